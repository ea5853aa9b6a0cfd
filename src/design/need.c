#include "design/need.h"

#include <math.h>
#include <stdint.h>

#include "base/units.h"
#include "physics/bragg.h"
#include "physics/corundum.h"
#include "physics/geometry.h"
#include "physics/profile.h"
#include "physics/reflect.h"

double bh_need_floor_variance(const bh_view_of_line *line, double grains,
			      bh_fit_parameter parameter)
{
	double floor = bh_view_limit(line, parameter);

	if (parameter == BH_FIT_AREA && grains > 0)
		floor += 1 / grains;
	return floor;
}

double bh_need_line_error(const bh_view_of_line *line, double grains,
			  double density_s_deg, bh_fit_parameter parameter)
{
	double variance = bh_view_planned_variance(line, density_s_deg, parameter);

	if (parameter == BH_FIT_AREA && grains > 0)
		variance += 1 / grains;
	return sqrt(variance);
}

static void need_of(bh_need *need, const bh_view_of_line *line, const double grains[2],
		    bh_view view, bh_fit_parameter parameter)
{
	double wanted = parameter == BH_FIT_AREA ? need->aim->area_error_frac
						 : need->aim->position_error_deg;
	double floor = bh_need_floor_variance(line, grains[view], parameter);
	double counting = wanted * wanted - floor, density;

	if (!(wanted > 0))
		return;
	if (parameter == BH_FIT_AREA || !(need->aim->area_error_frac > 0))
		need->floor[view] = sqrt(floor);
	/* an aim nearer to its floor than √(10/9) would only buy a long scan */
	if (counting < floor / 9) {
		counting = floor / 9;
		need->reachable[view] = false;
	}
	density = bh_view_density(line, counting, parameter);
	if (!isfinite(density))
		need->computed = false;
	else if (density > need->density_s_deg[view])
		need->density_s_deg[view] = density;
}

void bh_need_line(bh_need *need, const bh_view_of_line *line, const double grains[2])
{
	need->computed = line->area_cps_deg > 0;
	for (int view = 0; view < 2; view++) {
		need->reachable[view] = true;
		need->density_s_deg[view] = 0;
		if (!need->computed)
			continue;
		need_of(need, line, grains, (bh_view)view, BH_FIT_AREA);
		need_of(need, line, grains, (bh_view)view, BH_FIT_POSITION);
	}
}

/* Area of the 10 % line of a phase of corundum ratio 1 and share 1 at full light, one
 * aperture, counts·deg/s: corundum's 1 1 3 in this mixture, a tenth of it. */
static bool tenth_line(double *area_cps_deg, bh_arena *arena, const bh_signal *signal,
		       bh_err *err)
{
	const bh_line *line = &signal->radiation.lines[0];
	double strength, lp, two_theta_deg;
	static const double corundum_113_A = 2.0861; /* d, for the angle on this anode */

	*area_cps_deg = 0;
	if (!bh_corundum_strength(&strength, &lp, arena, err))
		return false;
	if (!signal->rates_known ||
	    !bh_bragg_two_theta_deg(&two_theta_deg, corundum_113_A, line->wavelength_A))
		return true;
	*area_cps_deg = 0.1 * line->flux_s * line->detected_frac *
			bh_deg(bh_reflect_per_photon(signal, strength, line->wavelength_A,
						     two_theta_deg,
						     line->mass_attenuation_cm2_g));
	return true;
}

/* 3.29 = 2 · 1.645: 5 % false alarms and 5 % misses; L. A. Currie, Anal. Chem. 40 (1968) 586. */
static const double currie2 = 3.29 * 3.29;

static double survey_density(const bh_signal *signal, const bh_scene *scene, double area,
			     double two_theta_deg)
{
	bh_lit lit = bh_lit_at(scene->request, &signal->setting, two_theta_deg);
	bh_profile profile =
		bh_profile_line(scene->instrument, NULL,
				signal->radiation.lines[0].wavelength_A, two_theta_deg);
	double width_deg = 1.5 * profile.fwhm_deg;
	double qa =
		area * lit.specimen_frac * bh_profile_inside_frac(profile, width_deg / 2);

	return currie2 *
	       (qa + width_deg * bh_observe_background_cps(signal, two_theta_deg)) /
	       (qa * qa);
}

static double survey_worst(const bh_signal *signal, const bh_scene *scene, double area,
			   const double limits_deg[2])
{
	double worst = 0;

	for (int i = 0; i <= 100; i++)
		worst = fmax(worst, survey_density(signal, scene, area,
						   limits_deg[0] + (limits_deg[1] -
								    limits_deg[0]) *
									   i / 100.0));
	return worst;
}

bool bh_need_survey(bh_need *need, bh_arena *arena, const bh_signal *signal,
		    const bh_scene *scene, const double limits_deg[2], bh_err *err)
{
	double area;

	if (!tenth_line(&area, arena, signal, err))
		return false;
	need->target = SIZE_MAX;
	need->computed = area > 0;
	for (int view = 0; view < 2; view++) {
		need->reachable[view] = true;
		need->density_s_deg[view] =
			area > 0 ? survey_worst(signal, scene, area * need->aim->at_frac,
						limits_deg)
				 : 0;
	}
	return true;
}

bool bh_need_survey_share(double *share_frac, bh_arena *arena, const bh_signal *signal,
			  const bh_scene *scene, const double limits_deg[2],
			  double density_s_deg, bh_err *err)
{
	double area, low = 1e-9, high = 1e3;

	if (!tenth_line(&area, arena, signal, err))
		return false;
	*share_frac = HUGE_VAL;
	if (!(area > 0) || !(density_s_deg > 0))
		return true;
	while (high / low > 1 + 1e-6) {
		double middle = sqrt(low * high);

		if (survey_worst(signal, scene, area * middle, limits_deg) >
		    density_s_deg)
			low = middle;
		else
			high = middle;
	}
	*share_frac = high;
	return true;
}
