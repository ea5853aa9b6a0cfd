/* Every table: rows in order, sources given, values where they can be. */
#include "support/near.h"

#include <string.h>

#include "base/units.h"
#include "data/anodes.h"
#include "data/elements.h"
#include "data/hazards.h"
#include "data/holders.h"
#include "physics/xray.h"

static void anodes(void **state)
{
	(void)state;
	for (size_t i = 0; i < bh_anode_count; i++) {
		const bh_anode *a = &bh_anodes[i];

		assert_true(strlen(a->source) > 10);
		assert_int_equal(bh_element_z(a->symbol), a->z);
		assert_true(i == 0 || a->z > bh_anodes[i - 1].z);
		assert_true(a->ka2_A > a->ka1_A && a->ka1_A > a->kb_A);
		/* the atomic database's mean Kα, rounded to 0.1 eV there: 60 ppm */
		assert_ratio(bh_energy_keV((2 * a->ka1_A + a->ka2_A) / 3),
			     bh_xray_group_keV(a->z, BH_FL_KA), 3e-4, a->symbol);
	}
	assert_null(bh_anode_find("Xx"));
}

/* Cells give the density of the metal in the atomic database (2 %: handbook densities). */
static void holders(void **state)
{
	(void)state;
	for (size_t i = 0; i < bh_holder_count; i++) {
		const bh_holder *h = &bh_holders[i];
		int z = bh_element_z(h->element), atoms;

		assert_true(strlen(h->source) > 5 && strlen(h->help) > 10);
		assert_ptr_equal(bh_holder_find(h->name), h);
		assert_true(i == 0 || strcmp(h->name, bh_holders[i - 1].name) > 0);
		if (!*h->element)
			continue;
		atoms = h->space_group[0] == 'F' ? 4 : 2;
		assert_ratio(atoms * bh_xray_molar_mass_g(z) / BH_AVOGADRO_PER_MOL /
				     (h->a_A * h->a_A * h->a_A * 1e-24),
			     bh_xray_density_g_cm3(z), 0.02, h->name);
	}
}

/* Named hazards: at least those that no plan may leave out. */
static void hazards(void **state)
{
	static const char *const must[] = {
		"Be", "As", "Cd", "Hg", "Pb", "Tl", "U", "Th"
	};

	(void)state;
	for (size_t i = 0; i < sizeof must / sizeof *must; i++)
		assert_non_null(bh_hazard_of(bh_element_z(must[i])));
	assert_null(bh_hazard_of(bh_element_z("Fe")));
	for (size_t i = 0; i < bh_hazard_count; i++)
		assert_true(strlen(bh_hazards[i].source) > 5 &&
			    (i == 0 || bh_hazards[i].z > bh_hazards[i - 1].z));
	for (size_t i = 0; i < bh_caution_row_count; i++)
		assert_true(strlen(bh_caution_rows[i].source) > 5);
}

/* Symbols there and back; masses of the database rise but for the four known pairs (Ar K,
 * Co Ni, Te I, Th Pa: IUPAC). */
static void elements(void **state)
{
	int falls = 0;

	(void)state;
	for (int z = 1; z <= BH_Z_MAX; z++) {
		assert_int_equal(bh_element_z(bh_element_symbol(z)), z);
		if (z > 1)
			falls += bh_xray_molar_mass_g(z) < bh_xray_molar_mass_g(z - 1);
	}
	assert_int_equal(falls, 4);
	assert_int_equal(bh_element_z("Xx"), 0);
	assert_string_equal(bh_element_symbol(0), "?");
}

int main(void)
{
	static const struct CMUnitTest tests[] = {
		cmocka_unit_test(anodes),
		cmocka_unit_test(holders),
		cmocka_unit_test(hazards),
		cmocka_unit_test(elements),
	};

	return cmocka_run_group_tests_name("tables", tests, NULL, NULL);
}
