#ifndef MODEL_PLAN_H
#define MODEL_PLAN_H

#include <stdbool.h>
#include <stddef.h>

#include "base/arena.h"
#include "model/finding.h"
#include "model/request.h"
#include "model/signal.h"

typedef enum { BH_MODE_STEP, BH_MODE_MOVING, BH_MODE_STANDING } bh_mode;

typedef struct {
	double from_deg, to_deg;	       /* fully exposed                         */
	double travel_from_deg, travel_to_deg; /* detector centre, run-in included      */
	bh_mode mode;
	double step_deg;
	size_t steps;		/* round((to − from)/step) + 1           */
	double exposure_s;	/* aperture·seconds per step             */
	double time_per_step_s; /* wall seconds per step                 */
	double speed_deg_s;	/* 0 unless moving                       */
	double wall_s;		/* overhead of the range included        */
	const char *purpose;	/* "goethite 1 0 1, 3 0 1" or "survey"   */
} bh_range;

typedef struct {
	const bh_aim *aim;
	const char *kind;	  /* "line", "survey"                                */
	const char *what;	  /* "area of quartz 1 0 1"                          */
	const char *unit;	  /* "%", "°2θ", "wt%"                               */
	double wanted, predicted; /* in that unit, one standard error                */
	double floor;		  /* what no count time gets below; same unit        */
	bool computed;		  /* false: no rate known, nothing can be said       */
	bool met;
	bool reachable;		  /* by counting                                     */
	double needed_exposure_s; /* aperture·s per step at the plan's step          */
	double expected_counts;	  /* net counts of the line                          */
	double price_s; /* scanning time saved if this aim were dropped; < 0 not computed */
} bh_aim_result;

typedef struct {
	size_t phase, target;	 /* of the request                                  */
	size_t reflection;	 /* of the signal; SIZE_MAX when out of reach       */
	bool rate_known;	 /* false: positions only, what needs a rate is 0   */
	double ka1_deg, ka2_deg; /* Kα2 0 when a Kα1 monochromator takes it away    */
	double fwhm_deg;
	double rate_cps_deg; /* Kα1 + Kα2, one aperture                         */
	double top_cps;	     /* highest point of the recorded peak, net         */
	double background_cps;
	double purity_frac;	 /* own share of the net counts in the window       */
	double overlap_price;	 /* variance factor when neighbours are fitted too  */
	bool merged;		 /* not separable by any count time                 */
	double grains;		 /* N_eff                                           */
	double grain_error_frac; /* 1/√N_eff                                        */
	double expected_counts;	 /* net counts of the plan                          */
	double predicted_error_frac; /* area, one standard error, grain floor in        */
} bh_target_result;

typedef struct {
	const char *input; /* what is unsure                                  */
	double factor;	   /* times or divided by                             */
	double wall_low_s, wall_high_s;
} bh_unsure;

/* Where a printed number comes from. */
typedef struct {
	const char *what;     /* "net rate of quartz 1 0 1"                      */
	const char *value;    /* "850 counts/s"                                  */
	const char *equation; /* "I = Φ r_e² λ³ m|F|²/v² · ..."                   */
	const char *inputs;   /* "Φ = 2.1e9 /s, λ = 1.54059 Å, ..."              */
	const char *source;
} bh_why;

typedef struct {
	const char *topic; /* "before the beam is on", ...                    */
	const char *text;
} bh_caution;

typedef struct {
	double total_s;	   /* booked: warm-up, check, ranges, change          */
	double scanning_s; /* ranges without their overhead                   */
	double overhead_s; /* warm-up, reference check, change, per range     */
	double scout_s;	   /* within overhead_s: the scan that settles the throughput */
	double constant_scan_s; /* scanning of one even scan over the whole range that
	                              * meets the same aims; 0: not computed            */
} bh_times;

typedef struct {
	bh_arena *arena; /* owns all that hangs below                       */
	const bh_request *request;
	const bh_instrument *instrument; /* NULL: a list of reflections alone */
	const bh_anode *anode;
	bh_phase *phases;   /* of the request, then the holder                 */
	size_t phase_count; /* with holder                                     */
	bool has_holder;    /* the last phase is the holder                    */
	bh_signal signal;
	double pattern_from_deg, pattern_to_deg, pattern_step_deg;
	double *pattern_cps; /* whole curve, one aperture                       */
	double *pattern_background_cps;
	size_t pattern_count;
	bh_target_result *targets;
	size_t target_count;
	double displacement_shift_deg; /* of a line at 30°, by the specimen's displacement */
	const char *step_reason;
	bh_range *ranges;
	size_t range_count;
	bh_aim_result *aims;
	size_t aim_count;
	bh_times times;
	bool booking_short;    /* the longest booking does not suffice            */
	double wanted_total_s; /* what all aims would have taken                  */
	bh_finding *findings;
	size_t finding_count;
	bh_unsure *unsure;
	size_t unsure_count;
	bh_caution *cautions;
	size_t caution_count;
	const char **notes; /* what was assumed, one sentence each             */
	size_t note_count;
	bh_why *whys;
	size_t why_count;
	const char *scout; /* how the scout scan settles the throughput; NULL */
} bh_plan;

#endif
