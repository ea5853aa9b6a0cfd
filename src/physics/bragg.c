#include "physics/bragg.h"

#include <math.h>

#include "base/units.h"

bool bh_bragg_two_theta_deg(double *two_theta_deg, double d_A, double wavelength_A)
{
	double s = wavelength_A / (2 * d_A);

	if (!(s <= 1))
		return false;
	*two_theta_deg = bh_deg(2 * asin(s));
	return true;
}

double bh_bragg_d_A(double two_theta_deg, double wavelength_A)
{
	return wavelength_A / (2 * sin(bh_rad(two_theta_deg / 2)));
}
