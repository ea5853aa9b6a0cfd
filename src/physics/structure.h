#ifndef PHYSICS_STRUCTURE_H
#define PHYSICS_STRUCTURE_H

#include <stdbool.h>

#include "base/arena.h"
#include "base/err.h"
#include "model/phase.h"

/* Displacement parameter used where a site gives none, Å²: common practice for inorganic
 * solids at room temperature; a plan says where it is used. */
#define BH_B_ISO_DEFAULT_A2 0.5

/* Fill volume, site multiplicities, composition, formula text (lowest whole numbers where
 * they exist, else as many formulas as the numbers of places have in common), formula units
 * in the cell and X-ray density of a phase with atoms; volume alone for one without atoms.
 * Images of a site closer than 0.06 Å are one atom.
 *   false  memory is out */
bool bh_structure_resolve(bh_phase *phase, bh_arena *arena, bh_err *err);

#endif
