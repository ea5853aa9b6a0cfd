#include "physics/pattern.h"

#include <math.h>

#include "physics/observe.h"
#include "physics/profile.h"

size_t bh_pattern_first(const bh_signal *signal, double two_theta_deg)
{
	size_t low = 0, high = signal->peak_count;

	while (low < high) {
		size_t middle = low + (high - low) / 2;

		if (signal->peaks[middle].two_theta_deg < two_theta_deg)
			low = middle + 1;
		else
			high = middle;
	}
	return low;
}

void bh_pattern(double *cps, double *background_cps, bh_grid grid,
		const bh_signal *signal)
{
	double from_deg = grid.from_deg, step_deg = grid.step_deg;
	size_t count = grid.count;
	/* a Lorentzian has 1 % of its area beyond 30 FWHM: what is cut is below the noise */
	static const double reach_fwhm = 30;

	for (size_t i = 0; i < count; i++)
		cps[i] = background_cps[i] = bh_observe_background_cps(
			signal, from_deg + (double)i * step_deg);
	for (size_t k = 0; k < signal->peak_count; k++) {
		const bh_peak *peak = &signal->peaks[k];
		bh_profile profile = { peak->fwhm_deg, peak->eta };
		double reach = reach_fwhm * peak->fwhm_deg;
		double first = ceil((peak->two_theta_deg - reach - from_deg) / step_deg);
		double last = floor((peak->two_theta_deg + reach - from_deg) / step_deg);

		if (!(peak->rate_cps_deg > 0) || last < 0 || first > (double)count - 1)
			continue;
		first = first < 0 ? 0 : first;
		last = last > (double)count - 1 ? (double)count - 1 : last;
		for (size_t i = (size_t)first; i <= (size_t)last; i++)
			cps[i] += peak->rate_cps_deg *
				  bh_profile_height_inv_deg(
					  profile, from_deg + (double)i * step_deg -
							   peak->two_theta_deg);
	}
}
