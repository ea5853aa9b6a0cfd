#include "findings/findings.h"

#include <math.h>
#include <stdint.h>

#include "physics/geometry.h"

/* The lowest angle that the plan scans. */
static double start_deg(const bh_plan *plan)
{
	double low = HUGE_VAL;

	for (size_t i = 0; i < plan->range_count; i++)
		low = fmin(low, plan->ranges[i].from_deg);
	return low;
}

/* Widest slit on offer that keeps the whole beam on the specimen at an angle; 0: none. */
static double slit_for(const bh_instrument *instrument, double length_mm,
		       double two_theta_deg)
{
	double best = 0;

	for (size_t i = 0; i < instrument->divergence_count; i++)
		if (bh_geometry_full_from_deg(instrument->divergence_deg[i],
					      instrument->radius_mm,
					      length_mm) <= two_theta_deg)
			best = fmax(best, instrument->divergence_deg[i]);
	return best;
}

static bool too_long(bh_findings *findings, double full_from_deg, double from_deg)
{
	const bh_plan *plan = findings->plan;
	const bh_setting *setting = &plan->signal.setting;
	double length_mm = plan->request->specimen.length_mm;
	double share =
		bh_geometry_lit_frac(setting->divergence_deg, plan->instrument->radius_mm,
				     length_mm, from_deg);
	double slit = slit_for(plan->instrument, length_mm, from_deg);
	bool target = false;

	for (size_t i = 0; i < plan->target_count; i++)
		target = target || (plan->targets[i].reflection != SIZE_MAX &&
				    plan->targets[i].ka1_deg < full_from_deg);
	return bh_findings_add(
		findings,
		&(bh_finding){
			.severity = target ? BH_CAUTION : BH_NOTE,
			.where = bh_say(findings, "below %.1f°", full_from_deg),
			.text = bh_say(findings,
				       "With the %.4g° slit the beam is longer than the "
				       "specimen's "
				       "%.3g mm below %.1f°; at %.1f° only %.0f %% of it "
				       "falls on the "
				       "specimen. The plan's rates allow for that; "
				       "relative intensities "
				       "from tables do not%s.",
				       setting->divergence_deg, length_mm, full_from_deg,
				       from_deg, 100 * share,
				       findings->scene->has_holder
					       ? ", and the holder's lines appear"
					       : ""),
			.evidence = { { "full_from", full_from_deg, "°" },
				      { "share_at_start", share, "" },
				      { "footprint_at_start",
					fmin(bh_geometry_footprint_mm(
						     setting->divergence_deg,
						     plan->instrument->radius_mm,
						     from_deg),
					     1e4),
					"mm" },
				      { "slit_that_fits", slit, "°" } },
			.evidence_count = 4,
			.remedy = slit > 0 ? bh_say(findings,
						    "The %.4g° slit keeps the beam on "
						    "the specimen; "
						    "it lets %.2g of the beam through.",
						    slit, slit / setting->divergence_deg)
					   : "No slit on offer keeps it on the specimen "
					     "from there: "
					     "use a longer specimen or start higher.",
		});
}

static bool too_wide(bh_findings *findings)
{
	const bh_plan *plan = findings->plan;
	double width_mm = plan->request->specimen.width_mm;
	double beam_mm = plan->instrument->beam_width_mm;

	return bh_findings_add(
		findings,
		&(bh_finding){
			.severity = BH_CAUTION,
			.where = "specimen width",
			.text = bh_say(findings,
				       "The beam is %.3g mm wide, the specimen %.3g mm: "
				       "%.0f %% of it "
				       "misses at every angle.",
				       beam_mm, width_mm, 100 * (1 - width_mm / beam_mm)),
			.evidence = { { "beam_width", beam_mm, "mm" },
				      { "specimen_width", width_mm, "mm" } },
			.evidence_count = 2,
			.remedy = "Use a beam mask no wider than the specimen: the "
				  "background falls, "
				  "the lines stay.",
		});
}

bool bh_find_footprint(bh_findings *findings)
{
	const bh_plan *plan = findings->plan;
	const bh_setting *setting = &plan->signal.setting;
	double from_deg = start_deg(plan), full_from_deg;

	if (setting->divergence_deg > 0 && isfinite(from_deg)) {
		full_from_deg = bh_geometry_full_from_deg(
			setting->divergence_deg, plan->instrument->radius_mm,
			plan->request->specimen.length_mm);
		if (full_from_deg > from_deg &&
		    !too_long(findings, full_from_deg, from_deg))
			return false;
	}
	if (plan->request->specimen.width_mm < plan->instrument->beam_width_mm)
		return too_wide(findings);
	return true;
}
