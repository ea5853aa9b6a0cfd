#ifndef PHYSICS_RADIATION_H
#define PHYSICS_RADIATION_H

#include <stdbool.h>
#include <stddef.h>

#include "base/arena.h"
#include "base/err.h"
#include "model/instrument.h"
#include "model/signal.h"

/* Photons/s per unit of tube-side intensity (photons/(s sr mA)) that reach the specimen
 * plane: current, divergence, axial acceptance and throughput. An automatic slit counts at
 * its widest (θ = 90°); its sinθ stands in bh_lit. */
double bh_radiation_beam_sr_mA(const bh_instrument *instrument,
			       const bh_setting *setting);

/* Share of photons that pass from the anode to the specimen plane: tube window, optics and
 * path on the tube's side. */
double bh_radiation_path_frac(const bh_instrument *instrument, const bh_tube *tube,
			      double energy_keV);

/* The tube's lines at the specimen, Kα1 first; lines that the tube-side optics stop are left
 * out. mixture NULL or empty: attenuation 0. */
void bh_radiation_make(bh_radiation *radiation, const bh_instrument *instrument,
		       const bh_setting *setting, const bh_composition *mixture);

/* The tube's continuum at the specimen, in bins of equal width. */
typedef struct {
	double low_keV, step_keV; /* centre of bin i: low + (i + ½) step    */
	size_t count;
	double *flux_s_keV;	   /* photons/(s keV) at the specimen plane  */
	double *counted_frac;	   /* D(E)                                   */
	double *attenuation_cm2_g; /* μ/ρ of the specimen                    */
} bh_continuum;

/*   false  memory is out */
bool bh_continuum_make(bh_continuum *continuum, bh_arena *arena,
		       const bh_instrument *instrument, const bh_setting *setting,
		       const bh_composition *mixture, bh_err *err);

/* Centre of a bin, and the bin of an energy (count when it is outside). */
double bh_continuum_keV(const bh_continuum *continuum, size_t bin);
size_t bh_continuum_bin(const bh_continuum *continuum, double energy_keV);

#endif
