#include "plan/unsure.h"

#include "design/design.h"

/* Wall time that all aims would take with another continuum: the whole design again. */
static bool with_continuum(double *total_s, bh_plan *plan, const bh_scene *scene,
			   double factor, bh_err *err)
{
	bh_instrument *instrument = bh_new(plan->arena, bh_instrument, 1);
	bh_request *request = bh_new(plan->arena, bh_request, 1);
	bh_plan other = *plan;
	bh_scene there = *scene;

	if (!instrument || !request)
		return bh_fail_memory(err);
	*instrument = *plan->instrument;
	instrument->continuum_scale *= factor;
	*request = *plan->request;
	request->instrument = instrument;
	request->booking.longest_s = 0;
	other.request = there.request = request;
	other.instrument = there.instrument = instrument;
	other.targets = NULL;
	other.target_count = other.aim_count = other.range_count = 0;
	if (!bh_observe(&other.signal, plan->arena, &there, &plan->signal.setting, err) ||
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
