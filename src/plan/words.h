#ifndef PLAN_WORDS_H
#define PLAN_WORDS_H

#include <stdbool.h>

#include "base/err.h"
#include "model/plan.h"
#include "physics/observe.h"

/* The parts of a plan that are words. Each fills its part; false: memory is out. */
bool bh_words_notes(bh_plan *plan, bh_err *err);    /* what was assumed           */
bool bh_words_cautions(bh_plan *plan, bh_err *err); /* safety, hazards by element */
bool bh_words_why(bh_plan *plan, const bh_scene *scene,
		  bh_err *err); /* where numbers come from */

#endif
