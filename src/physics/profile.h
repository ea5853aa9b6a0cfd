#ifndef PHYSICS_PROFILE_H
#define PHYSICS_PROFILE_H

#include "model/instrument.h"
#include "model/phase.h"

/* Shape of one line: a pseudo-Voigt of unit area. */
typedef struct {
	double fwhm_deg;
	double eta; /* Lorentzian share, 0 to 1 */
} bh_profile;

/* Pseudo-Voigt of the widths of its two parts.
 *   given    gauss_deg, lorentz_deg  full widths, ≥ 0, not both 0
 *   from     P. Thompson, D. E. Cox & J. B. Hastings, J. Appl. Cryst. 20 (1987) 79 */
bh_profile bh_profile_of(double gauss_deg, double lorentz_deg);

/* Line of the instrument and the phase's crystallites at an angle: instrument widths of the
 * instrument file; size by Scherrer K λ/(L cosθ), K = 0.9, and strain 4 ε tanθ, Lorentzian.
 *   given    phase   NULL: the instrument alone */
bh_profile bh_profile_line(const bh_instrument *instrument, const bh_phase *phase,
			   double wavelength_A, double two_theta_deg);

/* Height at offset_deg from the top, 1/° (the area is 1). */
double bh_profile_height_inv_deg(bh_profile profile, double offset_deg);

/* Share of the area within −half_deg to +half_deg. */
double bh_profile_inside_frac(bh_profile profile, double half_deg);

/* Share of the area between two offsets. */
double bh_profile_between_frac(bh_profile profile, double low_deg, double high_deg);

/* Gaussian part of the instrument, full width, ° 2θ; 0 where the polynomial is negative. */
double bh_profile_gauss_deg(const bh_instrument *instrument, double two_theta_deg);

#endif
