#ifndef MODEL_SIGNAL_H
#define MODEL_SIGNAL_H

#include <stdbool.h>
#include <stddef.h>

#include "model/phase.h"
#include "model/instrument.h"

/* What the machine is set to. Everything that a design may turn stands here. */
typedef struct {
	const bh_tube *tube;
	double kV, mA;
	double divergence_deg; /* 0: the automatic slit                    */
	double window_low_keV, window_high_keV;
	bool open_window; /* every pulse counts, for "before" figures */
} bh_setting;

/* One emission line at the specimen. */
typedef struct {
	const char *name; /* "Ka1", "Ka2", "Kb", "W La1"                     */
	int kind;	  /* BH_KA1 ...                                      */
	double wavelength_A, energy_keV;
	double flux_s;	      /* photons/s at the specimen plane, in the divergence */
	double detected_frac; /* D(E): path, foil, sensor, window                */
	double mass_attenuation_cm2_g; /* of the mixture; 0: composition not known    */
} bh_line;

enum { BH_MAX_LINES = 4 };

typedef struct {
	bh_line lines[BH_MAX_LINES];
	size_t count;
	double kbeta_ratio; /* Kβ:Kα as detected, photons                      */
	double kbeta_ratio_at_specimen;
	double overvoltage;  /* kV over the anode's K edge                      */
	double polarization; /* A = cos²2θ_M of the monochromator, else 1       */
} bh_radiation;

/* One plane of one phase, at the first line. Phases are numbered as in the plan: those of
 * the request, then the holder when it has lines. */
typedef struct {
	size_t phase;
	int h[3]; /* 0 0 0 for a phase given as a list               */
	double d_A;
	int multiplicity; /* Friedel pairs merged; 0 for a list              */
	double f2;	  /* |F|² at the first line; 0 without atoms         */
	double f2_lines[BH_MAX_LINES]; /* the same at each line of the radiation      */
	double texture; /* March-Dollase factor, 1: random                 */
	bool in_range;	/* the first line falls within the limits          */
	bool target;
	bool rate_known;      /* false: the phase has positions only             */
	double two_theta_deg; /* first line; 0 when out of reach                 */
	double fwhm_deg;
	double rate_cps_deg; /* first line, one aperture, counts·deg/s          */
	double relative;     /* 100 × rate / largest of the phase               */
} bh_reflection;

typedef struct {
	size_t reflection, line;
	double two_theta_deg;
	double fwhm_deg;     /* full width of the pseudo-Voigt                  */
	double eta;	     /* its Lorentzian share                            */
	double rate_cps_deg; /* area in one aperture, counts·deg/s; 0: unknown  */
} bh_peak;

/* Background in one aperture, counts/s. */
typedef struct {
	double two_theta_deg;
	double blank, fluorescence, continuum, compton, diffuse, total;
} bh_background;

typedef struct {
	int z;
	const char *line; /* "Ka", "Kb", "La", "Lb"                          */
	double energy_keV;
	const char *excited_by; /* a line's name, or "continuum"                   */
	double path_cm2_g;	/* μ/ρ in + μ/ρ out, for specimens that are thin   */
	double rate_cps;	/* one aperture, thick specimen fully lit          */
} bh_fluorescence;

/* What one setting of the machine sees of one specimen. */
typedef struct {
	bh_setting setting;
	bh_radiation radiation;
	bh_composition mixture; /* count 0: not known            */
	double density_g_cm3;	/* X-ray density of the mixture; 0: not known */
	double holder_attenuation_cm2_g
		[BH_MAX_LINES];	     /* by line; 0: the holder gives no lines */
	bool rates_known;	     /* the mixture's composition is known */
	double neighbour_prior_frac; /* how well a neighbour's area is known before */
	double aperture_deg;	     /* Δ                             */
	double axial_frac;	     /* h_eff/R                       */
	bh_reflection
		*reflections; /* in range first, then the others; by phase, d falling */
	size_t reflection_count, in_range_count;
	bh_peak *peaks; /* by 2θ                         */
	size_t peak_count;
	bh_background *background; /* by 2θ, even steps             */
	size_t background_count;
	bh_fluorescence *fluorescence;
	size_t fluorescence_count;
} bh_signal;

#endif
