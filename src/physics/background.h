#ifndef PHYSICS_BACKGROUND_H
#define PHYSICS_BACKGROUND_H

#include <stdbool.h>
#include <stddef.h>

#include "base/arena.h"
#include "base/err.h"
#include "model/instrument.h"
#include "model/signal.h"
#include "physics/radiation.h"
#include "physics/xray.h"

/* One kind of atom in one kind of place: what scatters diffusely. */
typedef struct {
	int z;
	double mass_frac; /* of the specimen                                   */
	double b_iso_A2;
	bool amorphous; /* all of |f|² is diffuse, not 1 − exp(−2 B s²) of it */
} bh_scatterer;

/* What the beam meets: the specimen, or the holder beside it. */
typedef struct {
	const bh_composition *composition;
	const bh_scatterer *scatterers;
	size_t scatterer_count;
	double areal_g_cm2; /* HUGE_VAL: thick */
} bh_body;

/* Photons of one energy on a body, and the aperture that looks at it. */
typedef struct {
	double energy_keV;
	double flux_s;
	double solid_angle_sr; /* Ω of one aperture */
} bh_photons;

/* Fluorescence of one element's line group from a thick flat body, counts/s in one aperture
 * before the detector's own losses:
 *   Φ Ω/4π w σ_fl(E)/(μ/ρ(E) + μ/ρ(E_f))
 *   from     depth integral of exp(−(μ + μ_f) t/sinθ); R. Jenkins, X-Ray Fluorescence
 *            Spectrometry (1999) */
double bh_background_fluorescence_cps(const bh_composition *composition, size_t element,
				      bh_fl_group group, bh_photons photons);

/* Compton scattering of one energy, counts/s in one aperture before D(E'):
 *   Φ Ω DCS_C/(μ/ρ(E) + μ/ρ(E')) */
double bh_background_compton_cps(const bh_composition *composition, bh_photons photons,
				 double two_theta_rad);

/* Diffuse (thermal, and amorphous) scattering of one energy, before D(E):
 *   Φ Ω Σ (w N_A/A) r_e² P |f|² (1 − exp(−2 B s²))/(2 μ/ρ) */
double bh_background_diffuse_cps(const bh_body *body, bh_photons photons,
				 double two_theta_rad, double polarization);

/* The beam on a body, and the machine that looks at it. */
typedef struct {
	const bh_instrument *instrument;
	const bh_setting *setting;
	const bh_radiation *radiation;
	const bh_continuum *continuum; /* with the body's own attenuation */
} bh_beam;

/* All fluorescence of a body, one row for each element, line group and exciting line, and
 * one for the continuum; D(E_f) is in, overspill is not. Rows below a millionth of the
 * strongest are left out.
 *   false  memory is out */
bool bh_background_fluorescence(bh_fluorescence **rows, size_t *count, bh_arena *arena,
				const bh_body *body, const bh_beam *beam, bh_err *err);

/* The instrument's blank at an angle, counts/s in one aperture (linear between points). */
double bh_background_blank_cps(const bh_instrument *instrument, const bh_setting *setting,
			       double two_theta_deg);

#endif
