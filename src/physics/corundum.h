#ifndef PHYSICS_CORUNDUM_H
#define PHYSICS_CORUNDUM_H

#include "base/arena.h"
#include "base/err.h"

/* m|F|²/(v²ρ) of the 1 1 3 reflection of corundum at Cu Kα1, cm³/(g·Å⁶), and its
 * Lorentz-polarization there: what reference-intensity ratios I/I_c refer to.
 *   false  memory is out
 *   from   structure: L. Lutterotti & P. Scardi, J. Appl. Cryst. 23 (1990) 246; scale:
 *          C. R. Hubbard & R. L. Snyder, Powder Diffr. 3 (1988) 74 */
bool bh_corundum_strength(double *strength, double *lorentz_polarization, bh_arena *arena,
			  bh_err *err);

#endif
