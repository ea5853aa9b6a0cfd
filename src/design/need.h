#ifndef DESIGN_NEED_H
#define DESIGN_NEED_H

#include <stdbool.h>
#include <stddef.h>

#include "design/view.h"
#include "model/plan.h"
#include "physics/grains.h"

/* What one aim needs of the scan. */
typedef struct {
	const bh_aim *aim;
	size_t target;		 /* of the plan's targets; SIZE_MAX for a survey       */
	bool computed;		 /* a rate is known and the target is in reach         */
	bool reachable[2];	 /* by counting, for each bh_view                      */
	double density_s_deg[2]; /* aperture·s per degree, for each bh_view            */
	double floor[2];	 /* in the aim's own unit: fraction or degrees         */
} bh_need;

/* Variance that no counting time removes: grains that contribute and, for an area, the
 * neighbours' limit. */
double bh_need_floor_variance(const bh_view_of_line *line, double grains,
			      bh_fit_parameter parameter);

/* Need of a `line` aim.
 *   given    line    its target's view; grains by bh_view
 *   The counting part of the variance is what the wanted one leaves above the floor, and
 *   never asked below a ninth of the floor: an aim nearer to its floor than that is not
 *   reachable by counting, and the exposure stops there. */
void bh_need_line(bh_need *need, const bh_view_of_line *line, const double grains[2]);

/* Error of a line aim at an exposure density: area (fraction) or position (degrees). */
double bh_need_line_error(const bh_view_of_line *line, double grains,
			  double density_s_deg, bh_fit_parameter parameter);

/* Need of a `survey` aim: everywhere ε ≥ 3.29² (q A + 1.5 f b)/(q A)², A the 10 % line of a
 * phase of corundum ratio 1 at the wanted share.
 *   false  memory is out */
bool bh_need_survey(bh_need *need, bh_arena *arena, const bh_signal *signal,
		    const bh_scene *scene, const double limits_deg[2], bh_err *err);

/* The share (fraction) that a survey at an exposure density shows everywhere; HUGE_VAL when
 * the corundum line is out of reach. */
bool bh_need_survey_share(double *share_frac, bh_arena *arena, const bh_signal *signal,
			  const bh_scene *scene, const double limits_deg[2],
			  double density_s_deg, bh_err *err);

#endif
