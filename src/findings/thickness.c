#include "findings/findings.h"

#include <math.h>
#include <stdint.h>

#include "base/units.h"
#include "physics/geometry.h"

static double highest_deg(const bh_plan *plan)
{
	double high = 0;

	for (size_t i = 0; i < plan->range_count; i++)
		high = fmax(high, plan->ranges[i].to_deg);
	return high;
}

static bool too_thin(bh_findings *findings, double mu_inv_cm, double at_deg,
		     double need_mm)
{
	const bh_specimen *specimen = &findings->plan->request->specimen;
	double s = sin(bh_rad(at_deg / 2));
	double lost = exp(-2 * mu_inv_cm * specimen->packing_frac *
			  specimen->thickness_mm * BH_CM_PER_MM / s);

	return bh_findings_add(
		findings,
		&(bh_finding){
			.severity = lost > 0.05 ? BH_CAUTION : BH_NOTE,
			.where = bh_say(findings, "near %.0f°", at_deg),
			.text = bh_say(findings,
				       "The layer of %.3g mm is not thick for this "
				       "radiation: at %.1f° "
				       "%.1f %% of the counts of a thick specimen are "
				       "missing. The plan's "
				       "rates allow for that.",
				       specimen->thickness_mm, at_deg, 100 * lost),
			.evidence = { { "thickness", specimen->thickness_mm, "mm" },
				      { "thick_from", need_mm, "mm" },
				      { "lost", lost, "" },
				      { "attenuation", mu_inv_cm, "1/cm" } },
			.evidence_count = 4,
			.remedy = bh_say(
				findings,
				"From %.2g mm on it counts as thick (3.2 sinθ/μ at this "
				"packing).",
				need_mm),
		});
}

static bool transparent(bh_findings *findings, double mu_inv_cm)
{
	const bh_plan *plan = findings->plan;
	double packed = mu_inv_cm * plan->request->specimen.packing_frac, at_deg, shift;

	at_deg = fmin(fmax(90, plan->request->two_theta_min_deg),
		      plan->request->two_theta_max_deg);
	shift = bh_geometry_transparency_deg(packed, plan->instrument->radius_mm, at_deg);
	if (fabs(shift) < 0.01)
		return true;
	return bh_findings_add(
		findings,
		&(bh_finding){
			.severity = fabs(shift) > 0.05 ? BH_CAUTION : BH_NOTE,
			.where = "line positions",
			.text = bh_say(findings,
				       "The beam goes deep: 99 %% of a line at %.0f° "
				       "comes from the top "
				       "%.2g mm, and its centre shifts by %.3f°.",
				       at_deg, bh_geometry_depth_mm(0.99, packed, at_deg),
				       shift),
			.evidence = { { "shift", shift, "°" },
				      { "depth_99",
					bh_geometry_depth_mm(0.99, packed, at_deg),
					"mm" },
				      { "attenuation", packed, "1/cm" } },
			.evidence_count = 3,
			.remedy = "Correct positions for transparency, mix in a "
				  "standard, or mount a "
				  "thin layer.",
		});
}

bool bh_find_thickness(bh_findings *findings)
{
	const bh_plan *plan = findings->plan;
	double mu_inv_cm = plan->signal.radiation.lines[0].mass_attenuation_cm2_g *
			   plan->signal.density_g_cm3;
	double at_deg = highest_deg(plan), need_mm;

	if (!plan->signal.rates_known || !(mu_inv_cm > 0))
		return true;
	if (at_deg > 0) {
		need_mm = bh_geometry_thick_mm(
			mu_inv_cm, plan->request->specimen.packing_frac, at_deg);
		if (need_mm > plan->request->specimen.thickness_mm &&
		    !too_thin(findings, mu_inv_cm, at_deg, need_mm))
			return false;
	}
	return transparent(findings, mu_inv_cm);
}
