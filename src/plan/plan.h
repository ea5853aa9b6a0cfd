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

/* Whether the plan asks for attention: an aim not met or not reachable by counting, or a
 * severe finding. */
bool bh_plan_wants_attention(const bh_plan *plan);

#endif
