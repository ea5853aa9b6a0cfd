#include "design/work.h"

#include <math.h>
#include <stdint.h>
#include <string.h>

/* The window that a line needs: MODEL's ±max(4 FWHM, 0.4°), and room for the best width of
 * background on both sides. */
static void line_window(bh_span *span, const bh_view_of_line *line)
{
	double background_deg, half;

	bh_view_net_variance(&background_deg, line);
	half = 1.5 * line->fwhm_deg + background_deg / 2;
	span->from_deg = fmin(line->fit_low_deg, line->ka1_deg - half);
	span->to_deg = fmax(line->fit_high_deg, line->ka2_deg + half);
}

/* Exposure density that the survey aims (all but the skipped one) put everywhere. */
static double survey_density(const bh_work *w, size_t skip)
{
	double most = 0;

	for (size_t i = 0; i < w->plan->request->aim_count; i++)
		if (i != skip && w->needs[i].aim->kind == BH_AIM_SURVEY &&
		    w->needs[i].computed)
			most = fmax(most, w->needs[i].density_s_deg[0]);
	return most * w->scale;
}

bool bh_work_is_survey(const bh_range *range)
{
	return strcmp(range->purpose, "survey") == 0;
}

static bool add_survey(bh_work *w, bh_range *ranges, size_t *count, double density)
{
	bh_span all = {
		w->limits_deg[0], w->limits_deg[1], { density, density }, "survey"
	};

	if (density > 0)
		ranges[(*count)++] = bh_ranges_run(&w->machine, &all);
	return true;
}

/* The ranges that meet every need but the skipped one's. A survey runs over everything; the
 * lines' ranges add what it leaves open. */
bool bh_work_lay(bh_work *w, bh_range *ranges, size_t *count, size_t skip)
{
	bh_plan *plan = w->plan;
	double everywhere = survey_density(w, skip);
	bh_span *spans = bh_new(plan->arena, bh_span, plan->request->aim_count);
	size_t n = 0, most = plan->request->booking.most_ranges;
	bh_view usual = plan->instrument->detector.kind == BH_DETECTOR_STRIP
				? BH_VIEW_SWEEPING
				: BH_VIEW_STILL;

	*count = 0;
	if (!spans)
		return bh_fail_memory(w->err);
	add_survey(w, ranges, count, everywhere);
	if (*count)
		everywhere = ranges[0].exposure_s / ranges[0].step_deg;
	for (size_t i = 0; i < plan->request->aim_count; i++) {
		const bh_need *need = &w->needs[i];
		bh_span *span = &spans[n];

		if (i == skip || !need->computed || need->aim->kind == BH_AIM_SURVEY)
			continue;
		line_window(span, &w->lines[need->target]);
		span->purpose = bh_work_target_name(w, &plan->targets[need->target]);
		if (!span->purpose)
			return bh_fail_memory(w->err);
		for (int view = 0; view < 2; view++)
			span->density_s_deg[view] =
				need->density_s_deg[view] * w->scale - everywhere;
		if (!need->reachable[BH_VIEW_STILL] && need->reachable[BH_VIEW_SWEEPING])
			span->density_s_deg[BH_VIEW_STILL] = HUGE_VAL;
		n += span->density_s_deg[usual] > 0;
	}
	if (!bh_ranges_join(spans, &n, most > *count ? most - *count : 1, &w->machine,
			    plan->arena, w->err))
		return false;
	for (size_t i = 0; i < n; i++)
		ranges[(*count)++] = bh_ranges_run(&w->machine, &spans[i]);
	return true;
}

double bh_work_scanning_s(const bh_work *w, const bh_range *ranges, size_t count)
{
	double sum = 0;

	for (size_t i = 0; i < count; i++)
		sum += bh_ranges_scanning_s(&ranges[i], w->plan->instrument);
	return sum;
}

/* Driving between ranges and the machine's overhead, without the scout scan. */
double bh_work_overhead_s(const bh_work *w, const bh_range *ranges, size_t count)
{
	const bh_instrument *instrument = w->plan->instrument;
	double sum = instrument->warm_up_s + instrument->reference_check_s +
		     instrument->specimen_change_s +
		     (double)count * instrument->per_range_s;

	for (size_t i = 0; i + 1 < count; i++)
		sum += fabs(ranges[i + 1].travel_from_deg - ranges[i].travel_to_deg) /
		       instrument->fastest_deg_s;
	return sum;
}

/* "0.5 s for each step of 0.02°", as it is typed at the machine. */
static const char *how_run(bh_work *w, const bh_range *range)
{
	bh_arena *arena = w->plan->arena;
	const char *how;

	if (range->mode == BH_MODE_MOVING)
		how = bh_arena_format(arena, "moving at %.3g°/min, step %.3g°",
				      60 * range->speed_deg_s, range->step_deg);
	else if (range->mode == BH_MODE_STANDING)
		how = bh_arena_format(arena, "standing for %.3g s, step %.3g°",
				      range->time_per_step_s, range->step_deg);
	else
		how = bh_arena_format(arena, "%.3g s for each step of %.3g°",
				      range->time_per_step_s, range->step_deg);
	return how ? how : "";
}

/* A first quick scan over the best target whose counts settle the throughput: to 5 %, which
 * beats the factor that it replaces. */
bool bh_work_scout(bh_work *w)
{
	bh_plan *plan = w->plan;
	const bh_tube *tube = plan->signal.setting.tube;
	const bh_view_of_line *best = NULL;
	bh_span span = { .purpose = "scout" };
	bh_range range;
	const char *name = NULL;
	double counts;

	if (tube->throughput_factor < 1.1)
		return true;
	for (size_t i = 0; i < plan->target_count; i++)
		if (plan->targets[i].reflection != SIZE_MAX &&
		    w->lines[i].area_cps_deg > 0 &&
		    (!best || w->lines[i].top_cps > best->top_cps)) {
			best = &w->lines[i];
			name = bh_work_target_name(w, &plan->targets[i]);
		}
	if (!best || !name)
		return !best || bh_fail_memory(w->err);
	line_window(&span, best);
	span.density_s_deg[0] = span.density_s_deg[1] =
		bh_view_density(best, 0.05 * 0.05, BH_FIT_AREA);
	range = bh_ranges_run(&w->machine, &span);
	plan->times.scout_s = range.wall_s;
	counts = best->area_cps_deg * best->inside_frac * range.exposure_s /
		 range.step_deg;
	plan->scout = bh_arena_format(
		plan->arena,
		"Scan %.1f to %.1f° (%s) first, %s. The plan expects %.0f net counts, "
		"summed over the "
		"steps from %.2f to %.2f°. If you find k times as many, divide every "
		"count time of the "
		"plan by k; below k = %.2g or above %.2g, look for the cause first.",
		range.from_deg, range.to_deg, name, how_run(w, &range),
		bh_ranges_round_up(counts), best->low_deg, best->high_deg,
		1 / tube->throughput_factor, tube->throughput_factor);
	return plan->scout || bh_fail_memory(w->err);
}
