#ifndef PHYSICS_PATTERN_H
#define PHYSICS_PATTERN_H

#include <stddef.h>

#include "model/signal.h"

/* The whole curve: every line of every peak on the background, counts/s in one aperture.
 *   given    cps, background_cps  count values each, at from_deg + i step_deg */
void bh_pattern(double *cps, double *background_cps, size_t count, double from_deg,
		double step_deg, const bh_signal *signal);

/* First peak of the signal at or above an angle (peak_count when there is none). */
size_t bh_pattern_first(const bh_signal *signal, double two_theta_deg);

#endif
