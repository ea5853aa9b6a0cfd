#include "physics/structure.h"

#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

#include "base/units.h"
#include "physics/cell.h"
#include "physics/formula.h"
#include "physics/symmetry.h"
#include "physics/xray.h"

/* A third printed as 0.33 puts images up to 0.06 Å apart in a cell of 10 Å; split sites of
 * disorder are reported from 0.1 Å on. */
static const double same_place_A = 0.06;

/* Sites of one composition: how many atoms of each element are in the cell. */
static void count_atoms(double atoms[BH_Z_MAX + 1], const bh_phase *phase)
{
	memset(atoms, 0, sizeof *atoms * (BH_Z_MAX + 1));
	for (size_t i = 0; i < phase->site_count; i++)
		atoms[phase->sites[i].z] +=
			phase->sites[i].multiplicity * phase->sites[i].occupancy;
}

/* Within 1 % of a whole number other than 0. */
static bool is_whole(double n)
{
	return n > 0.5 && fabs(n - round(n)) < 0.01;
}

/* The largest number of formulas that leaves whole atoms of every element; 0: none does. */
static int whole_units(const double atoms[BH_Z_MAX + 1])
{
	double fewest = HUGE_VAL;

	for (int z = 1; z <= BH_Z_MAX; z++)
		if (atoms[z] > 0)
			fewest = fmin(fewest, atoms[z]);
	for (int units = fewest < 1e4 ? (int)round(fewest) : 0; units > 0; units--) {
		bool whole = true;

		for (int z = 1; z <= BH_Z_MAX && whole; z++)
			whole = atoms[z] <= 0 || is_whole(atoms[z] / units);
		if (whole)
			return units;
	}
	return 0;
}

/* With shared or partly filled sites: what the numbers of places have in common. */
static int common_places(const bh_phase *phase)
{
	int common = 0;

	for (size_t i = 0; i < phase->site_count; i++) {
		int a = common, b = phase->sites[i].multiplicity;

		while (b) {
			int rest = a % b;

			a = b;
			b = rest;
		}
		common = a;
	}
	return common;
}

static void add_symbol(char *formula, size_t room, int z, double n)
{
	size_t used = strlen(formula);

	if (fabs(n - 1) < 0.01)
		snprintf(formula + used, room - used, "%s", bh_xray_symbol(z));
	else if (is_whole(n))
		snprintf(formula + used, room - used, "%s%.0f", bh_xray_symbol(z),
			 round(n));
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
	int units;

	phase->volume_A3 = bh_cell_volume_A3(&phase->cell);
	if (phase->site_count == 0)
		return true;
	for (size_t i = 0; i < phase->site_count; i++)
		phase->sites[i].multiplicity =
			(int)bh_symmetry_orbit(&phase->group, &phase->cell,
					       phase->sites[i].at, same_place_A, images);
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
	units = whole_units(atoms);
	phase->formula_units = units ? units : common_places(phase);
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

/* How full the surroundings of a site are, and who stands nearest. */
typedef struct {
	double occupancy;
	double nearest_A;
	size_t other;
} crowd;

/* Images of one site, and how near is too near. */
typedef struct {
	bh_mat3 metric;
	double spacing_A[3]; /* of the planes 1 0 0, 0 1 0, 0 0 1 */
	double images[BH_MAX_IMAGES][3];
	size_t count;
	double within_A;
} neighbours;

/* Points apart by more than within_A along one axis, counted in its planes. */
static bool far_apart(const neighbours *n, const double a[3], const double b[3])
{
	for (int j = 0; j < 3; j++) {
		double x = a[j] - b[j];

		if (fabs(x - round(x)) * n->spacing_A[j] >= n->within_A)
			return true;
	}
	return false;
}

/* Add the images of site j to the surroundings of site i. */
static void add_images(crowd *c, const bh_phase *phase, size_t i, size_t j,
		       const neighbours *n)
{
	for (size_t k = 0; k < n->count; k++) {
		const double *at = phase->sites[i].at;
		double d_A = far_apart(n, at, n->images[k])
				     ? HUGE_VAL
				     : distance_A(&n->metric, at, n->images[k]);

		if (d_A >= n->within_A)
			continue;
		c->occupancy += phase->sites[j].occupancy;
		if ((i != j || d_A >= same_place_A) && d_A < c->nearest_A) {
			c->nearest_A = d_A;
			c->other = j;
		}
	}
}

static bool crowded(const bh_phase *phase, crowd *crowds, double within_A, size_t *i)
{
	neighbours n = { .metric = bh_cell_metric(&phase->cell), .within_A = within_A };
	bh_mat3 reciprocal;

	if (!bh_cell_reciprocal(&reciprocal, &phase->cell))
		return false;
	for (int j = 0; j < 3; j++)
		n.spacing_A[j] = 1 / sqrt(reciprocal.at[j][j]);
	for (*i = 0; *i < phase->site_count; ++*i)
		crowds[*i] = (crowd){ 0, HUGE_VAL, *i };
	for (size_t j = 0; j < phase->site_count; j++) {
		n.count = bh_symmetry_orbit(&phase->group, &phase->cell,
					    phase->sites[j].at, same_place_A, n.images);
		for (*i = 0; *i < phase->site_count; ++*i)
			add_images(&crowds[*i], phase, *i, j, &n);
	}
	/* occupancies are printed with three decimals: 0.334 three times */
	for (*i = 0; *i < phase->site_count; ++*i)
		if (crowds[*i].occupancy > 1.0025 && crowds[*i].nearest_A < within_A)
			return true;
	return false;
}

bool bh_structure_clash(const bh_phase *phase, double within_A, size_t *i, size_t *j,
			double *distance)
{
	bh_arena *arena = bh_arena_new();
	crowd *crowds = arena ? bh_new(arena, crowd, phase->site_count) : NULL;
	bool found = crowds && crowded(phase, crowds, within_A, i);

	if (found) {
		*j = crowds[*i].other;
		*distance = crowds[*i].nearest_A;
	}
	bh_arena_free(arena);
	return found;
}

/* All atoms of the cell, site by site, and exp(2πi n x) of each along each axis for every
 * index n that the planes have: products of three replace a sine and a cosine an atom. */
typedef struct {
	double re, im;
} wave;

typedef struct {
	const bh_phase *phase;
	size_t *first;	/* atom of each site, and one past the last */
	wave *waves[3]; /* by atom · (2 most + 1) + most + index     */
	int most[3];
} atoms_list;

static bool place(atoms_list *list, bh_arena *arena, const bh_phase *phase,
		  double (**at)[3])
{
	size_t n = 0;

	*at = bh_arena_take(arena, phase->site_count * phase->group.op_count,
			    sizeof **at);
	list->first = bh_new(arena, size_t, phase->site_count + 1);
	if (!*at || !list->first)
		return false;
	for (size_t i = 0; i < phase->site_count; i++) {
		double images[BH_MAX_IMAGES][3];
		size_t count =
			bh_symmetry_orbit(&phase->group, &phase->cell, phase->sites[i].at,
					  same_place_A, images);

		list->first[i] = n;
		memcpy(*at + n, images, count * sizeof *images);
		n += count;
	}
	list->first[phase->site_count] = n;
	return true;
}

static bool make_waves(atoms_list *list, bh_arena *arena, double (*at)[3])
{
	size_t atoms = list->first[list->phase->site_count];

	for (int axis = 0; axis < 3; axis++) {
		int most = list->most[axis];
		size_t stride = 2 * (size_t)most + 1;

		list->waves[axis] = bh_new(arena, wave, atoms * stride);
		if (!list->waves[axis])
			return false;
		for (size_t k = 0; k < atoms; k++)
			for (int n = -most; n <= most; n++) {
				double turn = 2 * BH_PI * n * at[k][axis];

				list->waves[axis][k * stride + (size_t)(most + n)] =
					(wave){ cos(turn), sin(turn) };
			}
	}
	return true;
}

static bool expand(atoms_list *list, bh_arena *arena, const bh_phase *phase,
		   const int (*h)[3], size_t planes)
{
	double(*at)[3];

	for (size_t i = 0; i < planes; i++)
		for (int j = 0; j < 3; j++)
			list->most[j] = abs(h[i][j]) > list->most[j] ? abs(h[i][j])
								     : list->most[j];
	return place(list, arena, phase, &at) && make_waves(list, arena, at);
}

/* Σ exp(2πi h·x) over a site's atoms. */
static wave geometric(const atoms_list *list, size_t site, const int h[3])
{
	wave sum = { 0, 0 };
	size_t stride[3], offset[3];

	for (int j = 0; j < 3; j++) {
		stride[j] = 2 * (size_t)list->most[j] + 1;
		offset[j] = (size_t)(list->most[j] + h[j]);
	}
	for (size_t k = list->first[site]; k < list->first[site + 1]; k++) {
		wave a = list->waves[0][k * stride[0] + offset[0]];
		wave b = list->waves[1][k * stride[1] + offset[1]];
		wave c = list->waves[2][k * stride[2] + offset[2]];
		wave ab = { a.re * b.re - a.im * b.im, a.re * b.im + a.im * b.re };

		sum.re += ab.re * c.re - ab.im * c.im;
		sum.im += ab.re * c.im + ab.im * c.re;
	}
	return sum;
}

/* f' and f'' of every element at every energy. */
typedef struct {
	double *real, *imaginary; /* z · energies + energy */
} dispersion;

static bool disperse(dispersion *d, bh_arena *arena, const bh_phase *phase,
		     const double *energy_keV, size_t energies, bh_without without)
{
	bool done[BH_Z_MAX + 1] = { false };

	d->real = bh_new(arena, double, (BH_Z_MAX + 1) * energies);
	d->imaginary = bh_new(arena, double, (BH_Z_MAX + 1) * energies);
	if (!d->real || !d->imaginary)
		return false;
	for (size_t i = 0; i < phase->site_count && !without.anomalous; i++) {
		int z = phase->sites[i].z;

		for (size_t k = 0; k < energies && !done[z]; k++) {
			d->real[(size_t)z * energies + k] =
				bh_xray_f_prime(z, energy_keV[k]);
			d->imaginary[(size_t)z * energies + k] =
				bh_xray_f_double_prime(z, energy_keV[k]);
		}
		done[z] = true;
	}
	return true;
}

/* Of one plane, by element: Σ occupancy exp(−B s²) Σ exp(2πi h·x). */
static void element_sums(wave sums[BH_Z_MAX + 1], const atoms_list *list, const int h[3],
			 double s_inv_A)
{
	memset(sums, 0, sizeof *sums * (BH_Z_MAX + 1));
	for (size_t i = 0; i < list->phase->site_count; i++) {
		const bh_site *site = &list->phase->sites[i];
		double weight =
			site->occupancy * exp(-site->b_iso_A2 * s_inv_A * s_inv_A);
		wave g = geometric(list, i, h);

		sums[site->z].re += weight * g.re;
		sums[site->z].im += weight * g.im;
	}
}

/* |F|² of one plane at every energy. F(h) and F(−h) differ in the sign of the phase only, so
 * the mean of their squares is |Σ (f0 + f') G|² + |Σ f'' G|², G by element. */
static void plane_f2(double *f2, const wave sums[BH_Z_MAX + 1], const dispersion *d,
		     double s_inv_A, size_t energies)
{
	double f0[BH_Z_MAX + 1];

	for (int z = 1; z <= BH_Z_MAX; z++)
		f0[z] = sums[z].re != 0 || sums[z].im != 0 ? bh_xray_f0(z, s_inv_A) : 0;
	for (size_t k = 0; k < energies; k++) {
		wave a = { 0, 0 }, b = { 0, 0 };

		for (int z = 1; z <= BH_Z_MAX; z++) {
			double real = f0[z] + d->real[(size_t)z * energies + k];
			double imaginary = d->imaginary[(size_t)z * energies + k];

			a.re += real * sums[z].re;
			a.im += real * sums[z].im;
			b.re += imaginary * sums[z].re;
			b.im += imaginary * sums[z].im;
		}
		f2[k] = a.re * a.re + a.im * a.im + b.re * b.re + b.im * b.im;
	}
}

bool bh_structure_f2_table(double *f2, bh_arena *arena, const bh_phase *phase,
			   const bh_f2_query *query, bh_err *err)
{
	atoms_list list = { .phase = phase };
	wave sums[BH_Z_MAX + 1];
	dispersion d;

	if (!expand(&list, arena, phase, query->h, query->planes) ||
	    !disperse(&d, arena, phase, query->energy_keV, query->energies,
		      query->without))
		return bh_fail_memory(err);
	for (size_t i = 0; i < query->planes; i++) {
		double s_inv_A = 1 / (2 * query->d_A[i]);

		element_sums(sums, &list, query->h[i], s_inv_A);
		plane_f2(f2 + i * query->energies, sums, &d, s_inv_A, query->energies);
	}
	return true;
}

double bh_structure_f2(const bh_phase *phase, const int h[3], double d_A,
		       double energy_keV, bh_without without)
{
	bh_arena *arena = bh_arena_new();
	bh_err err = { BH_OK, 0, 0, "", "", "" };
	double f2 = 0;
	int plane[1][3] = { { h[0], h[1], h[2] } };
	bh_f2_query query = { (const int(*)[3])plane, &d_A, 1, &energy_keV, 1, without };

	if (arena)
		bh_structure_f2_table(&f2, arena, phase, &query, &err);
	bh_arena_free(arena);
	return f2;
}
