#include "findings/findings.h"

#include <math.h>

bool bh_find_saturation(bh_findings *findings)
{
	const bh_plan *plan = findings->plan;
	const bh_setting *setting = &plan->signal.setting;
	double most_cps = 0, at_deg = 0,
	       limit_cps = plan->instrument->detector.linear_limit_cps;
	double mA;

	for (size_t i = 0; i < plan->pattern_count; i++) {
		double here_deg =
			plan->pattern_from_deg + (double)i * plan->pattern_step_deg;
		bool scanned = false;

		for (size_t k = 0; k < plan->range_count; k++)
			scanned = scanned || (here_deg >= plan->ranges[k].from_deg &&
					      here_deg <= plan->ranges[k].to_deg);
		if (scanned && plan->pattern_cps[i] > most_cps) {
			most_cps = plan->pattern_cps[i];
			at_deg = here_deg;
		}
	}
	if (!(most_cps > limit_cps) || !(limit_cps > 0))
		return true;
	mA = floor(setting->mA * limit_cps / most_cps);
	return bh_findings_add(
		findings,
		&(bh_finding){
			.severity = most_cps > 5 * limit_cps ? BH_SEVERE : BH_CAUTION,
			.where = bh_say(findings, "%.2f°", at_deg),
			.text = bh_say(
				findings,
				"The strongest line gives %.3g counts/s in one aperture; "
				"the "
				"detector is linear to %.3g. Its area will read low.",
				most_cps, limit_cps),
			.evidence = { { "rate", most_cps, "counts/s" },
				      { "limit", limit_cps, "counts/s" },
				      { "mA_that_fits", mA, "mA" } },
			.evidence_count = 3,
			.remedy = mA >= 5 ? bh_say(findings,
						   "Run %.0f mA over this line, or the "
						   "next smaller slit.",
						   mA)
					  : "Use a smaller slit or an attenuating foil "
					    "over this line.",
		});
}
