#ifndef DESIGN_DESIGN_H
#define DESIGN_DESIGN_H

#include <stdbool.h>

#include "base/err.h"
#include "model/plan.h"
#include "physics/observe.h"

/* From what the machine sees to what it should do: targets, step, ranges, times, predicted
 * errors, price of each aim, what a short booking buys.
 *   given    plan    signal, phases, request, instrument, arena set
 *   fills    targets, step_reason, ranges, aims, times, booking_short, wanted_total_s, scout
 *   false    memory is out */
bool bh_design(bh_plan *plan, const bh_scene *scene, bh_err *err);

#endif
