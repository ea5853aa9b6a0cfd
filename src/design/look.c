#include "design/work.h"

#include <math.h>
#include <stdint.h>
#include <string.h>

#include "design/step.h"
#include "physics/profile.h"

const char *bh_work_target_name(bh_work *w, const bh_target_result *t)
{
	const bh_phase *phase = &w->plan->phases[t->phase];

	return bh_arena_format(w->plan->arena, "%s %s", phase->name,
			       phase->targets[t->target].text);
}

void bh_work_grains(double grains[2], const bh_work *w, size_t target)
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

static void look_at_target(bh_work *w, size_t index)
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
	bh_work_grains(grains, w, index);
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

bool bh_work_look(bh_work *w)
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

bool bh_work_step(bh_work *w)
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
		name = bh_work_target_name(w, t);
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

bool bh_work_needs(bh_work *w)
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
		bh_work_grains(grains, w, need->target);
		bh_need_line(need, &w->lines[need->target], grains);
		/* a line that the limits cut through cannot be measured */
		if (w->lines[need->target].low_deg < w->limits_deg[0] ||
		    w->lines[need->target].high_deg > w->limits_deg[1])
			need->computed = false;
	}
	return true;
}
