#ifndef PHYSICS_DETECTOR_H
#define PHYSICS_DETECTOR_H

#include "model/instrument.h"
#include "model/signal.h"

/* Share of photons absorbed and counted by the sensor: η0 (1 − exp(−μ t)). */
double bh_detector_efficiency_frac(const bh_detector *detector, double energy_keV);

/* Share of pulses of an energy that fall into the window low to high, keV: a Gaussian whose
 * FWHM grows as √E from fwhm_keV at ka_keV, and a flat low-energy tail. */
double bh_detector_window_frac(const bh_detector *detector, double energy_keV,
			       double ka_keV, double low_keV, double high_keV);

/* D(E): share of photons leaving the specimen towards the aperture that are counted:
 * path, foil and crystal on the detector's side, sensor, window. */
double bh_detector_counted_frac(const bh_instrument *instrument,
				const bh_setting *setting, double energy_keV);

/* One aperture as seen from the specimen, along 2θ. */
double bh_detector_aperture_rad(const bh_instrument *instrument);

/* h_eff/R: axial acceptance, the sensor's height or the Soller slit, whichever is less. */
double bh_detector_axial_frac(const bh_instrument *instrument);

/* Angle that all channels of a strip see at once. */
double bh_detector_window_deg(const bh_instrument *instrument); /* N p, ° 2θ */

#endif
