#ifndef DESIGN_VIEW_H
#define DESIGN_VIEW_H

#include <stdbool.h>
#include <stddef.h>

#include "base/arena.h"
#include "base/err.h"
#include "base/cholesky.h"
#include "physics/observe.h"

enum { BH_VIEW_NEIGHBOURS = 16 };

/* Another plane's counts within the window of a target's fit. */
typedef struct {
	size_t reflection;
	size_t line;		/* emission line of its peak that matters most    */
	double two_theta_deg;	/* of that peak                                   */
	double separation_fwhm; /* to the nearer of the target's Kα1, Kα2         */
	double area_cps_deg;	/* all its peaks within the fit window            */
	double in_window_frac;	/* its share of the net counts in the line window */
} bh_neighbour;

/* What surrounds a target: everything its count time depends on. Counts per unit of exposure
 * density (aperture·s per degree). */
typedef struct {
	size_t reflection;	 /* lead reflection in the signal                  */
	double ka1_deg, ka2_deg; /* ka2 = ka1 without a Kα2                        */
	double fwhm_deg;
	double low_deg, high_deg; /* line window: Kα1 − 1.5 FWHM to Kα2 + 1.5 FWHM  */
	double fit_low_deg, fit_high_deg; /* where the fit looks                    */
	double area_cps_deg;  /* own: Kα1 + Kα2, planes of equal d together     */
	double inside_frac;   /* of the own area within the line window         */
	double gross_cps_deg; /* all counts within the line window              */
	double background_cps;
	double top_cps;	     /* highest point of the recorded peak, net        */
	double purity_frac;  /* own share of the net counts in the line window */
	size_t equal_planes; /* planes of the same phase at the same d         */
	int multiplicity;    /* of all of them, Friedel opposites counted      */
	bh_neighbour neighbours[BH_VIEW_NEIGHBOURS];
	size_t neighbour_count;	    /* largest first                                  */
	double neighbour_prior_var; /* of their areas, relative                    */
	double information[BH_CHOLESKY_MOST * BH_CHOLESKY_MOST]; /* per s/deg       */
	size_t parameter_count; /* area, position, level, slope, neighbours       */
} bh_view_of_line;

/* Where a target lies in a signal: the index of its reflection, SIZE_MAX when no angle of
 * the first line reflects it. */
size_t bh_view_find(const bh_signal *signal, const bh_phase *phase, size_t phase_index,
		    const bh_target *target);

/* Look at a target. Its rate may be 0 or unknown: then only the angles are filled.
 *   given    reflection  in range, from bh_view_find */
void bh_view_make(bh_view_of_line *view, const bh_signal *signal, size_t reflection);

typedef enum { BH_FIT_AREA, BH_FIT_POSITION } bh_fit_parameter;

/* Variance by counting of the area (relative) or the position (°²) when level, slope,
 * position, area and, if asked, the neighbours' areas are fitted: Cramér-Rao bound. A
 * neighbour's area is known beforehand as the request's share factor says.
 *   given    density_s_deg  exposure, aperture·s per degree, > 0
 *   returns  HUGE_VAL when the data do not determine it */
double bh_view_variance(const bh_view_of_line *view, double density_s_deg,
			bool with_neighbours, bh_fit_parameter parameter);

/* What no exposure gets below: the neighbours' part of the variance. */
double bh_view_limit(const bh_view_of_line *view, bh_fit_parameter parameter);

/* Relative variance of the net area by counting peak and background apart, at density 1:
 * [G + b w_P²/w_B]/A². *background_deg: the best width of background,
 * w_B = w_P √(rate_B/rate_P), at least 2 FWHM on each side.
 *   from  Poisson counts; International Tables C (2004), 7.5.7 */
double bh_view_net_variance(double *background_deg, const bh_view_of_line *view);

/* Exposure density that brings the counting part of a variance down to a value.
 *   returns  HUGE_VAL when none does */
double bh_view_density(const bh_view_of_line *view, double variance,
		       bh_fit_parameter parameter);

/* Variance by counting at an exposure density: the bound, made worse by what summing peak
 * and background counts loses against a fit, plus the neighbours' limit. */
double bh_view_planned_variance(const bh_view_of_line *view, double density_s_deg,
				bh_fit_parameter parameter);

/* Factor by which the neighbours raise the variance at an exposure density, ≥ 1. */
double bh_view_price(const bh_view_of_line *view, double density_s_deg);

#endif
