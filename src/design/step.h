#ifndef DESIGN_STEP_H
#define DESIGN_STEP_H

#include <stdbool.h>

#include "base/arena.h"
#include "model/instrument.h"

/* The step of the scan and why it is that. */
typedef struct {
	double step_deg;
	const char *reason;
} bh_step;

/* Coarsest step that the machine can set and that keeps the narrowest line: at most FWHM/5
 * (FWHM/6 when a position is asked), and less than 2 % of the information lost however the
 * steps fall on the line. A slit's step divides 0.1°; a strip's divides its pitch.
 *   given    fwhm_deg, eta   of the narrowest line that the plan measures
 *            line            its name, for the reason
 *            position        whether a position is asked
 *   returns  reason NULL when memory is out
 *   from     L. B. McCusker et al., J. Appl. Cryst. 32 (1999) 36: at least five steps across
 *            the top of a peak; R. J. Hill & I. C. Madsen, Powder Diffr. 2 (1987) 146 */
bh_step bh_step_choose(bh_arena *arena, const bh_instrument *instrument, double fwhm_deg,
		       double eta, const char *line, bool position);

/* Information on the area and position of a pseudo-Voigt on a background of a fifth of its
 * height that a step keeps, worst phase of the grid, as a share of that of endless steps. */
double bh_step_kept_frac(double step_deg, double fwhm_deg, double eta);

#endif
