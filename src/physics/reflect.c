#include "physics/reflect.h"

#include <math.h>
#include <stdlib.h>
#include <string.h>

#include "base/units.h"
#include "physics/amplitude.h"
#include "physics/bragg.h"
#include "physics/cell.h"
#include "physics/corundum.h"
#include "physics/geometry.h"
#include "physics/hkl.h"
#include "physics/profile.h"
#include "physics/rates.h"
#include "physics/structure.h"

/* Mean over all equivalents of (r² cos²χ + sin²χ/r)^(−3/2), χ between the plane's normal and
 * the preferred axis. W. A. Dollase, J. Appl. Cryst. 19 (1986) 267. */
static double texture(const bh_phase *phase, const bh_mat3 *reciprocal, const int h[3])
{
	int planes[BH_MAX_EQUIVALENTS][3];
	double r = phase->march, sum = 0;
	size_t count;

	if (r == 1)
		return 1;
	count = bh_hkl_equivalents(&phase->group, h, planes);
	for (size_t i = 0; i < count; i++) {
		double c = bh_cell_cosine(reciprocal, planes[i], phase->march_axis);

		sum += pow(r * r * c * c + (1 - c * c) / r, -1.5);
	}
	return count ? sum / (double)count : 1;
}

static bool is_target(const bh_phase *phase, const int h[3], double d_A)
{
	for (size_t i = 0; i < phase->target_count; i++) {
		int standard[3];

		if (phase->kind == BH_PHASE_LIST) {
			if (fabs(phase->targets[i].d_A / d_A - 1) < 1e-9)
				return true;
			continue;
		}
		bh_hkl_standard(standard, &phase->group, phase->targets[i].h);
		if (memcmp(standard, h, sizeof standard) == 0)
			return true;
	}
	return false;
}

/* More than these take minutes or gigabytes; the first answers are then of no use anyway. */
static const double most_planes = 3e6, most_terms = 2e11;

static bool bearable(const bh_reflect_query *q, bh_err *err)
{
	double planes = bh_hkl_estimate(&q->phase->cell, &q->phase->group, q->least_d_A);
	double terms = planes * (double)bh_amplitude_terms(q->phase);

	return (planes < most_planes && terms < most_terms) ||
	       bh_fail(err, BH_BAD_INPUT,
		       "%s: about %.2g reflections of %zu sites are too many to compute\nask "
		       "for a smaller range of angles (two_theta, --two-theta), or a longer "
		       "wavelength (--anode)",
		       q->phase->name, planes, q->phase->site_count);
}

static bool fill_f2(bh_reflection *list, size_t count, bh_arena *arena,
		    const bh_reflect_query *q, bh_err *err)
{
	size_t energies = q->radiation->count;
	double energy_keV[BH_MAX_LINES], *d_A = bh_new(arena, double, count);
	double *f2 = bh_new(arena, double, count * energies);
	int(*h)[3] = bh_arena_take(arena, count, sizeof *h);
	bh_mat3 reciprocal;

	if (!d_A || !f2 || !h)
		return bh_fail_memory(err);
	for (size_t k = 0; k < energies; k++)
		energy_keV[k] = q->radiation->lines[k].energy_keV;
	for (size_t i = 0; i < count; i++) {
		d_A[i] = list[i].d_A;
		memcpy(h[i], list[i].h, sizeof *h);
	}
	if (!bh_amplitude_f2_table(f2, q->phase,
				   &(bh_f2_query){ (const int(*)[3])h, d_A, count,
						   energy_keV, energies, q->without },
				   err))
		return false;
	if (!bh_cell_reciprocal(&reciprocal, &q->phase->cell))
		return true; /* a cell that closes nothing was refused at reading */
	for (size_t i = 0; i < count; i++) {
		list[i].f2 = f2[i * energies];
		list[i].texture = texture(q->phase, &reciprocal, list[i].h);
		for (size_t k = 0; k < energies; k++)
			list[i].f2_lines[k] = f2[i * energies + k];
	}
	return true;
}

bool bh_reflect_planes(bh_reflection **list, size_t *count, bh_arena *arena,
		       const bh_reflect_query *q, bh_err *err)
{
	const bh_phase *phase = q->phase;
	bh_hkl *planes = NULL;

	if (phase->kind == BH_PHASE_LIST)
		*count = phase->list_count;
	else if (!bearable(q, err) ||
		 !bh_hkl_list(&planes, count, arena, &phase->cell, &phase->group,
			      q->least_d_A, err))
		return false;
	*list = bh_new(arena, bh_reflection, *count);
	if (!*list)
		return bh_fail_memory(err);
	for (size_t i = 0; i < *count; i++) {
		bh_reflection *r = &(*list)[i];

		r->phase = q->index;
		r->texture = 1;
		r->d_A = planes ? planes[i].d_A : phase->list_d_A[i];
		r->multiplicity = planes ? planes[i].multiplicity : 0;
		if (planes)
			memcpy(r->h, planes[i].h, sizeof r->h);
		r->target = is_target(phase, r->h, r->d_A);
	}
	return phase->kind != BH_PHASE_ATOMS || fill_f2(*list, *count, arena, q, err);
}

/* The strongest line of a list stands to corundum 1 1 3 as its corundum ratio, the others as
 * the list says, all at Cu Kα1; other wavelengths follow by λ³ and Lorentz-polarization.
 * The strength goes where |F|² of a phase with atoms goes: see bh_reflect_strength. */
static bool fill_list(bh_reflection *list, const bh_phase *phase, bh_arena *arena,
		      bh_err *err)
{
	const bh_anode *copper = bh_anode_find("Cu");
	double corundum, corundum_lp, most = 0;

	if (!bh_corundum_strength(&corundum, &corundum_lp, arena, err))
		return false;
	for (size_t i = 0; i < phase->list_count; i++)
		most = fmax(most, phase->list_intensity[i]);
	for (size_t i = 0; most > 0 && i < phase->list_count; i++) {
		double two_theta_deg, lp;

		if (!bh_bragg_two_theta_deg(&two_theta_deg, list[i].d_A, copper->ka1_A))
			continue;
		lp = bh_geometry_lorentz_polarization(1, bh_rad(two_theta_deg / 2));
		for (size_t k = 0; k < BH_MAX_LINES; k++)
			list[i].f2_lines[k] = phase->corundum_ratio * corundum *
					      corundum_lp / lp *
					      phase->list_intensity[i] / most;
	}
	return true;
}

double bh_reflect_strength(const bh_reflection *reflection, const bh_phase *phase,
			   size_t line)
{
	if (phase->kind == BH_PHASE_LIST)
		return reflection->f2_lines[line];
	if (!(phase->density_g_cm3 > 0) || !(phase->volume_A3 > 0))
		return 0;
	return reflection->multiplicity * reflection->texture *
	       reflection->f2_lines[line] /
	       (phase->volume_A3 * phase->volume_A3 * phase->density_g_cm3);
}

double bh_reflect_per_photon(const bh_signal *signal, double strength,
			     double wavelength_A, double two_theta_deg,
			     double attenuation_cm2_g)
{
	return bh_rates_integrated_cps_rad(&(bh_rate_terms){
		.flux_s = 1,
		.wavelength_A = wavelength_A,
		.theta_rad = bh_rad(two_theta_deg / 2),
		.polarization = signal->radiation.polarization,
		.strength_inv_A6 = strength,
		.share_per_density_cm3_g = 1,
		.attenuation_cm2_g = attenuation_cm2_g,
		.axial_frac = signal->axial_frac,
		.aperture_rad = bh_rad(signal->aperture_deg),
		.counted_frac = 1,
		.lit_frac = 1,
	});
}

/* Rate of a reflection at a line for a phase that is all of its body (share 1), counts·deg/s
 * in one aperture. Unknown mixture: on an arbitrary scale, for relative intensities only. */
static double pure_rate(const bh_signal *signal, const bh_scene *scene,
			const bh_reflection *r, size_t line, double two_theta_deg)
{
	const bh_line *l = &signal->radiation.lines[line];
	const bh_phase *phase = &scene->phases[r->phase];
	bool holder = scene->has_holder && r->phase + 1 == scene->phase_count;
	bh_lit lit = bh_lit_at(scene->request, &signal->setting, two_theta_deg);
	double mu, thick = 1,
		   areal = bh_observe_areal_g_cm2(scene->request, signal->density_g_cm3);

	mu = holder ? signal->holder_attenuation_cm2_g[line] : l->mass_attenuation_cm2_g;
	if (!(mu > 0))
		mu = 1;
	else if (!holder)
		thick = -expm1(-2 * mu * areal / sin(bh_rad(two_theta_deg / 2)));
	return bh_deg(bh_reflect_per_photon(signal, bh_reflect_strength(r, phase, line),
					    l->wavelength_A, two_theta_deg, mu)) *
	       l->flux_s * l->detected_frac * thick *
	       (holder ? lit.holder_frac : lit.specimen_frac);
}

static void fill_rates(bh_signal *signal, const bh_scene *scene, bh_reflection *list,
		       size_t count)
{
	const bh_instrument *instrument = scene->instrument;
	const bh_line *first = &signal->radiation.lines[0];
	const bh_phase *phase = &scene->phases[list->phase];
	bool known = signal->rates_known &&
		     (phase->kind == BH_PHASE_ATOMS ||
		      (phase->kind == BH_PHASE_LIST && phase->corundum_ratio > 0));
	double most = 0;

	for (size_t i = 0; i < count; i++) {
		bh_reflection *r = &list[i];

		r->rate_known = known;
		if (!bh_bragg_two_theta_deg(&r->two_theta_deg, r->d_A,
					    first->wavelength_A))
			continue;
		r->in_range = r->two_theta_deg >= scene->request->two_theta_min_deg &&
			      r->two_theta_deg <= scene->request->two_theta_max_deg;
		r->fwhm_deg = bh_profile_line(instrument, phase, first->wavelength_A,
					      r->two_theta_deg)
				      .fwhm_deg;
		r->relative = pure_rate(signal, scene, r, 0, r->two_theta_deg);
		r->rate_cps_deg = known ? r->relative * phase->share_frac : 0;
		if (r->two_theta_deg >= instrument->two_theta_min_deg &&
		    r->two_theta_deg <= instrument->two_theta_max_deg)
			most = fmax(most, r->relative);
	}
	for (size_t i = 0; i < count; i++)
		list[i].relative = most > 0 ? 100 * list[i].relative / most : 0;
}

/* In range first, the order kept otherwise. */
static void in_range_first(bh_signal *signal, bh_reflection *sorted)
{
	size_t n = 0;

	for (int pass = 0; pass < 2; pass++) {
		for (size_t i = 0; i < signal->reflection_count; i++)
			if (signal->reflections[i].in_range == (pass == 0))
				sorted[n++] = signal->reflections[i];
		if (pass == 0)
			signal->in_range_count = n;
	}
	signal->reflections = sorted;
}

static int by_two_theta(const void *a, const void *b)
{
	const bh_peak *p = a, *q = b;

	if (p->two_theta_deg < q->two_theta_deg || p->two_theta_deg > q->two_theta_deg)
		return p->two_theta_deg < q->two_theta_deg ? -1 : 1;
	if (p->reflection != q->reflection)
		return p->reflection < q->reflection ? -1 : 1;
	return p->line < q->line ? -1 : p->line > q->line;
}

static bool peaks_of(bh_signal *signal, bh_arena *arena, const bh_scene *scene,
		     bh_err *err)
{
	/* a little beyond the arms' reach: tails come in from there */
	double low_deg = scene->instrument->two_theta_min_deg - 1;
	double high_deg = scene->instrument->two_theta_max_deg + 1;
	const bh_radiation *radiation = &signal->radiation;
	double least =
		1e-9 * radiation->lines[0].flux_s * radiation->lines[0].detected_frac;

	signal->peaks =
		bh_new(arena, bh_peak, signal->reflection_count * radiation->count);
	if (!signal->peaks)
		return bh_fail_memory(err);
	for (size_t i = 0; i < signal->reflection_count; i++) {
		const bh_reflection *r = &signal->reflections[i];
		const bh_phase *phase = &scene->phases[r->phase];

		for (size_t k = 0; k < radiation->count; k++) {
			const bh_line *line = &radiation->lines[k];
			bh_profile profile;
			double at_deg;

			if (line->flux_s * line->detected_frac < least ||
			    !bh_bragg_two_theta_deg(&at_deg, r->d_A,
						    line->wavelength_A) ||
			    at_deg < low_deg || at_deg > high_deg)
				continue;
			profile = bh_profile_line(scene->instrument, phase,
						  line->wavelength_A, at_deg);
			signal->peaks[signal->peak_count++] =
				(bh_peak){ i,
					   k,
					   at_deg,
					   profile.fwhm_deg,
					   profile.eta,
					   r->rate_known
						   ? phase->share_frac *
							     pure_rate(signal, scene, r,
								       k, at_deg)
						   : 0 };
		}
	}
	qsort(signal->peaks, signal->peak_count, sizeof *signal->peaks, by_two_theta);
	return true;
}

bool bh_reflect(bh_signal *signal, bh_arena *arena, const bh_scene *scene, bh_err *err)
{
	const bh_radiation *radiation = &signal->radiation;
	double shortest_A = radiation->lines[0].wavelength_A, least_d_A;
	bh_reflection *list, *sorted;

	for (size_t k = 0; k < radiation->count; k++)
		shortest_A = fmin(shortest_A, radiation->lines[k].wavelength_A);
	least_d_A = bh_bragg_d_A(scene->instrument->two_theta_max_deg, shortest_A);
	for (size_t i = 0; i < scene->phase_count; i++) {
		const bh_phase *phase = &scene->phases[i];
		size_t count, old = signal->reflection_count;
		bool done = bh_reflect_planes(
			&list, &count, arena,
			&(bh_reflect_query){ phase, i, least_d_A, radiation,
					     scene->request->without },
			err);

		if (done && phase->kind == BH_PHASE_LIST &&
			 phase->corundum_ratio > 0)
			done = fill_list(list, phase, arena, err);
		if (!done)
			return false;
		if (count)
			fill_rates(signal, scene, list, count);
		signal->reflections = bh_grow(arena, signal->reflections, bh_reflection,
					      old, old + count);
		if (!signal->reflections)
			return bh_fail_memory(err);
		if (count)
			memcpy(signal->reflections + old, list, count * sizeof *list);
		signal->reflection_count = old + count;
	}
	sorted = bh_new(arena, bh_reflection, signal->reflection_count);
	if (!sorted)
		return bh_fail_memory(err);
	in_range_first(signal, sorted);
	return peaks_of(signal, arena, scene, err);
}
