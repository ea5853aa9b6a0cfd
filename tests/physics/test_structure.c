#include "support/near.h"

#include <complex.h>
#include <math.h>
#include <string.h>

#include "base/units.h"
#include "physics/amplitude.h"
#include "physics/crowding.h"
#include "physics/cell.h"
#include "physics/hkl.h"
#include "published/structures.h"

static const double cu_ka1_A = 1.5405929, cu_kb_A = 1.3922340, mo_ka1_A = 0.7093171;
static const bh_without everything_in = { .anomalous = false },
			no_dispersion = { .anomalous = true };

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

/* A phase of sites with occupancies, in one group and cell. */
typedef struct {
	const char *element;
	double at[3], occupancy, b_iso_A2;
} atom;

enum { MOST_ATOMS = 6 };

typedef struct {
	const char *group;
	bh_cell cell;
	atom atoms[MOST_ATOMS];
} mixture;

static bh_phase make(bh_arena *arena, const mixture *m)
{
	bh_phase phase = { .kind = BH_PHASE_ATOMS, .march = 1, .cell = m->cell };
	bh_err err = { BH_OK, 0, 0, "", "", "" };
	bool open;

	assert_true(bh_symmetry_find(&phase.group, &open, arena, m->group, &err));
	phase.sites = bh_new(arena, bh_site, MOST_ATOMS);
	for (size_t i = 0; i < MOST_ATOMS && m->atoms[i].element; i++) {
		phase.sites[i] = (bh_site){ .z = bh_xray_z(m->atoms[i].element),
					    .occupancy = m->atoms[i].occupancy,
					    .b_iso_A2 = m->atoms[i].b_iso_A2 };
		memcpy(phase.sites[i].at, m->atoms[i].at, sizeof phase.sites[i].at);
		phase.site_count++;
	}
	assert_true(bh_structure_resolve(&phase, arena, &err));
	return phase;
}

/* Formula and formula units in the cell as the mineralogical handbooks give them. */
static void formulas(void **state)
{
	static const struct {
		const char *crystal, *formula;
		double units;
	} rows[] = {
		{ "Si", "Si", 8 },
		{ "NaCl", "NaCl", 4 },
		{ "CaF2", "CaF2", 4 },
		{ "LaB6", "LaB6", 1 },
		{ "corundum", "Al2O3", 6 },
		{ "magnetite", "Fe3O4", 8 },
		{ "goethite", "FeO2H", 4 },
		{ "quartz", "SiO2", 3 },
		{ "calcite", "CaCO3", 6 },
		{ "dolomite", "CaMgC2O6", 3 },
		{ "rutile", "TiO2", 2 },
		{ "gypsum", "CaSO6H4", 4 },
		{ "LiCoO2", "LiCoO2", 3 },
		{ "BaTiO3", "BaTiO3", 1 },
		{ "low albite", "NaAlSi3O8", 4 },
	};

	for (size_t i = 0; i < sizeof rows / sizeof *rows; i++) {
		bh_phase phase = crystal_make(*state, crystal_find(rows[i].crystal), 0.5);

		assert_string_equal(phase.formula, rows[i].formula);
		assert_near(phase.formula_units, rows[i].units, 1e-12, rows[i].crystal);
	}
}

/* Shared and partly filled places. */
static void solid_solutions(void **state)
{
	static const mixture cathode = { "R -3 m:H",
					 { 2.871, 2.871, 14.22, 90, 90, 120 },
					 { { "Li", { 0, 0, 0 }, 1, 1 },
					   { "Ni", { 0, 0, 0.5 }, 0.6, 0.5 },
					   { "Mn", { 0, 0, 0.5 }, 0.2, 0.5 },
					   { "Co", { 0, 0, 0.5 }, 0.2, 0.5 },
					   { "O", { 0, 0, 0.2395 }, 1, 0.8 } } };
	static const mixture wustite = { "F m -3 m",
					 { 4.30, 4.30, 4.30, 90, 90, 90 },
					 { { "Fe", { 0, 0, 0 }, 0.945, 0.5 },
					   { "O", { 0.5, 0.5, 0.5 }, 1, 0.5 } } };
	bh_phase phase = make(*state, &cathode);
	double mass_g = 6.94 + 0.6 * 58.693 + 0.2 * 54.938 + 0.2 * 58.933 + 2 * 15.999;
	size_t i, j;
	double distance;

	assert_string_equal(phase.formula, "LiNi0.6Mn0.2Co0.2O2");
	assert_near(phase.formula_units, 3, 1e-12, "Z");
	assert_ratio(phase.density_g_cm3, 3 * mass_g / 0.602214076 / phase.volume_A3,
		     2e-4, "density");
	assert_false(bh_crowding_clash(&phase, 0.5, &i, &j, &distance));
	phase = make(*state, &wustite);
	assert_string_equal(phase.formula, "Fe0.945O");
	assert_near(phase.formula_units, 4, 1e-12, "Z");
}

/* Without atoms there is a volume only. */
static void no_atoms(void **state)
{
	bh_phase phase = { .cell = { 4.7605, 4.7605, 12.9956, 90, 90, 120 } };
	bh_err err = { BH_OK, 0, 0, "", "", "" };

	assert_true(bh_structure_resolve(&phase, *state, &err));
	assert_near(phase.volume_A3, 255.053981, 1e-6, "volume");
	assert_int_equal(phase.composition.count, 0);
	assert_near(phase.density_g_cm3, 0, 0, "not known");
}

/* Places with more than one atom, and places with just one in all. */
static void clashes(void **state)
{
	static const bh_cell cube = { 5.1, 5.1, 5.1, 90, 90, 90 };
	static const struct {
		mixture m;
		bool clash;
		size_t i, j;
		double distance_A, within_A;
	} rows[] = {
		/* two atoms at one place */
		{ { "P 1",
		    cube,
		    { { "Fe", { .1, .2, .3 }, 1, .5 }, { "O", { .1, .2, .3 }, 1, .5 } } },
		  true,
		  0,
		  1,
		  0,
		  1e-9 },
		/* across the edge of the cell */
		{ { "P 1",
		    cube,
		    { { "Fe", { 0, .2, .3 }, 1, .5 }, { "O", { .98, .2, .3 }, 1, .5 } } },
		  true,
		  0,
		  1,
		  0.102,
		  1e-9 },
		/* a mixed site, 1 in all; one that is too full */
		{ { "P 1",
		    cube,
		    { { "Fe", { .1, .2, .3 }, .7, .5 },
		      { "Mn", { .1, .2, .3 }, .3, .5 } } },
		  false,
		  0,
		  0,
		  0,
		  0 },
		{ { "P 1",
		    cube,
		    { { "Fe", { .1, .2, .3 }, .8, .5 },
		      { "Mn", { .1, .2, .3 }, .3, .5 } } },
		  true,
		  0,
		  1,
		  0,
		  1e-9 },
		/* three thirds printed with three decimals */
		{ { "P 1",
		    cube,
		    { { "Fe", { .1, .2, .3 }, .334, .5 },
		      { "Mn", { .1, .2, .3 }, .333, .5 },
		      { "Co", { .1, .2, .3 }, .334, .5 } } },
		  false,
		  0,
		  0,
		  0,
		  0 },
		/* an atom beside the centre that makes its own image too near */
		{ { "P -1", cube, { { "Fe", { .01, .02, .01 }, 1, .5 } } },
		  true,
		  0,
		  0,
		  0.24985,
		  1e-4 },
		/* the same as two halves: disorder */
		{ { "P -1", cube, { { "Fe", { .01, .02, .01 }, .5, .5 } } },
		  false,
		  0,
		  0,
		  0,
		  0 },
		/* honest neighbours */
		{ { "P -1",
		    cube,
		    { { "Fe", { .2, .2, .2 }, 1, .5 }, { "O", { .5, .5, .5 }, 1, .5 } } },
		  false,
		  0,
		  0,
		  0,
		  0 },
	};

	for (size_t n = 0; n < sizeof rows / sizeof *rows; n++) {
		bh_phase phase = make(*state, &rows[n].m);
		size_t i = 99, j = 99;
		double distance_A = -1;
		bool clash = bh_crowding_clash(&phase, 0.5, &i, &j, &distance_A);

		if (clash != rows[n].clash)
			print_error("row %zu\n", n);
		assert_int_equal(clash, rows[n].clash);
		if (clash) {
			assert_true(i == rows[n].i && j == rows[n].j);
			assert_near(distance_A, rows[n].distance_A, rows[n].within_A,
				    "distance");
		} else {
			assert_true(i == 0 || i == 99 || i == phase.site_count);
			assert_near(distance_A, -1, 0, "untouched");
		}
	}
}

/* Displaced titanium of cubic BaTiO3: eight places of one eighth, 0.1 Å apart, are one atom in
 * all, not an eighth of one. */
static void split_site(void **state)
{
	static const mixture m = { "P m -3 m",
				   { 4.006, 4.006, 4.006, 90, 90, 90 },
				   { { "Ba", { 0, 0, 0 }, 1, .5 },
				     { "Ti", { .486, .486, .486 }, .125, .5 },
				     { "O", { .5, .5, 0 }, 1, .5 } } };
	bh_phase phase = make(*state, &m);
	size_t i, j;
	double distance;

	assert_int_equal(phase.sites[1].multiplicity, 8);
	assert_string_equal(phase.formula, "BaTiO3");
	assert_false(bh_crowding_clash(&phase, 0.5, &i, &j, &distance));
}

/* F by the definition, one complex exponential an atom and operation. */
static const double complex imaginary_unit = CMPLX(0, 1);

static double plain_f2(const bh_phase *phase, const int h[3], double d_A,
		       double energy_keV)
{
	double sum = 0, s = 1 / (2 * d_A);

	for (int sign = 1; sign >= -1; sign -= 2) {
		double complex f = 0;

		for (size_t i = 0; i < phase->site_count; i++) {
			const bh_site *site = &phase->sites[i];
			double images[BH_MAX_IMAGES][3];
			size_t n = bh_symmetry_orbit(&phase->group, &phase->cell,
						     site->at, 0.05, images);
			double complex scatter =
				bh_amplitude_f0(bh_amplitude_form(site->z, 0), s) +
				bh_xray_f_prime(site->z, energy_keV) +
				imaginary_unit *
					bh_xray_f_double_prime(site->z, energy_keV);

			for (size_t k = 0; k < n; k++) {
				double turn = h[0] * images[k][0] + h[1] * images[k][1] +
					      h[2] * images[k][2];

				f += site->occupancy * scatter *
				     exp(-site->b_iso_A2 * s * s) *
				     cexp(2 * BH_PI * imaginary_unit * sign * turn);
			}
		}
		sum += creal(f * conj(f)) / 2;
	}
	return sum;
}

/* |F|² against its definition, for crystals with and without a centre, several elements on one
 * place, three photon energies. */
static void definition(void **state)
{
	static const mixture polar = {
		"P 63 m c",
		{ 3.249897, 3.249897, 5.20653, 90, 90, 120 },
		{ { "Zn", { 1.0 / 3, 2.0 / 3, 0 }, 0.9, 0.6 },
		  { "Mn", { 1.0 / 3, 2.0 / 3, 0 }, 0.1, 0.7 },
		  { "O", { 1.0 / 3, 2.0 / 3, 0.3819 }, 1, 0.8 } }
	};
	const double energy_keV[] = { bh_energy_keV(cu_ka1_A), bh_energy_keV(cu_kb_A),
				      bh_energy_keV(mo_ka1_A) };
	bh_phase phases[] = { make(*state, &polar),
			      crystal_make(*state, crystal_find("quartz"), 0.61),
			      crystal_make(*state, crystal_find("low albite"), 0.73),
			      crystal_make(*state, crystal_find("magnetite"), 0.37) };

	for (size_t p = 0; p < sizeof phases / sizeof *phases; p++) {
		static int h[400][3];
		static double d_A[400], f2[400][3];
		bh_hkl *planes;
		size_t count;
		bh_err err = { BH_OK, 0, 0, "", "", "" };

		assert_true(bh_hkl_list(&planes, &count, *state, &phases[p].cell,
					&phases[p].group, 1.1, &err));
		count = count > 400 ? 400 : count;
		for (size_t i = 0; i < count; i++) {
			memcpy(h[i], planes[i].h, sizeof h[i]);
			d_A[i] = planes[i].d_A;
		}
		assert_true(bh_amplitude_f2_table(&f2[0][0], &phases[p],
						  &(bh_f2_query){ (const int(*)[3])h, d_A,
								  count, energy_keV, 3,
								  everything_in },
						  &err));
		assert_true(count > 10);
		for (size_t i = 0; i < count; i++)
			for (int k = 0; k < 3; k++) {
				double want =
					plain_f2(&phases[p], h[i], d_A[i], energy_keV[k]);

				assert_near(f2[i][k], want, 1e-9 * want + 1e-8, "table");
				assert_near(bh_amplitude_f2(&phases[p], h[i], d_A[i],
							    energy_keV[k], everything_in),
					    want, 1e-9 * want + 1e-8, "one plane");
			}
	}
}

/* F = 0 by the lattice or a screw, also for planes that are asked for by name. */
static void extinct(void **state)
{
	static const struct {
		const char *crystal;
		int h[3];
	} rows[] = {
		{ "Si", { 2, 0, 0 } },	     { "NaCl", { 1, 0, 0 } },
		{ "corundum", { 0, 0, 3 } }, { "corundum", { 1, 0, 1 } },
		{ "quartz", { 0, 0, 1 } },   { "goethite", { 1, 0, 0 } },
		{ "ZnO", { 0, 0, 1 } },	     { "gypsum", { 1, 0, 0 } },
	};

	for (size_t i = 0; i < sizeof rows / sizeof *rows; i++) {
		bh_phase phase = crystal_make(*state, crystal_find(rows[i].crystal), 0.5);
		bh_mat3 reciprocal;

		assert_true(bh_cell_reciprocal(&reciprocal, &phase.cell));
		assert_true(bh_hkl_absent(&phase.group, rows[i].h));
		assert_near(bh_amplitude_f2(&phase, rows[i].h,
					    bh_cell_d_A(&reciprocal, rows[i].h),
					    bh_energy_keV(cu_ka1_A), everything_in),
			    0, 1e-20, rows[i].crystal);
	}
}

/* Forward: with s near 0 and no dispersion every electron scatters in step, F = Σ Z. */
static void forward(void **state)
{
	bh_phase phase = crystal_make(*state, crystal_find("corundum"), 0.3);
	const int h[3] = { 0, 0, 0 };

	assert_ratio(
		bh_amplitude_f2(&phase, h, 1e6, bh_energy_keV(cu_ka1_A), no_dispersion),
		pow(12 * 13 + 18 * 8, 2), 3e-4, "F(0)");
}

/* A zeolite's worth of work: 576 atoms at made-up places of the size of faujasite, a thousand planes;
 * the bound is ten times what it takes. */
static void speed(void **state)
{
	static const mixture m = { "F d -3 m:2",
				   { 24.345, 24.345, 24.345, 90, 90, 90 },
				   { { "Si", { .1253, .9466, .0357 }, 1, .5 },
				     { "O", { 0, .8937, .1063 }, 1, .5 },
				     { "O", { .0025, .0025, .1424 }, 1, .5 },
				     { "O", { .0758, .0758, .9678 }, 1, .5 },
				     { "O", { .0716, .0716, .3211 }, 1, .5 } } };
	bh_phase phase = make(*state, &m);
	double energy_keV = bh_energy_keV(mo_ka1_A), *d_A, *f2;
	int(*h)[3];
	bh_hkl *planes;
	size_t count;
	bh_err err = { BH_OK, 0, 0, "", "", "" };

	assert_string_equal(phase.formula, "SiO2");
	assert_near(phase.formula_units, 192, 1e-12, "Z");
	assert_true(bh_hkl_list(&planes, &count, *state, &phase.cell, &phase.group, 0.71,
				&err));
	h = bh_arena_take(*state, count, sizeof *h);
	d_A = bh_new(*state, double, count);
	f2 = bh_new(*state, double, count);
	for (size_t i = 0; i < count; i++) {
		memcpy(h[i], planes[i].h, sizeof h[i]);
		d_A[i] = planes[i].d_A;
	}
	assert_true(bh_amplitude_f2_table(f2, &phase,
					  &(bh_f2_query){ (const int(*)[3])h, d_A, count,
							  &energy_keV, 1, everything_in },
					  &err));
	assert_true(count > 900);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(formulas),   cmocka_unit_test(solid_solutions),
		cmocka_unit_test(no_atoms),   cmocka_unit_test(clashes),
		cmocka_unit_test(split_site), cmocka_unit_test(definition),
		cmocka_unit_test(extinct),    cmocka_unit_test(forward),
		cmocka_unit_test(speed),
	};

	return cmocka_run_group_tests(tests, set_up, tear_down);
}
