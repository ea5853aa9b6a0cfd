#include "findings/findings.h"

#include <math.h>
#include <stdint.h>

#include "physics/filter.h"
#include "physics/pattern.h"
#include "physics/profile.h"
#include "physics/xray.h"

enum { GHOSTS = 3 };

typedef struct {
	const bh_peak *peak;
	double counts, noise; /* in ± one FWHM, at this plan's exposure */
} ghost;

static double density_at(const bh_plan *plan, double two_theta_deg)
{
	double sum = 0;

	for (size_t i = 0; i < plan->range_count; i++)
		if (plan->ranges[i].from_deg <= two_theta_deg &&
		    plan->ranges[i].to_deg >= two_theta_deg)
			sum += plan->ranges[i].exposure_s / plan->ranges[i].step_deg;
	return sum;
}

/* Counts of a ghost against the noise of all else beneath it. */
static ghost measure(const bh_plan *plan, const bh_peak *peak)
{
	double density = density_at(plan, peak->two_theta_deg), all, background;
	bh_profile profile = { peak->fwhm_deg, peak->eta };
	ghost g = { peak, 0, 0 };

	if (!(density > 0))
		return g;
	bh_pattern(&all, &background, (bh_grid){ peak->two_theta_deg, 1, 1 },
		   &plan->signal);
	g.counts = density * peak->rate_cps_deg *
		   bh_profile_inside_frac(profile, peak->fwhm_deg);
	all -= peak->rate_cps_deg * bh_profile_height_inv_deg(profile, 0);
	g.noise = sqrt(fmax(density * all * 2 * peak->fwhm_deg, 1));
	return g;
}

static size_t strongest(ghost best[GHOSTS], const bh_plan *plan, int kind)
{
	size_t count = 0;

	for (size_t i = 0; i < plan->signal.peak_count; i++) {
		const bh_peak *peak = &plan->signal.peaks[i];
		ghost g;
		size_t at;

		if (plan->signal.radiation.lines[peak->line].kind != kind ||
		    !(peak->rate_cps_deg > 0))
			continue;
		g = measure(plan, peak);
		if (!(g.counts > 3.29 * g.noise)) /* Currie 1968: seen with confidence */
			continue;
		for (at = count;
		     at > 0 &&
		     g.counts / g.noise > best[at - 1].counts / best[at - 1].noise;
		     at--)
			if (at < GHOSTS)
				best[at] = best[at - 1];
		if (at < GHOSTS)
			best[at] = g;
		if (count < GHOSTS)
			count++;
	}
	return count;
}

static const char *remedy(bh_findings *findings, int kind, double excess)
{
	const bh_tube *tube = findings->plan->signal.setting.tube;
	int z = tube->foil_z ? tube->foil_z : bh_filter_element(tube->anode);

	if (kind == BH_W_LA1)
		return "An aged tube: tell the lab; a diffracted-beam crystal or a "
		       "narrow detector "
		       "window removes it.";
	if (tube->monochromator.two_theta_deg > 0 || !z)
		return "Do not take it for a phase.";
	return bh_say(findings,
		      "Do not take it for a phase. %.0f µm more %s foil would bring it "
		      "below the "
		      "noise.",
		      ceil(bh_filter_thickness_um(tube->anode, z, excess, 1)),
		      bh_xray_symbol(z));
}

static bool report(bh_findings *findings, int kind, const char *word)
{
	ghost best[GHOSTS];
	size_t count = strongest(best, findings->plan, kind);
	const char *text = "";

	if (count == 0)
		return true;
	for (size_t i = 0; i < count && text; i++)
		text = bh_say(findings,
			      "%s%s%s at %.2f° (%.2g counts, %.2g times the noise)", text,
			      i ? ", " : "",
			      bh_findings_plane(findings, best[i].peak->reflection),
			      best[i].peak->two_theta_deg, best[i].counts,
			      best[i].counts / best[i].noise);
	return text ? bh_findings_add(
			      findings,
			      &(bh_finding){
				      .severity = BH_NOTE,
				      .where = word,
				      .text = bh_say(findings,
						     "%s shows as small extra lines in "
						     "the planned "
						     "ranges: %s.",
						     word, text),
				      .evidence = { { "kbeta_ratio",
						      findings->plan->signal.radiation
							      .kbeta_ratio,
						      "" },
						    { "counts", best[0].counts, "" },
						    { "noise", best[0].noise, "" } },
				      .evidence_count = 3,
				      .remedy = remedy(findings, kind,
						       best[0].counts /
							       (3.29 * best[0].noise)),
			      })
		    : bh_fail_memory(findings->err);
}

bool bh_find_ghosts(bh_findings *findings)
{
	return report(findings, BH_KB, "Kβ") &&
	       report(findings, BH_W_LA1, "Tungsten Lα1");
}
