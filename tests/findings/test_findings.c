/* Each kind of finding: raised where it must be, silent where not, with the right numbers. */
#include "support/near.h"

#include <math.h>
#include <string.h>

#include "base/units.h"
#include "findings/findings.h"
#include "physics/xray.h"
#include "support/planned.h"

#define ON(instrument, anode) "instrument = \"" instrument "\" anodes = {\"" anode "\"}\n"

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

/* 2θ = 2 asin(λ/2d): silicon 4 2 2 (d = 1.10864 Å, a = 5.4311946 Å) reflects no Cr Kα1
 * (2.289726 Å > 2d); Cu Kα1 at 88.03° (NIST SRM 640 series). */
static void range(void **state)
{
	const bh_plan *plan = planned(*state, "instrument = \"strip-250\" "
					      "anodes = {\"Cr\", \"Cu\"}\n" SILICON
					      "targets = {\"4 2 2\"} }");
	const bh_finding *f = finding_of(plan, "range", "4 2 2");

	assert_near(evidence_of(f, "d"), 5.4311946 / sqrt(24), 1e-6, "d");
	assert_true(isnan(evidence_of(f, "two_theta")) != 0);
	assert_int_equal(f->severity, BH_SEVERE);
	assert_non_null(strstr(f->remedy, "Cu (88.0"));
	plan = planned(*state, ON("strip-250", "Cu") SILICON "targets = {\"4 2 2\"} }");
	assert_null(finding_of(plan, "range", "4 2 2"));
	plan = planned(*state, ON("strip-250", "Cu") "two_theta = {20, 60}\n" SILICON
						     "targets = {\"4 2 2\"} }");
	assert_near(evidence_of(finding_of(plan, "range", "4 2 2"), "two_theta"), 88.0257,
		    0.002, "SRM 640f"); /* its a is 9 ppm smaller */
}

/* The limits cut through a line (Si 1 1 1 at 28.44°, NIST SRM 640f): no range, no promise. */
static void cut_through(void **state)
{
	static const struct {
		const char *limits;
		bool found, computed;
		bh_severity severity;
	} rows[] = {
		{ "two_theta = {20, 28.45}\n", true, false, BH_SEVERE },
		{ "two_theta = {20, 28.75}\n", true, true, BH_CAUTION },
		{ "two_theta = {20, 40}\n", false, true, BH_NOTE },
	};

	for (size_t i = 0; i < 3; i++) {
		char text[1000];
		const bh_plan *plan;
		const bh_finding *f;

		snprintf(
			text, sizeof text, "%s%s%s", ON("slit-250-foil", "Cu"),
			rows[i].limits,
			SILICON
			"targets = {\"1 1 1\"} }\nspecimen { grain_um = 2 spin = true }\n"
			"aim \"line\" { phase = \"silicon\" plane = \"1 1 1\" "
			"area_error = 3 }");
		plan = planned(*state, text);
		f = finding_of(plan, "range", "silicon 1 1 1");
		assert_int_equal(f != NULL, rows[i].found);
		assert_int_equal(plan->aims[0].computed, rows[i].computed);
		assert_int_equal(plan->range_count, rows[i].computed);
		if (f)
			assert_int_equal(f->severity, rows[i].severity);
	}
}

/* A strip that starts at the beam: the primary beam falls on it. */
static void direct_beam(void **state)
{
	bh_plan *plan = planned(*state, ON("strip-200", "Cu") SILICON
				"targets = {\"1 1 1\"} }\naim \"survey\" { at = 50 }");
	bh_scene scene = scene_of_plan(plan);
	bh_err err = { BH_OK, 0, 0, "", "", "" };
	bh_findings findings = { plan, &scene, &err, 0 };

	assert_null(finding_of(plan, "range", "near"));
	plan->findings = NULL;
	plan->finding_count = 0;
	plan->ranges[0].travel_from_deg = 1.9; /* channels reach 1.72° to both sides */
	assert_true(bh_find_range(&findings));
	assert_int_equal(plan->finding_count, 1);
	assert_int_equal(plan->findings[0].severity, BH_SEVERE);
	assert_near(plan->findings[0].evidence[0].value,
		    1.9 - 160 * 0.075 / 200 / 2 * 57.29578, 1e-6, "lowest");
}

/* A second crystal with the very same cell lies exactly on top; with another cell beside. */
static void overlap(void **state)
{
	static const char text[] = ON("strip-250", "Cu") HALITE
		"targets = {\"2 0 0\"} }\n"
		"phase \"twin\" { space_group = \"F m -3 m\" cell = {%s} share = 20 "
		"site \"Na\" { element = \"Na\" at = {0, 0, 0} } "
		"site \"Cl\" { element = \"Cl\" at = {0.5, 0.5, 0.5} } }";
	static const struct {
		const char *cell;
		bool found, merged;
	} rows[] = { { "5.6402", true, true }, { "5.5", false, false } };

	for (size_t i = 0; i < 2; i++) {
		char request[1200];
		const bh_plan *plan;
		const bh_finding *f;

		snprintf(request, sizeof request, text, rows[i].cell);
		plan = planned(*state, request);
		f = finding_of(plan, "overlap", "halite 2 0 0");
		assert_int_equal(plan->targets[0].merged, rows[i].merged);
		if (!rows[i].merged) {
			assert_true(plan->targets[0].purity_frac > 0.98);
			continue;
		}
		/* the same crystal: 20 % of the counts, 0 away, known to 50 %: 12.5 % for ever */
		assert_near(evidence_of(f, "separation"), 0, 1e-6, "separation");
		assert_near(evidence_of(f, "neighbour_share"), 0.2, 0.01, "share");
		assert_near(evidence_of(f, "limit"), 0.125, 0.01, "limit");
		assert_int_equal(f->severity, BH_SEVERE);
	}
}

/* Which anode excites what: K edges of Bearden & Burr 1967. Fe (7.112 keV) under Cu, not under
 * Co Kα; behind nickel the continuum still excites nickel (8.333 keV). */
static void fluorescence(void **state)
{
	const bh_plan *cu =
		planned(*state, ON("strip-250", "Cu") HEMATITE "targets = {\"1 0 4\"} }");
	const bh_plan *na =
		planned(*state, ON("strip-250", "Cu") HALITE "targets = {\"2 0 0\"} }");
	const bh_finding *f = finding_of(cu, "fluorescence", "hematite");

	assert_near(evidence_of(f, "element"), 26, 0, "iron");
	assert_near(evidence_of(f, "energy"), 6.3995, 0.005, "Fe Ka");
	assert_true(evidence_of(f, "cost") > 1.15);
	assert_true(evidence_of(f, "gain_anode") > 1.15);
	assert_true(strstr(f->remedy, "tube at") != NULL);
	assert_null(finding_of(na, "fluorescence", ""));
	/* the sum of the table's rows is what the finding says */
	{
		double sum = 0;

		for (size_t i = 0; i < cu->signal.fluorescence_count; i++)
			sum += cu->signal.fluorescence[i].z == 26
				       ? cu->signal.fluorescence[i].rate_cps
				       : 0;
		assert_ratio(evidence_of(f, "rate"), sum, 1e-9, "sum");
	}
}

/* R δ/sinθ (Klug & Alexander 1974): 0.5° at R 250 and 2θ 10 is 25.1 mm on a specimen of 15. */
static void footprint(void **state)
{
	const bh_plan *plan =
		planned(*state, ON("slit-250-foil",
				   "Cu") "two_theta = {10, 60}\n" HALITE
					 "targets = {\"2 0 0\"} }\n"
					 "specimen { length_mm = 15 width_mm = 8 }\n"
					 "aim \"survey\" { at = 50 }");
	const bh_finding *f = finding_of(plan, "footprint", "below");

	assert_near(plan->signal.setting.divergence_deg, 0.5, 0, "slit");
	assert_ratio(evidence_of(f, "footprint_at_start"), 25.07, 0.005, "footprint");
	/* the far end of the beam: R sin(δ/2)/sin(θ − δ/2) = half of the specimen */
	assert_near(evidence_of(f, "full_from"),
		    2 * (bh_deg(asin(250 * sin(bh_rad(0.25)) / 7.5)) + 0.25), 1e-3,
		    "full from");
	assert_near(evidence_of(f, "share_at_start"), 15 / 25.07, 0.01, "share");
	assert_near(evidence_of(f, "slit_that_fits"), 0.25, 1e-9, "slit");
	f = finding_of(plan, "footprint", "width");
	assert_near(evidence_of(f, "specimen_width"), 8, 0, "width");
	plan = planned(*state, ON("slit-250-foil", "Cu") "two_theta = {20, 60}\n" HALITE
							 "targets = {\"2 0 0\"} }\n"
							 "specimen { length_mm = 25 }\n");
	assert_null(finding_of(plan, "footprint", ""));
}

/* μt ≥ 3.2 sinθ (Klug & Alexander 1974). NaCl with Cu Kα: μ/ρ = 75.98 cm²/g (NIST SRD 126),
 * ρ 2.164: at packing 0.6 and 2θ 60 thick from 0.162 mm. */
static void thickness(void **state)
{
	const bh_plan *plan = planned(
		*state,
		ON("slit-250-foil",
		   "Cu") "two_theta = {20, 60}\n" HALITE "targets = {\"2 2 2\"} }\n"
			 "specimen { thickness_mm = 0.05 }\naim \"survey\" { at = 50 }");
	const bh_finding *f = finding_of(plan, "thickness", "near");

	assert_ratio(evidence_of(f, "thick_from"), 0.162, 0.02, "thick from");
	assert_ratio(evidence_of(f, "lost"), exp(-2 * 75.98 * 2.164 * 0.6 * 0.005 / 0.5),
		     0.03, "lost");
	plan = planned(*state, ON("slit-250-foil", "Cu") "two_theta = {20, 60}\n" HALITE
							 "targets = {\"2 2 2\"} }\n");
	assert_null(finding_of(plan, "thickness", "near"));
}

/* Quartz 1 0 1, 10 µm, still, of order 100 grains: D. K. Smith, Powder Diffr. 16 (2001) 186
 * and Klug & Alexander 1974, Table 5-3, from memory. */
static void grains(void **state)
{
	static const char quartz[] =
		"phase \"quartz\" { space_group = \"P 32 2 1\" cell = {4.9160, 5.4054} "
		"site \"Si\" { element = \"Si\" at = {0.4697, 0, 0.66667} b_iso = 0.6 } "
		"site \"O\" { element = \"O\" at = {0.4135, 0.2669, 0.7858} b_iso = 0.6 "
		"} "
		"targets = {\"1 0 1\"} }\n";
	char text[1200];
	const bh_plan *plan;
	const bh_finding *f;
	double still;

	snprintf(text, sizeof text, "%s%s%s", ON("slit-250-foil", "Cu"), quartz,
		 "aim \"line\" { phase = \"quartz\" plane = \"1 0 1\" area_error = 2 }");
	plan = planned(*state, text);
	f = finding_of(plan, "grains", "quartz");
	still = evidence_of(f, "grains");
	assert_true(still > 40 && still < 400);
	assert_near(evidence_of(f, "grain_error"), 1 / sqrt(still), 1e-9, "1/sqrt N");
	assert_int_equal(f->severity, BH_SEVERE); /* 2 % is out of reach */
	assert_false(plan->aims[0].reachable);
	assert_true(plan->aims[0].predicted > plan->aims[0].floor);
	assert_true(f->gain > 5); /* spin */
	snprintf(text, sizeof text, "%s%s%s", ON("slit-250-foil", "Cu"), quartz,
		 "specimen { grain_um = 1 spin = true }\n"
		 "aim \"line\" { phase = \"quartz\" plane = \"1 0 1\" area_error = 2 }");
	plan = planned(*state, text);
	assert_null(finding_of(plan, "grains", ""));
	assert_true(plan->aims[0].met);
}

static void saturation(void **state)
{
	const bh_plan *plan = planned(*state, ON("slit-200-mono", "Cu") SILICON
				      "targets = {\"1 1 1\"} }");
	double top = 0;

	for (size_t i = 0; i < plan->pattern_count; i++)
		top = fmax(top, plan->pattern_cps[i]);
	assert_int_equal(finding_of(plan, "saturation", "") != NULL,
			 top > plan->instrument->detector.linear_limit_cps);
	/* the same with a limit that the line passes */
	{
		bh_instrument *slow = bh_new(*state, bh_instrument, 1);
		bh_plan copy = *plan;
		bh_scene scene = scene_of_plan(plan);
		bh_err err = { BH_OK, 0, 0, "", "", "" };
		bh_findings findings = { &copy, &scene, &err, 0 };

		*slow = *plan->instrument;
		slow->detector.linear_limit_cps = top / 2.5;
		copy.instrument = slow;
		copy.findings = NULL;
		copy.finding_count = 0;
		assert_true(bh_find_saturation(&findings));
		assert_int_equal(copy.finding_count, 1);
		assert_near(copy.findings[0].evidence[2].value,
			    floor(plan->signal.setting.mA / 2.5), 1, "mA that fits");
	}
}

/* Kβ without a foil shows; behind a thick enough one it does not. */
static void ghosts(void **state)
{
	const bh_plan *plan =
		planned(*state, ON("strip-250-fine", "Cu") CORUNDUM
			"targets = {\"1 0 4\"} }\naim \"survey\" { at = 5 }");
	const bh_plan *crystal = planned(*state, ON("strip-240-ka1", "Cu") CORUNDUM
					 "targets = {\"1 0 4\"} }\n"
					 "aim \"survey\" { at = 5 }");

	assert_non_null(finding_of(plan, "ghosts", "Kβ"));
	assert_null(finding_of(crystal, "ghosts", "Kβ"));
	assert_near(crystal->targets[0].ka2_deg, 0, 0, "Ka1 alone");
}

static double counting_part(const bh_aim_result *aim)
{
	return sqrt(aim->predicted * aim->predicted - aim->floor * aim->floor);
}

/* A booking that is too short: said first, all exposures cut by one factor, the plan fits. */
static void booking(void **state)
{
	static const char aims[] = HEMATITE "targets = {\"1 0 4\", \"0 1 2\"} }\n"
					    "aim \"line\" { phase = \"hematite\" plane = "
					    "\"0 1 2\" area_error = 1 }\n"
					    "specimen { grain_um = 1 spin = true }\n";
	char text[1000];
	const bh_plan *enough, *cut;
	double left;

	snprintf(text, sizeof text, "%s%s", ON("slit-250-foil", "Cu"), aims);
	enough = planned(*state, text);
	assert_null(finding_of(enough, "booking", ""));
	assert_true(enough->aims[0].met);
	snprintf(text, sizeof text, "%s%sbooking { longest = \"%.0f s\" }",
		 ON("slit-250-foil", "Cu"), aims,
		 enough->times.overhead_s + enough->times.scanning_s / 4);
	cut = planned(*state, text);
	assert_true(cut->booking_short);
	assert_string_equal(cut->findings[0].kind, "booking");
	assert_true(cut->times.total_s <=
		    enough->times.overhead_s + enough->times.scanning_s / 4 + 1);
	assert_near(cut->wanted_total_s, enough->times.total_s, 1, "what all would take");
	assert_false(cut->aims[0].met);
	/* Poisson: the counting part of the error grows as 1/√exposure */
	left = cut->ranges[0].exposure_s / enough->ranges[0].exposure_s;
	assert_ratio(counting_part(&cut->aims[0]) / counting_part(&enough->aims[0]),
		     sqrt(1 / left), 0.02, "error");
}

/* A holder of aluminium shows its 1 1 1 (38.47°, NBS Circ. 539) where the beam spills. */
static void holder(void **state)
{
	const bh_plan *plan = planned(*state, ON("slit-250-foil", "Cu") HALITE
				      "targets = {\"2 0 0\"} }\n"
				      "specimen { holder = \"aluminium\" length_mm = 6 "
				      "width_mm = 8 }");
	bool seen = false;

	assert_true(plan->has_holder);
	for (size_t i = 0; i < plan->signal.in_range_count; i++) {
		const bh_reflection *r = &plan->signal.reflections[i];

		if (r->phase + 1 == plan->phase_count &&
		    fabs(r->two_theta_deg - 38.473) < 0.005)
			seen = r->rate_cps_deg > 0;
	}
	assert_true(seen);
}

/* Every row of the registry has a name of its own and says what it does. */
static void registry(void **state)
{
	(void)state;
	for (size_t i = 0; i < bh_finding_row_count; i++) {
		assert_true(strlen(bh_finding_rows[i].help) > 10);
		for (size_t k = 0; k < i; k++)
			assert_string_not_equal(bh_finding_rows[i].kind,
						bh_finding_rows[k].kind);
	}
}

int main(void)
{
	static const struct CMUnitTest tests[] = {
		cmocka_unit_test_setup_teardown(range, set_up, tear_down),
		cmocka_unit_test_setup_teardown(cut_through, set_up, tear_down),
		cmocka_unit_test_setup_teardown(direct_beam, set_up, tear_down),
		cmocka_unit_test_setup_teardown(overlap, set_up, tear_down),
		cmocka_unit_test_setup_teardown(fluorescence, set_up, tear_down),
		cmocka_unit_test_setup_teardown(footprint, set_up, tear_down),
		cmocka_unit_test_setup_teardown(thickness, set_up, tear_down),
		cmocka_unit_test_setup_teardown(grains, set_up, tear_down),
		cmocka_unit_test_setup_teardown(saturation, set_up, tear_down),
		cmocka_unit_test_setup_teardown(ghosts, set_up, tear_down),
		cmocka_unit_test_setup_teardown(booking, set_up, tear_down),
		cmocka_unit_test_setup_teardown(holder, set_up, tear_down),
		cmocka_unit_test(registry),
	};

	return cmocka_run_group_tests_name("findings", tests, NULL, NULL);
}
