#ifndef PHYSICS_ABSORB_H
#define PHYSICS_ABSORB_H

#include <stdbool.h>
#include <stddef.h>

#include "base/arena.h"
#include "base/err.h"
#include "model/instrument.h"
#include "model/phase.h"

/* Mass attenuation coefficient of a composition, cm²/g: Σ w μ/ρ. */
double bh_absorb_cm2_g(const bh_composition *composition, double energy_keV);

/* Share that passes a layer of an element, exp(−μ t). thickness_um ≥ 0. */
double bh_absorb_layer_frac(int z, double thickness_um, double energy_keV);

/* Share that passes length_mm of the gas that fills the beam path.
 *   from  air as N2/O2/Ar 78.1/21.0/0.9 % by volume, 1.205 mg/cm³ at 20 °C; helium
 *         0.1664 mg/cm³ (ideal gas, 101.325 kPa): common practice */
double bh_absorb_gas_frac(bh_gas gas, double length_mm, double energy_keV);

/* One part of a mixture by weight. */
typedef struct {
	const bh_composition *composition;
	double share_frac;
} bh_mix_part;

/* The mixture's elements by mass, Σ w_i C_i, scaled to 1. Parts with share 0 are skipped.
 *   false  memory is out */
bool bh_absorb_mix(bh_composition *mixture, bh_arena *arena, const bh_mix_part *parts,
		   size_t count, bh_err *err);

#endif
