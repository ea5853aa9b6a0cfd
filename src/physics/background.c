#include "physics/background.h"

#include <math.h>

#include "base/units.h"
#include "physics/absorb.h"
#include "physics/detector.h"
#include "physics/geometry.h"

double bh_background_fluorescence_cps(const bh_composition *composition, size_t element,
				      bh_fl_group group, double energy_keV, double flux_s,
				      double solid_angle_sr)
{
	const bh_element_share *e = &composition->elements[element];
	double sigma_cm2_g = bh_xray_fluorescence_cm2_g(e->z, group, energy_keV);
	double out_keV = bh_xray_group_keV(e->z, group);

	if (!(sigma_cm2_g > 0) || !(out_keV > 0))
		return 0;
	return flux_s * solid_angle_sr / (4 * BH_PI) * e->mass_frac * sigma_cm2_g /
	       (bh_absorb_cm2_g(composition, energy_keV) +
		bh_absorb_cm2_g(composition, out_keV));
}

double bh_background_compton_cps(const bh_composition *composition, double energy_keV,
				 double flux_s, double solid_angle_sr,
				 double two_theta_rad)
{
	double out_keV = bh_xray_compton_keV(energy_keV, two_theta_rad), dcs = 0;

	for (size_t i = 0; i < composition->count; i++)
		dcs += composition->elements[i].mass_frac *
		       bh_xray_compton_cm2_g_sr(composition->elements[i].z, energy_keV,
						two_theta_rad);
	return flux_s * solid_angle_sr * dcs /
	       (bh_absorb_cm2_g(composition, energy_keV) +
		bh_absorb_cm2_g(composition, out_keV));
}

double bh_background_diffuse_cps(const bh_body *body, double energy_keV, double flux_s,
				 double solid_angle_sr, double two_theta_rad,
				 double polarization)
{
	double s = sin(two_theta_rad / 2) / bh_wavelength_A(energy_keV), dcs = 0;

	for (size_t i = 0; i < body->scatterer_count; i++) {
		const bh_scatterer *a = &body->scatterers[i];
		double f1 = bh_xray_f0(a->z, s) + bh_xray_f_prime(a->z, energy_keV);
		double f2 = bh_xray_f_double_prime(a->z, energy_keV);
		double loss = a->amorphous ? 1 : -expm1(-2 * a->b_iso_A2 * s * s);

		dcs += a->mass_frac * BH_AVOGADRO_PER_MOL / bh_xray_molar_mass_g(a->z) *
		       (f1 * f1 + f2 * f2) * loss;
	}
	dcs *= BH_ELECTRON_RADIUS_CM * BH_ELECTRON_RADIUS_CM *
	       bh_geometry_polarization(polarization, two_theta_rad / 2);
	return flux_s * solid_angle_sr * dcs /
	       (2 * bh_absorb_cm2_g(body->composition, energy_keV));
}

/* Sum over the continuum from the edge up, in bins that start at the edge: ≥ 60 energies
 * however near the edge lies to the tube voltage. */
static double by_continuum_cps(double *path_cm2_g, const bh_body *body, size_t element,
			       bh_fl_group group, const bh_continuum *continuum,
			       double solid_angle_sr)
{
	enum { ENERGIES = 80 };
	int z = body->composition->elements[element].z;
	bh_shell shell =
		group == BH_FL_KA || group == BH_FL_KB ? BH_SHELL_K : BH_SHELL_L3;
	double top_keV =
		continuum->low_keV + continuum->step_keV * (double)continuum->count;
	double from_keV = bh_xray_edge_keV(z, shell), step_keV, sum = 0, path = 0;
	double out_cm2_g =
		bh_absorb_cm2_g(body->composition, bh_xray_group_keV(z, group));

	*path_cm2_g = 0;

	if (from_keV < continuum->low_keV)
		from_keV = continuum->low_keV;
	if (!(bh_xray_edge_keV(z, shell) > 0) || from_keV >= top_keV)
		return 0;
	step_keV = (top_keV - from_keV) / ENERGIES;
	for (int i = 0; i < ENERGIES; i++) {
		double energy_keV = from_keV + (i + 0.5) * step_keV;
		size_t bin = bh_continuum_bin(continuum, energy_keV);
		double rate_cps;

		if (bin >= continuum->count || !(continuum->flux_s_keV[bin] > 0))
			continue;
		rate_cps = bh_background_fluorescence_cps(
			body->composition, element, group, energy_keV,
			continuum->flux_s_keV[bin] * step_keV, solid_angle_sr);
		sum += rate_cps;
		path += rate_cps * (continuum->attenuation_cm2_g[bin] + out_cm2_g);
	}
	if (sum > 0)
		*path_cm2_g = path / sum;
	return sum;
}

typedef struct {
	bh_fluorescence *rows;
	size_t count;
} row_list;

static void add_row(row_list *list, const bh_body *body, size_t element,
		    bh_fl_group group, const char *by, double rate_cps, double path_cm2_g)
{
	int z = body->composition->elements[element].z;

	if (rate_cps > 0)
		list->rows[list->count++] = (bh_fluorescence){
			.z = z,
			.line = bh_xray_group_name(group),
			.energy_keV = bh_xray_group_keV(z, group),
			.excited_by = by,
			.path_cm2_g = path_cm2_g,
			.rate_cps = rate_cps,
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

typedef struct {
	const bh_instrument *instrument;
	const bh_setting *setting;
	const bh_radiation *radiation;
	const bh_continuum *continuum;
	double omega_sr;
} beam_terms;

static void add_group(row_list *list, const bh_body *body, size_t element,
		      bh_fl_group group, const beam_terms *b)
{
	int z = body->composition->elements[element].z;
	double out_keV = bh_xray_group_keV(z, group), counted, path_cm2_g, rate_cps;

	if (!(out_keV > 0))
		return;
	counted = bh_detector_counted_frac(b->instrument, b->setting, out_keV);
	if (!(counted > 0))
		return;
	for (size_t k = 0; k < b->radiation->count; k++) {
		const bh_line *line = &b->radiation->lines[k];

		rate_cps = counted * bh_background_fluorescence_cps(
					     body->composition, element, group,
					     line->energy_keV, line->flux_s, b->omega_sr);
		path_cm2_g = bh_absorb_cm2_g(body->composition, line->energy_keV) +
			     bh_absorb_cm2_g(body->composition, out_keV);
		add_row(list, body, element, group, line->name, rate_cps, path_cm2_g);
	}
	rate_cps = counted * by_continuum_cps(&path_cm2_g, body, element, group,
					      b->continuum, b->omega_sr);
	add_row(list, body, element, group, "continuum", rate_cps, path_cm2_g);
}

bool bh_background_fluorescence(bh_fluorescence **rows, size_t *count, bh_arena *arena,
				const bh_body *body, const bh_instrument *instrument,
				const bh_setting *setting, const bh_radiation *radiation,
				const bh_continuum *continuum, bh_err *err)
{
	beam_terms beam = { instrument, setting, radiation, continuum,
			    bh_detector_aperture_rad(instrument) *
				    bh_detector_axial_frac(instrument) };
	row_list list = { NULL, 0 };

	list.rows =
		bh_new(arena, bh_fluorescence,
		       body->composition->count * BH_FL_GROUPS * (radiation->count + 1));
	if (!list.rows)
		return bh_fail_memory(err);
	for (size_t i = 0; i < body->composition->count; i++)
		for (bh_fl_group group = 0; group < BH_FL_GROUPS; group++)
			add_group(&list, body, i, group, &beam);
	drop_small(&list);
	*rows = list.rows;
	*count = list.count;
	return true;
}

double bh_background_blank_cps(const bh_instrument *instrument, const bh_setting *setting,
			       double two_theta_deg)
{
	const double *x = instrument->blank_two_theta_deg, *y = instrument->blank_cps;
	size_t n = instrument->blank_count, i = 0;
	/* air scatter grows with the beam: the blank was taken at the usual setting */
	double usual =
		setting->tube->kV * setting->tube->mA *
		(instrument->usual_divergence_deg > 0 ? instrument->usual_divergence_deg
						      : 1);
	double now =
		setting->kV * setting->mA *
		(setting->divergence_deg > 0		? setting->divergence_deg
		 : instrument->usual_divergence_deg > 0 ? instrument->usual_divergence_deg
							: 1);

	if (n == 0)
		return 0;
	while (i < n && x[i] < two_theta_deg)
		i++;
	if (i == 0)
		return y[0] * now / usual;
	if (i == n)
		return y[n - 1] * now / usual;
	return (y[i - 1] +
		(y[i] - y[i - 1]) * (two_theta_deg - x[i - 1]) / (x[i] - x[i - 1])) *
	       now / usual;
}
