#ifndef PHYSICS_FILTER_H
#define PHYSICS_FILTER_H

#include <stdbool.h>

#include "data/anodes.h"
#include "model/instrument.h"

/* The element of the best Kβ foil for an anode: its K edge lies between Kα and Kβ, and it
 * costs least Kα for the same cut of Kβ. 0 when the tables hold none.
 *   from  absorption edges; J. A. Bearden & A. F. Burr, Rev. Mod. Phys. 39 (1967) 125 */
int bh_filter_element(const bh_anode *anode);

/* Thinnest foil that brings Kβ/Kα from before to after, µm: t = ln(before/after) /
 * ((μβ − μα) ρ). 0 when the element does not absorb Kβ more than Kα. */
double bh_filter_thickness_um(const bh_anode *anode, int z, double before, double after);

/* Kβ/Kα of the anode as emitted, photons (from the database's radiative rates). */
double bh_filter_kbeta_ratio(const bh_anode *anode);

/* Energies that a crystal monochromator set for Kα lets pass: centre ± half, keV.
 *   from  derivative of Bragg's law, ΔE/E = cotθ_M Δθ */
typedef struct {
	double centre_keV, half_keV;
} bh_band;

bh_band bh_filter_band(const bh_tube *tube);

/* Share of photons of an energy that pass the tube's optics on one side of the specimen:
 * foil and monochromator, when they stand on that side. */
double bh_filter_pass_frac(const bh_tube *tube, bh_side side, double energy_keV);

/* A of the polarization factor (1 + A cos²2θ)/(1 + A): cos²2θ_M, 1 without crystal. */
double bh_filter_polarization(const bh_tube *tube);

/* Mean energy of Kα, (2 Kα1 + Kα2)/3 in wavelength, keV. */
double bh_filter_ka_keV(const bh_anode *anode);

#endif
