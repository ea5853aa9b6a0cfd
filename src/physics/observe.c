#include "physics/observe.h"

#include <math.h>

#include "base/units.h"
#include "physics/absorb.h"
#include "physics/detector.h"
#include "physics/filter.h"
#include "physics/geometry.h"
#include "physics/radiation.h"
#include "physics/reflect.h"
#include "physics/scatter.h"

bh_setting bh_observe_usual(const bh_instrument *instrument, const bh_tube *tube)
{
	double ka_keV = bh_filter_ka_keV(tube->anode);

	return (bh_setting){
		.tube = tube,
		.kV = tube->kV,
		.mA = tube->mA,
		.divergence_deg = instrument->automatic_length_mm > 0
					  ? 0
					  : instrument->usual_divergence_deg,
		.window_low_keV = instrument->detector.window_low_frac * ka_keV,
		.window_high_keV = instrument->detector.window_high_frac * ka_keV,
	};
}

bh_lit bh_lit_at(const bh_request *request, const bh_setting *setting,
		 double two_theta_deg)
{
	const bh_instrument *instrument = request->instrument;
	const bh_specimen *specimen = &request->specimen;
	double across = fmin(1, specimen->width_mm / instrument->beam_width_mm), share,
	       beam = 1;

	if (setting->divergence_deg > 0) {
		share = bh_geometry_lit_frac(setting->divergence_deg,
					     instrument->radius_mm, specimen->length_mm,
					     two_theta_deg);
	} else {
		beam = sin(bh_rad(two_theta_deg / 2));
		share = fmin(1, specimen->length_mm / instrument->automatic_length_mm);
	}
	return (bh_lit){ beam * share * across, beam * (1 - share * across) };
}

double bh_observe_areal_g_cm2(const bh_request *request, double density_g_cm3)
{
	return density_g_cm3 > 0 ? request->specimen.packing_frac * density_g_cm3 *
					   request->specimen.thickness_mm * BH_CM_PER_MM
				 : HUGE_VAL;
}

/* Composition and X-ray density of the whole specimen. An amorphous part without formula has
 * the crystalline mixture's composition; its density counts as the crystalline one's. */
static bool mix(bh_signal *signal, bh_arena *arena, const bh_scene *scene, bh_err *err)
{
	const bh_request *request = scene->request;
	bh_mix_part *parts = bh_new(arena, bh_mix_part, request->phase_count + 1);
	double volume = 0, share = 0;
	size_t n = 0;

	if (!parts)
		return bh_fail_memory(err);
	for (size_t i = 0; i < request->phase_count; i++) {
		const bh_phase *phase = &request->phases[i];

		if (!(phase->share_frac > 0))
			continue;
		if (phase->composition.count == 0 || !(phase->density_g_cm3 > 0))
			return true; /* not known: count stays 0 */
		parts[n++] = (bh_mix_part){ &phase->composition, phase->share_frac };
		volume += phase->share_frac / phase->density_g_cm3;
		share += phase->share_frac;
	}
	if (request->amorphous_frac > 0 && request->amorphous.count > 0)
		parts[n++] =
			(bh_mix_part){ &request->amorphous, request->amorphous_frac };
	if (n == 0 || !(volume > 0))
		return true;
	signal->density_g_cm3 = share / volume;
	signal->rates_known = true;
	return bh_absorb_mix(&signal->mixture, arena, parts, n, err);
}

bool bh_observe(bh_signal *signal, bh_arena *arena, const bh_scene *scene,
		const bh_setting *setting, bh_err *err)
{
	bh_continuum continuum;

	*signal = (bh_signal){
		.setting = *setting,
		/* a share that may be off by a factor of 1.5 is known to 50 %; one that is
		 * sure still leaves what structure and texture leave */
		.neighbour_prior_frac = fmax(scene->request->share_factor - 1, 0.05),
		.aperture_deg = bh_deg(bh_detector_aperture_rad(scene->instrument)),
		.axial_frac = bh_detector_axial_frac(scene->instrument),
	};
	if (!mix(signal, arena, scene, err))
		return false;
	bh_radiation_make(&signal->radiation, scene->instrument, setting,
			  &signal->mixture);
	for (size_t k = 0; scene->has_holder && k < signal->radiation.count; k++)
		signal->holder_attenuation_cm2_g[k] = bh_absorb_cm2_g(
			&scene->phases[scene->phase_count - 1].composition,
			signal->radiation.lines[k].energy_keV);
	return bh_reflect(signal, arena, scene, err) &&
	       bh_continuum_make(&continuum, arena, scene->instrument, setting,
				 &signal->mixture, err) &&
	       bh_scatter(signal, arena, scene, &continuum, err);
}

double bh_observe_background_cps(const bh_signal *signal, double two_theta_deg)
{
	const bh_background *b = signal->background;
	size_t n = signal->background_count;
	double step = (b[n - 1].two_theta_deg - b[0].two_theta_deg) / (double)(n - 1);
	double at = (two_theta_deg - b[0].two_theta_deg) / step;
	size_t i;

	if (!(at > 0))
		return b[0].total;
	if (at >= (double)(n - 1))
		return b[n - 1].total;
	i = (size_t)at;
	return b[i].total + (b[i + 1].total - b[i].total) * (at - (double)i);
}
