#include "physics/scatter.h"

#include <math.h>

#include "base/units.h"
#include "physics/absorb.h"
#include "physics/background.h"
#include "physics/detector.h"
#include "physics/reflect.h"
#include "physics/structure.h"
#include "physics/xray.h"

static size_t add_sites(bh_scatterer *scatterers, size_t n, const bh_phase *phase,
			double share_frac)
{
	double mass = 0;

	for (size_t i = 0; i < phase->site_count; i++)
		mass += phase->sites[i].multiplicity * phase->sites[i].occupancy *
			bh_xray_molar_mass_g(phase->sites[i].z);
	for (size_t i = 0; mass > 0 && i < phase->site_count; i++) {
		const bh_site *site = &phase->sites[i];

		scatterers[n++] =
			(bh_scatterer){ site->z,
					share_frac * site->multiplicity *
						site->occupancy *
						bh_xray_molar_mass_g(site->z) / mass,
					site->b_iso_A2, false };
	}
	return n;
}

static size_t add_elements(bh_scatterer *scatterers, size_t n, const bh_composition *c,
			   double share_frac, bool amorphous)
{
	for (size_t i = 0; i < c->count; i++)
		scatterers[n++] = (bh_scatterer){ c->elements[i].z,
						  share_frac * c->elements[i].mass_frac,
						  BH_B_ISO_DEFAULT_A2, amorphous };
	return n;
}

static bool specimen_body(bh_body *body, bh_arena *arena, const bh_scene *scene,
			  const bh_signal *signal, bh_err *err)
{
	const bh_request *request = scene->request;
	const bh_composition *amorphous =
		request->amorphous.count ? &request->amorphous : &signal->mixture;
	size_t most = amorphous->count, n = 0;
	bh_scatterer *scatterers;

	for (size_t i = 0; i < request->phase_count; i++)
		most += request->phases[i].site_count +
			request->phases[i].composition.count;
	scatterers = bh_new(arena, bh_scatterer, most);
	if (!scatterers)
		return bh_fail_memory(err);
	for (size_t i = 0; i < request->phase_count; i++) {
		const bh_phase *phase = &request->phases[i];

		if (!(phase->share_frac > 0))
			continue;
		n = phase->site_count ? add_sites(scatterers, n, phase, phase->share_frac)
				      : add_elements(scatterers, n, &phase->composition,
						     phase->share_frac, false);
	}
	if (request->amorphous_frac > 0)
		n = add_elements(scatterers, n, amorphous, request->amorphous_frac, true);
	*body = (bh_body){ &signal->mixture, scatterers, n,
			   bh_observe_areal_g_cm2(request, signal->density_g_cm3) };
	return true;
}

static bool holder_body(bh_body *body, bh_arena *arena, const bh_phase *holder,
			bh_err *err)
{
	bh_scatterer *scatterers = bh_new(arena, bh_scatterer, holder->site_count);

	if (!scatterers)
		return bh_fail_memory(err);
	*body = (bh_body){ &holder->composition, scatterers,
			   add_sites(scatterers, 0, holder, 1), HUGE_VAL };
	return true;
}

typedef struct {
	bh_signal *signal;
	const bh_scene *scene;
	const bh_continuum *continuum;
	double omega_sr;
} view;

/* Compton and diffuse scattering, counts/s in one aperture. */
typedef struct {
	double compton_cps, diffuse_cps;
} scattered;

/* One energy into the detector; counted_frac is D of the unshifted photons. */
static scattered scatter(const view *v, const bh_body *body, bh_photons photons,
			 double counted_frac, double theta2_rad)
{
	const bh_signal *signal = v->signal;
	double out_keV = bh_xray_compton_keV(photons.energy_keV, theta2_rad);
	double mu = bh_absorb_cm2_g(body->composition, photons.energy_keV);
	double thick = -expm1(-2 * mu * body->areal_g_cm2 / sin(theta2_rad / 2));

	return (scattered){ thick *
				    bh_background_compton_cps(body->composition, photons,
							      theta2_rad) *
				    bh_detector_counted_frac(v->scene->instrument,
							     &signal->setting, out_keV),
			    thick * counted_frac *
				    bh_background_diffuse_cps(
					    body, photons, theta2_rad,
					    signal->radiation.polarization) };
}

/* The continuum, Compton and diffuse, for the energies that the detector counts: four bins
 * at a time, for both vary slowly with energy. */
static double continuum_scatter_cps(const view *v, const bh_body *body, double theta2_rad)
{
	enum { STRIDE = 4 };
	const bh_continuum *c = v->continuum;
	double sum = 0;

	for (size_t i = 0; i + STRIDE <= c->count; i += STRIDE) {
		bh_photons photons = { c->low_keV +
					       ((double)i + STRIDE / 2.0) * c->step_keV,
				       0, v->omega_sr };
		double counted_s = 0;
		scattered one;

		for (size_t k = i; k < i + STRIDE; k++) {
			photons.flux_s += c->flux_s_keV[k] * c->step_keV;
			counted_s += c->flux_s_keV[k] * c->step_keV * c->counted_frac[k];
		}
		if (!(counted_s > 0) || !(c->counted_frac[i + STRIDE / 2] > 1e-4))
			continue;
		one = scatter(v, body, photons, counted_s / photons.flux_s, theta2_rad);
		sum += one.compton_cps + one.diffuse_cps;
	}
	return sum;
}

/* Continuum photons that the crystals reflect to this angle: each plane picks its own energy
 * hc/(2 d sinθ); dE/d2θ = E cotθ/2. |F|² is taken at the first line. */
static double continuum_bragg_cps(const view *v, double two_theta_deg)
{
	const bh_continuum *c = v->continuum;
	const bh_signal *signal = v->signal;
	bh_lit lit = bh_lit_at(v->scene->request, &signal->setting, two_theta_deg);
	double sum = 0, theta = bh_rad(two_theta_deg / 2);

	for (size_t i = 0; i < signal->reflection_count; i++) {
		const bh_reflection *r = &signal->reflections[i];
		const bh_phase *phase = &v->scene->phases[r->phase];
		double wavelength_A = 2 * r->d_A * sin(theta);
		double energy_keV = bh_energy_keV(wavelength_A);
		size_t bin = bh_continuum_bin(c, energy_keV);
		bool holder =
			v->scene->has_holder && r->phase + 1 == v->scene->phase_count;

		if (!r->rate_known || holder || bin >= c->count ||
		    !(c->counted_frac[bin] > 1e-4) || !(c->flux_s_keV[bin] > 0))
			continue;
		sum += phase->share_frac * c->flux_s_keV[bin] * c->counted_frac[bin] *
		       energy_keV / tan(theta) / 2 *
		       bh_reflect_per_photon(signal, bh_reflect_strength(r, phase, 0),
					     wavelength_A, two_theta_deg,
					     c->attenuation_cm2_g[bin]);
	}
	return sum * lit.specimen_frac;
}

/* The fluorescence of a body that is not endlessly thick. */
typedef struct {
	bh_fluorescence *rows;
	size_t count;
} glow;

static double glow_cps(const glow *g, double areal_g_cm2, double two_theta_deg)
{
	double sum = 0, s = sin(bh_rad(two_theta_deg / 2));

	for (size_t i = 0; i < g->count; i++)
		sum += g->rows[i].rate_cps *
		       -expm1(-g->rows[i].path_cm2_g * areal_g_cm2 / s);
	return sum;
}

static void add_body(bh_background *b, const view *v, const bh_body *body, const glow *g,
		     double lit_frac)
{
	double theta2_rad = bh_rad(b->two_theta_deg);

	if (!(lit_frac > 0))
		return;
	for (size_t k = 0; k < v->signal->radiation.count; k++) {
		const bh_line *line = &v->signal->radiation.lines[k];
		scattered one = scatter(
			v, body,
			(bh_photons){ line->energy_keV, line->flux_s, v->omega_sr },
			line->detected_frac, theta2_rad);

		b->compton += one.compton_cps * lit_frac;
		b->diffuse += one.diffuse_cps * lit_frac;
	}
	b->fluorescence += lit_frac * glow_cps(g, body->areal_g_cm2, b->two_theta_deg);
}

enum { COARSE = 24 }; /* angles of the smooth part of the continuum */

static void add_continuum(bh_signal *signal, const view *v, const bh_body *body)
{
	double coarse[COARSE + 1], low = signal->background[0].two_theta_deg;
	double high = signal->background[signal->background_count - 1].two_theta_deg;
	int last = signal->background_count > 2 * COARSE ? COARSE : 1;
	double step = (high - low) / last;

	for (int i = 0; i <= last; i++)
		coarse[i] = continuum_scatter_cps(v, body, bh_rad(low + i * step));
	for (size_t i = 0; i < signal->background_count; i++) {
		bh_background *b = &signal->background[i];
		double at = step > 0 ? (b->two_theta_deg - low) / step : 0;
		int k = at < last - 1 ? (int)at : last - 1;
		bh_lit lit =
			bh_lit_at(v->scene->request, &signal->setting, b->two_theta_deg);

		b->continuum = (coarse[k] + (coarse[k + 1] - coarse[k]) * (at - k)) *
				       lit.specimen_frac +
			       continuum_bragg_cps(v, b->two_theta_deg);
	}
}

static bool blank_grid(bh_signal *signal, bh_arena *arena, const bh_scene *scene,
		       bh_err *err)
{
	static const double step_deg = 0.5; /* every part varies slowly on this scale */
	bool all = !(scene->background_high_deg > 0);
	double low =
		all ? scene->instrument->two_theta_min_deg : scene->background_low_deg;
	double high =
		all ? scene->instrument->two_theta_max_deg : scene->background_high_deg;
	size_t steps = (size_t)ceil((high - low) / step_deg - 1e-9);

	signal->background = bh_new(arena, bh_background, steps + 1);
	if (!signal->background)
		return bh_fail_memory(err);
	signal->background_count = steps + 1;
	for (size_t i = 0; i <= steps; i++) {
		bh_background *b = &signal->background[i];

		b->two_theta_deg = low + (high - low) * (double)i / (double)steps;
		b->blank = bh_background_blank_cps(scene->instrument, &signal->setting,
						   b->two_theta_deg);
	}
	return true;
}

/* The holder lights up where the beam spills beside the specimen. Its fluorescence stands in
 * the background, not in the table of the specimen's own. */
static bool add_holder(bh_signal *signal, bh_arena *arena, const view *v, bh_err *err)
{
	const bh_scene *scene = v->scene;
	const bh_phase *holder = &scene->phases[scene->phase_count - 1];
	bh_continuum continuum;
	bh_beam beam = { scene->instrument, &signal->setting, &signal->radiation,
			 &continuum };
	bh_body body;
	glow g;

	if (!holder_body(&body, arena, holder, err) ||
	    !bh_continuum_make(&continuum, arena, scene->instrument, &signal->setting,
			       &holder->composition, err) ||
	    !bh_background_fluorescence(&g.rows, &g.count, arena, &body, &beam, err))
		return false;
	for (size_t i = 0; i < signal->background_count; i++) {
		bh_background *b = &signal->background[i];

		add_body(b, v, &body, &g,
			 bh_lit_at(scene->request, &signal->setting, b->two_theta_deg)
				 .holder_frac);
	}
	return true;
}

static bool add_specimen(bh_signal *signal, bh_arena *arena, const view *v, bh_err *err)
{
	const bh_scene *scene = v->scene;
	bh_beam beam = { scene->instrument, &signal->setting, &signal->radiation,
			 v->continuum };
	bh_body body;
	glow g;

	if (!specimen_body(&body, arena, scene, signal, err) ||
	    !bh_background_fluorescence(&g.rows, &g.count, arena, &body, &beam, err))
		return false;
	signal->fluorescence = g.rows;
	signal->fluorescence_count = g.count;
	for (size_t i = 0; i < signal->background_count; i++) {
		bh_background *b = &signal->background[i];

		add_body(b, v, &body, &g,
			 bh_lit_at(scene->request, &signal->setting, b->two_theta_deg)
				 .specimen_frac);
	}
	add_continuum(signal, v, &body);
	return true;
}

bool bh_scatter(bh_signal *signal, bh_arena *arena, const bh_scene *scene,
		const bh_continuum *continuum, bh_err *err)
{
	view v = { signal, scene, continuum,
		   bh_rad(signal->aperture_deg) * signal->axial_frac };

	if (!blank_grid(signal, arena, scene, err))
		return false;
	if (signal->rates_known &&
	    (!add_specimen(signal, arena, &v, err) ||
	     (scene->has_holder && !add_holder(signal, arena, &v, err))))
		return false;
	for (size_t i = 0; i < signal->background_count; i++) {
		bh_background *b = &signal->background[i];

		b->total = b->blank + b->fluorescence + b->continuum + b->compton +
			   b->diffuse;
	}
	return true;
}
