#include "design/design.h"

#include <math.h>
#include <stdint.h>

#include "design/work.h"

static bool lay_and_time(bh_work *w)
{
	bh_plan *plan = w->plan;

	if (!bh_work_lay(w, plan->ranges, &plan->range_count, SIZE_MAX))
		return false;
	plan->times.scanning_s = bh_work_scanning_s(w, plan->ranges, plan->range_count);
	plan->times.overhead_s = bh_work_overhead_s(w, plan->ranges, plan->range_count) +
				 plan->times.scout_s;
	plan->times.total_s = plan->times.scanning_s + plan->times.overhead_s;
	return true;
}

/* Fit the plan into the booking by the same factor on every exposure. */
static bool fit_booking(bh_work *w)
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

bool bh_design(bh_plan *plan, const bh_scene *scene, bh_err *err)
{
	bh_work w = { .plan = plan,
		      .scene = scene,
		      .machine = { plan->instrument, 0, plan->request->two_theta_min_deg,
				   plan->request->two_theta_max_deg },
		      .scale = 1,
		      .err = err };

	bh_ranges_limits(&w.limits_deg[0], &w.limits_deg[1], &w.machine);
	plan->ranges = bh_new(plan->arena, bh_range, plan->request->aim_count + 1);
	if (!plan->ranges)
		return bh_fail_memory(err);
	if (!bh_work_look(&w) || !bh_work_step(&w) || !bh_work_needs(&w) ||
	    !bh_work_scout(&w) || !fit_booking(&w) || !bh_work_results(&w))
		return false;
	bh_work_constant_scan(&w);
	return true;
}
