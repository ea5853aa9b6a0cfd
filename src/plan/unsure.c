#include "plan/unsure.h"

#include <string.h>

#include "design/design.h"

/* Share of the specimen's fluorescence that the continuum excites. */
static double by_continuum_frac(const bh_signal *signal)
{
	double all = 0, continuum = 0;

	for (size_t i = 0; i < signal->fluorescence_count; i++) {
		const bh_fluorescence *f = &signal->fluorescence[i];

		all += f->rate_cps;
		if (strcmp(f->excited_by, "continuum") == 0)
			continuum += f->rate_cps;
	}
	return all > 0 ? continuum / all : 0;
}

/* The same signal under a continuum that is stronger by a factor: what it excites and what of
 * it is scattered go with it. */
static bool scale_continuum(bh_signal *to, bh_arena *arena, const bh_signal *from,
			    double factor, bh_err *err)
{
	double share = by_continuum_frac(from);

	*to = *from;
	to->background = bh_new(arena, bh_background, from->background_count);
	if (!to->background)
		return bh_fail_memory(err);
	for (size_t i = 0; i < from->background_count; i++) {
		const bh_background *b = &from->background[i];

		to->background[i] = *b;
		to->background[i].total +=
			(factor - 1) * (b->continuum + share * b->fluorescence);
	}
	return true;
}

/* Wall time that all aims would take with another continuum: the whole design again. */
static bool with_continuum(double *total_s, bh_plan *plan, const bh_scene *scene,
			   double factor, bh_err *err)
{
	bh_request *request = bh_new(plan->arena, bh_request, 1);
	bh_plan other = *plan;
	bh_scene there = *scene;

	if (!request)
		return bh_fail_memory(err);
	*request = *plan->request;
	request->booking.longest_s = 0;
	other.request = there.request = request;
	other.target_count = other.aim_count = other.range_count = 0;
	if (!scale_continuum(&other.signal, plan->arena, &plan->signal, factor, err) ||
	    !bh_design(&other, &there, err))
		return false;
	*total_s = other.times.total_s;
	return true;
}

bool bh_unsure_find(bh_plan *plan, const bh_scene *scene, bh_err *err)
{
	double throughput = plan->signal.setting.tube->throughput_factor;
	double continuum = plan->instrument->continuum_factor;
	/* counting that all aims would take: what the booking cuts is left in */
	double counting_s = plan->wanted_total_s - plan->times.overhead_s;
	bh_unsure *rows = bh_new(plan->arena, bh_unsure, 2);

	plan->unsure = rows;
	if (!rows)
		return bh_fail_memory(err);
	if (plan->range_count == 0)
		return true;
	if (throughput > 1)
		rows[plan->unsure_count++] =
			(bh_unsure){ "throughput, not measured on this machine",
				     throughput,
				     plan->times.overhead_s + counting_s / throughput,
				     plan->times.overhead_s + counting_s * throughput };
	if (continuum > 1 && plan->signal.rates_known) {
		bh_unsure *row = &rows[plan->unsure_count++];

		*row = (bh_unsure){ "continuum of the tube", continuum, 0, 0 };
		return with_continuum(&row->wall_low_s, plan, scene, 1 / continuum,
				      err) &&
		       with_continuum(&row->wall_high_s, plan, scene, continuum, err);
	}
	return true;
}
