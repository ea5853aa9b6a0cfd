#include "physics/xray.h"

#include <math.h>
#include <stddef.h>

#include <xraylib.h>

#include "base/units.h"

/* The database answers 0 and an error where an element has no such line, shell or table:
 * inside our limits that means "nothing", so the error is dropped and 0 stays. */
static double clamp_keV(double energy_keV)
{
	return energy_keV < 0.1 ? 0.1 : energy_keV > 800 ? 800 : energy_keV;
}

static bool known(int z)
{
	return z >= 1 && z <= BH_Z_MAX;
}

int bh_xray_z(const char *symbol)
{
	return bh_element_z(symbol);
}

const char *bh_xray_symbol(int z)
{
	return bh_element_symbol(z);
}

double bh_xray_molar_mass_g(int z)
{
	return known(z) ? AtomicWeight(z, NULL) : 0;
}

double bh_xray_density_g_cm3(int z)
{
	return known(z) ? ElementDensity(z, NULL) : 0;
}

double bh_xray_f0(int z, double s_inv_A)
{
	return known(z) ? FF_Rayl(z, s_inv_A, NULL) : 0;
}

double bh_xray_f_prime(int z, double energy_keV)
{
	return known(z) ? Fi(z, clamp_keV(energy_keV), NULL) : 0;
}

double bh_xray_f_double_prime(int z, double energy_keV)
{
	/* the database carries f'' with a negative sign */
	return known(z) ? fabs(Fii(z, clamp_keV(energy_keV), NULL)) : 0;
}

double bh_xray_attenuation_cm2_g(int z, double energy_keV)
{
	return known(z) ? CS_Total(z, clamp_keV(energy_keV), NULL) : 0;
}

double bh_xray_edge_keV(int z, bh_shell shell)
{
	static const int shells[BH_SHELLS] = { K_SHELL, L1_SHELL, L2_SHELL, L3_SHELL };

	return known(z) && shell < BH_SHELLS ? EdgeEnergy(z, shells[shell], NULL) : 0;
}

static const struct {
	const char *name;
	int line;
} groups[BH_FL_GROUPS] = {
	[BH_FL_KA] = { "Ka", KA_LINE },
	[BH_FL_KB] = { "Kb", KB_LINE },
	[BH_FL_LA] = { "La", LA_LINE },
	[BH_FL_LB] = { "Lb", LB_LINE },
};

const char *bh_xray_group_name(bh_fl_group group)
{
	return groups[group].name;
}

double bh_xray_group_keV(int z, bh_fl_group group)
{
	return known(z) ? LineEnergy(z, groups[group].line, NULL) : 0;
}

double bh_xray_fluorescence_cm2_g(int z, bh_fl_group group, double energy_keV)
{
	return known(z) ? CS_FluorLine_Kissel(z, groups[group].line,
					      clamp_keV(energy_keV), NULL)
			: 0;
}

double bh_xray_yield(int z, bh_shell shell)
{
	static const int shells[BH_SHELLS] = { K_SHELL, L1_SHELL, L2_SHELL, L3_SHELL };

	return known(z) && shell < BH_SHELLS ? FluorYield(z, shells[shell], NULL) : 0;
}

double bh_xray_k_share_ka1(int z)
{
	return known(z) ? RadRate(z, KA1_LINE, NULL) : 0;
}

double bh_xray_k_share_ka2(int z)
{
	return known(z) ? RadRate(z, KA2_LINE, NULL) : 0;
}

double bh_xray_k_share_kb(int z)
{
	return known(z) ? RadRate(z, KB_LINE, NULL) : 0;
}

double bh_xray_compton_cm2_g_sr(int z, double energy_keV, double two_theta_rad)
{
	return known(z) ? DCS_Compt(z, clamp_keV(energy_keV), two_theta_rad, NULL) : 0;
}

double bh_xray_compton_keV(double energy_keV, double two_theta_rad)
{
	return energy_keV /
	       (1 + (1 - cos(two_theta_rad)) * energy_keV / BH_ELECTRON_REST_KEV);
}
