#include "physics/filter.h"

#include <math.h>

#include "base/units.h"
#include "physics/absorb.h"
#include "physics/xray.h"

double bh_filter_ka_keV(const bh_anode *anode)
{
	return bh_energy_keV((2 * anode->ka1_A + anode->ka2_A) / 3);
}

int bh_filter_element(const bh_anode *anode)
{
	double ka_keV = bh_energy_keV(anode->ka1_A), kb_keV = bh_energy_keV(anode->kb_A);
	double best = 1;
	int found = 0;

	for (int z = 1; z < anode->z; z++) {
		double edge_keV = bh_xray_edge_keV(z, BH_SHELL_K), gain;

		if (edge_keV <= ka_keV || edge_keV >= kb_keV)
			continue;
		gain = bh_xray_attenuation_cm2_g(z, kb_keV) /
		       bh_xray_attenuation_cm2_g(z, ka_keV);
		if (gain > best) {
			best = gain;
			found = z;
		}
	}
	return found;
}

double bh_filter_thickness_um(const bh_anode *anode, int z, double before, double after)
{
	double step_cm2_g = bh_xray_attenuation_cm2_g(z, bh_energy_keV(anode->kb_A)) -
			    bh_xray_attenuation_cm2_g(z, bh_filter_ka_keV(anode));

	if (!(step_cm2_g > 0) || after >= before)
		return 0;
	return log(before / after) / (step_cm2_g * bh_xray_density_g_cm3(z)) /
	       BH_CM_PER_UM;
}

double bh_filter_kbeta_ratio(const bh_anode *anode)
{
	return bh_xray_k_share_kb(anode->z) /
	       (bh_xray_k_share_ka1(anode->z) + bh_xray_k_share_ka2(anode->z));
}

bh_band bh_filter_band(const bh_tube *tube)
{
	const bh_monochromator *crystal = &tube->monochromator;
	double centre_keV = bh_filter_ka_keV(tube->anode);

	return (bh_band){ centre_keV, centre_keV * bh_rad(crystal->mosaic_deg) /
					      tan(bh_rad(crystal->two_theta_deg / 2)) };
}

static double crystal_frac(const bh_tube *tube, double energy_keV)
{
	const bh_monochromator *crystal = &tube->monochromator;
	bh_band band = bh_filter_band(tube);
	/* Kα1 and Kα2 lie 2.5e-3 to 8e-3 apart in energy: halfway is the cut */
	double cut_keV =
		(bh_energy_keV(tube->anode->ka1_A) + bh_energy_keV(tube->anode->ka2_A)) /
		2;

	if (crystal->ka1_only) {
		double half_keV = bh_energy_keV(tube->anode->ka1_A) - cut_keV;

		return fabs(energy_keV - cut_keV - half_keV) < half_keV
			       ? crystal->reflectivity
			       : 0;
	}
	return fabs(energy_keV - band.centre_keV) < band.half_keV ? crystal->reflectivity
								  : 0;
}

double bh_filter_pass_frac(const bh_tube *tube, bh_side side, double energy_keV)
{
	double pass = 1;

	if (tube->foil_z && tube->foil_side == side)
		pass *= bh_absorb_layer_frac(tube->foil_z, tube->foil_um, energy_keV);
	if (tube->monochromator.two_theta_deg > 0 && tube->monochromator.side == side)
		pass *= crystal_frac(tube, energy_keV);
	return pass;
}

double bh_filter_polarization(const bh_tube *tube)
{
	double c = cos(bh_rad(tube->monochromator.two_theta_deg));

	return tube->monochromator.two_theta_deg > 0 ? c * c : 1;
}
