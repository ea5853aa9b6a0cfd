#include "findings/findings.h"

#include <math.h>
#include <stdint.h>
#include <string.h>

/* Ranges of separation in FWHM: below the first two lines have one top, above the second each
 * has its own foot. Common practice. */
static const double merged_fwhm = 0.5, resolved_fwhm = 1.5;
static const double least_share = 0.01; /* of the counts in the line's window */
static const double least_price = 1.1;	/* of the variance                    */

static const char *state(double separation_fwhm)
{
	return separation_fwhm < merged_fwhm	 ? "merged"
	       : separation_fwhm < resolved_fwhm ? "shoulder"
						 : "resolved";
}

static const char *line_word(const bh_plan *plan, size_t line)
{
	switch (plan->signal.radiation.lines[line].kind) {
	case BH_KA2:
		return " (its Kα2)";
	case BH_KB:
		return " (its Kβ)";
	case BH_W_LA1:
		return " (by tungsten Lα1)";
	default:
		return "";
	}
}

/* The plane of the same phase that reaches the same error soonest, and its saving. */
static bool better_plane(bh_findings *findings, const bh_target_result *t, double density,
			 const char **name, double *gain)
{
	const bh_plan *plan = findings->plan;
	const bh_signal *signal = &plan->signal;
	double best = density;

	*name = NULL;
	*gain = 0;
	for (size_t i = 0; i < signal->in_range_count; i++) {
		const bh_reflection *r = &signal->reflections[i];
		bh_view_of_line line;
		double other;

		if (r->phase != t->phase || i == t->reflection || r->relative < 5)
			continue;
		bh_view_make(&line, signal, i);
		other = bh_view_density(&line, 0.03 * 0.03, BH_FIT_AREA);
		if (!(other < best) || !(bh_view_limit(&line, BH_FIT_AREA) < 1e-4))
			continue;
		best = other;
		*name = bh_findings_plane(findings, i);
		if (!*name)
			return bh_fail_memory(findings->err);
		*gain = density / other;
	}
	return true;
}

static bh_severity severity(const bh_findings *findings, const bh_target_result *t,
			    const bh_neighbour *n, double limit)
{
	if (t->merged && n->in_window_frac > 0.1)
		return bh_findings_wanted(findings->plan, t) && limit > 0.03 ? BH_SEVERE
									     : BH_CAUTION;
	return n->in_window_frac > 0.1 || t->overlap_price > 2 ? BH_CAUTION : BH_NOTE;
}

static const char *others(bh_findings *findings, const bh_view_of_line *line,
			  const bh_neighbour *worst)
{
	const char *text = "";
	int named = 0;

	for (size_t i = 0; i < line->neighbour_count && text && named < 3; i++)
		if (&line->neighbours[i] != worst &&
		    line->neighbours[i].in_window_frac > least_share && ++named)
			text = bh_say(findings, "%s%s%s%s %.1f %%", text,
				      *text ? ", " : " Also ",
				      bh_findings_plane(findings,
							line->neighbours[i].reflection),
				      line_word(findings->plan, line->neighbours[i].line),
				      100 * line->neighbours[i].in_window_frac);
	return text && *text ? bh_say(findings, "%s.", text) : text;
}

static bool asks_position(const bh_plan *plan, const bh_target_result *t)
{
	for (size_t i = 0; i < plan->request->aim_count; i++) {
		const bh_aim *aim = &plan->request->aims[i];

		if (aim->kind == BH_AIM_LINE && aim->phase == t->phase &&
		    aim->target == t->target && aim->position_error_deg > 0)
			return true;
	}
	return false;
}

static bool report(bh_findings *findings, const bh_target_result *t,
		   const bh_view_of_line *line, const bh_neighbour *n)
{
	double limit = sqrt(bh_view_limit(line, BH_FIT_AREA)), gain;
	double density = bh_view_density(line, 0.03 * 0.03, BH_FIT_AREA);
	const char *better, *more = others(findings, line, n), *remedy;

	better = NULL;
	gain = 0;
	if (!asks_position(findings->plan, t) && /* there that very plane is meant */
	    !better_plane(findings, t, density, &better, &gain))
		return false;
	if (better && gain > 1.2)
		remedy = bh_say(
			findings,
			"Measure %s instead: the same error in 1/%.2g of the exposure.",
			better, gain);
	else
		remedy = limit > 0.01
				 ? "No plane of this phase is freer: fit the whole "
				   "group, and pin "
				   "the neighbour's share by a line of its own."
				 : "Fit both lines; the plan's count time pays for it.";
	return bh_findings_add(
		findings,
		&(bh_finding){
			.severity = severity(findings, t, n, limit),
			.where = bh_findings_target(findings, t),
			.text = bh_say(
				findings,
				"%s%s at %.3f° is %.2f FWHM away (%s) and gives %.2g %% "
				"of the net "
				"counts in the window; fitting the neighbours costs a "
				"factor %.2f in "
				"count time%s.%s",
				bh_findings_plane(findings, n->reflection),
				line_word(findings->plan, n->line), n->two_theta_deg,
				n->separation_fwhm, state(n->separation_fwhm),
				100 * n->in_window_frac, t->overlap_price,
				limit > 0.005
					? bh_say(findings,
						 " and leaves %.1f %% whatever the time",
						 100 * limit)
					: "",
				more),
			.evidence = { { "separation", n->separation_fwhm, "FWHM" },
				      { "neighbour_share", n->in_window_frac, "" },
				      { "purity", t->purity_frac, "" },
				      { "price", t->overlap_price, "" },
				      { "limit", limit, "" },
				      { "neighbour_prior",
					sqrt(line->neighbour_prior_var), "" } },
			.evidence_count = 6,
			.remedy = remedy,
			.gain = better && gain > 1.2 ? gain : 0,
		});
}

static bool equal_planes(bh_findings *findings, const bh_target_result *t,
			 const bh_view_of_line *line)
{
	return bh_findings_add(
		findings,
		&(bh_finding){
			.severity = BH_NOTE,
			.where = bh_findings_target(findings, t),
			.text = bh_say(
				findings,
				"%zu planes of this phase share this line exactly; the "
				"plan counts them as one.",
				line->equal_planes),
			.evidence = { { "planes", (double)line->equal_planes, "" } },
			.evidence_count = 1,
			.remedy = "",
		});
}

bool bh_find_overlap(bh_findings *findings)
{
	const bh_plan *plan = findings->plan;

	for (size_t i = 0; i < plan->target_count; i++) {
		const bh_target_result *t = &plan->targets[i];
		const bh_neighbour *worst = NULL;
		bh_view_of_line line;

		if (t->reflection == SIZE_MAX || !t->rate_known || !(t->rate_cps_deg > 0))
			continue;
		bh_view_make(&line, &plan->signal, t->reflection);
		for (size_t k = 0; k < line.neighbour_count; k++)
			if (!worst ||
			    line.neighbours[k].in_window_frac > worst->in_window_frac)
				worst = &line.neighbours[k];
		if (worst &&
		    (worst->in_window_frac > least_share ||
		     t->overlap_price > least_price) &&
		    !report(findings, t, &line, worst))
			return false;
		if (line.equal_planes > 1 && !equal_planes(findings, t, &line))
			return false;
	}
	return true;
}
