#ifndef DESIGN_RANGES_H
#define DESIGN_RANGES_H

#include <stdbool.h>
#include <stddef.h>

#include "base/arena.h"
#include "base/err.h"
#include "model/plan.h"
#include "physics/grains.h"

/* A stretch of 2θ and the exposure that it needs, by how the detector meets it. */
typedef struct {
	double from_deg, to_deg;
	double density_s_deg
		[2]; /* by bh_view: aperture·s per degree; HUGE_VAL: not that way */
	const char *purpose;
} bh_span;

/* What the machine turns spans into. */
typedef struct {
	const bh_instrument *instrument;
	double step_deg;
	double low_deg, high_deg; /* limits of 2θ that a plan may use */
} bh_machine;

/* Detector centres reach low to high; a moving strip exposes fully only half a window inside
 * the arms' limits. */
void bh_ranges_limits(double *low_deg, double *high_deg, const bh_machine *machine);

/* The range that the machine runs for a span: angles rounded outward to 0.1°, time per step
 * or speed to two digits on the safe side, standing where that is shorter and possible. */
bh_range bh_ranges_run(const bh_machine *machine, const bh_span *span);

/* Join spans where one range costs less than two, and the cheapest pairs further until at
 * most `most` are left. Works in place; returns how many remain, ascending.
 *   false  memory is out */
bool bh_ranges_join(bh_span *spans, size_t *count, size_t most, const bh_machine *machine,
		    bh_arena *arena, bh_err *err);

/* Wall time without overhead. */
double bh_ranges_scanning_s(const bh_range *range, const bh_instrument *instrument);

/* Two significant digits, never below (up) or never above (down) the value. */
double bh_ranges_round_up(double value);
double bh_ranges_round_down(double value);

#endif
