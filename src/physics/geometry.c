#include "physics/geometry.h"

#include <math.h>

#include "base/units.h"

double bh_geometry_footprint_mm(double divergence_deg, double radius_mm,
				double two_theta_deg)
{
	double theta = bh_rad(two_theta_deg / 2), half = bh_rad(divergence_deg / 2);

	if (theta <= half)
		return HUGE_VAL;
	return radius_mm * sin(half) * (1 / sin(theta + half) + 1 / sin(theta - half));
}

static double side_rad(double half_rad, double reach_rad)
{
	return reach_rad < half_rad ? reach_rad : half_rad;
}

double bh_geometry_lit_frac(double divergence_deg, double radius_mm, double length_mm,
			    double two_theta_deg)
{
	double theta = bh_rad(two_theta_deg / 2), delta = bh_rad(divergence_deg);
	double a = length_mm / 2, rise = a * sin(theta), run = a * cos(theta);

	return (side_rad(delta / 2, atan2(rise, radius_mm - run)) +
		side_rad(delta / 2, atan2(rise, radius_mm + run))) /
	       delta;
}

double bh_geometry_full_from_deg(double divergence_deg, double radius_mm,
				 double length_mm)
{
	double low = 0, high = 180;

	if (bh_geometry_lit_frac(divergence_deg, radius_mm, length_mm, high) < 1 - 1e-12)
		return 180;
	while (high - low > 1e-6) {
		double middle = (low + high) / 2;

		if (bh_geometry_lit_frac(divergence_deg, radius_mm, length_mm, middle) <
		    1 - 1e-12)
			low = middle;
		else
			high = middle;
	}
	return high;
}

double bh_geometry_displacement_deg(double displacement_mm, double radius_mm,
				    double two_theta_deg)
{
	return bh_deg(-2 * displacement_mm * cos(bh_rad(two_theta_deg / 2)) / radius_mm);
}

double bh_geometry_transparency_deg(double attenuation_inv_cm, double radius_mm,
				    double two_theta_deg)
{
	return bh_deg(-sin(bh_rad(two_theta_deg)) /
		      (2 * attenuation_inv_cm * radius_mm * BH_CM_PER_MM));
}

double bh_geometry_flat_deg(double divergence_deg, double two_theta_deg)
{
	double delta = bh_rad(divergence_deg);

	return bh_deg(-delta * delta / (12 * tan(bh_rad(two_theta_deg / 2))));
}

double bh_geometry_thick_mm(double attenuation_inv_cm, double packing_frac,
			    double two_theta_deg)
{
	return 3.2 * sin(bh_rad(two_theta_deg / 2)) /
	       (attenuation_inv_cm * packing_frac) / BH_CM_PER_MM;
}

double bh_geometry_depth_mm(double share_frac, double attenuation_inv_cm,
			    double two_theta_deg)
{
	return -log(1 - share_frac) * sin(bh_rad(two_theta_deg / 2)) /
	       (2 * attenuation_inv_cm) / BH_CM_PER_MM;
}

double bh_geometry_polarization(double a, double theta_rad)
{
	double c = cos(2 * theta_rad);

	return (1 + a * c * c) / (1 + a);
}

double bh_geometry_lorentz_polarization(double a, double theta_rad)
{
	return bh_geometry_polarization(a, theta_rad) * 2 /
	       (sin(theta_rad) * sin(2 * theta_rad));
}
