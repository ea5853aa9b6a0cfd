#include "design/step.h"

#include <math.h>

#include "physics/detector.h"
#include "physics/profile.h"

/* Information per degree on area and position, steps at offset + i step. */
static void inform(double kept[2], bh_profile profile, double step_deg, double offset_deg)
{
	double reach = 4 * profile.fwhm_deg, h = profile.fwhm_deg / 100;
	double background = bh_profile_height_inv_deg(profile, 0) / 5;

	kept[0] = kept[1] = 0;
	for (double x = offset_deg - ceil(reach / step_deg) * step_deg; x <= reach;
	     x += step_deg) {
		double y = bh_profile_height_inv_deg(profile, x);
		double slope = (bh_profile_height_inv_deg(profile, x + h) -
				bh_profile_height_inv_deg(profile, x - h)) /
			       (2 * h);

		kept[0] += y * y / (y + background) * step_deg;
		kept[1] += slope * slope / (y + background) * step_deg;
	}
}

double bh_step_kept_frac(double step_deg, double fwhm_deg, double eta)
{
	bh_profile profile = { fwhm_deg, eta };
	double all[2], kept[2], least = 1;

	inform(all, profile, fwhm_deg / 200, 0);
	for (int i = 0; i < 8; i++) {
		inform(kept, profile, step_deg, i * step_deg / 8);
		least = fmin(least, fmin(kept[0] / all[0], kept[1] / all[1]));
	}
	return least;
}

static double machine_step(const bh_instrument *instrument, double parts)
{
	double base = instrument->detector.kind == BH_DETECTOR_STRIP
			      ? bh_detector_window_deg(instrument) /
					(double)instrument->detector.channels
			      : 0.1;
	double step = floor(base / parts / instrument->smallest_step_deg + 1e-6) *
		      instrument->smallest_step_deg;

	return step;
}

bh_step bh_step_choose(bh_arena *arena, const bh_instrument *instrument, double fwhm_deg,
		       double eta, const char *line, bool position)
{
	static const double most_loss = 0.02;
	double most = fwhm_deg / (position ? 6 : 5), step = instrument->smallest_step_deg;
	bool strip = instrument->detector.kind == BH_DETECTOR_STRIP;
	bh_step chosen;

	for (int parts = 1; parts <= 100; parts++) {
		double candidate = machine_step(instrument, parts);

		if (candidate < instrument->smallest_step_deg)
			break;
		if (!strip && fabs(0.1 / candidate - round(0.1 / candidate)) > 1e-6)
			continue;
		if (candidate <= most * (1 + 1e-9) &&
		    bh_step_kept_frac(candidate, fwhm_deg, eta) > 1 - most_loss) {
			step = candidate;
			break;
		}
	}
	chosen.step_deg = step;
	chosen.reason = bh_arena_format(
		arena, "narrowest line %s, FWHM %.3f°: at most a %s of it%s", line,
		fwhm_deg, position ? "sixth, for a position," : "fifth",
		strip ? "; tied to the strip's channels" : "");
	return chosen;
}
