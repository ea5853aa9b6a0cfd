#include "findings/findings.h"

#include <math.h>
#include <stdint.h>
#include <string.h>

#include "physics/grains.h"

/* Wanted area error of a target, fraction; 0: none asked. */
static double wanted_frac(const bh_plan *plan, const bh_target_result *t, bool *reachable)
{
	*reachable = true;
	for (size_t i = 0; i < plan->aim_count; i++) {
		const bh_aim_result *r = &plan->aims[i];

		if (r->aim->kind == BH_AIM_LINE && r->aim->phase == t->phase &&
		    r->aim->target == t->target && strcmp(r->unit, "%") == 0) {
			*reachable = r->reachable || !r->computed;
			return r->wanted / 100;
		}
	}
	return 0;
}

/* Diameter of what diffracts as one, µm. */
static double diameter_um(const bh_plan *plan, const bh_target_result *t)
{
	double size_nm = plan->phases[t->phase].size_nm;

	return size_nm > 0 ? size_nm / 1000 : plan->request->specimen.grain_um;
}

/* What spinning multiplies N_eff by, and the grain size that meets the wanted error. */
static const char *remedy(bh_findings *findings, const bh_target_result *t, double wanted,
			  double *gain)
{
	const bh_plan *plan = findings->plan;
	const bh_specimen *specimen = &plan->request->specimen;
	const bh_phase *phase = &plan->phases[t->phase];
	/* the multiplicity falls out of the ratio */
	bh_grain_line line = { phase, 1, t->ka1_deg, BH_VIEW_STILL, false };
	double still = bh_grains_effective(&plan->signal, findings->scene, &line), spun;
	/* half the wanted error: the rest is left to counting */
	double fine_um = diameter_um(plan, t) * cbrt(t->grains * wanted * wanted / 4);

	line.spin = true;
	spun = bh_grains_effective(&plan->signal, findings->scene, &line);
	*gain = specimen->spin || !(still > 0) ? 0 : spun / still;
	if (*gain > 1.2)
		return bh_say(findings,
			      "Spin the specimen: %.2g times as many grains. Or grind to "
			      "%.2g µm.",
			      *gain, fine_um);
	return bh_say(findings,
		      "Grind to %.2g µm (N grows as 1/size³), or refill and repeat.",
		      fine_um);
}

static bool report(bh_findings *findings, const bh_target_result *t, double wanted,
		   bool reachable)
{
	double gain;
	const char *cure = remedy(findings, t, wanted, &gain);

	return bh_findings_add(
		findings,
		&(bh_finding){
			.severity = reachable ? BH_CAUTION : BH_SEVERE,
			.where = bh_findings_target(findings, t),
			.text = bh_say(
				findings,
				"About %.2g grains of %.3g µm contribute: their chance "
				"orientation alone makes the area uncertain by %.2g %%, "
				"%s the "
				"%.2g %% asked for.%s",
				t->grains, diameter_um(findings->plan, t),
				100 * t->grain_error_frac,
				t->grain_error_frac > wanted ? "more than"
							     : "a large part of",
				100 * wanted,
				reachable ? "" : " No count time reaches that."),
			.evidence = { { "grains", t->grains, "" },
				      { "grain_error", t->grain_error_frac, "" },
				      { "wanted", wanted, "" } },
			.evidence_count = 3,
			.remedy = cure,
			.gain = gain > 1.2 ? gain : 0,
		});
}

bool bh_find_grains(bh_findings *findings)
{
	const bh_plan *plan = findings->plan;

	for (size_t i = 0; i < plan->target_count; i++) {
		const bh_target_result *t = &plan->targets[i];
		bool reachable;
		double wanted;

		if (t->reflection == SIZE_MAX || !(t->grains > 0))
			continue;
		wanted = wanted_frac(plan, t, &reachable);
		if (wanted > 0 && t->grain_error_frac > wanted / 2 &&
		    !report(findings, t, wanted, reachable))
			return false;
	}
	return true;
}
