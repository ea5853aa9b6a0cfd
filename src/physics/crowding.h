#ifndef PHYSICS_CROWDING_H
#define PHYSICS_CROWDING_H

#include <stdbool.h>
#include <stddef.h>

#include "base/arena.h"
#include "base/err.h"
#include "model/phase.h"

/* Which atoms of a structure stand too near each other. Atoms are sorted into boxes, so the work
 * grows with their number. Alternatives of one disorder assembly do not meet. */

/* A place that holds more than one atom: the occupancies of all images within within_A of a
 * site exceed 1. Returns true and names the nearest pair and its distance (site i against an
 * image of site j; i == j: two images of one site). */
bool bh_crowding_clash(const bh_phase *phase, double within_A, size_t *i, size_t *j,
		       double *distance_A);

/* Sites that repeat earlier ones: one element at one place up to symmetry, filled more than once.
 *   returns  repeats[i]: true when site i stands where an earlier one does
 *   false    memory is out */
bool bh_crowding_repeats(bool *repeats, const bh_phase *phase, bh_err *err);

#endif
