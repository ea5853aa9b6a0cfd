#ifndef PLAN_PLAN_H
#define PLAN_PLAN_H

#include <stdbool.h>

#include "base/arena.h"
#include "base/err.h"
#include "model/plan.h"
#include "model/request.h"

/* The scan plan of a request: what the machine sees, what it should do, what can go wrong,
 * what to watch for. The anode is the first of the request's.
 *   given    request  complete (as read); borrowed, must outlive the plan
 *   returns  *plan, all of it in the arena
 *   false    memory is out, or the holder cannot be built */
bool bh_plan_make(bh_plan *plan, bh_arena *arena, const bh_request *request, bh_err *err);

/* Only what the machine sees: reflections, peaks, background. For lists. */
bool bh_plan_observe(bh_plan *plan, bh_arena *arena, const bh_request *request,
		     bh_err *err);

/* The reflections of the phases at an anode's Kα1, without an instrument: places, |F|² and
 * relative intensities, no rates and no widths. The request holds phases and limits.
 *   false  memory is out; more reflections or terms than can be computed (BH_BAD_INPUT) */
bool bh_plan_list(bh_plan *plan, bh_arena *arena, const bh_request *request,
		  const bh_anode *anode, bh_err *err);

/* Which reflections a list shows. */
typedef struct {
	double d_min_A, d_max_A; /* 0, HUGE_VAL: all            */
	double least_percent;	 /* relative intensity; 0: all  */
} bh_list_filter;

/* Leave the others out of what is in range. */
void bh_plan_filter(bh_plan *plan, const bh_list_filter *filter);

/* Whether the plan asks for attention: an aim not met or not reachable by counting, or a
 * severe finding. */
bool bh_plan_wants_attention(const bh_plan *plan);

#endif
