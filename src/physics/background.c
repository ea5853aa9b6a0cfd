#include "physics/background.h"

#include <math.h>

#include "base/units.h"
#include "physics/absorb.h"
#include "physics/detector.h"
#include "physics/geometry.h"

/* Φ Ω/4π w σ_fl/(μ/ρ in + μ/ρ out) */
static double depth_integral_cps(bh_photons photons, double mass_frac, double sigma_cm2_g,
				 double path_cm2_g)
{
	return photons.flux_s * photons.solid_angle_sr / (4 * BH_PI) * mass_frac *
	       sigma_cm2_g / path_cm2_g;
}

double bh_background_fluorescence_cps(const bh_composition *composition, size_t element,
				      bh_fl_group group, bh_photons photons)
{
	const bh_element_share *e = &composition->elements[element];
	double sigma_cm2_g = bh_xray_fluorescence_cm2_g(e->z, group, photons.energy_keV);
	double out_keV = bh_xray_group_keV(e->z, group);

	if (!(sigma_cm2_g > 0) || !(out_keV > 0))
		return 0;
	return depth_integral_cps(photons, e->mass_frac, sigma_cm2_g,
				  bh_absorb_cm2_g(composition, photons.energy_keV) +
					  bh_absorb_cm2_g(composition, out_keV));
}

double bh_background_compton_cps(const bh_composition *composition, bh_photons photons,
				 double two_theta_rad)
{
	double out_keV = bh_xray_compton_keV(photons.energy_keV, two_theta_rad), dcs = 0;

	for (size_t i = 0; i < composition->count; i++)
		dcs += composition->elements[i].mass_frac *
		       bh_xray_compton_cm2_g_sr(composition->elements[i].z,
						photons.energy_keV, two_theta_rad);
	return photons.flux_s * photons.solid_angle_sr * dcs /
	       (bh_absorb_cm2_g(composition, photons.energy_keV) +
		bh_absorb_cm2_g(composition, out_keV));
}

double bh_background_diffuse_cps(const bh_body *body, bh_photons photons,
				 double two_theta_rad, double polarization)
{
	double s = sin(two_theta_rad / 2) / bh_wavelength_A(photons.energy_keV), dcs = 0;

	for (size_t i = 0; i < body->scatterer_count; i++) {
		const bh_scatterer *a = &body->scatterers[i];
		double f1 =
			bh_xray_f0(a->z, s) + bh_xray_f_prime(a->z, photons.energy_keV);
		double f2 = bh_xray_f_double_prime(a->z, photons.energy_keV);
		double loss = a->amorphous ? 1 : -expm1(-2 * a->b_iso_A2 * s * s);

		dcs += a->mass_frac * BH_AVOGADRO_PER_MOL / bh_xray_molar_mass_g(a->z) *
		       (f1 * f1 + f2 * f2) * loss;
	}
	dcs *= BH_ELECTRON_RADIUS_CM * BH_ELECTRON_RADIUS_CM *
	       bh_geometry_polarization(polarization, two_theta_rad / 2);
	return photons.flux_s * photons.solid_angle_sr * dcs /
	       (2 * bh_absorb_cm2_g(body->composition, photons.energy_keV));
}

/* One line group of one element of a body. */
typedef struct {
	const bh_body *body;
	size_t element;
	bh_fl_group group;
	int z;
	double out_keV, out_cm2_g; /* of its photons on their way out */
	double counted_frac;
} emitter;

/* Rate, and μ/ρ in + out. */
typedef struct {
	double cps, path_cm2_g;
} emission;

static emission emit(const emitter *e, bh_photons photons, double in_cm2_g)
{
	double path_cm2_g = in_cm2_g + e->out_cm2_g;

	return (emission){
		e->counted_frac *
			depth_integral_cps(
				photons,
				e->body->composition->elements[e->element].mass_frac,
				bh_xray_fluorescence_cm2_g(e->z, e->group,
							   photons.energy_keV),
				path_cm2_g),
		path_cm2_g
	};
}

/* Sum over the continuum from the edge up. Energies stand closer near the edge, where most is
 * excited and the foil and the anode have edges of their own. */
static emission by_continuum(const emitter *e, const bh_continuum *c,
			     double solid_angle_sr)
{
	enum { ENERGIES = 160 };
	bool k_shell = e->group == BH_FL_KA || e->group == BH_FL_KB;
	double edge_keV = bh_xray_edge_keV(e->z, k_shell ? BH_SHELL_K : BH_SHELL_L3);
	double top_keV = c->low_keV + c->step_keV * (double)c->count, ratio;
	double from_keV = fmax(edge_keV, c->low_keV);
	emission sum = { 0, 0 };

	if (!(edge_keV > 0) || from_keV >= top_keV)
		return sum;
	ratio = pow(top_keV / from_keV, 1.0 / ENERGIES);
	for (double low_keV = from_keV; low_keV * sqrt(ratio) < top_keV;
	     low_keV *= ratio) {
		double step_keV = low_keV * (ratio - 1),
		       energy_keV = low_keV + step_keV / 2;
		size_t bin = bh_continuum_bin(c, energy_keV);
		emission one;

		if (bin >= c->count || !(c->flux_s_keV[bin] > 0))
			continue;
		one = emit(e,
			   (bh_photons){ energy_keV, c->flux_s_keV[bin] * step_keV,
					 solid_angle_sr },
			   c->attenuation_cm2_g[bin]);
		sum.cps += one.cps;
		sum.path_cm2_g += one.cps * one.path_cm2_g;
	}
	if (sum.cps > 0)
		sum.path_cm2_g /= sum.cps;
	return sum;
}

typedef struct {
	bh_fluorescence *rows;
	size_t count;
} row_list;

static void add_row(row_list *list, const emitter *e, const char *by, emission one)
{
	if (one.cps > 0)
		list->rows[list->count++] = (bh_fluorescence){
			.z = e->z,
			.line = bh_xray_group_name(e->group),
			.energy_keV = e->out_keV,
			.excited_by = by,
			.path_cm2_g = one.path_cm2_g,
			.rate_cps = one.cps,
		};
}

static void drop_small(row_list *list)
{
	double most = 0;
	size_t kept = 0;

	for (size_t i = 0; i < list->count; i++)
		if (list->rows[i].rate_cps > most)
			most = list->rows[i].rate_cps;
	for (size_t i = 0; i < list->count; i++)
		if (list->rows[i].rate_cps > 1e-6 * most && list->rows[i].rate_cps > 1e-9)
			list->rows[kept++] = list->rows[i];
	list->count = kept;
}

static void add_group(row_list *list, const bh_body *body, size_t element,
		      bh_fl_group group, const bh_beam *beam)
{
	emitter e = { .body = body, .element = element, .group = group };
	double omega_sr = bh_detector_aperture_rad(beam->instrument) *
			  bh_detector_axial_frac(beam->instrument);

	e.z = body->composition->elements[element].z;
	e.out_keV = bh_xray_group_keV(e.z, group);
	if (!(e.out_keV > 0))
		return;
	e.out_cm2_g = bh_absorb_cm2_g(body->composition, e.out_keV);
	e.counted_frac =
		bh_detector_counted_frac(beam->instrument, beam->setting, e.out_keV);
	if (!(e.counted_frac > 0))
		return;
	for (size_t k = 0; k < beam->radiation->count; k++) {
		const bh_line *line = &beam->radiation->lines[k];

		add_row(list, &e, line->name,
			emit(&e, (bh_photons){ line->energy_keV, line->flux_s, omega_sr },
			     bh_absorb_cm2_g(body->composition, line->energy_keV)));
	}
	add_row(list, &e, "continuum", by_continuum(&e, beam->continuum, omega_sr));
}

bool bh_background_fluorescence(bh_fluorescence **rows, size_t *count, bh_arena *arena,
				const bh_body *body, const bh_beam *beam, bh_err *err)
{
	size_t most =
		body->composition->count * BH_FL_GROUPS * (beam->radiation->count + 1);
	row_list list = { bh_new(arena, bh_fluorescence, most), 0 };

	if (!list.rows)
		return bh_fail_memory(err);
	for (size_t i = 0; i < body->composition->count; i++)
		for (bh_fl_group group = 0; group < BH_FL_GROUPS; group++)
			add_group(&list, body, i, group, beam);
	drop_small(&list);
	*rows = list.rows;
	*count = list.count;
	return true;
}

/* kV · mA · opening: air scatter grows with it. */
static double beam_strength(const bh_instrument *instrument, double kV, double mA,
			    double divergence_deg)
{
	if (!(divergence_deg > 0))
		divergence_deg = instrument->usual_divergence_deg;
	return kV * mA * (divergence_deg > 0 ? divergence_deg : 1);
}

double bh_background_blank_cps(const bh_instrument *instrument, const bh_setting *setting,
			       double two_theta_deg)
{
	const double *x = instrument->blank_two_theta_deg, *y = instrument->blank_cps;
	size_t n = instrument->blank_count, i = 0;
	/* the blank was taken at the usual setting */
	double scale = beam_strength(instrument, setting->kV, setting->mA,
				     setting->divergence_deg) /
		       beam_strength(instrument, setting->tube->kV, setting->tube->mA, 0);

	if (n == 0)
		return 0;
	while (i < n && x[i] < two_theta_deg)
		i++;
	if (i == 0)
		return y[0] * scale;
	if (i == n)
		return y[n - 1] * scale;
	return (y[i - 1] +
		(y[i] - y[i - 1]) * (two_theta_deg - x[i - 1]) / (x[i] - x[i - 1])) *
	       scale;
}
