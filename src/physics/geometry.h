#ifndef PHYSICS_GEOMETRY_H
#define PHYSICS_GEOMETRY_H

/* Length that a divergent beam lights on a flat specimen set for reflection, mm, exact.
 *   given    divergence_deg (0, 5], radius_mm > 0, two_theta_deg (0, 180)
 *   returns  R sin(δ/2) [1/sin(θ + δ/2) + 1/sin(θ − δ/2)]; HUGE_VAL when the lower edge of
 *            the beam misses the plane (θ ≤ δ/2)
 *   from     plane geometry; H. P. Klug & L. E. Alexander, X-Ray Diffraction Procedures
 *            (1974), ch. 5 for the usual R δ/sinθ */
double bh_geometry_footprint_mm(double divergence_deg, double radius_mm,
				double two_theta_deg);

/* Share of the beam that falls on a specimen of length_mm, along the beam.
 *   returns  [min(δ/2, atan(a sinθ/(R − a cosθ))) + min(δ/2, atan(a sinθ/(R + a cosθ)))]/δ,
 *            a = length/2 */
double bh_geometry_lit_frac(double divergence_deg, double radius_mm, double length_mm,
			    double two_theta_deg);

/* Smallest 2θ at which the whole beam falls on the specimen; 180 when none. */
double bh_geometry_full_from_deg(double divergence_deg, double radius_mm,
				 double length_mm);

/* Line shift of a specimen off the axis, ° 2θ: −2 s cosθ/R; s > 0 below the axis.
 *   from  International Tables H (2019), Table 3.1.1 */
double bh_geometry_displacement_deg(double displacement_mm, double radius_mm,
				    double two_theta_deg);

/* Shift of the centroid of a thick specimen by its transparency, ° 2θ: −sin2θ/(2 μ R). */
double bh_geometry_transparency_deg(double attenuation_inv_cm, double radius_mm,
				    double two_theta_deg);

/* Shift of the centroid by a flat specimen, ° 2θ: −δ² cotθ/12, δ in rad. */
double bh_geometry_flat_deg(double divergence_deg, double two_theta_deg);

/* Thickness that absorbs all but exp(−6.4) of the beam's path in and out, mm:
 * 3.2 sinθ/(μ · packing).
 *   from  H. P. Klug & L. E. Alexander (1974): μt ≥ 3.2 sinθ */
double bh_geometry_thick_mm(double attenuation_inv_cm, double packing_frac,
			    double two_theta_deg);

/* Depth that gives share_frac (e.g. 0.99) of a line's counts, mm, in dense material. */
double bh_geometry_depth_mm(double share_frac, double attenuation_inv_cm,
			    double two_theta_deg);

/* 1 + A cos²2θ over 1 + A, and its product with 2/(sinθ sin2θ). */
double bh_geometry_polarization(double a, double theta_rad);
double bh_geometry_lorentz_polarization(double a, double theta_rad);

#endif
