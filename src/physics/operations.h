#ifndef PHYSICS_OPERATIONS_H
#define PHYSICS_OPERATIONS_H

#include <stdbool.h>
#include <stddef.h>

#include "base/arena.h"
#include "base/err.h"
#include "model/phase.h"

/* Symmetry operations as structure files list them. */

/* Read one: "x,y,z", "-X, 1/2+Y, .5-z", "-x+y,-x,z+1/3". Decimals near a multiple of 1/24
 * (0.3333, .6667) are that; shifts are taken into [0, 1).
 *   false  not an operation, or one that does not keep volumes: BH_BAD_INPUT
 *   from   International Tables A (2016), 1.2 */
bool bh_operations_read(bh_symop *op, const char *text, size_t length, bh_err *err);

/* Whether two operations are the same up to whole cells. */
bool bh_operations_same(const bh_symop *a, const bh_symop *b);

/* Whether two groups have the same operations, in any order. */
bool bh_operations_equal(const bh_space_group *a, const bh_space_group *b);

/* Make a group of listed operations: each once, closed. Name and number are not filled.
 *   returns  *repeated: how many were listed more than once, whole cells apart
 *   false    no x,y,z; products that are not in the list: BH_BAD_INPUT; memory */
bool bh_operations_group(bh_space_group *group, size_t *repeated, bh_arena *arena,
			 const bh_symop *ops, size_t count, bh_err *err);

/* True when the operations hold −x,−y,−z about any point. */
bool bh_operations_centric(const bh_space_group *group);

#endif
