#include "physics/detector.h"

#include <math.h>

#include "base/units.h"
#include "physics/absorb.h"
#include "physics/filter.h"

double bh_detector_efficiency_frac(const bh_detector *detector, double energy_keV)
{
	if (!detector->sensor_z || !(detector->sensor_um > 0))
		return detector->efficiency;
	return detector->efficiency *
	       (1 - bh_absorb_layer_frac(detector->sensor_z, detector->sensor_um,
					 energy_keV));
}

double bh_detector_window_frac(const bh_detector *detector, double energy_keV,
			       double ka_keV, double low_keV, double high_keV)
{
	static const double fwhm_per_sigma = 2.35482004503094938; /* 2 √(2 ln 2) */
	double sigma_keV =
		detector->resolution_frac * sqrt(ka_keV * energy_keV) / fwhm_per_sigma;
	double tail = detector->tail_frac;
	double upper_keV = energy_keV < high_keV ? energy_keV : high_keV;
	double gauss, low;

	if (sigma_keV > 0)
		gauss = (erf((high_keV - energy_keV) / (sqrt(2) * sigma_keV)) -
			 erf((low_keV - energy_keV) / (sqrt(2) * sigma_keV))) /
			2;
	else
		gauss = energy_keV > low_keV && energy_keV < high_keV ? 1 : 0;
	low = (upper_keV - low_keV) / energy_keV;
	low = low < 0 ? 0 : low > 1 ? 1 : low;
	return (1 - tail) * gauss + tail * low;
}

double bh_detector_counted_frac(const bh_instrument *instrument,
				const bh_setting *setting, double energy_keV)
{
	const bh_detector *detector = &instrument->detector;
	double counted = bh_absorb_gas_frac(instrument->detector_path,
					    instrument->radius_mm, energy_keV) *
			 bh_filter_pass_frac(setting->tube, BH_SIDE_DETECTOR, energy_keV);

	if (!(counted > 0))
		return 0;
	counted *= bh_detector_efficiency_frac(detector, energy_keV);
	if (!setting->open_window)
		counted *= bh_detector_window_frac(
			detector, energy_keV, bh_filter_ka_keV(setting->tube->anode),
			setting->window_low_keV, setting->window_high_keV);
	return counted;
}

double bh_detector_aperture_rad(const bh_instrument *instrument)
{
	return instrument->detector.aperture_mm / instrument->radius_mm;
}

double bh_detector_axial_frac(const bh_instrument *instrument)
{
	double height = instrument->detector.height_mm / instrument->radius_mm;
	double soller = bh_rad(instrument->soller_detector_deg);

	return soller > 0 && soller < height ? soller : height;
}

double bh_detector_window_deg(const bh_instrument *instrument)
{
	return bh_deg(bh_detector_aperture_rad(instrument)) *
	       (double)instrument->detector.channels;
}
