/* Information of a line and what counting buys, against closed forms and drawn counts. */
#include "support/near.h"

#include <math.h>
#include <stdlib.h>
#include <string.h>

#include "design/need.h"
#include "design/view.h"
#include "physics/profile.h"
#include "support/planned.h"

/* A signal of a few lines of two phases by hand: Kα1 alone, even background. */
typedef struct {
	bh_signal signal;
	bh_reflection reflections[4];
	bh_peak peaks[4];
	bh_background background[2];
} made;

static void make(made *m, size_t count, const double at_deg[], const double area[],
		 const bh_profile *shape, double background_cps)
{
	*m = (made){ .signal = { .rates_known = true, .neighbour_prior_frac = 0.5 } };
	m->signal.radiation.count = 1;
	m->signal.radiation.lines[0].kind = BH_KA1;
	m->signal.reflections = m->reflections;
	m->signal.peaks = m->peaks;
	m->signal.background = m->background;
	m->signal.reflection_count = m->signal.in_range_count = m->signal.peak_count =
		count;
	m->signal.background_count = 2;
	m->background[0] =
		(bh_background){ .two_theta_deg = 10, .total = background_cps };
	m->background[1] =
		(bh_background){ .two_theta_deg = 90, .total = background_cps };
	for (size_t i = 0; i < count; i++) {
		m->reflections[i] = (bh_reflection){ .phase = i,
						     .d_A = 3 - 0.1 * (double)i,
						     .multiplicity = 6,
						     .rate_known = true,
						     .in_range = true,
						     .two_theta_deg = at_deg[i],
						     .fwhm_deg = shape->fwhm_deg };
		m->peaks[i] = (bh_peak){ i,	     0,	     at_deg[i], shape->fwhm_deg,
					 shape->eta, area[i] };
	}
}

/* Gaussian without background: σ(2θ0) = σ_w/√N; Lorentzian: HWHM √(2/N). Closed forms of the
 * Fisher information of Poisson counts. */
static void position(void **state)
{
	static const double at[] = { 40 }, area[] = { 1 };
	bh_view_of_line line;
	made m;
	double n = 1e4, fwhm = 0.05 * 2.35482;

	(void)state;
	make(&m, 1, at, area, &(bh_profile){ fwhm, 0 }, 1e-9);
	bh_view_make(&line, &m.signal, 0);
	assert_ratio(sqrt(bh_view_variance(&line, n, false, BH_FIT_POSITION)), 5.0e-4,
		     0.005, "Gaussian");
	make(&m, 1, at, area, &(bh_profile){ 0.1, 1 }, 1e-9);
	bh_view_make(&line, &m.signal, 0);
	/* a free background takes a little of a Lorentzian, whose feet look like one */
	assert_ratio(sqrt(bh_view_variance(&line, n, false, BH_FIT_POSITION)), 7.071e-4,
		     0.025, "Lorentzian");
}

/* Without background the area is as good as the counts: σ/A = 1/√N. Level and slope are
 * fitted too, but a background of zero is known to be zero by its own counts. */
static void area(void **state)
{
	static const double at[] = { 40 }, areas[] = { 2 };
	bh_view_of_line line;
	made m;

	(void)state;
	make(&m, 1, at, areas, &(bh_profile){ 0.1, 0 }, 1e-6);
	bh_view_make(&line, &m.signal, 0);
	assert_ratio(bh_view_variance(&line, 5000, false, BH_FIT_AREA), 1e-4, 0.01,
		     "1/N");
	assert_near(line.inside_frac, 0.99959, 2e-5,
		    "Gaussian inside 1.5 FWHM"); /* erf */
	assert_near(line.purity_frac, 1, 0, "alone");
	assert_near(bh_view_limit(&line, BH_FIT_AREA), 0, 1e-9, "no limit");
	/* twice the exposure, half the variance */
	assert_ratio(bh_view_variance(&line, 10000, false, BH_FIT_AREA) * 2,
		     bh_view_variance(&line, 5000, false, BH_FIT_AREA), 1e-6, "exposure");
}

/* Best split of time between peak and background, t_P/t_B = √(r_P/r_B): for 100 and 25
 * counts/s var·T = (√100 + √25)² = 225 (ITC C (2004), 7.5.7; equal split 250). Widths stand
 * for times. */
static void split(void **state)
{
	bh_view_of_line line = { .low_deg = 10,
				 .high_deg = 11,
				 .fwhm_deg = 0.01,
				 .gross_cps_deg = 100,
				 .background_cps = 25,
				 .area_cps_deg = 75,
				 .inside_frac = 1 };
	double background_deg, variance;

	(void)state;
	variance = bh_view_net_variance(&background_deg, &line);
	assert_near(background_deg, 0.5, 1e-12, "2:1");
	assert_near(variance * 75 * 75 * (1 + background_deg), 225, 1e-9, "225");
	/* net σ 1 % of 75/s needs 400 s at the best split */
	assert_near(variance * 1e4 * (1 + background_deg), 400, 1e-9, "400 s");
	line.fwhm_deg = 0.5; /* two widths on each side at least */
	bh_view_net_variance(&background_deg, &line);
	assert_near(background_deg, 2, 1e-12, "two widths on each side");
}

/* A generator of the tests' own: 64-bit LCG of D. E. Knuth, TAOCP 3.3.4. */
static double uniform(unsigned long long *seed)
{
	*seed = *seed * 6364136223846793005ULL + 1442695040888963407ULL;
	return ((double)(*seed >> 11) + 0.5) / 9007199254740992.0;
}

/* Poisson by multiplication, in parts for large means. */
static double poisson(double mean, unsigned long long *seed)
{
	double n = 0;

	while (mean > 0) {
		double part = mean > 30 ? 30 : mean, product = uniform(seed);

		mean -= part;
		while (product > exp(-part)) {
			product *= uniform(seed);
			n++;
		}
	}
	return n;
}

/* Draw counts of an isolated doublet step by step with the density that the design asks for
 * an area to 3 %, sum peak and background as a person would, and look at the scatter. */
static void drawn_counts(void **state)
{
	static const char text[] =
		"instrument = \"slit-250-foil\"\n anodes = {\"Cu\"}\n two_theta = {20, "
		"60}\n" SILICON "targets = {\"2 2 0\"} }\n"
		"aim \"line\" { phase = \"silicon\" plane = \"2 2 0\" area_error = 3 }\n";
	enum { DRAWS = 4000 };
	bh_arena *arena = bh_arena_new();
	bh_plan *plan = planned(arena, text);
	bh_view_of_line v;
	unsigned long long seed = 20261201;
	double step = 0.01, density, width_b, sum = 0, squares = 0, p, background;

	(void)state;
	bh_view_make(&v, &plan->signal, plan->targets[0].reflection);
	density = bh_view_density(&v, 0.03 * 0.03, BH_FIT_AREA);
	assert_true(density < 1e9);
	bh_view_net_variance(&width_b, &v);
	background = v.background_cps * step * density;
	p = v.high_deg - v.low_deg;
	for (int draw = 0; draw < DRAWS; draw++) {
		double net = 0, beside = 0;

		/* gross_cps_deg holds every line's part in the window */
		for (double x = v.low_deg; x < v.high_deg - step / 2; x += step)
			net += poisson(v.gross_cps_deg / p * step * density, &seed);
		for (double x = 0; x < width_b - step / 2; x += step)
			beside += poisson(background, &seed);
		net -= beside * p / width_b;
		sum += net;
		squares += net * net;
	}
	sum /= DRAWS;
	squares = sqrt(squares / DRAWS - sum * sum) / sum;
	/* 4000 draws give a scatter to 1.1 %; steps that do not divide the window 2 % more */
	assert_ratio(squares, 0.03, 0.05, "scatter of drawn counts");
	bh_arena_free(arena);
}

/* Neighbours: far away they cost nothing, on top they leave what is not known of them. */
static void neighbours(void **state)
{
	double at[] = { 40, 43 }, areas[] = { 2, 0.4 };
	bh_profile shape = { 0.1, 0.2 };
	bh_view_of_line line;
	made m;
	double last = 0;

	(void)state;
	make(&m, 2, at, areas, &shape, 1);
	bh_view_make(&line, &m.signal, 0);
	assert_near(bh_view_price(&line, 1e4), 1, 0.02, "far away");
	for (double apart = 0.12; apart > -0.01; apart -= 0.03) {
		double price;

		at[1] = 40 + apart;
		make(&m, 2, at, areas, &shape, 1);
		bh_view_make(&line, &m.signal, 0);
		price = bh_view_price(&line, 1e4);
		assert_true(price >=
			    last * (1 - 1e-9)); /* within 1.2 FWHM nearer is dearer */
		last = price;
	}
	at[1] = 40;
	make(&m, 2, at, areas, &shape, 1);
	bh_view_make(&line, &m.signal, 0);
	assert_near(line.purity_frac, 2 / 2.4, 1e-6, "purity");
	/* known to 50 %: 0.5 · 0.4/2 = 10 % of the area whatever the time */
	assert_ratio(sqrt(bh_view_limit(&line, BH_FIT_AREA)), 0.1, 0.01, "limit");
	assert_true(bh_view_density(&line, 0.02 * 0.02, BH_FIT_AREA) < HUGE_VAL);
	assert_ratio(bh_view_planned_variance(
			     &line, bh_view_density(&line, 0.02 * 0.02, BH_FIT_AREA),
			     BH_FIT_AREA),
		     0.1 * 0.1 + 0.02 * 0.02, 0.02, "both parts");
}

/* The grain floor: an aim above it is met exactly, an aim at or below it is not reachable and
 * takes no endless time. */
static void floors(void **state)
{
	static const double at[] = { 40 }, areas[] = { 2 };
	static const struct {
		double wanted, predicted;
		bool reachable;
	} rows[] = {
		{ 0.12, 0.12, true },
		{ 0.10541, 0.10541, true }, /* floor · √(10/9) */
		{ 0.10, 0.105409, false },
		{ 0.03, 0.105409, false },
	};
	const double grains[2] = { 100, 100 };
	bh_view_of_line line;
	made m;

	(void)state;
	make(&m, 1, at, areas, &(bh_profile){ 0.1, 0.2 }, 5);
	bh_view_make(&line, &m.signal, 0);
	for (size_t i = 0; i < sizeof rows / sizeof *rows; i++) {
		bh_aim aim = { .kind = BH_AIM_LINE, .area_error_frac = rows[i].wanted };
		bh_need need = { .aim = &aim };

		bh_need_line(&need, &line, grains);
		assert_true(need.computed);
		assert_int_equal(need.reachable[0], rows[i].reachable);
		assert_near(need.floor[0], 0.1, 1e-9, "floor");
		assert_ratio(bh_need_line_error(&line, 100, need.density_s_deg[0],
						BH_FIT_AREA),
			     rows[i].predicted, 1e-4, "predicted");
	}
}

/* A survey's exposure, judged by drawn counts: a line that brings S counts on B is found in at
 * least 95 % of cases at 5 % false alarms (threshold B + 1.645 √B, L. A. Currie, Anal. Chem. 40
 * (1968) 586, background well known), and not by a plan four times as long as need be. */
static void survey(void **state)
{
	static const char text[] = "instrument = \"strip-250\" anodes = {\"Cu\"}\n"
				   "two_theta = {20, 80}\n" HALITE "}\n"
				   "aim \"survey\" { at = 3 }";
	enum { DRAWS = 4000 };
	bh_arena *arena = bh_arena_new();
	bh_plan *plan = planned(arena, text), *pure;
	bh_scene scene = scene_of_plan(plan);
	bh_need need = { .aim = &plan->request->aims[0] };
	bh_err err = { BH_OK, 0, 0, "", "", "" };
	const double limits[2] = { 30, 30.001 };
	unsigned long long seed = 7;
	bh_profile shape;
	double share, area, width, counts, background;
	int found = 0, alarms = 0;

	(void)state;
	assert_true(bh_need_survey(&need, arena, &plan->signal, &scene, limits, &err));
	/* the 10 % line of 3 wt% of a phase of ratio 1: a tenth of 3 % of corundum 1 1 3 in this
	 * mixture, here from a plan of pure corundum */
	pure = planned(arena, "instrument = \"strip-250\" anodes = {\"Cu\"}\n" CORUNDUM
			      "targets = {\"1 1 3\"} }");
	area = pure->signal.reflections[pure->targets[0].reflection].rate_cps_deg * 0.1 *
	       0.03 * pure->signal.radiation.lines[0].mass_attenuation_cm2_g /
	       plan->signal.radiation.lines[0].mass_attenuation_cm2_g;
	shape = bh_profile_line(plan->instrument, NULL, 1.5405929, 30);
	width = 1.5 * shape.fwhm_deg;
	share = bh_profile_inside_frac(shape, width / 2);
	counts = area * share * need.density_s_deg[0];
	background = bh_observe_background_cps(&plan->signal, 30) * width *
		     need.density_s_deg[0];
	for (int i = 0; i < DRAWS; i++) {
		double limit = background + 1.645 * sqrt(background);

		found += poisson(counts + background, &seed) > limit;
		alarms += poisson(background, &seed) > limit;
	}
	assert_true(found >= 0.95 * DRAWS);
	assert_true(alarms < 0.07 * DRAWS);
	/* the closed form: S² = 3.29² (S + B) */
	assert_ratio(counts * counts, 3.29 * 3.29 * (counts + background), 0.005,
		     "survey");
	bh_arena_free(arena);
}

int main(void)
{
	static const struct CMUnitTest tests[] = {
		cmocka_unit_test(position),   cmocka_unit_test(area),
		cmocka_unit_test(split),      cmocka_unit_test(drawn_counts),
		cmocka_unit_test(neighbours), cmocka_unit_test(floors),
		cmocka_unit_test(survey),
	};

	return cmocka_run_group_tests_name("line view", tests, NULL, NULL);
}
