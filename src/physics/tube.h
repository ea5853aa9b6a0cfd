#ifndef PHYSICS_TUBE_H
#define PHYSICS_TUBE_H

#include "data/anodes.h"

/* Photons of one characteristic K line, per second, steradian and milliampere, at the anode's
 * surface (before the tube window).
 *   given    kind        BH_KA1, BH_KA2 or BH_KB (all of Kβ)
 *            kV          tube voltage; below the K edge the result is 0
 *            takeoff_deg (0, 90]
 *   from     H. Ebel, X-Ray Spectrom. 28 (1999) 255, coefficients from memory: checked by
 *            the ratio of continuum to Kα excitation of iron behind nickel and by the
 *            (U − 1)^1.6 growth of handbooks */
double bh_tube_line_per_s_sr_mA(const bh_anode *anode, int kind, double kV,
				double takeoff_deg);

/* Continuum photons per second, steradian, milliampere and keV at an energy; 0 at and above
 * kV.
 *   from     the same paper: 1.35e9 Z (E0/E − 1)^x f(χ), x = 1.109 − 0.00435 Z + 0.00175 E0 */
double bh_tube_continuum_per_s_sr_mA_keV(const bh_anode *anode, double energy_keV,
					 double kV, double takeoff_deg);

/* Share of photons of an energy that leave the anode: depth distribution of their birth and
 * absorption on the way out at the take-off angle.
 *   given    edge_keV    energy that starts the emission: the K edge for a line, the photon's
 *                        own energy for the continuum */
double bh_tube_escape_frac(int z, double energy_keV, double edge_keV, double kV,
			   double takeoff_deg);

#endif
