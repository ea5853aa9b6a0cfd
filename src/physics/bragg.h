#ifndef PHYSICS_BRAGG_H
#define PHYSICS_BRAGG_H

#include <stdbool.h>

/* First-order Bragg angle, λ = 2 d sinθ.
 *   given    d_A > 0, wavelength_A > 0
 *   returns  *two_theta_deg in (0, 180]
 *   false    λ > 2d: no angle reflects
 *   from     W. L. Bragg, Proc. Camb. Phil. Soc. 17 (1913) 43 */
bool bh_bragg_two_theta_deg(double *two_theta_deg, double d_A, double wavelength_A);

/* The distance that reflects at two_theta_deg in (0, 180]. */
double bh_bragg_d_A(double two_theta_deg, double wavelength_A);

#endif
