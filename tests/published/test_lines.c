/* Emission lines, edges, foils, attenuation, path and sensor against printed tables. */
#include "support/near.h"

#include <math.h>
#include <string.h>

#include "base/units.h"
#include "data/anodes.h"
#include "physics/absorb.h"
#include "physics/bragg.h"
#include "physics/detector.h"
#include "physics/filter.h"
#include "physics/formula.h"
#include "physics/tube.h"
#include "physics/xray.h"

/* Deslattes et al., Rev. Mod. Phys. 75 (2003) 35 = International Tables C (2004) Table
 * 4.2.2.4, seen for Cu Kα1 and Mo Kα1 at Table 4.2.2.6; the others cross-checked against the
 * atomic database (35 ppm; Mo Kβ1 59 ppm). */
static void wavelengths(void **state)
{
	static const struct {
		const char *anode;
		double ka1_A, ka2_A, kb_A, mean_A, ka1_keV;
	} rows[] = {
		{ "Cr", 2.2897260, 2.2936510, 2.0848810, 2.291034, 5.41481 },
		{ "Fe", 1.9360410, 1.9399730, 1.7566040, 1.937352, 6.40401 },
		{ "Co", 1.7889960, 1.7928350, 1.6208260, 1.790276, 6.93038 },
		{ "Cu", 1.5405929, 1.5444274, 1.3922340, 1.541871, 8.04782 },
		{ "Mo", 0.7093171, 0.7136070, 0.6323030, 0.710747, 17.47937 },
		{ "Ag", 0.5594218, 0.5638131, 0.4970817, 0.560886, 22.16292 },
	};

	(void)state;
	assert_int_equal(bh_anode_count, sizeof rows / sizeof *rows);
	for (size_t i = 0; i < sizeof rows / sizeof *rows; i++) {
		const bh_anode *a = bh_anode_find(rows[i].anode);

		assert_non_null(a);
		assert_ratio(a->ka1_A, rows[i].ka1_A, 2e-7, rows[i].anode);
		assert_ratio(a->ka2_A, rows[i].ka2_A, 2e-7, rows[i].anode);
		assert_ratio(a->kb_A, rows[i].kb_A, 2e-7, rows[i].anode);
		assert_near((2 * a->ka1_A + a->ka2_A) / 3, rows[i].mean_A, 1e-6,
			    rows[i].anode);
		assert_near(bh_energy_keV(a->ka1_A), rows[i].ka1_keV, 1e-5,
			    rows[i].anode);
	}
	/* Deslattes et al.: 1.47631 Å; Bearden 1967: 1.47639 */
	assert_near(bh_w_la1_A, 1.47631, 1.2e-4, "W La1");
}

/* Hölzer et al., Phys. Rev. A 56 (1997) 4554: Kα1 maxima and widths of the summed Lorentzians,
 * Tables II to IV. */
static void profiles(void **state)
{
	static const struct {
		const char *anode;
		double maximum_eV, fwhm_eV;
	} rows[] = {
		{ "Cr", 5414.81, 1.93 },
		{ "Fe", 6404.01, 2.62 },
		{ "Co", 6930.38, 2.39 },
		{ "Cu", 8047.83, 2.41 },
	};

	(void)state;
	for (size_t i = 0; i < sizeof rows / sizeof *rows; i++) {
		const bh_anode *a = bh_anode_find(rows[i].anode);

		assert_near(1000 * bh_energy_keV(a->ka1_A), rows[i].maximum_eV, 0.04,
			    rows[i].anode);
		assert_near(a->ka1_fwhm_eV, rows[i].fwhm_eV, 0.005, rows[i].anode);
	}
}

/* Ratios: theoretical radiative rates (J. H. Scofield) as carried by the database; measured
 * integrated Kα2/Kα1 of Hölzer 1997: Cr 0.480, Fe 0.512, Co 0.519, Cu 0.517. */
static void ratios(void **state)
{
	static const struct {
		const char *anode;
		double ka2, kb, measured_ka2;
	} rows[] = {
		{ "Cr", 0.5093, 0.1287, 0.480 }, { "Fe", 0.5106, 0.1344, 0.512 },
		{ "Co", 0.5113, 0.1351, 0.519 }, { "Cu", 0.5132, 0.1338, 0.517 },
		{ "Mo", 0.5244, 0.1935, 0 },	 { "Ag", 0.5295, 0.2083, 0 },
	};

	(void)state;
	for (size_t i = 0; i < sizeof rows / sizeof *rows; i++) {
		int z = bh_anode_find(rows[i].anode)->z;
		double ka2 = bh_xray_k_share_ka2(z) / bh_xray_k_share_ka1(z);

		assert_near(ka2, rows[i].ka2, 0.02, rows[i].anode);
		if (rows[i].measured_ka2 > 0)
			assert_near(ka2, rows[i].measured_ka2, 0.03, rows[i].anode);
		assert_near(bh_filter_kbeta_ratio(bh_anode_find(rows[i].anode)),
			    rows[i].kb, 0.02, rows[i].anode);
	}
}

/* J. A. Bearden & A. F. Burr, Rev. Mod. Phys. 39 (1967) 125, via the database; Fe 7.11075 and
 * Co 7.70878 keV as measured in International Tables C. */
static void edges(void **state)
{
	static const struct {
		const char *element;
		bh_shell shell;
		double edge_keV, within_keV;
	} rows[] = {
		{ "Ti", BH_SHELL_K, 4.9664, 3e-3 },   { "V", BH_SHELL_K, 5.4651, 3e-3 },
		{ "Cr", BH_SHELL_K, 5.9892, 3e-3 },   { "Mn", BH_SHELL_K, 6.5390, 3e-3 },
		{ "Fe", BH_SHELL_K, 7.1120, 3e-3 },   { "Co", BH_SHELL_K, 7.7089, 3e-3 },
		{ "Ni", BH_SHELL_K, 8.3328, 3e-3 },   { "Cu", BH_SHELL_K, 8.9789, 3e-3 },
		{ "Zn", BH_SHELL_K, 9.6586, 3e-3 },   { "Zr", BH_SHELL_K, 17.9976, 3e-3 },
		{ "Mo", BH_SHELL_K, 19.9995, 3e-3 },  { "Rh", BH_SHELL_K, 23.2199, 3e-3 },
		{ "Ag", BH_SHELL_K, 25.5140, 3e-3 },  { "Ba", BH_SHELL_L3, 5.2470, 5e-3 },
		{ "Gd", BH_SHELL_L3, 7.2428, 5e-3 },  { "Dy", BH_SHELL_L3, 7.7901, 5e-3 },
		{ "Ho", BH_SHELL_L3, 8.0711, 5e-3 },  { "W", BH_SHELL_L3, 10.2068, 5e-3 },
		{ "Pb", BH_SHELL_L3, 13.0352, 5e-3 }, { "Fe", BH_SHELL_K, 7.11075, 3e-3 },
		{ "Co", BH_SHELL_K, 7.70878, 3e-3 },
	};

	(void)state;
	for (size_t i = 0; i < sizeof rows / sizeof *rows; i++)
		assert_near(bh_xray_edge_keV(bh_xray_z(rows[i].element), rows[i].shell),
			    rows[i].edge_keV, rows[i].within_keV, rows[i].element);
}

/* B. D. Cullity, Elements of X-Ray Diffraction: filter table for Kβ/Kα = 1/500, from memory:
 * ρt in mg/cm² and Kα passed. The two agree within 2 % (Zr, Ni) to 12 % (Mn). */
static void foils(void **state)
{
	static const struct {
		const char *anode, *foil;
		double mg_cm2, ka_passed;
	} rows[] = {
		{ "Cr", "V", 10, 0.49 },  { "Fe", "Mn", 12, 0.48 },
		{ "Co", "Fe", 14, 0.46 }, { "Cu", "Ni", 18, 0.42 },
		{ "Mo", "Zr", 77, 0.29 },
	};

	(void)state;
	for (size_t i = 0; i < sizeof rows / sizeof *rows; i++) {
		const bh_anode *a = bh_anode_find(rows[i].anode);
		int z = bh_filter_element(a);
		double um, mg_cm2;

		assert_string_equal(bh_xray_symbol(z), rows[i].foil);
		um = bh_filter_thickness_um(a, z, bh_filter_kbeta_ratio(a), 1.0 / 500);
		mg_cm2 = um * BH_CM_PER_UM * bh_xray_density_g_cm3(z) * 1000;
		assert_ratio(mg_cm2, rows[i].mg_cm2, 0.15, rows[i].foil);
		assert_ratio(bh_absorb_layer_frac(z, um, bh_filter_ka_keV(a)),
			     rows[i].ka_passed, 0.15, rows[i].foil);
	}
	/* common practice: silver takes rhodium or palladium */
	assert_true(bh_filter_element(bh_anode_find("Ag")) == 45 ||
		    bh_filter_element(bh_anode_find("Ag")) == 46);
}

/* J. H. Hubbell & S. M. Seltzer, NIST SRD 126: total μ/ρ, cm²/g, at (2 Kα1 + Kα2)/3, as carried
 * by the database; printed here to four digits. 4 %, light elements 3 %, near an edge 8 %. */
static void attenuation(void **state)
{
	static const char *const anodes[] = { "Cr", "Fe", "Co", "Cu", "Mo", "Ag" };
	static const struct {
		const char *formula;
		double cm2_g[6];
	} rows[] = {
		{ "C", { 15.01, 8.991, 7.072, 4.506, 0.5761, 0.3738 } },
		{ "O", { 37.78, 22.8, 17.97, 11.45, 1.222, 0.6847 } },
		{ "Al", { 154.6, 95.87, 76.4, 49.58, 5.114, 2.588 } },
		{ "Si", { 196.4, 122.5, 97.83, 63.74, 6.642, 3.348 } },
		{ "Ti", { 590.2, 358.4, 290.8, 199.7, 23.41, 11.91 } },
		{ "Mn", { 97.52, 61.57, 392.5, 269.9, 33.06, 16.98 } },
		{ "Fe", { 112.5, 71.05, 57.22, 301.7, 37.62, 19.39 } },
		{ "Co", { 124.3, 78.48, 63.18, 320.7, 40.95, 21.19 } },
		{ "Ni", { 144.4, 91.27, 73.48, 48.83, 46.89, 24.39 } },
		{ "Cu", { 153.1, 96.83, 77.97, 51.82, 49.1, 25.64 } },
		{ "Zr", { 385.7, 246.8, 199.7, 133.8, 16.34, 55.89 } },
		{ "W", { 454.2, 298.6, 244.8, 168.3, 93.74, 50.51 } },
		{ "Pb", { 601.6, 397.9, 327, 225.7, 121.8, 66.64 } },
		{ "H2O", { 33.59, 20.29, 16, 10.21, 1.126, 0.6491 } },
		{ "SiO2", { 111.9, 69.39, 55.3, 35.9, 3.756, 1.93 } },
		{ "Al2O3", { 99.61, 61.46, 48.89, 31.62, 3.281, 1.692 } },
		{ "Fe2O3", { 90.08, 56.55, 45.42, 214.5, 26.68, 13.77 } },
		{ "CaCO3", { 216.3, 137.9, 111.4, 74.21, 8.402, 4.293 } },
		{ "LaB6", { 146.1, 422.8, 346.7, 238.1, 30.74, 16.32 } },
		{ "LiCoO2", { 87.26, 54.77, 43.97, 196.9, 25.07, 13 } },
	};
	bh_arena *arena = bh_arena_new();
	bh_err err = { BH_OK, 0, 0, "", "", "" };

	(void)state;
	for (size_t i = 0; i < sizeof rows / sizeof *rows; i++)
		for (size_t k = 0; k < 6; k++) {
			bh_composition c;

			assert_true(bh_formula_read(&c, arena, rows[i].formula, &err));
			assert_ratio(bh_absorb_cm2_g(&c, bh_filter_ka_keV(bh_anode_find(
								 anodes[k]))),
				     rows[i].cm2_g[k], 0.003, rows[i].formula);
		}
	/* D. K. Smith 1992: quartz with Cu Kα μ = 91.3 1/cm; 4 % between
	 * generations of tables */
	{
		bh_composition quartz;

		assert_true(bh_formula_read(&quartz, arena, "SiO2", &err));
		assert_ratio(
			2.646 * bh_absorb_cm2_g(&quartz,
						bh_filter_ka_keV(bh_anode_find("Cu"))),
			91.3, 0.045, "quartz");
	}
	bh_arena_free(arena);
}

/* Dry air, J. H. Hubbell & S. M. Seltzer, NIST SRD 126, from memory: μ/ρ 23.41, 9.921, 5.120,
 * 1.614, 0.7779 cm²/g at 6, 8, 10, 15, 20 keV; 2 % for another generation of tables. A 320 µm
 * silicon sensor stops 0.99 of Cu, 0.39 of Mo, 0.22 of Ag Kα: from Si of the same source. */
static void path_and_sensor(void **state)
{
	static const struct {
		double keV, cm2_g;
	} air[] = {
		{ 6, 23.41 }, { 8, 9.921 }, { 10, 5.120 }, { 15, 1.614 }, { 20, 0.7779 }
	};
	static const struct {
		const char *anode;
		double stopped;
	} rows[] = { { "Cu", 0.99 }, { "Mo", 0.39 }, { "Ag", 0.22 } };
	static const bh_detector silicon = { .sensor_z = 14,
					     .sensor_um = 320,
					     .efficiency = 1 };

	(void)state;
	for (size_t i = 0; i < sizeof air / sizeof *air; i++)
		assert_ratio(-log(bh_absorb_gas_frac(BH_GAS_AIR, 480, air[i].keV)) /
				     (1.205e-3 * 48),
			     air[i].cm2_g, 0.02, "air");
	for (size_t i = 0; i < sizeof rows / sizeof *rows; i++)
		assert_near(
			bh_detector_efficiency_frac(
				&silicon, bh_filter_ka_keV(bh_anode_find(rows[i].anode))),
			rows[i].stopped, 0.0051, rows[i].anode);
	assert_near(bh_absorb_gas_frac(BH_GAS_VACUUM, 480, 5), 1, 0, "vacuum");
	assert_true(bh_absorb_gas_frac(BH_GAS_HELIUM, 480, 5.4) > 0.99);
}

/* Which anode's Kα1 or Kβ excites which element: edges of Bearden & Burr 1967. */
static void who_excites_whom(void **state)
{
	static const struct {
		const char *anode, *element;
		bh_fl_group group;
		bool by_ka, by_kb;
	} rows[] = {
		{ "Cu", "Fe", BH_FL_KA, true, true },
		{ "Cu", "Co", BH_FL_KA, true, true },
		{ "Cu", "Ni", BH_FL_KA, false, true },
		{ "Cu", "Mn", BH_FL_KA, true, true },
		{ "Cu", "Cu", BH_FL_KA, false, false },
		{ "Cu", "Dy", BH_FL_LA, true, true },
		{ "Cu", "Ho", BH_FL_LA, false, true },
		{ "Cu", "Er", BH_FL_LA, false, true },
		{ "Co", "Mn", BH_FL_KA, true, true },
		{ "Co", "Cr", BH_FL_KA, true, true },
		{ "Co", "Fe", BH_FL_KA, false, true },
		{ "Fe", "Cr", BH_FL_KA, true, true },
		{ "Fe", "Mn", BH_FL_KA, false, true },
		{ "Cr", "Ti", BH_FL_KA, true, true },
		{ "Cr", "V", BH_FL_KA, false, true },
		{ "Mo", "Y", BH_FL_KA, true, true },
		{ "Mo", "Zr", BH_FL_KA, false, true },
	};

	(void)state;
	for (size_t i = 0; i < sizeof rows / sizeof *rows; i++) {
		const bh_anode *a = bh_anode_find(rows[i].anode);
		int z = bh_xray_z(rows[i].element);
		double ka = bh_xray_fluorescence_cm2_g(z, rows[i].group,
						       bh_energy_keV(a->ka1_A));
		double kb = bh_xray_fluorescence_cm2_g(z, rows[i].group,
						       bh_energy_keV(a->kb_A));

		if ((ka > 0) != rows[i].by_ka || (kb > 0) != rows[i].by_kb)
			fail_msg("%s on %s: Ka %g, Kb %g", rows[i].anode, rows[i].element,
				 ka, kb);
	}
}

/* M. O. Krause, J. Phys. Chem. Ref. Data 8 (1979) 307, from memory; newer tables lie 3 to 5 %
 * above for Ti to Cu, hence 6 %. */
static void yields(void **state)
{
	static const struct {
		const char *element;
		double yield;
	} rows[] = {
		{ "Ti", 0.214 }, { "Cr", 0.275 }, { "Fe", 0.340 }, { "Co", 0.373 },
		{ "Ni", 0.406 }, { "Cu", 0.440 }, { "Zn", 0.474 }, { "Mo", 0.765 },
	};

	(void)state;
	for (size_t i = 0; i < sizeof rows / sizeof *rows; i++)
		assert_ratio(bh_xray_yield(bh_xray_z(rows[i].element), BH_SHELL_K),
			     rows[i].yield, 0.06, rows[i].element);
}

/* Kα output grows as (U − 1)^1.6 for U below about 4 (E. P. Bertin, Principles and Practice of
 * X-Ray Spectrometric Analysis, from memory): 10 % between U = 2 and 4. */
static void tube_growth(void **state)
{
	const bh_anode *cu = bh_anode_find("Cu");
	double low = bh_tube_line_per_s_sr_mA(cu, BH_KA1, 2 * 8.979, 90);
	double high = bh_tube_line_per_s_sr_mA(cu, BH_KA1, 4 * 8.979, 90);

	(void)state;
	assert_ratio(high / low, pow(3, 1.6), 0.15, "(U - 1)^1.6");
	assert_near(bh_tube_line_per_s_sr_mA(cu, BH_KA1, 8.9, 6), 0, 0, "below the edge");
	assert_true(bh_tube_line_per_s_sr_mA(cu, BH_KA1, 40, 3) <
		    bh_tube_line_per_s_sr_mA(cu, BH_KA1, 40, 12));
	/* H. Ebel 1999: of the order of 1e12 photons/(s sr mA) for copper at 40 kV, from memory */
	assert_true(bh_tube_line_per_s_sr_mA(cu, BH_KA1, 40, 6) > 3e11 &&
		    bh_tube_line_per_s_sr_mA(cu, BH_KA1, 40, 6) < 3e12);
}

int main(void)
{
	static const struct CMUnitTest tests[] = {
		cmocka_unit_test(wavelengths),	   cmocka_unit_test(profiles),
		cmocka_unit_test(ratios),	   cmocka_unit_test(edges),
		cmocka_unit_test(foils),	   cmocka_unit_test(attenuation),
		cmocka_unit_test(path_and_sensor), cmocka_unit_test(who_excites_whom),
		cmocka_unit_test(yields),	   cmocka_unit_test(tube_growth),
	};

	return cmocka_run_group_tests_name("published lines", tests, NULL, NULL);
}
