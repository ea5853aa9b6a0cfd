#include "support/near.h"

#include <math.h>
#include <string.h>

#include "physics/formula.h"

static int set_up(void **state)
{
	*state = bh_arena_new();
	return *state ? 0 : -1;
}

static int tear_down(void **state)
{
	bh_arena_free(*state);
	return 0;
}

/* Molar masses from the standard atomic weights (IUPAC 2021, abridged to five figures): H 1.0080,
 * Li 6.94, C 12.011, O 15.999, Mg 24.305, Al 26.982, Si 28.085, S 32.06, K 39.098, Ca 40.078, Fe
 * 55.845, Co 58.933, Ni 58.693, La 138.91, B 10.81, Pb 207.2. The database rounds more. */
static void molar_masses(void **state)
{
	static const struct {
		const char *text;
		double mass_g;
	} rows[] = {
		{ "Fe2O3", 159.687 },
		{ "Ca(OH)2", 74.092 },
		{ "CaSO4*2H2O", 172.164 },
		{ "CaSO4\xC2\xB7"
		  "2H2O",
		  172.164 },
		{ "CaSO4*0.5H2O", 145.141 },
		{ "Li0.5CoO2", 94.401 },
		{ "Al2(SO4)3", 342.132 },
		{ "K(Al(Si3Al)O10(OH)2)Al", 398.303 },
		{ "Mg3(Si2O5(OH)2)(OH)2", 277.108 },
		{ "LaB6", 203.770 },
		{ "PbO2", 239.198 },
		{ "2H2O", 36.030 },
		{ "Fe.5Ni.5", 57.269 },
		{ "D2O", 18.015 },
	};

	(void)state;
	for (size_t i = 0; i < sizeof rows / sizeof *rows; i++)
		assert_ratio(bh_formula_molar_mass_g(rows[i].text), rows[i].mass_g, 3e-4,
			     rows[i].text);
}

/* Mass fractions of gypsum as mineralogy lists them (from memory): CaO 32.57, SO3 46.50, H2O 20.93
 * weight percent. */
static void gypsum(void **state)
{
	static const struct {
		int z;
		double mass_frac;
	} rows[] = {
		{ 1, 0.2093 * 2.016 / 18.015 },
		{ 8, 0.3257 * 15.999 / 56.077 + 0.4650 * 47.997 / 80.06 +
			     0.2093 * 15.999 / 18.015 },
		{ 16, 0.4650 * 32.06 / 80.06 },
		{ 20, 0.3257 * 40.078 / 56.077 },
	};
	bh_composition c;
	bh_err err = { BH_OK, 0, 0, "", "", "" };
	double sum = 0;

	assert_true(bh_formula_read(&c, *state, "CaSO4*2H2O", &err));
	assert_int_equal(c.count, 4);
	for (size_t i = 0; i < 4; i++) {
		assert_int_equal(c.elements[i].z, rows[i].z);
		assert_near(c.elements[i].mass_frac, rows[i].mass_frac, 1e-4, "share");
		sum += c.elements[i].mass_frac;
	}
	assert_near(sum, 1, 1e-15, "sum");
}

/* What is no formula is refused, at the character that shows it. */
static void refused(void **state)
{
	static const struct {
		const char *text, *says, *at;
	} rows[] = {
		{ "", "nothing", "character 1" },
		{ "fe2O3", "no element", "character 1" },
		{ "Fe2o3", "no element", "character 4" },
		{ "Xx2O", "no element", "character 1" },
		{ "Np", "no element", "character 1" },
		{ "Fe2 O3", "no element", "character 4" },
		{ "Fe+3", "no element", "character 3" },
		{ "Fe0O", "zero", "character" },
		{ "Fe9999999", "too large", "character" },
		{ "CaSO4.2H2O", "hydrate", "character 8" },
		{ "CaSO4.0.5H2O", "dot", "character 8" },
		{ "Fe1.2.3", "dot", "character 6" },
		{ "Ca(OH2", "not closed", "character 3" },
		{ "CaOH)2", "not opened", "character 5" },
		{ "Ca()2", "nothing", "character 4" },
		{ "CaSO4*", "nothing", "character 7" },
		{ "*H2O", "nothing", "character 1" },
		{ "Ca(SO4*2H2O)3", "bracket", "character 7" },
		{ "((((((((((H))))))))))", "brackets", "character" },
	};

	for (size_t i = 0; i < sizeof rows / sizeof *rows; i++) {
		bh_composition c = { NULL, 77 };
		bh_err err = { BH_OK, 0, 0, "", "", "" };

		if (bh_formula_read(&c, *state, rows[i].text, &err) ||
		    !strstr(err.what, rows[i].says) || !strstr(err.what, rows[i].at))
			print_error("%s: %s\n", rows[i].text, err.what);
		assert_int_equal(err.code, BH_BAD_INPUT);
		assert_non_null(strstr(err.what, rows[i].says));
		assert_non_null(strstr(err.what, rows[i].at));
		assert_true(err.hint[0] != '\0');
		assert_int_equal(c.count, 77);
		assert_near(bh_formula_molar_mass_g(rows[i].text), 0, 0, rows[i].text);
	}
}

/* The longest formula, and one character more. */
static void length(void **state)
{
	char text[BH_FORMULA_LENGTH + 3];
	bh_composition c;
	bh_err err = { BH_OK, 0, 0, "", "", "" };

	memset(text, 'H', sizeof text);
	text[BH_FORMULA_LENGTH] = '\0';
	assert_true(bh_formula_read(&c, *state, text, &err));
	text[BH_FORMULA_LENGTH] = 'H';
	text[BH_FORMULA_LENGTH + 1] = '\0';
	assert_false(bh_formula_read(&c, *state, text, &err));
	assert_non_null(strstr(err.what, "longer"));
}

static void normalise(void **state)
{
	bh_element_share elements[] = {
		{ 26, 3.3 }, { 8, 1.1 }, { 26, 2.2 }, { 14, 0 }, { 8, 4.4 }
	};
	bh_composition c = { elements, 5 };

	(void)state;
	bh_formula_normalise(&c);
	assert_int_equal(c.count, 2);
	assert_int_equal(elements[0].z, 8);
	assert_int_equal(elements[1].z, 26);
	assert_near(elements[0].mass_frac, 0.5, 1e-15, "O");
	assert_near(elements[1].mass_frac, 0.5, 1e-15, "Fe");
	c.count = 0;
	bh_formula_normalise(&c);
	assert_int_equal(c.count, 0);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(molar_masses), cmocka_unit_test(gypsum),
		cmocka_unit_test(refused),	cmocka_unit_test(length),
		cmocka_unit_test(normalise),
	};

	return cmocka_run_group_tests(tests, set_up, tear_down);
}
