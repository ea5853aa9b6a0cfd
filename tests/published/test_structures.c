/* Structures, line positions, structure factors and relative intensities against handbooks,
 * standards and reference materials; sources beside the rows. */
#include "support/near.h"

#include <math.h>
#include <stdlib.h>
#include <string.h>

#include "base/units.h"
#include "physics/amplitude.h"
#include "physics/crowding.h"
#include "physics/bragg.h"
#include "physics/cell.h"
#include "physics/hkl.h"
#include "published/structures.h"

/* Cu Kα1, International Tables C (2004) Table 4.2.2.4 */
static const double cu_ka1_A = 1.5405929, cu_ka2_A = 1.5444274;
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

/* (1 + cos²2θ)/(sin²θ cosθ), B. D. Cullity, Elements of X-ray Diffraction. */
static double lorentz(double two_theta_deg)
{
	double theta = bh_rad(two_theta_deg / 2), c = cos(2 * theta);

	return (1 + c * c) / (sin(theta) * sin(theta) * cos(theta));
}

static bh_hkl plane_of(const bh_phase *phase, const char *text)
{
	bh_hkl plane;
	bh_mat3 reciprocal;
	int planes[BH_MAX_EQUIVALENTS][3];

	assert_true(bh_hkl_parse(plane.h, text));
	assert_true(bh_cell_reciprocal(&reciprocal, &phase->cell));
	plane.d_A = bh_cell_d_A(&reciprocal, plane.h);
	plane.multiplicity = (int)bh_hkl_equivalents(&phase->group, plane.h, planes);
	return plane;
}

/* m |F|² LP of one plane. */
static double intensity(const bh_phase *phase, const bh_hkl *plane, double wavelength_A,
			bh_without without)
{
	double two_theta_deg;

	assert_true(bh_bragg_two_theta_deg(&two_theta_deg, plane->d_A, wavelength_A));
	return plane->multiplicity * lorentz(two_theta_deg) *
	       bh_amplitude_f2(phase, plane->h, plane->d_A, bh_energy_keV(wavelength_A),
			       without);
}

/* One line of a powder: all planes of one distance. */
typedef struct {
	double d_A, intensity;
	int multiplicity;
} line;

/* All lines down to a distance, d falling; how many. */
static size_t lines_of(line **lines, const bh_phase *phase, bh_arena *arena,
		       double least_d_A)
{
	bh_hkl *planes;
	size_t count, n = 0;
	bh_err err = { BH_OK, 0, 0, "", "", "" };

	assert_true(bh_hkl_list(&planes, &count, arena, &phase->cell, &phase->group,
				least_d_A, &err));
	*lines = bh_new(arena, line, count);
	for (size_t i = 0; i < count; i++) {
		if (n == 0 || planes[i].d_A < (*lines)[n - 1].d_A * (1 - 1e-8))
			(*lines)[n++] = (line){ planes[i].d_A, 0, 0 };
		(*lines)[n - 1].multiplicity += planes[i].multiplicity;
		(*lines)[n - 1].intensity +=
			intensity(phase, &planes[i], cu_ka1_A, everything_in);
	}
	return n;
}

static double strongest(const line *lines, size_t count)
{
	double best = 0;

	for (size_t i = 0; i < count; i++)
		best = fmax(best, lines[i].intensity);
	return best;
}

static line line_at(const line *lines, size_t count, double d_A)
{
	for (size_t i = 0; i < count; i++)
		if (fabs(lines[i].d_A - d_A) < 1e-8 * d_A)
			return lines[i];
	return (line){ 0, NAN, 0 };
}

/* Volume, density, and the strongest lines of every crystal: to the printed digits; relative
 * intensities to 0.5 on the scale of 100. */
static void every_crystal(void **state)
{
	for (size_t i = 0; i < CRYSTALS; i++) {
		const crystal *c = &crystals[i];
		bh_phase phase = crystal_make(*state, c, 0.5);
		line *lines;
		size_t a, b, count = lines_of(&lines, &phase, *state, 0.9);
		double near_A, most = strongest(lines, count);

		assert_near(phase.volume_A3, c->volume_A3, 6e-4, c->name);
		assert_near(phase.density_g_cm3, c->density_g_cm3, 6e-4, c->name);
		assert_false(bh_crowding_clash(&phase, 0.5, &a, &b, &near_A));
		for (size_t k = 0; k < CRYSTAL_LINES && c->lines[k].plane; k++) {
			bh_hkl plane = plane_of(&phase, c->lines[k].plane);
			double two_theta_deg, mine;
			char name[64];

			snprintf(name, sizeof name, "%s %s", c->name, c->lines[k].plane);
			assert_false(bh_hkl_absent(&phase.group, plane.h));
			assert_true(bh_bragg_two_theta_deg(&two_theta_deg, plane.d_A,
							   cu_ka1_A));
			mine = 100 * line_at(lines, count, plane.d_A).intensity / most;
			assert_near(plane.d_A, c->lines[k].d_A, 6e-5, name);
			assert_near(two_theta_deg, c->lines[k].two_theta_deg, 1e-3, name);
			assert_near(mine, c->lines[k].intensity, 0.5, name);
		}
	}
}

/* Certificates of NIST SRM 640f (silicon) and 660c (lanthanum hexaboride): the cells; angles
 * by Bragg's law for Cu Kα1; 28.44 and 30.385 are also in the certificates' information. */
static void reference_materials(void **state)
{
	static const struct {
		const char *crystal, *plane;
		double two_theta_deg;
	} rows[] = {
		{ "Si", "111", 28.4412 },   { "Si", "220", 47.3007 },
		{ "Si", "311", 56.1199 },   { "Si", "400", 69.1268 },
		{ "Si", "331", 76.3726 },   { "Si", "422", 88.0257 },
		{ "Si", "511", 94.9475 },   { "Si", "440", 106.7023 },
		{ "Si", "531", 114.0851 },  { "Si", "620", 127.5352 },
		{ "Si", "533", 136.8816 },  { "LaB6", "100", 21.3583 },
		{ "LaB6", "110", 30.3854 }, { "LaB6", "111", 37.4425 },
		{ "LaB6", "200", 43.5074 }, { "LaB6", "210", 48.9584 },
		{ "LaB6", "211", 53.9899 }, { "LaB6", "220", 63.2197 },
		{ "LaB6", "300", 67.5491 }, { "LaB6", "310", 71.7470 },
		{ "LaB6", "311", 75.8457 }, { "LaB6", "222", 79.8716 },
		{ "LaB6", "320", 83.8474 }, { "LaB6", "321", 87.7937 },
		{ "LaB6", "400", 95.6735 },
	};

	for (size_t i = 0; i < sizeof rows / sizeof *rows; i++) {
		bh_phase phase = crystal_make(*state, crystal_find(rows[i].crystal), 0.5);
		bh_hkl plane = plane_of(&phase, rows[i].plane);
		double two_theta_deg;

		assert_true(bh_bragg_two_theta_deg(&two_theta_deg, plane.d_A, cu_ka1_A));
		assert_near(two_theta_deg, rows[i].two_theta_deg, 1e-4, rows[i].plane);
		assert_false(bh_hkl_absent(&phase.group, plane.h));
	}
}

/* B. D. Cullity, Elements of X-ray Diffraction, worked example of copper: λ 1.542 Å, a 3.615 Å,
 * no dispersion, no displacement. θ, f and multiplicity as printed (from memory); relative
 * intensities again from the form factors of D. Waasmaier & A. Kirfel (1995). */
static void copper_of_the_handbook(void **state)
{
	static const struct {
		const char *plane;
		double theta_deg, f, lp;
		int multiplicity;
		double printed, again;
	} rows[] = {
		{ "111", 21.68, 22.1, 12.06, 8, 10.0, 10.00 },
		{ "200", 25.25, 20.9, 8.54, 6, 4.7, 4.68 },
		{ "220", 37.10, 16.8, 3.70, 12, 2.7, 2.66 },
		{ "311", 45.02, 14.8, 2.83, 24, 3.2, 3.16 },
		{ "222", 47.63, 14.2, 2.74, 8, 0.9, 0.95 },
		{ "400", 58.55, 12.5, 3.18, 6, 0.6, 0.63 },
		{ "331", 68.38, 11.5, 4.81, 24, 3.3, 3.22 },
		{ "420", 72.52, 11.1, 6.12, 24, 3.9, 3.90 },
	};
	crystal copper = *crystal_find("Cu");
	bh_phase phase;
	double first;

	copper.cell = (bh_cell){ 3.615, 3.615, 3.615, 90, 90, 90 };
	phase = crystal_make(*state, &copper, 0);
	bh_hkl top = plane_of(&phase, "111");
	first = intensity(&phase, &top, 1.542, no_dispersion);
	for (size_t i = 0; i < sizeof rows / sizeof *rows; i++) {
		bh_hkl plane = plane_of(&phase, rows[i].plane);
		double two_theta_deg, mine, f;

		assert_true(bh_bragg_two_theta_deg(&two_theta_deg, plane.d_A, 1.542));
		f = sqrt(bh_amplitude_f2(&phase, plane.h, plane.d_A, bh_energy_keV(1.542),
					 no_dispersion)) /
		    4;
		mine = 10 * intensity(&phase, &plane, 1.542, no_dispersion) / first;
		assert_int_equal(plane.multiplicity, rows[i].multiplicity);
		assert_near(two_theta_deg / 2, rows[i].theta_deg, 0.03, rows[i].plane);
		assert_ratio(lorentz(two_theta_deg), rows[i].lp, 0.004, rows[i].plane);
		assert_ratio(f, rows[i].f, 0.015, rows[i].plane);
		assert_ratio(mine, rows[i].again, 0.02, rows[i].plane);
		/* the book's own figure has one decimal */
		assert_near(mine, rows[i].printed, 0.051 + 0.02 * rows[i].printed,
			    rows[i].plane);
	}
}

/* F of NaCl: 4 (f_Na + f_Cl) for even, 4 (f_Cl − f_Na) for odd indices; numbers with the form
 * factors of Waasmaier & Kirfel for neutral atoms from a general-purpose library (cctbx). */
static void sodium_chloride(void **state)
{
	static const struct {
		const char *plane;
		double f, within_frac;
	} rows[] = {
		{ "111", 18.0, 0.04 }, { "200", 85.4, 0.01 }, { "220", 72.9, 0.01 },
		{ "311", 10.9, 0.04 }, { "222", 64.9, 0.01 }, { "400", 59.2, 0.01 },
	};
	bh_phase phase = crystal_make(*state, crystal_find("NaCl"), 0);

	for (size_t i = 0; i < sizeof rows / sizeof *rows; i++) {
		bh_hkl plane = plane_of(&phase, rows[i].plane);
		double f2 = bh_amplitude_f2(&phase, plane.h, plane.d_A,
					    bh_energy_keV(cu_ka1_A), no_dispersion);

		assert_ratio(sqrt(f2), rows[i].f, rows[i].within_frac, rows[i].plane);
	}
}

/* |F|² of sphalerite by the rules of the handbooks, 16 (f_Zn² + f_S²) for odd, 16 (f_Zn − f_S)²
 * for 2 (2n + 1), 16 (f_Zn + f_S)² for 4n; form factors of Waasmaier & Kirfel (cctbx). */
static void sphalerite(void **state)
{
	static const struct {
		const char *plane;
		double f_zn, f_s;
		int kind;
	} rows[] = { { "111", 25.74, 12.27, 0 },
		     { "200", 24.83, 11.53, -1 },
		     { "220", 22.08, 9.70, 1 } };
	bh_phase phase = crystal_make(*state, crystal_find("ZnS sphalerite"), 0);

	for (size_t i = 0; i < sizeof rows / sizeof *rows; i++) {
		bh_hkl plane = plane_of(&phase, rows[i].plane);
		double zn = rows[i].f_zn, s = rows[i].f_s;
		double want = 16 * (zn * zn + s * s + 2 * rows[i].kind * zn * s);

		assert_ratio(bh_amplitude_f2(&phase, plane.h, plane.d_A,
					     bh_energy_keV(cu_ka1_A), no_dispersion),
			     want, 0.015, rows[i].plane);
	}
}

/* Relative peak heights of SRM 674, International Tables C (2004) Table 5.2.11.1, seen. They are
 * peak heights of powders: 8 % for the oxides of zinc and titanium, 20 % for corundum (its own
 * calculation from the structure is 10 to 14 % above the printed values). */
static void relative_intensities(void **state)
{
	static const struct {
		const char *crystal, *plane, *strongest;
		double printed, within_frac;
	} rows[] = {
		{ "ZnO", "100", "101", 57.6, 0.08 },
		{ "ZnO", "002", "101", 40.2, 0.08 },
		{ "rutile", "211", "110", 56.9, 0.08 },
		{ "rutile", "101", "110", 44.0, 0.08 },
		{ "corundum", "116", "113", 92.5, 0.20 },
		{ "corundum", "104", "113", 87.4, 0.20 },
	};

	for (size_t i = 0; i < sizeof rows / sizeof *rows; i++) {
		bh_phase phase = crystal_make(*state, crystal_find(rows[i].crystal), 0.5);
		bh_hkl plane = plane_of(&phase, rows[i].plane);
		bh_hkl top = plane_of(&phase, rows[i].strongest);

		assert_ratio(100 * intensity(&phase, &plane, cu_ka1_A, everything_in) /
				     intensity(&phase, &top, cu_ka1_A, everything_in),
			     rows[i].printed, rows[i].within_frac, rows[i].plane);
	}
}

/* ASTM E975 Table 1 for Cr Kα (numbers from memory): R = |F|² p LP exp(−2M)/V² with λ 2.29100 Å,
 * f' −1.6, f'' 0.9, B 0.35 Å². One element: its dispersion can be put in from outside. */
static void retained_austenite(void **state)
{
	static const struct {
		const char *crystal, *plane;
		double a_A, theta_deg, f2, lp;
		int multiplicity;
		double r;
	} rows[] = {
		{ "α-Fe", "110", 2.8664, 34.41, 1142, 4.290, 12, 101.5 },
		{ "α-Fe", "200", 2.8664, 53.06, 745, 2.805, 6, 20.73 },
		{ "α-Fe", "211", 2.8664, 78.20, 535, 9.388, 24, 190.8 },
		{ "γ-Fe (E975)", "111", 3.60, 33.44, 4684, 4.554, 8, 75.24 },
		{ "γ-Fe (E975)", "200", 3.60, 39.52, 4018, 3.317, 6, 34.78 },
		{ "γ-Fe (E975)", "220", 3.60, 64.15, 2472, 3.920, 12, 47.88 },
	};
	const double wavelength_A = 2.29100, f_prime = -1.6, f_double_prime = 0.9,
		     b_A2 = 0.35;

	for (size_t i = 0; i < sizeof rows / sizeof *rows; i++) {
		crystal iron = *crystal_find(rows[i].crystal);
		bh_phase phase;
		bh_hkl plane;
		double two_theta_deg, s, f0, f2, v;

		iron.cell =
			(bh_cell){ rows[i].a_A, rows[i].a_A, rows[i].a_A, 90, 90, 90 };
		phase = crystal_make(*state, &iron, 0);
		plane = plane_of(&phase, rows[i].plane);
		assert_true(
			bh_bragg_two_theta_deg(&two_theta_deg, plane.d_A, wavelength_A));
		s = 1 / (2 * plane.d_A);
		f0 = bh_xray_f0(26, s);
		f2 = bh_amplitude_f2(&phase, plane.h, plane.d_A,
				     bh_energy_keV(wavelength_A), no_dispersion) /
		     (f0 * f0) * (pow(f0 + f_prime, 2) + pow(f_double_prime, 2));
		v = phase.volume_A3;
		assert_near(two_theta_deg / 2, rows[i].theta_deg, 0.02, rows[i].plane);
		assert_int_equal(plane.multiplicity, rows[i].multiplicity);
		assert_ratio(lorentz(two_theta_deg), rows[i].lp, 0.002, rows[i].plane);
		assert_ratio(f2, rows[i].f2, 0.01, rows[i].plane);
		assert_ratio(f2 * plane.multiplicity * lorentz(two_theta_deg) *
				     exp(-2 * b_A2 * s * s) / (v * v),
			     rows[i].r, 0.01, rows[i].plane);
	}
}

/* Form factors of neutral atoms: Waasmaier & Kirfel (1995) and International Tables C (1992)
 * agree with each other to the digits shown, by general-purpose libraries. */
static void form_factors(void **state)
{
	static const struct {
		int z;
		double s_inv_A, f0;
	} rows[] = {
		{ 29, 0.1, 27.09 }, { 29, 0.2, 23.54 }, { 29, 0.3, 19.88 },
		{ 29, 0.4, 16.51 }, { 29, 0.5, 13.71 }, { 29, 0.6, 11.52 },
		{ 14, 0.1, 12.13 }, { 14, 0.2, 9.68 },	{ 14, 0.3, 8.23 },
		{ 14, 0.5, 6.24 },  { 8, 0.1, 7.25 },	{ 8, 0.2, 5.62 },
		{ 8, 0.3, 4.09 },   { 8, 0.5, 2.34 },
	};

	(void)state;
	for (size_t i = 0; i < sizeof rows / sizeof *rows; i++)
		assert_near(bh_xray_f0(rows[i].z, rows[i].s_inv_A), rows[i].f0, 0.06,
			    bh_xray_symbol(rows[i].z));
}

/* Quartz of Levien, Prewitt & Weidner, Am. Mineral. 65 (1980) 920, with B 0.6 Å²: positions for
 * Cu Kα1 and Kα2 to the printed digits, intensities (cctbx) to 0.5 of 100. */
static void quartz_lines(void **state)
{
	static const struct {
		const char *plane;
		double d_A, ka1_deg, ka2_deg;
		int multiplicity;
		double intensity;
	} rows[] = {
		{ "100", 4.2574, 20.848, 20.901, 6, 19.8 },
		{ "101", 3.3446, 26.631, 26.699, 12, 100 },
		{ "110", 2.4580, 36.526, 36.621, 6, 7.2 },
		{ "102", 2.2818, 39.460, 39.563, 12, 7.3 },
		{ "111", 2.2375, 40.274, 40.378, 12, 3.3 },
		{ "200", 2.1287, 42.429, 42.540, 6, 5.3 },
		{ "201", 1.9806, 45.774, 45.894, 12, 3.2 },
		{ "112", 1.8184, 50.125, 50.258, 12, 12.9 },
		{ "202", 1.6723, 54.855, 55.003, 12, 4.0 },
		{ "103", 1.6593, 55.320, 55.470, 12, 1.7 },
		{ "211", 1.5422, 59.929, 60.093, 24, 9.4 },
		{ "113", 1.4532, 64.021, 64.199, 12, 1.8 },
		{ "212", 1.3826, 67.714, 67.906, 24, 5.8 },
		{ "203", 1.3753, 68.126, 68.319, 12, 7.0 },
		{ "301", 1.3726, 68.276, 68.470, 12, 4.4 },
	};
	bh_phase phase = crystal_make(*state, crystal_find("quartz"), 0.6);
	line *lines;
	size_t count = lines_of(&lines, &phase, *state, 1.0);

	for (size_t i = 0; i < sizeof rows / sizeof *rows; i++) {
		bh_hkl plane = plane_of(&phase, rows[i].plane);
		line mine = line_at(lines, count, plane.d_A);
		double ka1_deg, ka2_deg;

		assert_true(bh_bragg_two_theta_deg(&ka1_deg, plane.d_A, cu_ka1_A));
		assert_true(bh_bragg_two_theta_deg(&ka2_deg, plane.d_A, cu_ka2_A));
		assert_near(plane.d_A, rows[i].d_A, 6e-5, rows[i].plane);
		assert_near(ka1_deg, rows[i].ka1_deg, 6e-4, rows[i].plane);
		assert_near(ka2_deg, rows[i].ka2_deg, 6e-4, rows[i].plane);
		assert_int_equal(mine.multiplicity, rows[i].multiplicity);
		assert_near(100 * mine.intensity / strongest(lines, count),
			    rows[i].intensity, 0.5, rows[i].plane);
	}
}

/* The "five fingers" of quartz with the cell of NBS Monograph 25-18 (from memory), a 4.91344,
 * c 5.40524 Å. */
static void five_fingers(void **state)
{
	static const struct {
		const char *plane;
		double ka1_deg, ka2_deg;
	} rows[] = {
		{ "100", 20.859, 0 },	   { "101", 26.640, 0 },
		{ "112", 50.141, 0 },	   { "212", 67.744, 67.936 },
		{ "203", 68.144, 68.337 }, { "301", 68.314, 68.508 },
	};
	crystal quartz = *crystal_find("quartz");
	bh_phase phase;

	quartz.cell = (bh_cell){ 4.91344, 4.91344, 5.40524, 90, 90, 120 };
	phase = crystal_make(*state, &quartz, 0.6);
	for (size_t i = 0; i < sizeof rows / sizeof *rows; i++) {
		bh_hkl plane = plane_of(&phase, rows[i].plane);
		double two_theta_deg;

		assert_true(bh_bragg_two_theta_deg(&two_theta_deg, plane.d_A, cu_ka1_A));
		assert_near(two_theta_deg, rows[i].ka1_deg, 6e-4, rows[i].plane);
		assert_true(bh_bragg_two_theta_deg(&two_theta_deg, plane.d_A, cu_ka2_A));
		if (rows[i].ka2_deg > 0)
			assert_near(two_theta_deg, rows[i].ka2_deg, 6e-4, rows[i].plane);
	}
}

/* Mistakes that people make with these files, and what shows them. */
static void wrong_settings(void **state)
{
	crystal quartz = *crystal_find("quartz"), gypsum = *crystal_find("gypsum");
	crystal calcite = *crystal_find("calcite"), spinel = *crystal_find("magnetite");
	bh_phase phase;
	bh_hkl *planes;
	size_t count, fours = 0, a, b;
	double near_A;
	bh_err err = { BH_OK, 0, 0, "", "", "" };

	/* quartz as its data base lists it has another origin than International Tables A: with
	 * z as listed silicon leaves the three-fold site, and the density says so */
	for (int i = 0; i < 2; i++)
		quartz.sites[i].at[2] -= 2 * THIRD;
	phase = crystal_make(*state, &quartz, 0.5);
	assert_int_equal(phase.sites[0].multiplicity, 6);
	assert_near(phase.density_g_cm3, 3.88, 0.005, "quartz off its origin");
	/* gypsum with β 118.43° is I-centred: no 4.28 Å line in the C-centred setting's place */
	gypsum.group = "C 1 2/c 1";
	phase = crystal_make(*state, &gypsum, 0.5);
	assert_true(
		bh_hkl_list(&planes, &count, *state, &phase.cell, &phase.group, 4, &err));
	for (size_t i = 0; i < count; i++)
		fours += fabs(planes[i].d_A - 4.2812) < 0.001;
	assert_int_equal(fours, 0);
	/* calcite in P1: the atoms that symmetry makes are missing */
	calcite.group = "P 1";
	phase = crystal_make(*state, &calcite, 0.5);
	assert_near(phase.density_g_cm3, (40.08 + 12.01 + 16.0) / 0.602214076 / 367.846,
		    0.001, "calcite without symmetry");
	/* magnetite of origin 2 read with origin 1: octahedral iron falls near the oxygen */
	spinel.group = "F d -3 m:1";
	phase = crystal_make(*state, &spinel, 0.5);
	assert_true(phase.density_g_cm3 > 6 ||
		    bh_crowding_clash(&phase, 1.0, &a, &b, &near_A));
}

/* The same crystal in another cell: h' and x' by the change of axes. Column i of `axes` is the
 * new axis i in the old ones; x = axes · x' + origin. */
typedef struct {
	const char *crystal, *group;
	double axes[3][3], origin[3];
} change;

static bh_phase changed(bh_arena *arena, const change *c)
{
	crystal other = *crystal_find(c->crystal);
	bh_mat3 metric = bh_cell_metric(&other.cell), axes, inverse;
	double edge[3], cosine[3];

	memcpy(axes.at, c->axes, sizeof axes.at);
	assert_true(bh_mat3_invert(&inverse, &axes));
	for (int i = 0; i < 3; i++) {
		double u[3], v[3], w[3];

		for (int j = 0; j < 3; j++) {
			u[j] = axes.at[j][i];
			v[j] = axes.at[j][(i + 1) % 3];
			w[j] = axes.at[j][(i + 2) % 3];
		}
		edge[i] = sqrt(bh_mat3_form(&metric, u, u));
		cosine[i] =
			bh_mat3_form(&metric, v, w) /
			sqrt(bh_mat3_form(&metric, v, v) * bh_mat3_form(&metric, w, w));
	}
	other.cell = (bh_cell){ edge[0],
				edge[1],
				edge[2],
				bh_deg(acos(cosine[0])),
				bh_deg(acos(cosine[1])),
				bh_deg(acos(cosine[2])) };
	other.group = c->group;
	for (size_t s = 0; s < CRYSTAL_SITES && other.sites[s].element; s++) {
		double old[3];

		for (int j = 0; j < 3; j++)
			old[j] = other.sites[s].at[j] - c->origin[j];
		for (int j = 0; j < 3; j++)
			other.sites[s].at[j] = inverse.at[j][0] * old[0] +
					       inverse.at[j][1] * old[1] +
					       inverse.at[j][2] * old[2];
	}
	return crystal_make(arena, &other, 0.5);
}

/* Lines that are there at all: an equal list of d, multiplicities when asked, and m|F|²/v². */
static void compare(bh_arena *arena, const bh_phase *one, const bh_phase *two,
		    bool same_count, const char *name)
{
	line *a, *b;
	size_t m = lines_of(&a, one, arena, 0.8), n = lines_of(&b, two, arena, 0.8),
	       found = 0;
	double top = strongest(a, m);

	for (size_t i = 0; i < m; i++) {
		line other = line_at(b, n, a[i].d_A);

		assert_ratio(other.intensity / pow(two->volume_A3, 2) + 1e-9 * top,
			     a[i].intensity / pow(one->volume_A3, 2) + 1e-9 * top, 1e-6,
			     name);
		if (same_count)
			assert_int_equal(other.multiplicity, a[i].multiplicity);
		found++;
	}
	if (same_count)
		assert_int_equal(n, m);
	/* nothing else reflects */
	for (size_t i = 0; i < n; i++)
		if (isnan(line_at(a, m, b[i].d_A).intensity))
			assert_near(b[i].intensity / pow(two->volume_A3, 2), 0,
				    1e-12 * top / pow(one->volume_A3, 2), name);
	assert_true(found > 10);
}

/* One crystal in two settings of its group, International Tables A 1.5: the same lines. */
static void equivalent_settings(void **state)
{
	static const change changes[] = {
		{ "goethite",
		  "P b n m",
		  { { 0, 1, 0 }, { 0, 0, 1 }, { 1, 0, 0 } },
		  { 0 } },
		{ "goethite",
		  "P m c n",
		  { { 0, 0, 1 }, { 1, 0, 0 }, { 0, 1, 0 } },
		  { 0 } },
		{ "m-ZrO2",
		  "P 1 21/n 1",
		  { { -1, 0, 1 }, { 0, 1, 0 }, { -1, 0, 0 } },
		  { 0 } },
		{ "m-ZrO2",
		  "P 1 1 21/a",
		  { { 0, 1, 0 }, { 0, 0, 1 }, { 1, 0, 0 } },
		  { 0 } },
		{ "gypsum",
		  "C 1 2/c 1",
		  { { -1, 0, 0 }, { 0, -1, 0 }, { 1, 0, 1 } },
		  { 0 } },
		{ "corundum",
		  "R -3 c:R",
		  { { 2 * THIRD, -THIRD, -THIRD },
		    { THIRD, THIRD, -2 * THIRD },
		    { THIRD, THIRD, THIRD } },
		  { 0 } },
		{ "magnetite",
		  "F d -3 m:1",
		  { { 1, 0, 0 }, { 0, 1, 0 }, { 0, 0, 1 } },
		  { -0.125, -0.125, -0.125 } },
		{ "anatase",
		  "I 41/a m d:2",
		  { { 1, 0, 0 }, { 0, 1, 0 }, { 0, 0, 1 } },
		  { 0, -0.25, 0.125 } },
		{ "low albite",
		  "I -1",
		  { { 1, 0, 0 }, { 0, 1, 0 }, { 1, 0, 1 } },
		  { 0 } },
	};

	for (size_t i = 0; i < sizeof changes / sizeof *changes; i++) {
		bh_phase one =
			crystal_make(*state, crystal_find(changes[i].crystal), 0.5);
		bh_phase two = changed(*state, &changes[i]);

		assert_ratio(two.density_g_cm3, one.density_g_cm3, 1e-9,
			     changes[i].group);
		compare(*state, &one, &two, true, changes[i].group);
	}
}

/* All atoms of the cell in P 1, `times` cells along a. */
static bh_phase all_atoms(bh_arena *arena, const bh_phase *phase, int times)
{
	bh_phase all = *phase;
	bh_err err = { BH_OK, 0, 0, "", "", "" };
	double images[BH_MAX_IMAGES][3];

	all.cell.a_A *= times;
	all.sites =
		bh_new(arena, bh_site, phase->site_count * BH_MAX_IMAGES * (size_t)times);
	all.site_count = 0;
	for (size_t i = 0; i < phase->site_count; i++) {
		size_t count = bh_symmetry_orbit(&phase->group, &phase->cell,
						 phase->sites[i].at, 0.01, images);

		for (size_t k = 0; k < count; k++)
			for (int n = 0; n < times; n++) {
				bh_site *site = &all.sites[all.site_count++];

				*site = phase->sites[i];
				memcpy(site->at, images[k], sizeof site->at);
				site->at[0] = (site->at[0] + n) / times;
			}
	}
	assert_true(bh_symmetry_row(&all.group, arena, 1, &err));
	assert_true(bh_structure_resolve(&all, arena, &err));
	return all;
}

/* All atoms without symmetry, and a cell of twice the length: the same lines, other indices. */
static void supercells(void **state)
{
	static const char *const names[] = { "quartz", "corundum",	 "goethite",
					     "m-ZrO2", "ZnS sphalerite", "anatase",
					     "gypsum", "low albite",	 "LaB6" };

	for (size_t i = 0; i < sizeof names / sizeof *names; i++) {
		bh_phase one = crystal_make(*state, crystal_find(names[i]), 0.5);

		for (int times = 1; times <= 2; times++) {
			bh_phase all = all_atoms(*state, &one, times);

			assert_ratio(all.density_g_cm3, one.density_g_cm3, 1e-12,
				     names[i]);
			assert_string_equal(all.formula, one.formula);
			compare(*state, &one, &all, false, names[i]);
		}
	}
}

int main(void)
{
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(every_crystal),
		cmocka_unit_test(reference_materials),
		cmocka_unit_test(copper_of_the_handbook),
		cmocka_unit_test(sodium_chloride),
		cmocka_unit_test(sphalerite),
		cmocka_unit_test(relative_intensities),
		cmocka_unit_test(retained_austenite),
		cmocka_unit_test(form_factors),
		cmocka_unit_test(quartz_lines),
		cmocka_unit_test(five_fingers),
		cmocka_unit_test(wrong_settings),
		cmocka_unit_test(equivalent_settings),
		cmocka_unit_test(supercells),
	};

	return cmocka_run_group_tests(tests, set_up, tear_down);
}
