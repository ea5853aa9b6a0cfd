/* What the machine runs: exposure, run-in, rounding, joining. */
#include "support/near.h"

#include <math.h>
#include <string.h>

#include "design/ranges.h"
#include "design/step.h"

/* 160 channels of 0.02°. */
static bh_instrument strip(void)
{
	return (bh_instrument){
		.radius_mm = 180 / 3.14159265358979323846,
		.two_theta_min_deg = 3,
		.two_theta_max_deg = 150,
		.smallest_step_deg = 0.001,
		.fastest_deg_s = 5,
		.per_range_s = 15,
		.shortest_step_s = 0.1,
		.detector = { .kind = BH_DETECTOR_STRIP,
			      .aperture_mm = 0.02,
			      .channels = 160 },
	};
}

/* A strip moving at 0.1°/s over 30 to 31° in steps of 0.02°: every bin sees 32.000
 * channel·s and the wall takes 42.0 s (event-by-event simulation of an independent script). */
static void moving(void **state)
{
	bh_instrument i = strip();
	bh_machine machine = { &i, 0.02, 3, 150 };
	bh_span span = { 30, 31, { HUGE_VAL, 32 / 0.02 }, "test" };
	bh_range r = bh_ranges_run(&machine, &span);

	(void)state;
	assert_int_equal(r.mode, BH_MODE_MOVING);
	assert_near(r.speed_deg_s, 0.1, 1e-9, "speed");
	assert_near(r.exposure_s, 32, 1e-6, "exposure");
	assert_near(bh_ranges_scanning_s(&r, &i), 42, 1e-6, "scanning");
	assert_near(r.wall_s, 57, 1e-6, "wall");
	assert_near(r.travel_from_deg, 28.4, 1e-9, "run-in");
	assert_near(r.travel_to_deg, 32.6, 1e-9, "run-out");
	assert_int_equal(r.steps, 51);
}

/* Count channel by channel what one bin sees while the strip goes by. */
static double simulated_exposure(const bh_range *r, double bin_deg, double pitch_deg,
				 int channels)
{
	double seen_s = 0, dt_s = 0.01 * r->step_deg / r->speed_deg_s;
	double half = r->step_deg / 2;

	for (double t = 0, end = (r->travel_to_deg - r->travel_from_deg) / r->speed_deg_s;
	     t < end; t += dt_s) {
		double centre = r->travel_from_deg + r->speed_deg_s * t;

		for (int c = 0; c < channels; c++) {
			double at = centre + (c - (channels - 1) / 2.0) * pitch_deg;

			if (at >= bin_deg - half && at < bin_deg + half)
				seen_s += dt_s;
		}
	}
	return seen_s;
}

static void every_bin_alike(void **state)
{
	bh_instrument i = strip();
	bh_machine machine = { &i, 0.013, 3, 150 };
	bh_span span = { 30, 31, { HUGE_VAL, 900 }, "test" };
	bh_range r = bh_ranges_run(&machine, &span);

	(void)state;
	assert_near(simulated_exposure(&r, 30.0, 0.02, 160), r.exposure_s,
		    0.02 * r.exposure_s, "first");
	assert_near(simulated_exposure(&r, 30.5, 0.02, 160), r.exposure_s,
		    0.02 * r.exposure_s, "middle");
	assert_near(simulated_exposure(&r, 31.0, 0.02, 160), r.exposure_s,
		    0.02 * r.exposure_s, "last");
}

/* Standing over a window: counts of T seconds fall on T step/pitch per step. */
static void standing(void **state)
{
	bh_instrument i = strip();
	bh_machine machine = { &i, 0.01, 3, 150 };
	bh_span span = { 30, 31, { 1000, 1000 }, "test" };
	bh_range r;

	(void)state;
	i.detector.standing = true;
	r = bh_ranges_run(&machine, &span);
	assert_int_equal(r.mode, BH_MODE_STANDING);
	assert_near(r.time_per_step_s, 20, 1e-9, "time");
	assert_near(r.exposure_s, 10, 1e-9, "exposure");
	assert_near(r.travel_from_deg, 30.5, 1e-9, "centre");
	assert_near(bh_ranges_scanning_s(&r, &i), 20, 1e-9, "scanning");
	/* wider than the window of 3.2° it must move */
	span.to_deg = 34;
	assert_int_equal(bh_ranges_run(&machine, &span).mode, BH_MODE_MOVING);
	/* nor may it stand where standing cannot reach the aim */
	span.to_deg = 31;
	span.density_s_deg[BH_VIEW_STILL] = HUGE_VAL;
	assert_int_equal(bh_ranges_run(&machine, &span).mode, BH_MODE_MOVING);
}

static void stepping(void **state)
{
	bh_instrument i = strip();
	bh_machine machine = { &i, 0.02, 10, 100 };
	bh_span span = { 29.97, 31.04, { 123, HUGE_VAL }, "test" };
	bh_range r;

	(void)state;
	i.detector.kind = BH_DETECTOR_SLIT;
	i.detector.channels = 1;
	i.settle_s = 0.5;
	r = bh_ranges_run(&machine, &span);
	assert_int_equal(r.mode, BH_MODE_STEP);
	assert_near(r.from_deg, 29.9, 1e-9, "outward");
	assert_near(r.to_deg, 31.1, 1e-9, "outward");
	assert_int_equal(r.steps, 61);
	assert_near(r.time_per_step_s, 2.5, 1e-9, "2.46 s up to two digits");
	assert_near(bh_ranges_scanning_s(&r, &i), 61 * 3.0, 1e-9, "settling in");
	/* never outside the limits, never below the shortest time */
	span = (bh_span){ 5, 11, { 1, HUGE_VAL }, "test" };
	r = bh_ranges_run(&machine, &span);
	assert_near(r.from_deg, 10, 1e-9, "limit");
	assert_near(r.time_per_step_s, 0.1, 1e-9, "shortest");
}

static void rounding(void **state)
{
	static const struct {
		double value, up, down;
	} rows[] = {
		{ 123, 130, 120 }, { 120, 120, 120 },	   { 0.0987, 0.099, 0.098 },
		{ 9.91, 10, 9.9 }, { 5.0000000001, 5, 5 }, { 1e-3, 1e-3, 1e-3 },
		{ 99.1, 100, 99 }, { 2.51, 2.6, 2.5 },
	};

	(void)state;
	for (size_t i = 0; i < sizeof rows / sizeof *rows; i++) {
		assert_ratio(bh_ranges_round_up(rows[i].value), rows[i].up, 1e-9, "up");
		assert_ratio(bh_ranges_round_down(rows[i].value), rows[i].down, 1e-9,
			     "down");
	}
}

static void joining(void **state)
{
	bh_arena *arena = bh_arena_new();
	bh_instrument i = strip();
	bh_machine machine = { &i, 0.02, 3, 150 };
	bh_err err = { BH_OK, 0, 0, "", "", "" };
	/* equal exposures 0.4° apart: one range saves run-in and overhead; a third far away with
	 * a hundredth of the exposure does not join unless it must */
	bh_span spans[3] = { { 60, 61, { HUGE_VAL, 20 }, "c" },
			     { 30, 31, { HUGE_VAL, 2000 }, "a" },
			     { 31.4, 32, { HUGE_VAL, 2000 }, "b" } };
	size_t count = 3;

	(void)state;
	assert_true(bh_ranges_join(spans, &count, 6, &machine, arena, &err));
	assert_int_equal(count, 2);
	assert_near(spans[0].from_deg, 30, 0, "joined from");
	assert_near(spans[0].to_deg, 32, 0, "joined to");
	assert_string_equal(spans[0].purpose, "a; b");
	assert_true(bh_ranges_join(spans, &count, 1, &machine, arena, &err));
	assert_int_equal(count, 1);
	assert_near(spans[0].to_deg, 61, 0, "all");
	assert_near(spans[0].density_s_deg[BH_VIEW_SWEEPING], 2000, 0,
		    "the larger exposure");
	bh_arena_free(arena);
}

/* L. B. McCusker et al., J. Appl. Cryst. 32 (1999) 36: at least five steps across the top of a
 * peak. A slit's steps divide 0.1°; a strip's its channel. */
static void steps(void **state)
{
	bh_arena *arena = bh_arena_new();
	bh_instrument i = strip();
	bh_step s;

	(void)state;
	s = bh_step_choose(arena, &i, 0.1, 0.5, "x", false);
	assert_near(s.step_deg, 0.02, 1e-9, "strip, fifth");
	s = bh_step_choose(arena, &i, 0.1, 0.5, "x", true);
	assert_near(s.step_deg, 0.01, 1e-9, "strip, sixth");
	i.detector.kind = BH_DETECTOR_SLIT;
	s = bh_step_choose(arena, &i, 0.3, 0.5, "x", false);
	assert_near(s.step_deg, 0.05, 1e-9, "slit");
	assert_true(strstr(s.reason, "x") != NULL);
	assert_true(bh_step_kept_frac(0.02, 0.1, 0.5) > 0.98);
	/* one step for each width loses a lot, wherever it falls */
	assert_true(bh_step_kept_frac(0.1, 0.1, 0) < 0.95);
	bh_arena_free(arena);
}

int main(void)
{
	static const struct CMUnitTest tests[] = {
		cmocka_unit_test(moving),   cmocka_unit_test(every_bin_alike),
		cmocka_unit_test(standing), cmocka_unit_test(stepping),
		cmocka_unit_test(rounding), cmocka_unit_test(joining),
		cmocka_unit_test(steps),
	};

	return cmocka_run_group_tests_name("ranges", tests, NULL, NULL);
}
