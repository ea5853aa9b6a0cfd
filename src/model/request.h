#ifndef MODEL_REQUEST_H
#define MODEL_REQUEST_H

#include <stdbool.h>
#include <stddef.h>

#include "model/instrument.h"
#include "model/phase.h"

typedef struct {
	char holder[24];     /* a row of data/holders                    */
	double length_mm;    /* along the beam                           */
	double width_mm;     /* across                                   */
	double thickness_mm; /* of the packed powder                     */
	double packing_frac; /* powder density / X-ray density           */
	double grain_um;     /* diameter of the crystallites (grains)    */
	bool spin;
	double displacement_mm; /* how far off the axis it may lie          */
} bh_specimen;

typedef enum { BH_AIM_LINE, BH_AIM_SURVEY, BH_AIM_KINDS } bh_aim_kind;

typedef struct {
	bh_aim_kind kind;
	size_t phase;		   /* line: index into phases               */
	size_t target;		   /* line: index into that phase's targets */
	double area_error_frac;	   /* line: wanted, one standard error; 0: not asked    */
	double position_error_deg; /* line: wanted, one standard error; 0: not asked    */
	double at_frac;		   /* survey: weight fraction to be seen    */
	bool by_default;	   /* the request has no aims               */
	bh_place place;
} bh_aim;

typedef struct {
	double longest_s; /* 0: no limit                        */
	size_t most_ranges;
	double reserve_frac; /* of the booking, kept free          */
} bh_booking;

typedef struct {
	char title[128];
	char file[256];
	const bh_instrument *instrument;
	const bh_anode *anodes[BH_MAX_TUBES]; /* to choose among, in order */
	size_t anode_count;
	double two_theta_min_deg,
		two_theta_max_deg; /* user's limits within the instrument's */
	bool two_theta_given;

	bh_phase *phases;
	size_t phase_count;
	double amorphous_frac;
	char amorphous_formula[64]; /* "" : as the crystalline mixture   */
	bh_composition amorphous;   /* resolved                          */

	bh_specimen specimen;
	bh_aim *aims;
	size_t aim_count;
	bh_booking booking;
	double share_factor;	/* how unsure minor shares are, times or divided by */
	bh_without without;	/* for comparison with tables */
} bh_request;

#endif
