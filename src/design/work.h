#ifndef DESIGN_WORK_H
#define DESIGN_WORK_H

#include <stdbool.h>
#include <stddef.h>

#include "base/err.h"
#include "design/need.h"
#include "design/ranges.h"
#include "design/view.h"
#include "model/plan.h"
#include "physics/observe.h"

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
} bh_work;

/* What a target is called: "quartz 1 0 1"; NULL: memory is out. */
const char *bh_work_target_name(bh_work *w, const bh_target_result *t);

/* Grains that contribute to a target, for each bh_view. */
void bh_work_grains(double grains[2], const bh_work *w, size_t target);

/* look: targets with their neighbours, the step, what each aim needs. */
bool bh_work_look(bh_work *w);
bool bh_work_step(bh_work *w);
bool bh_work_needs(bh_work *w);

/* lay: the ranges that meet every need but the skipped one's (SIZE_MAX: all). A survey runs
 * over everything; the lines' ranges add what it leaves open. */
bool bh_work_lay(bh_work *w, bh_range *ranges, size_t *count, size_t skip);
bool bh_work_is_survey(const bh_range *range);
double bh_work_scanning_s(const bh_work *w, const bh_range *ranges, size_t count);
/* Driving between ranges and the machine's overhead, without the scout scan. */
double bh_work_overhead_s(const bh_work *w, const bh_range *ranges, size_t count);
bool bh_work_scout(bh_work *w);

/* results: what the laid ranges give each aim and target, and one even scan beside them. */
bool bh_work_results(bh_work *w);
void bh_work_constant_scan(bh_work *w);

#endif
