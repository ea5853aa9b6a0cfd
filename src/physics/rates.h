#ifndef PHYSICS_RATES_H
#define PHYSICS_RATES_H

/* What one reflection at one emission line needs. */
typedef struct {
	double flux_s; /* photons/s at the specimen plane           */
	double wavelength_A;
	double theta_rad;
	double polarization;		/* A                                         */
	double strength_inv_A6;		/* m |F|²/v², texture included               */
	double share_per_density_cm3_g; /* w_α/ρ_α                              */
	double attenuation_cm2_g;	/* μ/ρ of the mixture at the line            */
	double axial_frac;		/* h_eff/R                                   */
	double aperture_rad;		/* Δ, one aperture along 2θ                   */
	double counted_frac;		/* D(E)                                      */
	double lit_frac;		/* G                                         */
} bh_rate_terms;

/* Integrated rate of a reflection of a flat specimen in one aperture, counts·rad/s:
 *   Φ r_e² λ³ m|F|²/v² · P · 2/(sinθ sin2θ) · (w/ρ)/(2 μ/ρ) · (h_eff/R)/(16π) · Δ · D · G
 *   from  B. E. Warren, X-ray Diffraction (1969), ch. 4 */
double bh_rates_integrated_cps_rad(const bh_rate_terms *terms);

#endif
