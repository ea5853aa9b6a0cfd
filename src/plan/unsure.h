#ifndef PLAN_UNSURE_H
#define PLAN_UNSURE_H

#include <stdbool.h>

#include "base/err.h"
#include "model/plan.h"
#include "physics/observe.h"

/* How much the plan's wall time for all aims moves with what is not known of the machine:
 * its throughput, and the tube's continuum.
 *   false  memory is out */
bool bh_unsure_find(bh_plan *plan, const bh_scene *scene, bh_err *err);

#endif
