#include "support/near.h"

#include <math.h>

#include "physics/bragg.h"

/* NIST SRM 640f silicon 111 and SRM 660c lanthanum hexaboride 110 with Cu Kα1: 28.441°, 30.385°
 * (certificates); iron 211 with Cr Kα1: 156.09° and aluminium 422 with Cu Kα: 137.71°, the usual
 * stress lines (from memory), by Bragg's law. */
static void angles(void **state)
{
	static const struct {
		const char *name;
		double d_A, wavelength_A, two_theta_deg;
	} rows[] = {
		{ "Si 111", 3.1356725, 1.5405929, 28.4412 },
		{ "LaB6 110", 2.9393198, 1.5405929, 30.3854 },
		{ "Fe 211", 1.1702437, 2.2897260, 156.09 },
		{ "Al 422", 0.8266007, 1.5418711, 137.71 },
	};

	(void)state;
	for (size_t i = 0; i < sizeof rows / sizeof *rows; i++) {
		double two_theta_deg;

		assert_true(bh_bragg_two_theta_deg(&two_theta_deg, rows[i].d_A,
						   rows[i].wavelength_A));
		assert_near(two_theta_deg, rows[i].two_theta_deg, i < 2 ? 1e-4 : 0.01,
			    rows[i].name);
		assert_ratio(bh_bragg_d_A(two_theta_deg, rows[i].wavelength_A),
			     rows[i].d_A, 1e-13, rows[i].name);
	}
}

/* The end of the range: λ = 2d reflects straight back, anything longer does not. */
static void limits(void **state)
{
	double two_theta_deg = -7.3;

	(void)state;
	assert_false(bh_bragg_two_theta_deg(&two_theta_deg, 0.77029, 1.5405929));
	assert_false(bh_bragg_two_theta_deg(&two_theta_deg, NAN, 1.5405929));
	assert_near(two_theta_deg, -7.3, 0, "untouched");
	assert_true(bh_bragg_two_theta_deg(&two_theta_deg, 0.77029645, 1.5405929));
	assert_near(two_theta_deg, 180, 1e-6, "back");
	assert_near(bh_bragg_d_A(180, 1.5405929), 0.77029645, 1e-12, "back");
}

int main(void)
{
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(angles),
		cmocka_unit_test(limits),
	};

	return cmocka_run_group_tests(tests, NULL, NULL);
}
