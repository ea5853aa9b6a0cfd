#ifndef PHYSICS_HKL_H
#define PHYSICS_HKL_H

#include <stdbool.h>
#include <stddef.h>

#include "base/arena.h"
#include "base/err.h"
#include "model/phase.h"

/* One plane: its printed representative, how many equivalents with Friedel pairs, d. */
typedef struct {
	int h[3];
	int multiplicity;
	double d_A;
} bh_hkl;

enum { BH_MAX_EQUIVALENTS = 48 };

/* True when the operations extinguish hkl in any crystal of the group.
 *   from  International Tables A, 1.6: h R = h with h·t not an integer */
bool bh_hkl_absent(const bh_space_group *group, const int h[3]);

/* All planes equivalent to hkl, Friedel opposites counted; returns how many. */
size_t bh_hkl_equivalents(const bh_space_group *group, const int h[3],
			  int planes[BH_MAX_EQUIVALENTS][3]);

/* The equivalent with fewest negative indices, then the largest (h, k, l). */
void bh_hkl_standard(int standard[3], const bh_space_group *group, const int h[3]);

/* Unique planes that the group does not extinguish, d_A ≥ least_d_A, d falling (equal d:
 * larger h k l first). No limit on how many; the work grows as V/d³.
 *   false  memory is out */
bool bh_hkl_list(bh_hkl **planes, size_t *count, bh_arena *arena, const bh_cell *cell,
		 const bh_space_group *group, double least_d_A, bh_err *err);

/* About how many bh_hkl_list would find: half the points of the sphere over the rotations. */
double bh_hkl_estimate(const bh_cell *cell, const bh_space_group *group, double least_d_A);

/* Read a plane as people write it: "1 0 4", "1,0,-4", "10-4", "1 0 -1 4" (four indices
 * only when the third is minus the sum of the first two). Without separators each index
 * is one digit with an optional minus.
 *   false  not a plane, or 0 0 0 */
bool bh_hkl_parse(int h[3], const char *text);

#endif
