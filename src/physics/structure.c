#include "physics/structure.h"

#include <math.h>
#include <stdio.h>
#include <string.h>

#include "base/units.h"
#include "physics/cell.h"
#include "physics/formula.h"
#include "physics/symmetry.h"
#include "physics/xray.h"

/* Coordinates are printed with three to five decimals: images of a point on a special
 * position fall this far apart at most, while no two atoms come nearer. */
static const double same_place_A = 0.15;

/* Sites of one composition: how many atoms of each element are in the cell. */
static void count_atoms(double atoms[BH_Z_MAX + 1], const bh_phase *phase)
{
	memset(atoms, 0, sizeof *atoms * (BH_Z_MAX + 1));
	for (size_t i = 0; i < phase->site_count; i++)
		atoms[phase->sites[i].z] +=
			phase->sites[i].multiplicity * phase->sites[i].occupancy;
}

/* The largest number of formulas that leaves whole atoms (to 1 %); 1 when none does. */
static double units_of(const double atoms[BH_Z_MAX + 1])
{
	for (int units = 96; units > 1; units--) {
		bool whole = true;

		for (int z = 1; z <= BH_Z_MAX && whole; z++) {
			double n = atoms[z] / units;

			whole = atoms[z] <= 0 || (n > 0.99 && fabs(n - round(n)) < 0.01);
		}
		if (whole)
			return units;
	}
	return 1;
}

static void add_symbol(char *formula, size_t room, int z, double n)
{
	size_t used = strlen(formula);

	if (fabs(n - 1) < 0.005)
		snprintf(formula + used, room - used, "%s", bh_xray_symbol(z));
	else if (fabs(n - round(n)) < 0.01)
		snprintf(formula + used, room - used, "%s%.0f", bh_xray_symbol(z), round(n));
	else
		snprintf(formula + used, room - used, "%s%.3g", bh_xray_symbol(z), n);
}

/* "Fe2O3": elements in the order of their first site, hydrogen last. */
static void write_formula(bh_phase *phase, const double atoms[BH_Z_MAX + 1])
{
	bool done[BH_Z_MAX + 1] = { false };

	phase->formula[0] = '\0';
	for (size_t i = 0; i < phase->site_count; i++) {
		int z = phase->sites[i].z;

		if (!done[z] && z != 1)
			add_symbol(phase->formula, sizeof phase->formula, z,
				   atoms[z] / phase->formula_units);
		done[z] = true;
	}
	if (atoms[1] > 0)
		add_symbol(phase->formula, sizeof phase->formula, 1,
			   atoms[1] / phase->formula_units);
}

bool bh_structure_resolve(bh_phase *phase, bh_arena *arena, bh_err *err)
{
	double images[BH_MAX_IMAGES][3], atoms[BH_Z_MAX + 1], mass_g = 0;
	bh_element_share *elements;
	size_t n = 0;

	phase->volume_A3 = bh_cell_volume_A3(&phase->cell);
	if (phase->site_count == 0)
		return true;
	for (size_t i = 0; i < phase->site_count; i++)
		phase->sites[i].multiplicity = (int)bh_symmetry_orbit(
			&phase->group, &phase->cell, phase->sites[i].at, same_place_A, images);
	count_atoms(atoms, phase);
	elements = bh_new(arena, bh_element_share, BH_Z_MAX);
	if (!elements)
		return bh_fail_memory(err);
	for (int z = 1; z <= BH_Z_MAX; z++)
		if (atoms[z] > 0) {
			double part_g = atoms[z] * bh_xray_molar_mass_g(z);

			elements[n++] = (bh_element_share){ z, part_g };
			mass_g += part_g;
		}
	phase->composition = (bh_composition){ elements, n };
	bh_formula_normalise(&phase->composition);
	phase->formula_units = units_of(atoms);
	write_formula(phase, atoms);
	if (phase->volume_A3 > 0)
		phase->density_g_cm3 = mass_g / BH_AVOGADRO_PER_MOL /
				       (phase->volume_A3 * pow(BH_CM_PER_A, 3));
	return true;
}

/* Nearest distance between a point and another's image in any neighbouring cell. */
static double distance_A(const bh_mat3 *metric, const double a[3], const double b[3])
{
	double best = HUGE_VAL;

	for (int i = -1; i <= 1; i++)
		for (int j = -1; j <= 1; j++)
			for (int k = -1; k <= 1; k++) {
				double x[3] = { a[0] - b[0], a[1] - b[1], a[2] - b[2] };

				for (int m = 0; m < 3; m++)
					x[m] -= round(x[m]);
				x[0] += i;
				x[1] += j;
				x[2] += k;
				best = fmin(best, bh_mat3_form(metric, x, x));
			}
	return sqrt(best);
}

/* Occupancies that share the place of site i. */
static double shared_occupancy(const bh_phase *phase, const bh_mat3 *metric, size_t i)
{
	double images[BH_MAX_IMAGES][3], sum = 0;

	for (size_t j = 0; j < phase->site_count; j++) {
		size_t count = bh_symmetry_orbit(&phase->group, &phase->cell, phase->sites[j].at,
						 same_place_A, images);

		for (size_t k = 0; k < count; k++)
			if (distance_A(metric, phase->sites[i].at, images[k]) < same_place_A)
				sum += phase->sites[j].occupancy;
	}
	return sum;
}

bool bh_structure_clash(const bh_phase *phase, double within_A, size_t *i, size_t *j,
			double *distance)
{
	double images[BH_MAX_IMAGES][3];
	bh_mat3 metric = bh_cell_metric(&phase->cell);

	for (*j = 0; *j < phase->site_count; ++*j) {
		size_t count = bh_symmetry_orbit(&phase->group, &phase->cell,
						 phase->sites[*j].at, same_place_A, images);

		for (*i = 0; *i <= *j; ++*i) {
			double both = phase->sites[*i].occupancy + phase->sites[*j].occupancy;

			for (size_t k = 0; k < count; k++) {
				*distance = distance_A(&metric, phase->sites[*i].at, images[k]);
				if (*distance >= within_A ||
				    (*i == *j && *distance < same_place_A))
					continue;
				/* partly filled sites may stand for disorder: not both at once */
				if (both > 1.001 ||
				    (*distance < same_place_A &&
				     shared_occupancy(phase, &metric, *i) > 1.001))
					return true;
			}
		}
	}
	return false;
}

/* All atoms of the cell, site by site. */
typedef struct {
	double (*at)[3];
	size_t *first; /* of each site, and one past the last */
	const bh_phase *phase;
} atoms_list;

static bool expand(atoms_list *list, bh_arena *arena, const bh_phase *phase)
{
	size_t n = 0;

	list->phase = phase;
	list->at = bh_arena_take(arena, phase->site_count * BH_MAX_IMAGES, sizeof *list->at);
	list->first = bh_new(arena, size_t, phase->site_count + 1);
	if (!list->at || !list->first)
		return false;
	for (size_t i = 0; i < phase->site_count; i++) {
		list->first[i] = n;
		n += bh_symmetry_orbit(&phase->group, &phase->cell, phase->sites[i].at,
				       same_place_A, list->at + n);
	}
	list->first[phase->site_count] = n;
	return true;
}

/* Σ exp(2πi h·x) over a site's atoms. */
static void geometric(double *re, double *im, const atoms_list *list, size_t site,
		      const int h[3])
{
	*re = *im = 0;
	for (size_t k = list->first[site]; k < list->first[site + 1]; k++) {
		double turn = 2 * BH_PI * (h[0] * list->at[k][0] + h[1] * list->at[k][1] +
					   h[2] * list->at[k][2]);

		*re += cos(turn);
		*im += sin(turn);
	}
}

enum { MOST_ENERGIES = 8 };

/* f' and f'' of every site at every energy. */
typedef struct {
	double *f1, *f2; /* site · energies + energy */
} dispersion;

static bool disperse(dispersion *d, bh_arena *arena, const bh_phase *phase,
		     const double *energy_keV, size_t energies, bh_without without)
{
	d->f1 = bh_new(arena, double, phase->site_count * energies);
	d->f2 = bh_new(arena, double, phase->site_count * energies);
	if (!d->f1 || !d->f2)
		return false;
	for (size_t i = 0; i < phase->site_count && !without.anomalous; i++)
		for (size_t k = 0; k < energies; k++) {
			int z = phase->sites[i].z;

			d->f1[i * energies + k] = bh_xray_f_prime(z, energy_keV[k]);
			d->f2[i * energies + k] = bh_xray_f_double_prime(z, energy_keV[k]);
		}
	return true;
}

/* |F|² of one plane at every energy. With A = Σ (f0 + f') g cos etc., F(h) and F(−h) differ
 * in the sign of the phase only, so the mean of the squares is
 * |Σ f1 G|² + |Σ f2 G|², f1 = f0 + f', both times occupancy and exp(−B s²). */
static void plane_f2(double *f2, const atoms_list *list, const dispersion *d, const int h[3],
		     double d_A, size_t energies)
{
	double s = 1 / (2 * d_A), sums[MOST_ENERGIES][4] = { { 0 } };

	for (size_t i = 0; i < list->phase->site_count; i++) {
		const bh_site *site = &list->phase->sites[i];
		double weight = site->occupancy * exp(-site->b_iso_A2 * s * s);
		double f0 = bh_xray_f0(site->z, s), re, im;

		geometric(&re, &im, list, i, h);
		for (size_t k = 0; k < energies; k++) {
			double real = weight * (f0 + d->f1[i * energies + k]);
			double imaginary = weight * d->f2[i * energies + k];

			sums[k][0] += real * re;
			sums[k][1] += real * im;
			sums[k][2] += imaginary * re;
			sums[k][3] += imaginary * im;
		}
	}
	for (size_t k = 0; k < energies; k++)
		f2[k] = sums[k][0] * sums[k][0] + sums[k][1] * sums[k][1] +
			sums[k][2] * sums[k][2] + sums[k][3] * sums[k][3];
}

bool bh_structure_f2_table(double *f2, bh_arena *arena, const bh_phase *phase,
			   const int (*h)[3], const double *d_A, size_t planes,
			   const double *energy_keV, size_t energies, bh_without without,
			   bh_err *err)
{
	atoms_list list;
	dispersion d;

	if (!expand(&list, arena, phase) ||
	    !disperse(&d, arena, phase, energy_keV, energies, without))
		return bh_fail_memory(err);
	for (size_t i = 0; i < planes; i++)
		plane_f2(f2 + i * energies, &list, &d, h[i], d_A[i], energies);
	return true;
}

double bh_structure_f2(const bh_phase *phase, const int h[3], double d_A, double energy_keV,
		       bh_without without)
{
	bh_arena *arena = bh_arena_new();
	bh_err err = { BH_OK, 0, 0, "", "", "" };
	double f2 = 0;
	int plane[1][3] = { { h[0], h[1], h[2] } };

	if (arena)
		bh_structure_f2_table(&f2, arena, phase, (const int(*)[3])plane, &d_A, 1,
				      &energy_keV, 1, without, &err);
	bh_arena_free(arena);
	return f2;
}
