#ifndef PHYSICS_SYMMETRY_H
#define PHYSICS_SYMMETRY_H

#include <stdbool.h>
#include <stddef.h>

#include "base/arena.h"
#include "base/err.h"
#include "model/phase.h"

/* Door to the space-group database (spglib, 530 settings of the 230 groups). */

/* A space group from what a user writes: Hermann-Mauguin symbol (short, full; blanks and
 * underscores do not matter; any tabulated setting; ":1" ":2" ":H" ":R" choose origin or
 * axes), Hall symbol, or number 1 to 230. Without setting: unique axis b, cell choice 1,
 * hexagonal axes; a group with two origins takes ":1" and sets *origin_open, so that the
 * caller can ask when there are atoms.
 *   given    text        as written
 *   returns  group with operations in the arena
 *   false    unknown symbol: BH_BAD_INPUT, hint names the nearest symbols
 *   from     International Tables A */
bool bh_symmetry_find(bh_space_group *group, bool *origin_open, bh_arena *arena,
		      const char *text, bh_err *err);

/* A cell may miss the symmetry of its group by this much; see bh_symmetry_misfit. */
#define BH_MISFIT_MOST 5e-3

typedef struct {
	const char *text;
	const bh_cell *cell;
} bh_symmetry_asked;

/* The same for a cell that is known: of several settings with one symbol (hexagonal and
 * rhombohedral axes, unique axes) the first that leaves the cell as it is. */
bool bh_symmetry_find_for_cell(bh_space_group *group, bool *origin_open, bh_arena *arena,
			       const bh_symmetry_asked *asked, bh_err *err);

/* The group of one row of the database, 1 to 530. */
bool bh_symmetry_row(bh_space_group *group, bh_arena *arena, int hall_number,
		     bh_err *err);

/* Largest relative misfit of the metric under the operations: 0 for a cell that the group
 * allows, e.g. 0.02 for a = 4.9, b = 5.0 in a cubic group. */
double bh_symmetry_misfit(const bh_space_group *group, const bh_cell *cell);

/* Number, symbol and Hall symbol of a group given by its operations alone, in a cell that they
 * leave as it is. Of a setting or origin that is not in the table: number and symbol of the
 * group's first setting, hall_number 0 and no Hall symbol.
 *   false  the database finds no type */
bool bh_symmetry_name(bh_space_group *group, const bh_cell *cell);

/* Make a cell that nearly has the group's symmetry have it: the mean metric under the
 * operations. */
void bh_symmetry_fit_cell(bh_cell *cell, const bh_space_group *group);

/* How many values describe a cell of this group, and which: bit 0 to 5 of the result for
 * a b c α β γ. (Cubic: a; hexagonal axes and tetragonal: a c; rhombohedral axes: a α; ...) */
unsigned bh_symmetry_free_cell(const bh_space_group *group);

enum { BH_MAX_IMAGES = 192 };

/* How near two images of a site may be before they count as one atom, when its own precision
 * does not say: a third printed as 0.33 puts images up to 0.06 Å apart in a cell of 10 Å;
 * split sites of disorder are reported from 0.1 Å on. */
#define BH_REACH_DEFAULT_A 0.06

/* The special position that a point was meant to stand on: the mean of its images closer than
 * within_A (0: the default), so that 0.3333 becomes 1/3. */
void bh_symmetry_settle(double exact[3], const bh_space_group *group, const bh_cell *cell,
			const double at[3], double within_A);

/* Distance, Å, from a point to the nearest of its images that is at least beyond_A away; HUGE_VAL
 * when there is none within the neighbouring cells. */
double bh_symmetry_image_A(const bh_space_group *group, const bh_cell *cell,
			   const double at[3], double beyond_A);

/* All images of a point in the cell, in [0, 1), doubles (closer than within_A, 0: the
 * default) merged.
 *   returns  how many; images[i] filled */
size_t bh_symmetry_orbit(const bh_space_group *group, const bh_cell *cell,
			 const double at[3], double within_A,
			 double images[BH_MAX_IMAGES][3]);

#endif
