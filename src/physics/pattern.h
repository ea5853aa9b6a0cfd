#ifndef PHYSICS_PATTERN_H
#define PHYSICS_PATTERN_H

#include <stddef.h>

#include "model/signal.h"

/* Even angles: from_deg + i step_deg, i < count. */
typedef struct {
	double from_deg, step_deg;
	size_t count;
} bh_grid;

/* The whole curve: every line of every peak on the background, counts/s in one aperture.
 *   given    cps, background_cps  room for one value at each angle of the grid */
void bh_pattern(double *cps, double *background_cps, bh_grid grid,
		const bh_signal *signal);

/* First peak of the signal at or above an angle (peak_count when there is none). */
size_t bh_pattern_first(const bh_signal *signal, double two_theta_deg);

#endif
