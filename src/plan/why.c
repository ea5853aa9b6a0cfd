#include "plan/words.h"

#include <math.h>
#include <stdint.h>

#include "base/units.h"
#include "design/view.h"
#include "physics/detector.h"
#include "physics/geometry.h"
#include "physics/reflect.h"
#include "physics/tube.h"

enum { MOST_WHYS = 24 };

#define say(plan, ...) bh_arena_format((plan)->arena, __VA_ARGS__)

static bool add(bh_plan *plan, bh_why why, bh_err *err)
{
	if (!why.what || !why.value || !why.equation || !why.inputs || !why.source)
		return bh_fail_memory(err);
	if (plan->why_count < MOST_WHYS)
		plan->whys[plan->why_count++] = why;
	return true;
}

static bool radiation(bh_plan *plan, bh_err *err)
{
	const bh_setting *s = &plan->signal.setting;
	const bh_line *line = &plan->signal.radiation.lines[0];

	return add(plan,
		   (bh_why){ "wavelength of Kα1", say(plan, "%.7f Å", line->wavelength_A),
			     "measured", say(plan, "anode %s", s->tube->anode->symbol),
			     s->tube->anode->source },
		   err) &&
	       add(plan,
		   (bh_why){ "Kα1 photons at the specimen",
			     say(plan, "%.4g /s", line->flux_s),
			     "Φ = N · mA · δ · axial · throughput · window · foil · "
			     "path; N = 5e13 (1/S) R ω p f(χ)",
			     say(plan,
				 "N = %.4g /(s sr mA) at %.3g kV, %.3g mA, δ = %.3g°, "
				 "throughput %.3g",
				 bh_tube_line_per_s_sr_mA(s->tube->anode, BH_KA1, s->kV,
							  s->tube->takeoff_deg),
				 s->kV, s->mA, s->divergence_deg, s->tube->throughput),
			     "H. Ebel, X-Ray Spectrom. 28 (1999) 255; coefficients from "
			     "memory" },
		   err) &&
	       add(plan,
		   (bh_why){ "share of Kα1 counted, D",
			     say(plan, "%.4f", line->detected_frac),
			     "D = path · foil · η0 (1 − exp(−μ t)) · window",
			     say(plan, "E = %.4f keV, window %.2f to %.2f keV",
				 line->energy_keV, s->window_low_keV, s->window_high_keV),
			     "attenuation: xraylib, Spectrochim. Acta B 66 (2011) 776" },
		   err) &&
	       add(plan,
		   (bh_why){ "attenuation of the mixture",
			     plan->signal.rates_known ? say(plan, "%.4g cm²/g",
							    line->mass_attenuation_cm2_g)
						      : "not known",
			     "μ/ρ = Σ w (μ/ρ)_i",
			     say(plan, "E = %.4f keV", line->energy_keV),
			     "xraylib, CS_Total" },
		   err);
}

static bool target(bh_plan *plan, const bh_scene *scene, const bh_target_result *t,
		   bh_err *err)
{
	const bh_reflection *r = &plan->signal.reflections[t->reflection];
	const bh_phase *phase = &plan->phases[t->phase];
	const bh_line *line = &plan->signal.radiation.lines[0];
	double theta = bh_rad(r->two_theta_deg / 2);
	const char *name =
		say(plan, "%s %s", phase->name, phase->targets[t->target].text);
	bh_lit lit = bh_lit_at(scene->request, &plan->signal.setting, r->two_theta_deg);

	if (!name)
		return bh_fail_memory(err);
	if (!add(plan,
		 (bh_why){
			 say(plan, "2θ of %s", name),
			 say(plan, "%.4f°", r->two_theta_deg), "λ = 2 d sinθ",
			 say(plan, "d = %.5f Å, λ = %.7f Å", r->d_A, line->wavelength_A),
			 "W. L. Bragg, Proc. Camb. Phil. Soc. 17 (1913) 43" },
		 err))
		return false;
	if (!t->rate_known || !(t->rate_cps_deg > 0))
		return true;
	return add(plan,
		   (bh_why){ say(plan, "rate of %s, Kα1, one aperture", name),
			     say(plan, "%.4g counts·°/s", r->rate_cps_deg),
			     "I = Φ r_e² λ³ m|F|²/v² · P · 2/(sinθ sin2θ) · (w/ρ)/(2μ/ρ) "
			     "· (h/R)/16π · Δ · D · G",
			     say(plan,
				 "m|F|²/(v²ρ) = %.4g cm³/(g Å⁶), P·2/(sinθ sin2θ) = "
				 "%.4g, w = %.4g, "
				 "μ/ρ = %.4g cm²/g, h/R = %.4g, Δ = %.4g°, D = %.4g, lit "
				 "= %.4g",
				 bh_reflect_strength(r, phase, 0),
				 bh_geometry_lorentz_polarization(
					 plan->signal.radiation.polarization, theta),
				 phase->share_frac, line->mass_attenuation_cm2_g,
				 plan->signal.axial_frac, plan->signal.aperture_deg,
				 line->detected_frac, lit.specimen_frac),
			     "B. E. Warren, X-ray Diffraction (1969), ch. 4" },
		   err);
}

static bool error_of(bh_plan *plan, const bh_target_result *t, bh_err *err)
{
	const bh_phase *phase = &plan->phases[t->phase];
	double background_deg, density, sum, fit, all, limit;
	bh_view_of_line v;

	if (!(t->predicted_error_frac > 0))
		return true;
	bh_view_make(&v, &plan->signal, t->reflection);
	density = t->expected_counts / (v.area_cps_deg * v.inside_frac);
	sum = bh_view_net_variance(&background_deg, &v) / density;
	fit = bh_view_variance(&v, density, false, BH_FIT_AREA);
	all = bh_view_variance(&v, density, true, BH_FIT_AREA);
	limit = bh_view_limit(&v, BH_FIT_AREA);
	return add(
		plan,
		(bh_why){
			say(plan, "area error of %s %s", phase->name,
			    phase->targets[t->target].text),
			say(plan, "%.3g %%", 100 * t->predicted_error_frac),
			"σ² = 1/N_eff + V∞ + max(V_sum/V_fit, 1) (V_all − V∞); "
			"V_sum = [P + B w_P/w_B]/N², w_B = w_P √(rate_B/rate_P); V_fit, "
			"V_all: Cramér-Rao bounds without and with free neighbours; V∞: "
			"V_all after endless counting",
			say(plan,
			    "ε = %.4g s/°, N = %.4g net counts, background %.4g "
			    "counts/s, "
			    "w_P = %.3f°, w_B = %.3f°, V_sum = %.3g, V_fit = %.3g, V_all "
			    "= "
			    "%.3g, V∞ = %.2g, N_eff = %.3g",
			    density, t->expected_counts, v.background_cps,
			    v.high_deg - v.low_deg, background_deg, sum, fit, all, limit,
			    t->grains),
			"Poisson counts; ITC C (2004), 7.5.7; grains: Alexander, Klug & "
			"Kummer 1948" },
		err);
}

bool bh_words_why(bh_plan *plan, const bh_scene *scene, bh_err *err)
{
	plan->whys = bh_new(plan->arena, bh_why, MOST_WHYS);
	if (!plan->whys)
		return bh_fail_memory(err);
	if (!radiation(plan, err))
		return false;
	for (size_t i = 0; i < plan->target_count; i++) {
		const bh_target_result *t = &plan->targets[i];

		if (t->reflection != SIZE_MAX &&
		    (!target(plan, scene, t, err) || !error_of(plan, t, err)))
			return false;
	}
	return true;
}
