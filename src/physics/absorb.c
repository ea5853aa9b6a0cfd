#include "physics/absorb.h"

#include <math.h>

#include "base/units.h"
#include "physics/formula.h"
#include "physics/xray.h"

double bh_absorb_cm2_g(const bh_composition *composition, double energy_keV)
{
	double sum = 0;

	for (size_t i = 0; i < composition->count; i++)
		sum += composition->elements[i].mass_frac *
		       bh_xray_attenuation_cm2_g(composition->elements[i].z, energy_keV);
	return sum;
}

double bh_absorb_layer_frac(int z, double thickness_um, double energy_keV)
{
	double areal_g_cm2 = bh_xray_density_g_cm3(z) * thickness_um * BH_CM_PER_UM;

	return thickness_um > 0
		       ? exp(-bh_xray_attenuation_cm2_g(z, energy_keV) * areal_g_cm2)
		       : 1;
}

/* Mass shares of dry air from 78.1/21.0/0.9 % by volume of N2, O2, Ar. */
static const bh_element_share air[] = { { 7, 0.7555 }, { 8, 0.2321 }, { 18, 0.0124 } };
static const bh_element_share helium[] = { { 2, 1 } };

double bh_absorb_gas_frac(bh_gas gas, double length_mm, double energy_keV)
{
	static const double air_g_cm3 = 1.205e-3, helium_g_cm3 = 1.664e-4;
	const bh_element_share *elements = gas == BH_GAS_AIR ? air : helium;
	size_t count = gas == BH_GAS_AIR ? sizeof air / sizeof *air : 1;
	double density_g_cm3 = gas == BH_GAS_AIR ? air_g_cm3 : helium_g_cm3, sum = 0;

	if (gas == BH_GAS_VACUUM)
		return 1;
	for (size_t i = 0; i < count; i++)
		sum += elements[i].mass_frac *
		       bh_xray_attenuation_cm2_g(elements[i].z, energy_keV);
	return exp(-sum * density_g_cm3 * length_mm * BH_CM_PER_MM);
}

bool bh_absorb_mix(bh_composition *mixture, bh_arena *arena, const bh_mix_part *parts,
		   size_t count, bh_err *err)
{
	size_t most = 0, n = 0;
	bh_element_share *elements;

	for (size_t i = 0; i < count; i++)
		most += parts[i].composition->count;
	elements = bh_new(arena, bh_element_share, most);
	if (!elements)
		return bh_fail_memory(err);
	for (size_t i = 0; i < count; i++) {
		const bh_composition *part = parts[i].composition;

		for (size_t k = 0; parts[i].share_frac > 0 && k < part->count; k++)
			elements[n++] = (bh_element_share){ part->elements[k].z,
							    part->elements[k].mass_frac *
								    parts[i].share_frac };
	}
	*mixture = (bh_composition){ elements, n };
	bh_formula_normalise(mixture);
	return true;
}
