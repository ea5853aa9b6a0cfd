/* Geometry, profile and counting against numbers of handbooks and of independent evaluation. */
#include "support/near.h"

#include <math.h>

#include "base/cholesky.h"
#include "base/units.h"
#include "data/anodes.h"
#include "model/instrument.h"
#include "physics/bragg.h"
#include "physics/detector.h"
#include "physics/filter.h"
#include "physics/geometry.h"
#include "physics/grains.h"
#include "physics/profile.h"

static double at(double two_theta_deg)
{
	return bh_rad(two_theta_deg / 2);
}

/* R δ/sinθ and its exact form: H. P. Klug & L. E. Alexander, X-Ray Diffraction Procedures
 * (1974); evaluated by a second program. */
static void footprint(void **state)
{
	static const struct {
		double divergence_deg, two_theta_deg, exact_mm, within_frac;
	} rows[] = {
		{ 0.5, 20, 12.069, 1e-3 },
		{ 1, 10, 48.55, 1e-3 },
		{ 0.25, 30, 4.046, 1e-3 },
	};

	(void)state;
	for (size_t i = 0; i < 3; i++)
		assert_ratio(bh_geometry_footprint_mm(rows[i].divergence_deg, 240,
						      rows[i].two_theta_deg),
			     rows[i].exact_mm, rows[i].within_frac, "footprint");
	assert_true(isinf(bh_geometry_footprint_mm(1, 240, 0.5)));
	/* where the exact footprint equals the specimen, the whole beam is on it: the lower edge
	 * reaches a little farther than half, so the two differ by that asymmetry */
	assert_near(bh_geometry_lit_frac(0.5, 240, 13, 20), 1, 1e-12, "all on");
	assert_near(bh_geometry_lit_frac(0.5, 240, 6.03, 20), 0.5, 2e-3, "half on");
	{
		double from = bh_geometry_full_from_deg(0.5, 240, 20);

		assert_near(bh_geometry_lit_frac(0.5, 240, 20, from + 0.001), 1, 1e-9,
			    "full");
		assert_true(bh_geometry_lit_frac(0.5, 240, 20, from - 0.01) < 1);
	}
}

/* Aberrations: International Tables H (2019) Table 3.1.1 for the forms, A. J. C. Wilson,
 * Mathematical Theory of X-Ray Powder Diffractometry (1963), from memory for the constants. */
static void shifts(void **state)
{
	(void)state;
	assert_near(bh_geometry_displacement_deg(0.1, 240, 28.44), -0.04628, 1e-5,
		    "displaced");
	assert_near(bh_geometry_displacement_deg(0.1, 240, 60), -0.04135, 1e-5,
		    "displaced");
	assert_near(bh_geometry_displacement_deg(0.1, 173, 26.64), -0.06446, 1e-5,
		    "displaced");
	assert_near(bh_geometry_transparency_deg(91.0, 240, 26.64), -0.00588, 1e-5,
		    "quartz");
	assert_near(bh_geometry_transparency_deg(7, 240, 30), -0.0853, 6e-5, "organic");
	assert_near(bh_geometry_flat_deg(1, 28.44), -0.00574, 1e-5, "flat");
}

/* Lorentz-polarization, (1 + cos²2θ)/(sin²θ cosθ), and with a monochromator of 2θ_M = 26.58°;
 * here halved by 1 + A and doubled by 2/(sinθ sin2θ) = 1/(sin²θ cosθ). */
static void lorentz_polarization(void **state)
{
	static const struct {
		double two_theta_deg, lp, with_crystal;
	} rows[] = {
		{ 20, 63.411, 0 },	{ 30, 27.046, 13.738 }, { 40, 14.436, 0 },
		{ 60, 5.7735, 3.0794 }, { 90, 2.8284, 1.5715 }, { 120, 3.3333, 1.7779 },
		{ 150, 7.2469, 0 },
	};
	double a = pow(cos(bh_rad(26.58)), 2);

	(void)state;
	assert_near(a, 0.7998, 5e-5, "A");
	for (size_t i = 0; i < sizeof rows / sizeof *rows; i++) {
		double theta = at(rows[i].two_theta_deg);

		assert_ratio(2 * bh_geometry_lorentz_polarization(1, theta), rows[i].lp,
			     1e-4, "LP");
		if (rows[i].with_crystal > 0)
			assert_ratio(bh_geometry_lorentz_polarization(a, theta),
				     rows[i].with_crystal, 1e-3, "LP with crystal");
	}
}

/* Graphite 002, d = 3.3545 Å: setting angles for mean Kα, common practice. */
static void graphite(void **state)
{
	static const struct {
		const char *anode;
		double two_theta_deg;
	} rows[] = {
		{ "Cu", 26.573 }, { "Co", 30.953 }, { "Cr", 39.935 }, { "Mo", 12.163 }
	};

	(void)state;
	for (size_t i = 0; i < 4; i++) {
		double two_theta_deg;

		assert_true(bh_bragg_two_theta_deg(
			&two_theta_deg, 3.3545,
			bh_wavelength_A(bh_filter_ka_keV(bh_anode_find(rows[i].anode)))));
		assert_near(two_theta_deg, rows[i].two_theta_deg, 0.03, rows[i].anode);
	}
}

/* "Infinitely thick": μt = 3.2 sinθ absorbs to 1 − e^−6.4 (Klug & Alexander 1974); depths that
 * give 99 % at 2θ = 45°, from handbook attenuation, 4 %. */
static void depth(void **state)
{
	static const struct {
		double mu_inv_cm, depth_um;
	} rows[] = {
		{ 7.874 * 301.7, 3.7 }, { 7.874 * 57.22, 19.6 }, { 7.874 * 37.62, 29.7 },
		{ 19.25 * 168.3, 2.7 }, { 2.699 * 49.58, 65.9 }, { 91.0, 96.8 },
	};

	(void)state;
	for (size_t i = 0; i < sizeof rows / sizeof *rows; i++)
		assert_ratio(1000 * bh_geometry_depth_mm(0.99, rows[i].mu_inv_cm, 45),
			     rows[i].depth_um, 0.04, "depth");
	assert_ratio(bh_geometry_thick_mm(91, 1, 60), 3.2 * 0.5 / 9.1, 1e-9, "thick");
	assert_near(
		1 - exp(-2 * 91 * bh_geometry_thick_mm(91, 1, 60) * BH_CM_PER_MM / 0.5),
		0.99834, 1e-5, "1 - exp(-6.4)");
}

/* P. Thompson, D. E. Cox & J. B. Hastings, J. Appl. Cryst. 20 (1987) 79, evaluated by a second
 * program; the true Voigt differs by at most 0.43 %. */
static void pseudo_voigt(void **state)
{
	static const struct {
		double gauss, lorentz, fwhm, eta, voigt;
	} rows[] = {
		{ 1, 1, 1.634643, 0.68254, 1.637595 },
		{ 0.08, 0.05, 0.109620, 0.53435, 0.110031 },
		{ 0.05, 0.10, 0.121614, 0.86241, 0.121787 },
		{ 1, 0.5, 1.288280, 0.46479, 1.293776 },
	};

	(void)state;
	for (size_t i = 0; i < 4; i++) {
		bh_profile p = bh_profile_of(rows[i].gauss, rows[i].lorentz);
		double sum = 0, step = p.fwhm_deg / 50;

		assert_near(p.fwhm_deg, rows[i].fwhm, 1e-6, "FWHM");
		assert_near(p.eta, rows[i].eta, 1e-5, "eta");
		assert_ratio(p.fwhm_deg, rows[i].voigt, 0.0045, "true Voigt");
		assert_ratio(bh_profile_height_inv_deg(p, p.fwhm_deg / 2),
			     bh_profile_height_inv_deg(p, 0) / 2, 1e-9, "half height");
		for (int k = -500; k <= 500; k++) /* ± 10 FWHM by the midpoint rule */
			sum += bh_profile_height_inv_deg(p, k * step) * step;
		assert_near(bh_profile_inside_frac(p, 500.5 * step), sum, 1e-4, "area");
	}
	/* share inside 1.5 FWHM in all: 0.92 Gaussian, 0.63 Lorentzian (closed forms) */
	assert_near(bh_profile_inside_frac((bh_profile){ 1, 0 }, 0.75),
		    erf(0.75 * 2 * sqrt(log(2))), 1e-12, "Gaussian");
	assert_near(bh_profile_inside_frac((bh_profile){ 1, 1 }, 0.75),
		    2 / BH_PI * atan(1.5), 1e-12, "Lorentzian");
}

/* G. Caglioti, A. Paoletti & F. P. Ricci, Nucl. Instrum. 3 (1958) 223, from memory, and
 * P. Scherrer 1918: worked numbers by a second program. */
static void widths(void **state)
{
	bh_instrument i = { .gauss_tan2_deg2 = 0.01,
			    .gauss_tan_deg2 = -0.005,
			    .gauss_0_deg2 = 0.004 };
	bh_phase small = { .size_nm = 40.977 };
	bh_instrument none = { .radius_mm = 240 };

	(void)state;
	assert_near(bh_profile_gauss_deg(&i, 60), 0.066683, 1e-6, "width at 60");
	assert_near(bh_profile_line(&i, NULL, 1.5, 60).fwhm_deg, 0.066683, 1e-6,
		    "no Lorentzian");
	/* K 0.9, Cu Kα1, β 0.2° at 28.44° : 409.77 Å */
	assert_ratio(bh_profile_line(&none, &small, 1.5405929, 28.44).fwhm_deg, 0.2, 1e-4,
		     "Scherrer");
	small = (bh_phase){ .size_nm = 16.908 };
	assert_ratio(bh_profile_line(&none, &small, 1.5405929, 40).fwhm_deg, 0.5, 1e-4,
		     "Scherrer");
}

/* MODEL of a strip: 160 channels of 0.02°, a range of 1° at 0.1°/s in steps of 0.02°: every bin
 * sees 32 channel·s and the wall takes 42 s (event-by-event simulation). Grains: quartz 101,
 * 10 µm, still: of order 100 crystallites (Klug & Alexander 1974, Table 5-3: 5 to 15 µm
 * reproduce within 2 %, spun). */
static void spinner(void **state)
{
	(void)state;
	assert_near(bh_grains_spin_gain(1, 2), 1, 0, "nothing to gain");
	/* Δψ = 100 Δω: 100/[(2/π) ln 100 + π/4] = 26.89 (closed form, checked by quadrature of
	 * the swept union of acceptance bands) */
	assert_ratio(bh_grains_spin_gain(100, 1), 26.89, 1e-3, "spin");
}

/* Inverse of the 3×3 Hilbert matrix: 9, 192, 180 on its diagonal (textbook). */
static void inverse(void **state)
{
	static const double want[3] = { 9, 192, 180 };

	(void)state;
	for (size_t k = 0; k < 3; k++) {
		double a[9], got;

		for (size_t i = 0; i < 9; i++)
			a[i] = 1.0 / (double)(i / 3 + i % 3 + 1);
		assert_true(bh_cholesky_inverse_kk(&got, a, 3, k));
		assert_ratio(got, want[k], 1e-10, "Hilbert");
	}
	{
		double singular[4] = { 1, 1, 1, 1 }, got = 7;

		assert_false(bh_cholesky_inverse_kk(&got, singular, 2, 0));
		assert_near(got, 7, 0, "untouched");
	}
}

int main(void)
{
	static const struct CMUnitTest tests[] = {
		cmocka_unit_test(footprint),
		cmocka_unit_test(shifts),
		cmocka_unit_test(lorentz_polarization),
		cmocka_unit_test(graphite),
		cmocka_unit_test(depth),
		cmocka_unit_test(pseudo_voigt),
		cmocka_unit_test(widths),
		cmocka_unit_test(spinner),
		cmocka_unit_test(inverse),
	};

	return cmocka_run_group_tests_name("published geometry", tests, NULL, NULL);
}
