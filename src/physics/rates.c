#include "physics/rates.h"

#include "base/units.h"
#include "physics/geometry.h"

double bh_rates_integrated_cps_rad(const bh_rate_terms *terms)
{
	double lambda_cm = terms->wavelength_A * BH_CM_PER_A;
	double cm3_per_A3 = BH_CM_PER_A * BH_CM_PER_A * BH_CM_PER_A;
	double inv_cm6 = terms->strength_inv_A6 / (cm3_per_A3 * cm3_per_A3);
	double crystal_inv_cm = BH_ELECTRON_RADIUS_CM * BH_ELECTRON_RADIUS_CM *
				lambda_cm * lambda_cm * lambda_cm * inv_cm6;
	double depth_cm = terms->share_per_density_cm3_g / (2 * terms->attenuation_cm2_g);

	return terms->flux_s * crystal_inv_cm * depth_cm *
	       bh_geometry_lorentz_polarization(terms->polarization, terms->theta_rad) *
	       terms->axial_frac / (16 * BH_PI) * terms->aperture_rad *
	       terms->counted_frac * terms->lit_frac;
}
