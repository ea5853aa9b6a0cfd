#include "design/work.h"

#include <math.h>
#include <stdint.h>
#include <string.h>

/* Exposure density and view that the plan's ranges give a stretch. */
static double density_at(const bh_plan *plan, double low_deg, double high_deg,
			 bh_view *view)
{
	double sum = 0;

	*view = plan->instrument->detector.kind == BH_DETECTOR_STRIP ? BH_VIEW_SWEEPING
								     : BH_VIEW_STILL;
	for (size_t i = 0; i < plan->range_count; i++) {
		const bh_range *range = &plan->ranges[i];

		if (range->from_deg > low_deg + 1e-9 || range->to_deg < high_deg - 1e-9)
			continue;
		sum += range->exposure_s / range->step_deg;
		if (range->mode == BH_MODE_STANDING &&
		    !(sum > 2 * range->exposure_s / range->step_deg))
			*view = BH_VIEW_STILL;
	}
	return sum;
}

static void result_line(bh_work *w, bh_aim_result *result, const bh_need *need,
			bh_fit_parameter parameter)
{
	bh_plan *plan = w->plan;
	const bh_view_of_line *line = &w->lines[need->target];
	double unit = parameter == BH_FIT_AREA ? 100 : 1, grains[2], density;
	bh_view view;

	bh_work_grains(grains, w, need->target);
	density = density_at(plan, line->low_deg, line->high_deg, &view);
	result->computed = need->computed && density > 0;
	result->reachable = need->reachable[view];
	result->needed_exposure_s = need->density_s_deg[view] * w->machine.step_deg;
	result->floor =
		unit * sqrt(bh_need_floor_variance(line, grains[view], parameter));
	if (!result->computed)
		return;
	result->predicted =
		unit * bh_need_line_error(line, grains[view], density, parameter);
	result->expected_counts = line->area_cps_deg * line->inside_frac * density;
	result->met =
		result->reachable && result->predicted <= result->wanted * (1 + 1e-6);
}

static bool result_survey(bh_work *w, bh_aim_result *result, const bh_need *need)
{
	bh_plan *plan = w->plan;
	double density = 0, share;

	for (size_t i = 0; i < plan->range_count; i++)
		if (bh_work_is_survey(&plan->ranges[i]))
			density = plan->ranges[i].exposure_s / plan->ranges[i].step_deg;
	if (!bh_need_survey_share(&share, plan->arena, &plan->signal, w->scene,
				  w->limits_deg, density, w->err))
		return false;
	result->computed = need->computed && isfinite(share);
	result->reachable = true;
	result->predicted = result->computed ? 100 * share : 0;
	result->needed_exposure_s = need->density_s_deg[0] * w->machine.step_deg;
	result->met =
		result->computed && result->predicted <= result->wanted * (1 + 1e-4);
	return true;
}

/* Scanning time that the plan would save without an aim. */
static bool price(bh_work *w, bh_aim_result *result, size_t aim)
{
	bh_plan *plan = w->plan;
	bh_range *ranges = bh_new(plan->arena, bh_range, plan->request->aim_count + 1);
	size_t count;

	if (!ranges)
		return bh_fail_memory(w->err);
	if (!bh_work_lay(w, ranges, &count, aim))
		return false;
	result->price_s = plan->times.scanning_s - bh_work_scanning_s(w, ranges, count);
	if (result->price_s < 0)
		result->price_s = 0;
	return true;
}

static bool add_result(bh_work *w, const bh_need *need, size_t aim,
		       bh_fit_parameter parameter)
{
	bh_plan *plan = w->plan;
	bh_aim_result *result = &plan->aims[plan->aim_count++];
	const bh_target_result *t;

	*result = (bh_aim_result){ .aim = need->aim,
				   .kind = "survey",
				   .unit = "wt%",
				   .what = "any phase, everywhere in range" };
	if (need->aim->kind == BH_AIM_SURVEY) {
		result->wanted = 100 * need->aim->at_frac;
		return result_survey(w, result, need) && price(w, result, aim);
	}
	t = &plan->targets[need->target];
	result->kind = "line";
	result->unit = parameter == BH_FIT_AREA ? "%" : "°2θ";
	result->what = bh_arena_format(plan->arena, "%s of %s",
				       parameter == BH_FIT_AREA ? "area" : "position",
				       bh_work_target_name(w, t));
	result->wanted = parameter == BH_FIT_AREA ? 100 * need->aim->area_error_frac
						  : need->aim->position_error_deg;
	if (!result->what)
		return bh_fail_memory(w->err);
	if (t->reflection != SIZE_MAX)
		result_line(w, result, need, parameter);
	return price(w, result, aim);
}

bool bh_work_results(bh_work *w)
{
	bh_plan *plan = w->plan;

	plan->aims = bh_new(plan->arena, bh_aim_result, 2 * plan->request->aim_count);
	if (!plan->aims)
		return bh_fail_memory(w->err);
	for (size_t i = 0; i < plan->request->aim_count; i++) {
		const bh_aim *aim = &plan->request->aims[i];

		if ((aim->kind == BH_AIM_SURVEY || aim->area_error_frac > 0) &&
		    !add_result(w, &w->needs[i], i, BH_FIT_AREA))
			return false;
		if (aim->position_error_deg > 0 &&
		    !add_result(w, &w->needs[i], i, BH_FIT_POSITION))
			return false;
	}
	for (size_t i = 0; i < plan->target_count; i++) {
		bh_target_result *t = &plan->targets[i];
		const bh_view_of_line *line = &w->lines[i];
		double grains[2], density;
		bh_view view;

		if (t->reflection == SIZE_MAX || !(line->area_cps_deg > 0))
			continue;
		bh_work_grains(grains, w, i);
		density = density_at(plan, line->low_deg, line->high_deg, &view);
		t->grains = grains[view];
		t->grain_error_frac = t->grains > 0 ? 1 / sqrt(t->grains) : 0;
		if (!(density > 0))
			continue;
		t->overlap_price = bh_view_price(line, density);
		t->expected_counts = line->area_cps_deg * line->inside_frac * density;
		t->predicted_error_frac =
			bh_need_line_error(line, t->grains, density, BH_FIT_AREA);
	}
	return true;
}

/* One even scan over everything that gives each aim what it needs. */
void bh_work_constant_scan(bh_work *w)
{
	bh_plan *plan = w->plan;
	bh_view view = plan->instrument->detector.kind == BH_DETECTOR_STRIP
			       ? BH_VIEW_SWEEPING
			       : BH_VIEW_STILL;
	bh_span all = { w->limits_deg[0], w->limits_deg[1], { HUGE_VAL, HUGE_VAL }, "" };
	double most = 0;
	bh_range range;

	for (size_t i = 0; i < plan->request->aim_count; i++)
		if (w->needs[i].computed)
			most = fmax(most, w->needs[i].density_s_deg[view] * w->scale);
	if (!(most > 0))
		return;
	all.density_s_deg[view] = most;
	range = bh_ranges_run(&w->machine, &all);
	plan->times.constant_scan_s = bh_ranges_scanning_s(&range, plan->instrument);
}
