#include "support/near.h"

#include <math.h>
#include <string.h>

#include <xraylib.h>

#include "base/units.h"
#include "physics/xray.h"

enum {
	H = 1,
	O = 8,
	AL = 13,
	SI = 14,
	CR = 24,
	MN = 25,
	FE = 26,
	CO = 27,
	NI = 28,
	CU = 29,
	MO = 42,
	BA = 56,
	HO = 67,
	PB = 82
};

static const double cu_ka1_A = 1.5405929;

/* Every symbol against the database's own list; what is none. */
static void symbols(void **state)
{
	static const char *const none[] = { "",	   "fe",  "FE", "Xx", "Np",
					    "Fe2", " Fe", "J",	"?" };

	(void)state;
	for (int z = 1; z <= BH_Z_MAX; z++) {
		char *symbol = AtomicNumberToSymbol(z, NULL);

		assert_string_equal(bh_xray_symbol(z), symbol);
		assert_int_equal(bh_xray_z(symbol), z);
		xrlFree(symbol);
	}
	for (size_t i = 0; i < sizeof none / sizeof *none; i++)
		assert_int_equal(bh_xray_z(none[i]), 0);
	assert_string_equal(bh_xray_symbol(0), "?");
	assert_string_equal(bh_xray_symbol(93), "?");
}

/* Fluorescence cross sections (K, Kissel): numbers of an independent script that multiplies
 * photoelectric cross section, yield and radiative share. */
static void fluorescence(void **state)
{
	static const struct {
		bh_fl_group group;
		double wavelength_A, cm2_g;
	} rows[] = {
		{ BH_FL_KA, 1.5405929, 82.07372 }, { BH_FL_KA, 1.5444274, 82.58578 },
		{ BH_FL_KA, 1.3922340, 63.32725 }, { BH_FL_KB, 1.5405929, 11.02683 },
		{ BH_FL_KB, 1.5444274, 11.09563 }, { BH_FL_KB, 1.3922340, 8.50819 },
	};

	(void)state;
	for (size_t i = 0; i < sizeof rows / sizeof *rows; i++)
		assert_ratio(
			bh_xray_fluorescence_cm2_g(FE, rows[i].group,
						   bh_energy_keV(rows[i].wavelength_A)),
			rows[i].cm2_g, 5e-7, "Fe");
	assert_near(bh_xray_group_keV(FE, BH_FL_KA), 6.39951, 5e-6, "Fe Ka");
	assert_near(bh_xray_group_keV(FE, BH_FL_KB), 7.05800, 5e-6, "Fe Kb");
	assert_string_equal(bh_xray_group_name(BH_FL_LB), "Lb");
}

/* Which line excites what: K edges of Bearden & Burr (1967), L3 of the rare earths. Copper
 * Kα excites K up to cobalt and L3 up to dysprosium, its Kβ nickel too. */
static void excitation(void **state)
{
	static const struct {
		int z;
		bh_fl_group group;
		double wavelength_A;
		bool excites;
	} rows[] = {
		{ FE, BH_FL_KA, 1.5405929, true },  { CO, BH_FL_KA, 1.5405929, true },
		{ NI, BH_FL_KA, 1.5405929, false }, { NI, BH_FL_KA, 1.3922340, true },
		{ 66, BH_FL_LA, 1.5405929, true },  { HO, BH_FL_LA, 1.5405929, false },
		{ MN, BH_FL_KA, 1.7889960, true },  { FE, BH_FL_KA, 1.7889960, false },
		{ FE, BH_FL_KB, 1.6208260, true },  { CR, BH_FL_KA, 1.9360410, true },
		{ MN, BH_FL_KA, 1.9360410, false }, { 39, BH_FL_KA, 0.7093171, true },
		{ 40, BH_FL_KA, 0.7093171, false }, { O, BH_FL_LA, 0.7093171, false },
	};

	(void)state;
	for (size_t i = 0; i < sizeof rows / sizeof *rows; i++) {
		double cm2_g = bh_xray_fluorescence_cm2_g(
			rows[i].z, rows[i].group, bh_energy_keV(rows[i].wavelength_A));

		assert_true(rows[i].excites ? cm2_g > 1 : cm2_g == 0);
	}
	assert_near(bh_xray_edge_keV(FE, BH_SHELL_K), 7.1120, 0.003, "Fe K");
	assert_near(bh_xray_edge_keV(BA, BH_SHELL_L3), 5.2470, 0.005, "Ba L3");
	assert_near(bh_xray_edge_keV(H, BH_SHELL_L3), 0, 0, "H has no L shell");
}

/* f' and f'' with the usual signs: S. Sasaki, KEK Report 88-14 (1989), by cctbx, Cu Kα; 0.05
 * electrons in general, 0.3 near an edge. */
static void dispersion(void **state)
{
	static const struct {
		int z;
		double f_prime, f_double_prime, within;
	} rows[] = {
		{ SI, 0.244, 0.330, 0.05 },  { FE, -1.179, 3.198, 0.08 },
		{ CO, -2.417, 3.615, 0.1 },  { NI, -3.056, 0.509, 0.12 },
		{ CU, -2.023, 0.589, 0.05 },
	};
	double energy_keV = bh_energy_keV(cu_ka1_A);

	(void)state;
	for (size_t i = 0; i < sizeof rows / sizeof *rows; i++) {
		assert_near(bh_xray_f_prime(rows[i].z, energy_keV), rows[i].f_prime,
			    rows[i].within, bh_xray_symbol(rows[i].z));
		assert_near(bh_xray_f_double_prime(rows[i].z, energy_keV),
			    rows[i].f_double_prime, rows[i].within,
			    bh_xray_symbol(rows[i].z));
	}
	for (int z = 1; z <= BH_Z_MAX; z++)
		for (double keV = 0.2; keV < 200; keV *= 1.7)
			assert_true(bh_xray_f_double_prime(z, keV) >= 0);
}

/* Form factors of D. Waasmaier & A. Kirfel, Acta Cryst. A51 (1995) 416, by cctbx; hydrogen: the
 * free atom, 1/(1 + (2π a0 s)²)² exactly. At s = 0 the number of electrons. */
static void form_factors(void **state)
{
	static const struct {
		int z;
		double s_inv_A, f0, within_frac;
	} rows[] = {
		{ H, 0.05, 0.9469, 2e-4 },   { H, 0.2, 0.4808, 2e-4 },
		{ H, 0.4, 0.1304, 1e-3 },    { 6, 0.2, 3.5572, 0.007 },
		{ O, 0.25, 4.8081, 0.002 },  { FE, 0.1, 23.679, 0.002 },
		{ FE, 0.4, 13.8426, 0.005 },
	};

	(void)state;
	for (size_t i = 0; i < sizeof rows / sizeof *rows; i++)
		assert_ratio(bh_xray_f0(rows[i].z, rows[i].s_inv_A), rows[i].f0,
			     rows[i].within_frac, bh_xray_symbol(rows[i].z));
	for (int z = 1; z <= BH_Z_MAX; z++) {
		assert_near(bh_xray_f0(z, 0), z, 1e-4, bh_xray_symbol(z));
		for (double s = 0; s < 2; s += 0.1)
			assert_true(bh_xray_f0(z, s + 0.1) < bh_xray_f0(z, s));
	}
}

/* Shares of the K radiation sum to one; Kα2/Kα1 is near one half and Kβ/Kα 0.13 to 0.21 (text
 * books, from memory; J. H. Scofield's rates); yields: M. O. Krause, J. Phys. Chem. Ref. Data 8
 * (1979) 307 (from memory), 6 %. */
static void emission(void **state)
{
	static const struct {
		int z;
		double yield;
	} rows[] = { { 22, 0.214 }, { CR, 0.275 }, { FE, 0.340 }, { CO, 0.373 },
		     { NI, 0.406 }, { CU, 0.440 }, { 30, 0.474 }, { MO, 0.765 } };

	(void)state;
	for (int z = 21; z <= BH_Z_MAX; z++) {
		double ka1 = bh_xray_k_share_ka1(z), ka2 = bh_xray_k_share_ka2(z);
		double kb = bh_xray_k_share_kb(z);

		assert_near(ka1 + ka2 + kb, 1, 2e-3, bh_xray_symbol(z));
		assert_near(ka2 / ka1, 0.5, 0.14, bh_xray_symbol(z));
		assert_true(kb / (ka1 + ka2) > 0.1 && kb / (ka1 + ka2) < 0.31);
	}
	for (size_t i = 0; i < sizeof rows / sizeof *rows; i++)
		assert_ratio(bh_xray_yield(rows[i].z, BH_SHELL_K), rows[i].yield, 0.06,
			     bh_xray_symbol(rows[i].z));
}

/* Compton: the longest shift h/(m c) (1 − cos 2θ), h/(m c) = 0.0242631 Å (CODATA 2018); cross
 * sections of Al2O3 by mass, from an independent script. */
static void compton(void **state)
{
	static const struct {
		double two_theta_deg, cm2_g_sr;
	} rows[] = { { 30, 0.00567430 }, { 90, 0.00706570 } };
	double energy_keV = bh_energy_keV(cu_ka1_A);

	(void)state;
	for (double two_theta_deg = 0; two_theta_deg <= 180; two_theta_deg += 30) {
		double after_A = bh_wavelength_A(
			bh_xray_compton_keV(energy_keV, bh_rad(two_theta_deg)));

		assert_near(after_A - cu_ka1_A,
			    0.0242631 * (1 - cos(bh_rad(two_theta_deg))), 1e-7, "shift");
	}
	for (size_t i = 0; i < sizeof rows / sizeof *rows; i++) {
		double angle = bh_rad(rows[i].two_theta_deg);

		assert_ratio(0.5291348 * bh_xray_compton_cm2_g_sr(AL, energy_keV, angle) +
				     0.4708652 * bh_xray_compton_cm2_g_sr(O, energy_keV,
									  angle),
			     rows[i].cm2_g_sr, 2e-6, "Al2O3");
	}
	assert_near(bh_xray_compton_cm2_g_sr(AL, energy_keV, 0), 0, 0,
		    "none straight on");
}

/* Attenuation of J. H. Hubbell & S. M. Seltzer (NIST SRD 126) at the mean Kα of the anodes, 4 %;
 * outside of the tables the nearest edge of them, never an error. */
static void attenuation(void **state)
{
	static const struct {
		int z;
		double energy_keV, cm2_g;
	} rows[] = {
		{ FE, 8.0412, 301.7 }, { FE, 6.9254, 57.22 }, { FE, 17.4442, 37.62 },
		{ O, 8.0412, 11.45 },  { AL, 5.4117, 154.6 }, { PB, 17.4442, 121.8 },
	};

	(void)state;
	for (size_t i = 0; i < sizeof rows / sizeof *rows; i++)
		assert_ratio(bh_xray_attenuation_cm2_g(rows[i].z, rows[i].energy_keV),
			     rows[i].cm2_g, 0.04, bh_xray_symbol(rows[i].z));
	for (int z = 1; z <= BH_Z_MAX; z++) {
		assert_true(bh_xray_attenuation_cm2_g(z, 0.01) > 0);
		assert_true(bh_xray_attenuation_cm2_g(z, 5000) > 0);
		assert_true(bh_xray_molar_mass_g(z) >= 1);
		assert_true(isfinite(bh_xray_density_g_cm3(z)));
	}
	assert_near(bh_xray_attenuation_cm2_g(0, 8), 0, 0, "no element");
	assert_near(bh_xray_attenuation_cm2_g(93, 8), 0, 0, "no element");
	assert_near(bh_xray_density_g_cm3(CU), 8.96, 0.02, "copper, handbooks");
}

int main(void)
{
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(symbols),	cmocka_unit_test(fluorescence),
		cmocka_unit_test(excitation),	cmocka_unit_test(dispersion),
		cmocka_unit_test(form_factors), cmocka_unit_test(emission),
		cmocka_unit_test(compton),	cmocka_unit_test(attenuation),
	};

	return cmocka_run_group_tests(tests, NULL, NULL);
}
