/* What must hold of any plan, whatever the numbers. */
#include "support/near.h"

#include <math.h>
#include <stdio.h>
#include <string.h>

#include "plan/plan.h"
#include "support/planned.h"

static const char *const examples[] = {
	"examples/battery-cathode.conf",      "examples/cement-dust-quartz.conf",
	"examples/gear-steel-austenite.conf", "examples/glaze-pigment.conf",
	"examples/harbour-steel.conf",	      "examples/paint-scraping.conf",
};
enum { EXAMPLES = sizeof examples / sizeof *examples };

static int set_up(void **state)
{
	*state = bh_arena_new();
	return *state ? 0 : 1;
}

static int tear_down(void **state)
{
	bh_arena_free(*state);
	return 0;
}

static bh_plan *example(bh_arena *arena, size_t i)
{
	char text[20000];
	FILE *file = fopen(examples[i], "rb");
	size_t n;

	assert_non_null(file);
	n = fread(text, 1, sizeof text - 1, file);
	fclose(file);
	text[n] = '\0';
	return planned(arena, text);
}

static void shares_and_numbers(void **state)
{
	for (size_t i = 0; i < EXAMPLES; i++) {
		const bh_plan *plan = example(*state, i);
		double sum = 0, shares = plan->request->amorphous_frac;

		for (size_t k = 0; k < plan->signal.mixture.count; k++)
			sum += plan->signal.mixture.elements[k].mass_frac;
		assert_near(sum, 1, 1e-12, "mass fractions");
		for (size_t k = 0; k < plan->request->phase_count; k++)
			shares += plan->request->phases[k].share_frac;
		assert_near(shares, 1, 1e-12, "shares");
		for (size_t k = 0; k < plan->pattern_count; k++)
			assert_true(plan->pattern_cps[k] >=
					    plan->pattern_background_cps[k] *
						    (1 - 1e-12) &&
				    plan->pattern_background_cps[k] > 0);
		assert_near(plan->times.total_s,
			    plan->times.scanning_s + plan->times.overhead_s, 1e-6,
			    "time");
		for (size_t k = 0; k < plan->range_count; k++)
			assert_true(plan->ranges[k].from_deg >=
					    plan->request->two_theta_min_deg &&
				    plan->ranges[k].to_deg <=
					    plan->request->two_theta_max_deg &&
				    plan->ranges[k].travel_from_deg >=
					    plan->instrument->two_theta_min_deg - 1e-9 &&
				    plan->ranges[k].travel_to_deg <=
					    plan->instrument->two_theta_max_deg + 1e-9);
		for (size_t k = 0; k < plan->aim_count; k++)
			assert_true(!plan->aims[k].computed ||
				    plan->aims[k].predicted >=
					    plan->aims[k].floor * (1 - 1e-9));
	}
}

/* Rates go with the tube current; a shorter count time only with exposure. */
static void current(void **state)
{
	bh_plan *plan =
		planned(*state, "instrument = \"strip-250\" anodes = {\"Cu\"}\n" HEMATITE
				"targets = {\"1 0 4\"} }");
	bh_scene scene = scene_of_plan(plan);
	bh_setting half = plan->signal.setting;
	bh_err err = { BH_OK, 0, 0, "", "", "" };
	bh_signal other;

	half.mA /= 2;
	assert_true(bh_observe(&other, *state, &scene, &half, &err));
	assert_int_equal(other.peak_count, plan->signal.peak_count);
	for (size_t i = 0; i < other.peak_count; i++)
		assert_ratio(2 * other.peaks[i].rate_cps_deg,
			     plan->signal.peaks[i].rate_cps_deg, 1e-12, "peak");
	for (size_t i = 0; i < other.background_count; i++)
		assert_ratio(2 * other.background[i].total,
			     plan->signal.background[i].total, 1e-12, "background");
}

/* A share x in a mixture: I = x/ρ ÷ (2 μ/ρ of the mixture), so I μ/x stays. */
static void shares(void **state)
{
	double last = 0;

	for (int share = 10; share <= 90; share += 40) {
		char text[1500];
		const bh_plan *plan;
		double now;

		snprintf(text, sizeof text,
			 "instrument = \"slit-250-foil\" anodes = {\"Cu\"}\n" CORUNDUM
			 "}\n" HEMATITE "share = %d targets = {\"1 0 4\"} }",
			 share);
		plan = planned(*state, text);
		now = plan->targets[0].rate_cps_deg *
		      plan->signal.radiation.lines[0].mass_attenuation_cm2_g / share;
		if (last > 0) /* Kα2 has an attenuation of its own: 1e-3 */
			assert_ratio(now, last, 2e-3, "I mu/x");
		last = now;
	}
}

/* Exposure: half the wanted error, four times the exposure of the counting part. */
static void exposure(void **state)
{
	double first = 0;

	for (int i = 0; i < 2; i++) {
		char text[1200];
		const bh_plan *plan;

		snprintf(text, sizeof text,
			 "instrument = \"slit-250-foil\" anodes = {\"Cu\"}\n"
			 "specimen { grain_um = 0.05 spin = true }\n" HEMATITE
			 "targets = {\"1 0 4\"} }\n"
			 "aim \"line\" { phase = \"hematite\" plane = \"1 0 4\" "
			 "area_error = %g }",
			 i ? 0.5 : 1.0);
		plan = planned(*state, text);
		if (i)
			assert_ratio(plan->aims[0].needed_exposure_s / first, 4, 0.01,
				     "1/sigma^2");
		first = plan->aims[0].needed_exposure_s;
	}
}

/* Rates of a phase summed over planes of equal d, strongest first. */
static double sum_near(const bh_plan *plan, size_t phase, double two_theta_deg)
{
	double sum = 0;

	for (size_t i = 0; i < plan->signal.peak_count; i++) {
		const bh_peak *p = &plan->signal.peaks[i];

		if (plan->signal.reflections[p->reflection].phase == phase &&
		    p->line == 0 && fabs(p->two_theta_deg - two_theta_deg) < 1e-6)
			sum += p->rate_cps_deg;
	}
	return sum;
}

/* A cell written twice as long, or in another setting, is the same powder. */
static void same_powder(void **state)
{
#define START "instrument = \"strip-250\" anodes = {\"Cu\"} two_theta = {10, 120}\n"
	static const struct {
		const char *one, *other;
	} rows[] = {
		/* halite, and its cell doubled along c */
		{ START HALITE "}", START
		  "phase \"halite\" { space_group = \"P 4/m m m\" cell = {5.6402, "
		  "11.2804} "
		  "site \"a\" { element = \"Na\" at = {0, 0, 0} b_iso = 1.6 } "
		  "site \"b\" { element = \"Na\" at = {0, 0, 0.5} b_iso = 1.6 } "
		  "site \"c\" { element = \"Na\" at = {0, 0.5, 0.25} b_iso = 1.6 } "
		  "site \"d\" { element = \"Na\" at = {0.5, 0.5, 0} b_iso = 1.6 } "
		  "site \"e\" { element = \"Na\" at = {0.5, 0.5, 0.5} b_iso = 1.6 } "
		  "site \"f\" { element = \"Cl\" at = {0.5, 0.5, 0.25} b_iso = 1.3 } "
		  "site \"g\" { element = \"Cl\" at = {0, 0, 0.25} b_iso = 1.3 } "
		  "site \"h\" { element = \"Cl\" at = {0.5, 0, 0} b_iso = 1.3 } "
		  "site \"i\" { element = \"Cl\" at = {0.5, 0, 0.5} b_iso = 1.3 } }" },
		/* hematite on hexagonal and on rhombohedral axes: a_r = √(3a² + c²)/3,
		 * sin(α/2) = 3/(2 √(3 + (c/a)²)) */
		{ START HEMATITE "}",
		  START "phase \"hematite\" { space_group = \"R -3 c:R\" "
			"cell = {5.43458386, 55.22805024} "
			"site \"Fe\" { element = \"Fe\" at = {0.3553, 0.3553, 0.3553} "
			"b_iso = 0.3 } "
			"site \"O\" { element = \"O\" at = {0.5559, -0.0559, 0.25} b_iso "
			"= 0.4 } }" },
	};

	for (size_t r = 0; r < 2; r++) {
		const bh_plan *a = planned(*state, rows[r].one);
		const bh_plan *b = planned(*state, rows[r].other);

		assert_ratio(b->phases[0].density_g_cm3, a->phases[0].density_g_cm3, 1e-6,
			     "density");
		for (size_t i = 0; i < a->signal.in_range_count; i++) {
			const bh_reflection *x = &a->signal.reflections[i];
			double best = 1;
			size_t at = 0;

			for (size_t k = 0; k < b->signal.in_range_count; k++) {
				const bh_reflection *y = &b->signal.reflections[k];

				if (fabs(y->two_theta_deg - x->two_theta_deg) < best) {
					best = fabs(y->two_theta_deg - x->two_theta_deg);
					at = k;
				}
			}
			assert_near(best, 0, 2e-5, "position");
			assert_ratio(
				sum_near(b, 0, b->signal.reflections[at].two_theta_deg),
				sum_near(a, 0, x->two_theta_deg), 1e-4, "rate");
		}
	}
}

/* A list of d with a crystal's own ratio to corundum gives the crystal's rates: the strongest
 * line stands to corundum 1 1 3 as I/I_c. The ratio of integrated intensities is made here from
 * two plans of pure phases, independent of the list. */
static void list_like_atoms(void **state)
{
#define ON_COPPER "instrument = \"slit-250-foil\" anodes = {\"Cu\"}\n"
	/* C. J. Howard et al., Acta Cryst. B47 (1991) 462 */
	const bh_plan *pure = planned(
		*state, ON_COPPER
		"phase \"rutile\" { space_group = \"P 42/m n m\" cell = {4.5937, 2.9587} "
		"site \"Ti\" { element = \"Ti\" at = {0, 0, 0} } "
		"site \"O\" { element = \"O\" at = {0.30478, 0.30478, 0} } "
		"targets = {\"1 1 0\", \"2 1 1\"} }");
	const bh_plan *corundum =
		planned(*state, ON_COPPER CORUNDUM "targets = {\"1 1 3\"} }");
	const bh_plan *list;
	char text[1200];
	const bh_reflection *r = &pure->signal.reflections[pure->targets[0].reflection];
	const bh_reflection *s = &pure->signal.reflections[pure->targets[1].reflection];
	const bh_reflection *c =
		&corundum->signal.reflections[corundum->targets[0].reflection];
	double ratio = r->rate_cps_deg *
		       pure->signal.radiation.lines[0].mass_attenuation_cm2_g /
		       (c->rate_cps_deg *
			corundum->signal.radiation.lines[0].mass_attenuation_cm2_g);

	/* SRM 674, International Tables C Table 5.2.11.1: I/I_c 3.39(12) of peak heights; the
	 * kinematic integrated ratio is 3.66 */
	assert_ratio(ratio, 3.39, 0.1, "I/Ic of rutile");
	snprintf(text, sizeof text,
		 ON_COPPER "phase \"listed\" { d = {%.6f, %.6f} intensity = {100, %.4f} "
			   "corundum_ratio = %.6f formula = \"TiO2\" density = %.6f "
			   "targets = {\"%.4f\", \"%.4f\"} }",
		 r->d_A, s->d_A, 100 * s->rate_cps_deg / r->rate_cps_deg, ratio,
		 pure->signal.density_g_cm3, r->d_A, s->d_A);
	list = planned(*state, text);
	assert_int_equal(list->target_count, 2);
	for (size_t i = 0; i < 2; i++)
		assert_ratio(list->targets[i].rate_cps_deg, pure->targets[i].rate_cps_deg,
			     0.005, "list");
}

/* The same request twice: the same plan to the last bit. */
static void repeatable(void **state)
{
	for (size_t i = 0; i < EXAMPLES; i++) {
		const bh_plan *a = example(*state, i), *b = example(*state, i);

		assert_int_equal(a->pattern_count, b->pattern_count);
		assert_memory_equal(a->pattern_cps, b->pattern_cps,
				    a->pattern_count * sizeof *a->pattern_cps);
		assert_memory_equal(&a->times, &b->times, sizeof a->times);
		assert_int_equal(a->finding_count, b->finding_count);
		for (size_t k = 0; k < a->finding_count; k++)
			assert_string_equal(a->findings[k].text, b->findings[k].text);
	}
}

/* Positions only: angles, no rate, no count time, nothing invented. */
static void positions_only(void **state)
{
	const bh_plan *plan = planned(
		*state, "instrument = \"strip-250\" anodes = {\"Cu\"}\n"
			"phase \"bare\" { space_group = \"F d -3 m\" cell = {8.39} "
			"targets = {\"3 1 1\"} }");

	assert_false(plan->signal.rates_known);
	assert_near(plan->targets[0].ka1_deg, 35.457, 0.002, "Bragg"); /* d = 8.39/√11 */
	assert_false(plan->targets[0].rate_known);
	assert_int_equal(plan->range_count, 0);
	assert_false(plan->aims[plan->aim_count - 1].computed);
}

int main(void)
{
	static const struct CMUnitTest tests[] = {
		cmocka_unit_test_setup_teardown(shares_and_numbers, set_up, tear_down),
		cmocka_unit_test_setup_teardown(current, set_up, tear_down),
		cmocka_unit_test_setup_teardown(shares, set_up, tear_down),
		cmocka_unit_test_setup_teardown(exposure, set_up, tear_down),
		cmocka_unit_test_setup_teardown(same_powder, set_up, tear_down),
		cmocka_unit_test_setup_teardown(list_like_atoms, set_up, tear_down),
		cmocka_unit_test_setup_teardown(repeatable, set_up, tear_down),
		cmocka_unit_test_setup_teardown(positions_only, set_up, tear_down),
	};

	return cmocka_run_group_tests_name("invariants", tests, NULL, NULL);
}
