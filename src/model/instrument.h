#ifndef MODEL_INSTRUMENT_H
#define MODEL_INSTRUMENT_H

#include <stdbool.h>
#include <stddef.h>

#include "data/anodes.h"

typedef enum { BH_SIDE_TUBE, BH_SIDE_DETECTOR } bh_side;
typedef enum { BH_GAS_AIR, BH_GAS_HELIUM, BH_GAS_VACUUM, BH_GAS_COUNT } bh_gas;
typedef enum { BH_DETECTOR_SLIT, BH_DETECTOR_STRIP } bh_detector_kind;

/* A crystal monochromator; two_theta_deg 0: none. */
typedef struct {
	double two_theta_deg; /* setting angle for Kα                          */
	bh_side side;	      /* incident or diffracted beam                   */
	double mosaic_deg;    /* full width that it accepts                    */
	double reflectivity;  /* of Kα, (0, 1]                                 */
	bool ka1_only;	      /* an incident crystal that splits off Kα2       */
} bh_monochromator;

typedef struct {
	const bh_anode *anode;
	double most_kV, most_mA, most_W; /* limits of tube and generator           */
	double kV, mA;			 /* usual setting                          */
	double takeoff_deg;
	double focus_mm;  /* projected width of the line focus      */
	double window_um; /* beryllium                              */
	int foil_z;	  /* Kβ foil; 0: none                       */
	double foil_um;
	bh_side foil_side;
	bh_monochromator monochromator;
	double throughput;	  /* measured/model; see MODEL 6            */
	double throughput_factor; /* uncertainty, times or divided by       */
	double tungsten_share;	  /* W Lα1 per Kα1 photon of an aged tube   */
} bh_tube;

typedef struct {
	bh_detector_kind kind;
	double aperture_mm;	 /* receiving slit, or pitch of one channel        */
	size_t channels;	 /* 1 for a slit                                   */
	double height_mm;	 /* across the diffraction plane                   */
	int sensor_z;		 /* absorbing element of the sensor                */
	double sensor_um;	 /* 0: efficiency alone                            */
	double efficiency;	 /* η0 of absorbed photons, (0, 1]                 */
	double resolution_frac;	 /* FWHM of the energy response at Kα, ΔE/E        */
	double window_low_frac;	 /* lower level, of the Kα energy                  */
	double window_high_frac; /* upper level, of the Kα energy                  */
	double tail_frac;	 /* share of pulses in the low-energy tail         */
	double linear_limit_cps; /* highest rate of one channel, 1 % dead time     */
	bool standing;		 /* a strip that may stand still                   */
} bh_detector;

enum { BH_MAX_TUBES = 8, BH_MAX_SLITS = 12 };

typedef struct {
	char name[128]; /* as asked for: preset name or path    */
	char title[128];
	double radius_mm;
	double two_theta_min_deg, two_theta_max_deg;
	double smallest_step_deg;
	double fastest_deg_s;
	double settle_s;	/* per step                             */
	double shortest_step_s; /* shortest count time                  */

	bh_tube tubes[BH_MAX_TUBES];
	size_t tube_count;

	double divergence_deg[BH_MAX_SLITS]; /* fixed slits offered, ascending */
	size_t divergence_count;
	double usual_divergence_deg; /* one of these                    */
	double automatic_length_mm;  /* > 0: a slit of constant irradiated length */
	double beam_width_mm;	     /* irradiated across the beam      */
	double soller_tube_deg;	     /* full opening, 0: none           */
	double soller_detector_deg;

	bh_detector detector;
	bh_gas tube_path, detector_path;

	double gauss_tan2_deg2, gauss_tan_deg2, gauss_0_deg2; /* Γ_G², ° 2θ squared */
	double lorentz_tan_deg, lorentz_sec_deg;	      /* Γ_L, ° 2θ           */

	double *blank_two_theta_deg; /* ascending                       */
	double *blank_cps;	     /* one aperture, usual setting     */
	size_t blank_count;

	double warm_up_s, reference_check_s, specimen_change_s, per_range_s;
	double continuum_scale, continuum_factor;
} bh_instrument;

#endif
