#ifndef BASE_UNITS_H
#define BASE_UNITS_H

/* Conversions stand here once. hc, N_A: exact by the SI of 2019 (CODATA 2018); r_e, m_e c²:
 * CODATA 2018, P. J. Mohr et al., Rev. Mod. Phys. 93 (2021) 025010. */
#define BH_HC_KEV_A 12.398419843320026	       /* h c, keV Å; exact         */
#define BH_AVOGADRO_PER_MOL 6.02214076e23      /* exact                     */
#define BH_ELECTRON_RADIUS_CM 2.8179403262e-13 /* classical, CODATA 2018    */
#define BH_ELECTRON_REST_KEV 510.99895	       /* m_e c², CODATA 2018       */
#define BH_PI 3.14159265358979323846
#define BH_CM_PER_A 1e-8
#define BH_CM_PER_MM 0.1
#define BH_CM_PER_UM 1e-4
#define BH_A_PER_NM 10.0

static inline double bh_rad(double angle_deg)
{
	return angle_deg * (BH_PI / 180.0);
}

static inline double bh_deg(double angle_rad)
{
	return angle_rad * (180.0 / BH_PI);
}

/* Photon energy of a wavelength and back: E = h c / λ. */
static inline double bh_energy_keV(double wavelength_A)
{
	return BH_HC_KEV_A / wavelength_A;
}

static inline double bh_wavelength_A(double energy_keV)
{
	return BH_HC_KEV_A / energy_keV;
}

#endif
