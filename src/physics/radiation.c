#include "physics/radiation.h"

#include <math.h>

#include "base/units.h"
#include "physics/absorb.h"
#include "physics/detector.h"
#include "physics/filter.h"
#include "physics/tube.h"
#include "physics/xray.h"

enum { BERYLLIUM = 4 };

double bh_radiation_beam_sr_mA(const bh_instrument *instrument, const bh_setting *setting)
{
	double divergence_rad =
		setting->divergence_deg > 0
			? bh_rad(setting->divergence_deg)
			: instrument->automatic_length_mm / instrument->radius_mm;
	double axial_rad = instrument->beam_width_mm / instrument->radius_mm;
	double soller_rad = bh_rad(instrument->soller_tube_deg);

	if (soller_rad > 0 && soller_rad < axial_rad)
		axial_rad = soller_rad;
	return setting->mA * divergence_rad * axial_rad * setting->tube->throughput;
}

double bh_radiation_path_frac(const bh_instrument *instrument, const bh_tube *tube,
			      double energy_keV)
{
	return bh_absorb_layer_frac(BERYLLIUM, tube->window_um, energy_keV) *
	       bh_filter_pass_frac(tube, BH_SIDE_TUBE, energy_keV) *
	       bh_absorb_gas_frac(instrument->tube_path, instrument->radius_mm,
				  energy_keV);
}

static const char *const line_names[BH_LINE_KINDS] = { "Ka1", "Ka2", "Kb", "W La1" };

static double wavelength_A(const bh_anode *anode, int kind)
{
	switch (kind) {
	case BH_KA1:
		return anode->ka1_A;
	case BH_KA2:
		return anode->ka2_A;
	case BH_KB:
		return anode->kb_A;
	default:
		return bh_w_la1_A;
	}
}

static double emitted_per_s_sr_mA(const bh_setting *setting, int kind)
{
	const bh_tube *tube = setting->tube;

	if (kind == BH_W_LA1)
		return tube->tungsten_share *
		       bh_tube_line_per_s_sr_mA(tube->anode, BH_KA1, setting->kV,
						tube->takeoff_deg);
	return bh_tube_line_per_s_sr_mA(tube->anode, kind, setting->kV,
					tube->takeoff_deg);
}

static void kbeta_ratios(bh_radiation *radiation)
{
	double ka_flux = 0, ka_counted = 0, kb_flux = 0, kb_counted = 0;

	for (size_t i = 0; i < radiation->count; i++) {
		const bh_line *line = &radiation->lines[i];

		if (line->kind == BH_KA1 || line->kind == BH_KA2) {
			ka_flux += line->flux_s;
			ka_counted += line->flux_s * line->detected_frac;
		} else if (line->kind == BH_KB) {
			kb_flux += line->flux_s;
			kb_counted += line->flux_s * line->detected_frac;
		}
	}
	radiation->kbeta_ratio_at_specimen = ka_flux > 0 ? kb_flux / ka_flux : 0;
	radiation->kbeta_ratio = ka_counted > 0 ? kb_counted / ka_counted : 0;
}

void bh_radiation_make(bh_radiation *radiation, const bh_instrument *instrument,
		       const bh_setting *setting, const bh_composition *mixture)
{
	double beam = bh_radiation_beam_sr_mA(instrument, setting);

	*radiation = (bh_radiation){
		.overvoltage = setting->kV /
			       bh_xray_edge_keV(setting->tube->anode->z, BH_SHELL_K),
		.polarization = bh_filter_polarization(setting->tube),
	};
	for (int kind = 0; kind < BH_LINE_KINDS; kind++) {
		double lambda_A = wavelength_A(setting->tube->anode, kind);
		double energy_keV = bh_energy_keV(lambda_A);
		double flux_s =
			emitted_per_s_sr_mA(setting, kind) * beam *
			bh_radiation_path_frac(instrument, setting->tube, energy_keV);

		if (kind != BH_KA1 && !(flux_s > 0))
			continue;
		radiation->lines[radiation->count++] = (bh_line){
			.name = line_names[kind],
			.kind = kind,
			.wavelength_A = lambda_A,
			.energy_keV = energy_keV,
			.flux_s = flux_s,
			.detected_frac =
				bh_detector_counted_frac(instrument, setting, energy_keV),
			.mass_attenuation_cm2_g =
				mixture ? bh_absorb_cm2_g(mixture, energy_keV) : 0,
		};
	}
	kbeta_ratios(radiation);
}

double bh_continuum_keV(const bh_continuum *continuum, size_t bin)
{
	return continuum->low_keV + ((double)bin + 0.5) * continuum->step_keV;
}

size_t bh_continuum_bin(const bh_continuum *continuum, double energy_keV)
{
	double bin = (energy_keV - continuum->low_keV) / continuum->step_keV;

	return bin >= 0 && bin < (double)continuum->count ? (size_t)bin
							  : continuum->count;
}

bool bh_continuum_make(bh_continuum *continuum, bh_arena *arena,
		       const bh_instrument *instrument, const bh_setting *setting,
		       const bh_composition *mixture, bh_err *err)
{
	/* below 2 keV neither air nor a beryllium window lets a countable share through;
	 * 400 bins keep each below 0.15 keV */
	static const double low_keV = 2;
	enum { BINS = 400 };
	const bh_tube *tube = setting->tube;
	double beam = bh_radiation_beam_sr_mA(instrument, setting) *
		      instrument->continuum_scale;

	*continuum = (bh_continuum){ low_keV,
				     (setting->kV - low_keV) / BINS,
				     BINS,
				     bh_new(arena, double, BINS),
				     bh_new(arena, double, BINS),
				     bh_new(arena, double, BINS) };
	if (!continuum->flux_s_keV || !continuum->counted_frac ||
	    !continuum->attenuation_cm2_g)
		return bh_fail_memory(err);
	for (size_t i = 0; i < BINS; i++) {
		double energy_keV = bh_continuum_keV(continuum, i);

		continuum->flux_s_keV[i] =
			beam * bh_radiation_path_frac(instrument, tube, energy_keV) *
			bh_tube_continuum_per_s_sr_mA_keV(tube->anode, energy_keV,
							  setting->kV, tube->takeoff_deg);
		continuum->counted_frac[i] =
			bh_detector_counted_frac(instrument, setting, energy_keV);
		continuum->attenuation_cm2_g[i] =
			mixture ? bh_absorb_cm2_g(mixture, energy_keV) : 0;
	}
	return true;
}
