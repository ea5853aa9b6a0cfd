#ifndef PHYSICS_GRAINS_H
#define PHYSICS_GRAINS_H

#include <stdbool.h>

#include "model/phase.h"
#include "physics/observe.h"

/* How the detector meets a line, for the spread of grain orientations that count. */
typedef enum {
	BH_VIEW_STILL,	 /* slit, or a strip that stands: source and aperture     */
	BH_VIEW_SWEEPING /* a moving strip: the specimen turns by half its window */
} bh_view;

/* The line that grains are counted for. */
typedef struct {
	const bh_phase *phase;
	int multiplicity; /* planes with Friedel opposites, ≥ 1 */
	double two_theta_deg;
	bh_view view;
	bool spin;
} bh_grain_line;

/* Number of crystallites that contribute to a line: N_eff = V packing v_α/v_grain ·
 * m Δω Δψ/4π, V = irradiated area · sinθ/2μ, Δψ = h_eff/(2 R sinθ); a spinner multiplies by
 * (Δψ/Δω)/[(2/π) ln(Δψ/Δω) + π/4] when Δψ > Δω.
 *   returns  N_eff; 0 when the mixture or the phase's density is not known
 *   from     L. E. Alexander, H. P. Klug & E. Kummer, J. Appl. Phys. 19 (1948) 742;
 *            D. K. Smith, Powder Diffr. 16 (2001) 186 */
double bh_grains_effective(const bh_signal *signal, const bh_scene *scene,
			   const bh_grain_line *line);

/* Spread of orientations in the diffraction plane, rad. */
double bh_grains_spread_rad(const bh_scene *scene, const bh_setting *setting,
			    bh_view view);

/* Factor that turning the specimen in its plane multiplies N_eff by, ≥ 1. */
double bh_grains_spin_gain(double across_rad, double along_rad);

#endif
