#include "physics/grains.h"

#include <math.h>

#include "base/units.h"
#include "physics/detector.h"
#include "physics/geometry.h"

double bh_grains_spread_rad(const bh_scene *scene, const bh_setting *setting,
			    bh_view view)
{
	const bh_instrument *instrument = scene->instrument;

	if (view == BH_VIEW_SWEEPING)
		return bh_rad(bh_detector_window_deg(instrument)) / 2;
	return (setting->tube->focus_mm + instrument->detector.aperture_mm) /
	       (2 * instrument->radius_mm);
}

double bh_grains_spin_gain(double across_rad, double along_rad)
{
	double ratio = across_rad / along_rad;

	return ratio > 1 ? ratio / (2 / BH_PI * log(ratio) + BH_PI / 4) : 1;
}

/* Lit area of the specimen, mm². */
static double lit_mm2(const bh_scene *scene, const bh_setting *setting,
		      double two_theta_deg)
{
	const bh_instrument *instrument = scene->instrument;
	const bh_specimen *specimen = &scene->request->specimen;
	double along =
		setting->divergence_deg > 0
			? bh_geometry_footprint_mm(setting->divergence_deg,
						   instrument->radius_mm, two_theta_deg)
			: instrument->automatic_length_mm;

	return fmin(along, specimen->length_mm) *
	       fmin(instrument->beam_width_mm, specimen->width_mm);
}

double bh_grains_effective(const bh_signal *signal, const bh_scene *scene,
			   const bh_grain_line *line)
{
	const bh_phase *phase = line->phase;
	double s = sin(bh_rad(line->two_theta_deg / 2)), diameter_mm, grain_mm3,
	       solid_mm3, n;
	double mu_inv_cm =
		signal->radiation.lines[0].mass_attenuation_cm2_g * signal->density_g_cm3;
	double along = bh_grains_spread_rad(scene, &signal->setting, line->view);
	double across = signal->axial_frac / (2 * s);
	double volume_frac, depth_mm;

	if (!signal->rates_known || !(phase->density_g_cm3 > 0) || !(mu_inv_cm > 0))
		return 0;
	/* where a crystallite size is known, that is what diffracts as one */
	diameter_mm = phase->size_nm > 0 ? phase->size_nm * 1e-6
					 : scene->request->specimen.grain_um * 1e-3;
	grain_mm3 = BH_PI / 6 * pow(diameter_mm, 3);
	volume_frac = phase->share_frac / phase->density_g_cm3 * signal->density_g_cm3;
	/* packing thins μ and the powder alike: the solid that counts is that of dense matter */
	depth_mm = s / (2 * mu_inv_cm) / BH_CM_PER_MM;
	depth_mm = fmin(depth_mm, scene->request->specimen.packing_frac *
					  scene->request->specimen.thickness_mm);
	solid_mm3 = lit_mm2(scene, &signal->setting, line->two_theta_deg) * depth_mm;
	n = solid_mm3 * volume_frac / grain_mm3 *
	    (line->multiplicity > 0 ? line->multiplicity : 1) * along * across /
	    (4 * BH_PI);
	return line->spin ? n * bh_grains_spin_gain(across, along) : n;
}
