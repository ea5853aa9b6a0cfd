#include "physics/tube.h"

#include <math.h>

#include "base/units.h"
#include "physics/xray.h"

/* All coefficients: H. Ebel, X-Ray Spectrom. 28 (1999) 255, from memory. Energies in keV,
 * mass depths in g/cm². */
static const double k_line_constant = 5e13;	   /* photons/(s sr mA), K shell  */
static const double continuum_constant = 1.35e9;   /* photons/(s sr mA keV)     */
static const double ionisation_keV_per_z = 0.0135; /* J = 0.0135 Z            */

double bh_tube_escape_frac(int z, double energy_keV, double edge_keV, double kV,
			   double takeoff_deg)
{
	double u = log(kV / edge_keV), lz = log(z), j_keV = ionisation_keV_per_z * z;
	double m = 0.1382 - 0.9211 / sqrt(z);
	double eta = pow(kV, m) *
		     (0.1904 - 0.2236 * lz + 0.1292 * lz * lz - 0.0149 * lz * lz * lz);
	double deepest_g_cm2 =
		bh_xray_molar_mass_g(z) / z *
		(0.787e-5 * sqrt(j_keV) * pow(kV, 1.5) + 0.735e-6 * kV * kV);
	double mean_g_cm2 = deepest_g_cm2 * u *
			    (0.49269 - 1.0987 * eta + 0.78557 * eta * eta) /
			    (0.70256 - 1.09865 * eta + 1.0046 * eta * eta + u);
	double chi = bh_xray_attenuation_cm2_g(z, energy_keV) * 2 * mean_g_cm2 /
		     sin(bh_rad(takeoff_deg));

	return chi > 0 ? -expm1(-chi) / chi : 1;
}

/* Electrons that ionise the K shell while they slow down, per electron. */
static double stopping(int z, double overvoltage, double edge_keV)
{
	double u = overvoltage, slow = u * log(u) + 1 - u;
	double root = sqrt(u) * log(u) + 2 * (1 - sqrt(u));

	return 2 * 0.35 / z * slow *
	       (1 + 16.05 * sqrt(ionisation_keV_per_z * z / edge_keV) * root / slow);
}

static double backscatter(int z, double overvoltage, double kV)
{
	return 1 - 0.0081517 * z + 3.613e-5 * z * z + 0.009583 * z * exp(-overvoltage) +
	       0.001141 * kV;
}

double bh_tube_line_per_s_sr_mA(const bh_anode *anode, int kind, double kV,
				double takeoff_deg)
{
	double edge_keV = bh_xray_edge_keV(anode->z, BH_SHELL_K), u = kV / edge_keV,
	       share, wavelength_A;

	if (u <= 1)
		return 0;
	switch (kind) {
	case BH_KA1:
		share = bh_xray_k_share_ka1(anode->z);
		wavelength_A = anode->ka1_A;
		break;
	case BH_KA2:
		share = bh_xray_k_share_ka2(anode->z);
		wavelength_A = anode->ka2_A;
		break;
	default:
		share = bh_xray_k_share_kb(anode->z);
		wavelength_A = anode->kb_A;
	}
	return k_line_constant * stopping(anode->z, u, edge_keV) *
	       backscatter(anode->z, u, kV) * bh_xray_yield(anode->z, BH_SHELL_K) *
	       share *
	       bh_tube_escape_frac(anode->z, bh_energy_keV(wavelength_A), edge_keV, kV,
				   takeoff_deg);
}

double bh_tube_continuum_per_s_sr_mA_keV(const bh_anode *anode, double energy_keV,
					 double kV, double takeoff_deg)
{
	double x = 1.109 - 0.00435 * anode->z + 0.00175 * kV;

	if (energy_keV >= kV)
		return 0;
	return continuum_constant * anode->z * pow(kV / energy_keV - 1, x) *
	       bh_tube_escape_frac(anode->z, energy_keV, energy_keV, kV, takeoff_deg);
}
