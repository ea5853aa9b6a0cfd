#include "physics/profile.h"

#include <math.h>

#include "base/units.h"

static const double scherrer_k =
	0.9; /* P. Scherrer, Nachr. Ges. Wiss. Göttingen (1918) 98 */
static const double four_ln2 = 2.77258872223978124;

bh_profile bh_profile_of(double gauss_deg, double lorentz_deg)
{
	double g = gauss_deg, l = lorentz_deg, q;
	double fwhm = pow(
		pow(g, 5) + 2.69269 * pow(g, 4) * l + 2.42843 * pow(g, 3) * l * l +
			4.47163 * g * g * pow(l, 3) + 0.07842 * g * pow(l, 4) + pow(l, 5),
		0.2);

	q = fwhm > 0 ? l / fwhm : 0;
	return (bh_profile){ fwhm, 1.36603 * q - 0.47719 * q * q + 0.11116 * q * q * q };
}

double bh_profile_gauss_deg(const bh_instrument *instrument, double two_theta_deg)
{
	double t = tan(bh_rad(two_theta_deg / 2));
	double square = instrument->gauss_tan2_deg2 * t * t +
			instrument->gauss_tan_deg2 * t + instrument->gauss_0_deg2;

	return square > 0 ? sqrt(square) : 0;
}

bh_profile bh_profile_line(const bh_instrument *instrument, const bh_phase *phase,
			   double wavelength_A, double two_theta_deg)
{
	double theta = bh_rad(two_theta_deg / 2), lorentz;

	lorentz = instrument->lorentz_tan_deg * tan(theta) +
		  instrument->lorentz_sec_deg / cos(theta);
	if (lorentz < 0)
		lorentz = 0;
	if (phase && phase->size_nm > 0)
		lorentz += bh_deg(scherrer_k * wavelength_A /
				  (phase->size_nm * BH_A_PER_NM * cos(theta)));
	if (phase)
		lorentz += bh_deg(4 * phase->strain * tan(theta));
	return bh_profile_of(bh_profile_gauss_deg(instrument, two_theta_deg), lorentz);
}

double bh_profile_height_inv_deg(bh_profile profile, double offset_deg)
{
	double x = offset_deg / profile.fwhm_deg;
	double gauss = sqrt(four_ln2 / BH_PI) * exp(-four_ln2 * x * x);
	double lorentz = 2 / BH_PI / (1 + 4 * x * x);

	return (profile.eta * lorentz + (1 - profile.eta) * gauss) / profile.fwhm_deg;
}

double bh_profile_between_frac(bh_profile profile, double low_deg, double high_deg)
{
	double low = low_deg / profile.fwhm_deg, high = high_deg / profile.fwhm_deg;
	double gauss = (erf(sqrt(four_ln2) * high) - erf(sqrt(four_ln2) * low)) / 2;
	double lorentz = (atan(2 * high) - atan(2 * low)) / BH_PI;

	return profile.eta * lorentz + (1 - profile.eta) * gauss;
}

double bh_profile_inside_frac(bh_profile profile, double half_deg)
{
	return bh_profile_between_frac(profile, -half_deg, half_deg);
}
