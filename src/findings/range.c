#include "findings/findings.h"

#include <math.h>
#include <stdint.h>

#include "design/ranges.h"
#include "physics/bragg.h"
#include "physics/detector.h"

/* The machine's other anodes whose Kα1 brings a distance within the limits. */
static const char *anodes_for(bh_findings *findings, double d_A)
{
	const bh_plan *plan = findings->plan;
	const bh_request *request = plan->request;
	const char *list = "";

	for (size_t i = 0; i < plan->instrument->tube_count && list; i++) {
		const bh_tube *tube = &plan->instrument->tubes[i];
		double at_deg;

		if (tube != plan->signal.setting.tube &&
		    bh_bragg_two_theta_deg(&at_deg, d_A, tube->anode->ka1_A) &&
		    at_deg >= request->two_theta_min_deg &&
		    at_deg <= request->two_theta_max_deg)
			list = bh_say(findings, "%s%s%s (%.2f°)", list, *list ? ", " : "",
				      tube->anode->symbol, at_deg);
	}
	return list;
}

static bool out_of_reach(bh_findings *findings, const bh_target_result *t)
{
	const bh_plan *plan = findings->plan;
	const bh_request *request = plan->request;
	const bh_anode *anode = plan->signal.setting.tube->anode;
	double d_A = plan->phases[t->phase].targets[t->target].d_A, at_deg = 0;
	bool somewhere = bh_bragg_two_theta_deg(&at_deg, d_A, anode->ka1_A);
	const char *others = anodes_for(findings, d_A);
	const char *name = bh_findings_target(findings, t);

	if (!others || !name)
		return bh_fail_memory(findings->err);
	return bh_findings_add(
		findings,
		&(bh_finding){
			.severity = bh_findings_wanted(plan, t) ? BH_SEVERE : BH_CAUTION,
			.where = name,
			.text = somewhere ? bh_say(findings,
						   "d = %.4f Å reflects %s Kα1 at %.2f°, "
						   "outside %.4g to "
						   "%.4g°.",
						   d_A, anode->symbol, at_deg,
						   request->two_theta_min_deg,
						   request->two_theta_max_deg)
					  : bh_say(findings,
						   "d = %.4f Å is less than half of %s "
						   "Kα1 (%.4f Å): no "
						   "angle reflects it.",
						   d_A, anode->symbol, anode->ka1_A),
			.evidence = { { "d", d_A, "Å" },
				      { "two_theta", somewhere ? at_deg : (double)NAN,
					"°" },
				      { "lowest", request->two_theta_min_deg, "°" },
				      { "highest", request->two_theta_max_deg, "°" } },
			.evidence_count = 4,
			.remedy = *others ? bh_say(findings, "In range with %s.", others)
					  : "No anode on offer brings it in: ask for "
					    "another plane "
					    "of this phase.",
		});
}

/* A strip exposes fully only half its window inside the arms' limits: a line there loses its
 * background on one side, or is itself cut through. */
static bool cut(bh_findings *findings, const bh_target_result *t)
{
	const bh_plan *plan = findings->plan;
	bh_machine machine = { plan->instrument, 0, plan->request->two_theta_min_deg,
			       plan->request->two_theta_max_deg };
	double width = fmax(4 * t->fwhm_deg, 0.4), core = 1.5 * t->fwhm_deg, low, high;
	double last = t->ka2_deg > 0 ? t->ka2_deg : t->ka1_deg;
	bool through;

	bh_ranges_limits(&low, &high, &machine);
	if (t->ka1_deg - width >= low && last + width <= high)
		return true;
	through = t->ka1_deg - core < low || last + core > high;
	return bh_findings_add(
		findings,
		&(bh_finding){
			.severity = through && bh_findings_wanted(plan, t) ? BH_SEVERE
									   : BH_CAUTION,
			.where = bh_findings_target(findings, t),
			.text = bh_say(
				findings,
				"Its window %.2f to %.2f° runs beyond %.2f to %.2f°, "
				"where every point can be exposed fully: %s.",
				t->ka1_deg - width, last + width, low, high,
				through ? "the line itself is cut"
					: "one side has little or no background"),
			.evidence = { { "two_theta", t->ka1_deg, "°" },
				      { "lowest_full", low, "°" },
				      { "highest_full", high, "°" } },
			.evidence_count = 3,
			.remedy = "Widen the limits if the machine allows, or measure "
				  "another "
				  "plane.",
		});
}

/* The lowest angle that any channel sees while a range runs. */
static double lowest_seen_deg(const bh_plan *plan)
{
	double half_deg = plan->instrument->detector.kind == BH_DETECTOR_STRIP
				  ? bh_detector_window_deg(plan->instrument) / 2
				  : 0;
	double lowest = 180;

	for (size_t i = 0; i < plan->range_count; i++)
		lowest = fmin(lowest, plan->ranges[i].travel_from_deg - half_deg);
	return lowest;
}

/* Near 2θ = 0 the primary beam runs past the specimen into the detector. */
static bool direct_beam(bh_findings *findings)
{
	const bh_plan *plan = findings->plan;
	double divergence_deg = plan->signal.setting.divergence_deg;
	double lowest = lowest_seen_deg(plan);
	/* half of the opening, the rest for its height and a specimen that does not block it */
	double limit = divergence_deg > 0 ? divergence_deg : 1;

	if (lowest > limit)
		return true;
	return bh_findings_add(findings,
			       &(bh_finding){
				       .severity = BH_SEVERE,
				       .where = bh_say(findings, "near %.2f°", lowest),
				       .text = bh_say(findings,
						      "The detector sees down to %.2f° "
						      "while the plan runs: the "
						      "primary beam, %.3g° wide, falls "
						      "on it and can destroy it.",
						      lowest, limit),
				       .evidence = { { "lowest_seen", lowest, "°" },
						     { "limit", limit, "°" } },
				       .evidence_count = 2,
				       .remedy = "Raise the lower limit of two_theta, or "
						 "work with the lab's beam "
						 "stop in place.",
			       });
}

bool bh_find_range(bh_findings *findings)
{
	const bh_plan *plan = findings->plan;

	if (plan->range_count && !direct_beam(findings))
		return false;

	for (size_t i = 0; i < plan->target_count; i++) {
		const bh_target_result *t = &plan->targets[i];

		if (!(t->reflection == SIZE_MAX ? out_of_reach(findings, t)
						: cut(findings, t)))
			return false;
	}
	return true;
}
