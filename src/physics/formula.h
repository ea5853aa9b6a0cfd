#ifndef PHYSICS_FORMULA_H
#define PHYSICS_FORMULA_H

#include <stdbool.h>
#include <stddef.h>

#include "base/arena.h"
#include "base/err.h"
#include "model/phase.h"

enum { BH_FORMULA_DEPTH = 8, BH_FORMULA_LENGTH = 120 };

/* Elements by mass of a chemical formula: "Fe2O3", "Ca(OH)2", "Li0.5CoO2", "CaSO4*2H2O"
 * (also "·": hydrate dot; a "." is a decimal point only, and "CaSO4.2H2O" is refused).
 *   false  BH_BAD_INPUT: says which character and what is allowed */
bool bh_formula_read(bh_composition *composition, bh_arena *arena, const char *text,
		     bh_err *err);

/* Put elements in order of Z, doubles merged, scaled to sum 1. Drops shares of 0. */
void bh_formula_normalise(bh_composition *composition);

/* Molar mass, g/mol, of the formula as written; 0 when it cannot be read. */
double bh_formula_molar_mass_g(const char *text);

#endif
