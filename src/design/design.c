#include "design/design.h"

#include <math.h>
#include <stdint.h>
#include <stdio.h>
#include <string.h>

#include "base/units.h"
#include "design/need.h"
#include "design/ranges.h"
#include "design/step.h"
#include "design/view.h"
#include "physics/detector.h"
#include "physics/profile.h"

/* Everything of one design that is not part of the plan itself. */
typedef struct {
	bh_plan *plan;
	const bh_scene *scene;
	bh_machine machine;
	double limits_deg[2];	/* where every point can be fully exposed      */
	bh_view_of_line *lines; /* one for each target                         */
	bh_need *needs;		/* one for each aim                            */
	double scale;		/* exposures are multiplied by it; 1, or less when
	                          * the booking does not suffice                */
	bh_err *err;
} work;

static const char *target_name(work *w, const bh_target_result *t)
{
	const bh_phase *phase = &w->plan->phases[t->phase];

	return bh_arena_format(w->plan->arena, "%s %s", phase->name,
			       phase->targets[t->target].text);
}

static void grains_of(double grains[2], const work *w, size_t target)
{
	const bh_view_of_line *line = &w->lines[target];

	for (int view = 0; view < 2; view++)
		grains[view] = bh_grains_effective(
			&w->plan->signal, w->scene,
			&(bh_grain_line){
				&w->plan->phases[w->plan->targets[target].phase],
				line->multiplicity, line->ka1_deg, (bh_view)view,
				w->plan->request->specimen.spin });
}

static void look_at_target(work *w, size_t index)
{
	bh_target_result *t = &w->plan->targets[index];
	bh_view_of_line *line = &w->lines[index];
	const bh_signal *signal = &w->plan->signal;
	const bh_phase *phase = &w->plan->phases[t->phase];
	double grains[2], density;

	t->reflection = bh_view_find(signal, phase, t->phase, &phase->targets[t->target]);
	if (t->reflection == SIZE_MAX || !signal->reflections[t->reflection].in_range) {
		t->reflection = SIZE_MAX;
		return;
	}
	bh_view_make(line, signal, t->reflection);
	grains_of(grains, w, index);
	t->rate_known = signal->reflections[t->reflection].rate_known;
	t->ka1_deg = line->ka1_deg;
	t->ka2_deg = line->ka2_deg > line->ka1_deg ? line->ka2_deg : 0;
	t->fwhm_deg = line->fwhm_deg;
	t->rate_cps_deg = line->area_cps_deg;
	t->top_cps = line->top_cps;
	t->background_cps = line->background_cps;
	t->purity_frac = line->purity_frac;
	/* until the plan's exposure is known: at that of an area to 3 % */
	density = bh_view_density(line, 0.03 * 0.03, BH_FIT_AREA);
	t->overlap_price = isfinite(density) ? bh_view_price(line, density) : 0;
	t->grains = grains[BH_VIEW_STILL];
	for (size_t i = 0; i < line->neighbour_count; i++)
		if (line->neighbours[i].separation_fwhm < 0.5 &&
		    line->neighbours[i].in_window_frac > 0.03)
			t->merged = true;
}

static bool look_at_targets(work *w)
{
	bh_plan *plan = w->plan;
	size_t count = 0;

	for (size_t i = 0; i < plan->request->phase_count; i++)
		count += plan->phases[i].target_count;
	plan->targets = bh_new(plan->arena, bh_target_result, count);
	w->lines = bh_new(plan->arena, bh_view_of_line, count);
	if (!plan->targets || !w->lines)
		return bh_fail_memory(w->err);
	for (size_t i = 0; i < plan->request->phase_count; i++)
		for (size_t k = 0; k < plan->phases[i].target_count; k++) {
			plan->targets[plan->target_count] =
				(bh_target_result){ .phase = i, .target = k };
			look_at_target(w, plan->target_count++);
		}
	return true;
}

static size_t target_of(const bh_plan *plan, const bh_aim *aim)
{
	for (size_t i = 0; i < plan->target_count; i++)
		if (plan->targets[i].phase == aim->phase &&
		    plan->targets[i].target == aim->target)
			return i;
	return SIZE_MAX;
}

static bool choose_step(work *w)
{
	bh_plan *plan = w->plan;
	const bh_instrument *instrument = plan->instrument;
	double middle = (w->limits_deg[0] + w->limits_deg[1]) / 2;
	bh_profile narrow = bh_profile_line(
		instrument, NULL, plan->signal.radiation.lines[0].wavelength_A, middle);
	const char *name = "of the instrument";
	bool position = false;
	bh_step step;

	for (size_t i = 0; i < plan->target_count; i++) {
		const bh_target_result *t = &plan->targets[i];

		if (t->reflection == SIZE_MAX ||
		    (strcmp(name, "of the instrument") != 0 &&
		     t->fwhm_deg >= narrow.fwhm_deg))
			continue;
		narrow = bh_profile_line(instrument, &plan->phases[t->phase],
					 plan->signal.radiation.lines[0].wavelength_A,
					 t->ka1_deg);
		name = target_name(w, t);
		if (!name)
			return bh_fail_memory(w->err);
	}
	for (size_t i = 0; i < plan->request->aim_count; i++)
		position = position || plan->request->aims[i].position_error_deg > 0;
	step = bh_step_choose(plan->arena, instrument, narrow.fwhm_deg, narrow.eta, name,
			      position);
	w->machine.step_deg = step.step_deg;
	plan->step_reason = step.reason;
	return step.reason || bh_fail_memory(w->err);
}

static bool find_needs(work *w)
{
	bh_plan *plan = w->plan;

	w->needs = bh_new(plan->arena, bh_need, plan->request->aim_count);
	if (!w->needs)
		return bh_fail_memory(w->err);
	for (size_t i = 0; i < plan->request->aim_count; i++) {
		bh_need *need = &w->needs[i];
		double grains[2];

		need->aim = &plan->request->aims[i];
		if (need->aim->kind == BH_AIM_SURVEY) {
			if (!bh_need_survey(need, plan->arena, &plan->signal, w->scene,
					    w->limits_deg, w->err))
				return false;
			continue;
		}
		need->target = target_of(plan, need->aim);
		if (need->target == SIZE_MAX ||
		    plan->targets[need->target].reflection == SIZE_MAX)
			continue;
		grains_of(grains, w, need->target);
		bh_need_line(need, &w->lines[need->target], grains);
	}
	return true;
}

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
static double survey_density(const work *w, size_t skip)
{
	double most = 0;

	for (size_t i = 0; i < w->plan->request->aim_count; i++)
		if (i != skip && w->needs[i].aim->kind == BH_AIM_SURVEY &&
		    w->needs[i].computed)
			most = fmax(most, w->needs[i].density_s_deg[0]);
	return most * w->scale;
}

static bool is_survey(const bh_range *range)
{
	return strcmp(range->purpose, "survey") == 0;
}

static bool add_survey(work *w, bh_range *ranges, size_t *count, double density)
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
static bool lay_ranges(work *w, bh_range *ranges, size_t *count, size_t skip)
{
	bh_plan *plan = w->plan;
	double everywhere = survey_density(w, skip);
	bh_span *spans = bh_new(plan->arena, bh_span, plan->request->aim_count);
	size_t n = 0, most = plan->request->booking.most_ranges;

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
		span->purpose = target_name(w, &plan->targets[need->target]);
		if (!span->purpose)
			return bh_fail_memory(w->err);
		for (int view = 0; view < 2; view++)
			span->density_s_deg[view] =
				need->density_s_deg[view] * w->scale - everywhere;
		if (!need->reachable[BH_VIEW_STILL] && need->reachable[BH_VIEW_SWEEPING])
			span->density_s_deg[BH_VIEW_STILL] = HUGE_VAL;
		n += span->density_s_deg[BH_VIEW_SWEEPING] > 0;
	}
	if (!bh_ranges_join(spans, &n, most > *count ? most - *count : 1, &w->machine,
			    plan->arena, w->err))
		return false;
	for (size_t i = 0; i < n; i++)
		ranges[(*count)++] = bh_ranges_run(&w->machine, &spans[i]);
	return true;
}

static double scanning_s(const work *w, const bh_range *ranges, size_t count)
{
	double sum = 0;

	for (size_t i = 0; i < count; i++)
		sum += bh_ranges_scanning_s(&ranges[i], w->plan->instrument);
	return sum;
}

/* Driving between ranges and the machine's overhead, without the scout scan. */
static double overhead_s(const work *w, const bh_range *ranges, size_t count)
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
static const char *how_run(work *w, const bh_range *range)
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
static bool scout(work *w)
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
			name = target_name(w, &plan->targets[i]);
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

static bool lay_and_time(work *w)
{
	bh_plan *plan = w->plan;

	if (!lay_ranges(w, plan->ranges, &plan->range_count, SIZE_MAX))
		return false;
	plan->times.scanning_s = scanning_s(w, plan->ranges, plan->range_count);
	plan->times.overhead_s =
		overhead_s(w, plan->ranges, plan->range_count) + plan->times.scout_s;
	plan->times.total_s = plan->times.scanning_s + plan->times.overhead_s;
	return true;
}

/* Fit the plan into the booking by the same factor on every exposure. */
static bool fit_booking(work *w)
{
	bh_plan *plan = w->plan;
	const bh_booking *booking = &plan->request->booking;
	double room_s = booking->longest_s * (1 - booking->reserve_frac);
	double low = 1e-6, high = 1;

	if (!lay_and_time(w))
		return false;
	plan->wanted_total_s = plan->times.total_s;
	if (!(booking->longest_s > 0) || plan->times.total_s <= room_s)
		return true;
	plan->booking_short = true;
	while (high / low > 1.001) {
		w->scale = sqrt(low * high);
		if (!lay_and_time(w))
			return false;
		if (plan->times.total_s > room_s)
			high = w->scale;
		else
			low = w->scale;
	}
	w->scale = low;
	return lay_and_time(w);
}

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

static void result_line(work *w, bh_aim_result *result, const bh_need *need,
			bh_fit_parameter parameter)
{
	bh_plan *plan = w->plan;
	const bh_view_of_line *line = &w->lines[need->target];
	double unit = parameter == BH_FIT_AREA ? 100 : 1, grains[2], density;
	bh_view view;

	grains_of(grains, w, need->target);
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

static bool result_survey(work *w, bh_aim_result *result, const bh_need *need)
{
	bh_plan *plan = w->plan;
	double density = 0, share;

	for (size_t i = 0; i < plan->range_count; i++)
		if (is_survey(&plan->ranges[i]))
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
static bool price(work *w, bh_aim_result *result, size_t aim)
{
	bh_plan *plan = w->plan;
	bh_range *ranges = bh_new(plan->arena, bh_range, plan->request->aim_count + 1);
	size_t count;

	if (!ranges)
		return bh_fail_memory(w->err);
	if (!lay_ranges(w, ranges, &count, aim))
		return false;
	result->price_s = plan->times.scanning_s - scanning_s(w, ranges, count);
	if (result->price_s < 0)
		result->price_s = 0;
	return true;
}

static bool add_result(work *w, const bh_need *need, size_t aim,
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
				       target_name(w, t));
	result->wanted = parameter == BH_FIT_AREA ? 100 * need->aim->area_error_frac
						  : need->aim->position_error_deg;
	if (!result->what)
		return bh_fail_memory(w->err);
	if (t->reflection != SIZE_MAX)
		result_line(w, result, need, parameter);
	return price(w, result, aim);
}

static bool results(work *w)
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
		grains_of(grains, w, i);
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
static void constant_scan(work *w)
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

bool bh_design(bh_plan *plan, const bh_scene *scene, bh_err *err)
{
	work w = { .plan = plan,
		   .scene = scene,
		   .machine = { plan->instrument, 0, plan->request->two_theta_min_deg,
				plan->request->two_theta_max_deg },
		   .scale = 1,
		   .err = err };

	bh_ranges_limits(&w.limits_deg[0], &w.limits_deg[1], &w.machine);
	plan->ranges = bh_new(plan->arena, bh_range, plan->request->aim_count + 1);
	if (!plan->ranges)
		return bh_fail_memory(err);
	if (!look_at_targets(&w) || !choose_step(&w) || !find_needs(&w) || !scout(&w) ||
	    !fit_booking(&w) || !results(&w))
		return false;
	constant_scan(&w);
	return true;
}
