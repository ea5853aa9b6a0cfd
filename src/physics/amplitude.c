#include "physics/amplitude.h"

#include <assert.h>
#include <math.h>
#include <stdlib.h>
#include <string.h>

#include "base/units.h"
#include "physics/cell.h"
#include "physics/symmetry.h"
#include "physics/waves.h"
#include "physics/xray.h"

double bh_amplitude_f0(const bh_form_factor *row, double s_inv_A)
{
	double s2 = s_inv_A * s_inv_A, f0 = row->c;

	for (int i = 0; i < 5; i++)
		f0 += row->a[i] * exp(-row->b_A2[i] * s2);
	return f0;
}

const bh_form_factor *bh_amplitude_form(int z, int charge)
{
	const bh_form_factor *row = bh_form_factor_find(z, charge);

	return row ? row : bh_form_factor_find(z, 0);
}

/* The operations that are left when lattice vectors and the inversion are taken out, with the
 * origin in the inversion. */
typedef struct {
	const bh_space_group *group;
	bh_symop *ops;
	size_t count;
	double (*vectors)[3]; /* of the lattice, 0 0 0 first */
	size_t vector_count;
	double origin[3];
} half_group;

static bool same_rotation(const bh_symop *a, const bh_symop *b, int sign)
{
	for (int i = 0; i < 3; i++)
		for (int j = 0; j < 3; j++)
			if (a->rotation[i][j] != sign * b->rotation[i][j])
				return false;
	return true;
}

static bool is_known(const half_group *half, const bh_symop *op)
{
	for (size_t i = 0; i < half->count; i++)
		if (same_rotation(op, &half->ops[i], 1) ||
		    (half->group->centrosymmetric &&
		     same_rotation(op, &half->ops[i], -1)))
			return true;
	return false;
}

static bool halve(half_group *half, bh_arena *arena, const bh_space_group *group)
{
	static const bh_symop one = { { { 1, 0, 0 }, { 0, 1, 0 }, { 0, 0, 1 } },
				      { 0 } };

	*half = (half_group){ .group = group };
	half->ops = bh_new(arena, bh_symop, group->op_count);
	half->vectors = bh_arena_take(arena, group->op_count, sizeof *half->vectors);
	if (!half->ops || !half->vectors)
		return false;
	for (size_t i = 0; i < group->op_count; i++) {
		const bh_symop *op = &group->ops[i];

		if (same_rotation(op, &one, 1))
			memcpy(half->vectors[half->vector_count++], op->shift,
			       sizeof op->shift);
		if (same_rotation(op, &one, -1))
			for (int j = 0; j < 3; j++)
				half->origin[j] = op->shift[j] / 2;
		if (!is_known(half, op))
			half->ops[half->count++] = *op;
	}
	return true;
}

static double fraction(double x)
{
	return x - round(x);
}

/* Whether two points are one, lattice vectors apart. Points on special positions are exact:
 * 1e-5 of an edge tells rounding from distance. */
static bool are_one(const half_group *half, const double a[3], const double b[3],
		    double sign)
{
	for (size_t v = 0; v < half->vector_count; v++) {
		bool same = true;

		for (int j = 0; j < 3 && same; j++)
			same = fabs(fraction(a[j] - sign * b[j] - half->vectors[v][j])) <
			       1e-5;
		if (same)
			return true;
	}
	return false;
}

/* R β Rᵀ: a tensor at the image of its atom. */
static void turn_tensor(double to[6], const double beta[6], const bh_symop *op)
{
	static const int at[6][2] = { { 0, 0 }, { 1, 1 }, { 2, 2 },
				      { 0, 1 }, { 0, 2 }, { 1, 2 } };
	const double full[3][3] = { { beta[0], beta[3], beta[4] },
				    { beta[3], beta[1], beta[5] },
				    { beta[4], beta[5], beta[2] } };

	for (int n = 0; n < 6; n++) {
		to[n] = 0;
		for (int i = 0; i < 3; i++)
			for (int j = 0; j < 3; j++)
				to[n] += op->rotation[at[n][0]][i] * full[i][j] *
					 op->rotation[at[n][1]][j];
	}
}

/* exp(−B s²) as a tensor: β = B/4 G*. */
static void isotropic(double beta[6], double b_A2, const bh_mat3 *reciprocal)
{
	static const int at[6][2] = { { 0, 0 }, { 1, 1 }, { 2, 2 },
				      { 0, 1 }, { 0, 2 }, { 1, 2 } };

	for (int n = 0; n < 6; n++)
		beta[n] = b_A2 / 4 * reciprocal->at[at[n][0]][at[n][1]];
}

/* A site ready to be spread: where it stands exactly, how many operations leave it there, and
 * its tensor, the mean over these. */
typedef struct {
	double at[3], beta[6];
	size_t staying;
} spot;

static void image_of(double to[3], const bh_symop *op, const double at[3])
{
	for (int j = 0; j < 3; j++)
		to[j] = op->rotation[j][0] * at[0] + op->rotation[j][1] * at[1] +
			op->rotation[j][2] * at[2] + op->shift[j];
}

static void settle(spot *s, const bh_phase *phase, const bh_site *site,
		   const bh_mat3 *reciprocal, bh_without without)
{
	double given[6], turned[6];
	bool tensor = site->tensor_known && !without.anisotropy;
	double b = without.anisotropy && !site->b_known ? 0 : site->b_iso_A2;

	*s = (spot){ .staying = 0 };
	bh_symmetry_settle(s->at, &phase->group, &phase->cell, site->at, site->reach_A);
	if (tensor)
		memcpy(given, site->beta, sizeof given);
	else
		isotropic(s->beta, b, reciprocal);
	for (size_t i = 0; i < phase->group.op_count; i++) {
		const bh_symop *op = &phase->group.ops[i];
		double image[3];

		image_of(image, op, s->at);
		if (!(fabs(fraction(image[0] - s->at[0])) < 1e-5 &&
		      fabs(fraction(image[1] - s->at[1])) < 1e-5 &&
		      fabs(fraction(image[2] - s->at[2])) < 1e-5))
			continue;
		s->staying++;
		if (tensor)
			turn_tensor(turned, given, op);
		for (int n = 0; tensor && n < 6; n++)
			s->beta[n] += turned[n];
	}
	for (int n = 0; tensor && n < 6; n++)
		s->beta[n] /= (double)s->staying;
}

/* All points to sum over, by scatterer. */
typedef struct {
	double *at[3], *weight, *beta[6];
	size_t count, room;
	size_t *group; /* first point of each scatterer, and count */
	const bh_form_factor **forms;
	size_t forms_count;
} crowd;

static bool take_room(crowd *c, bh_arena *arena, size_t sites, size_t each)
{
	/* each scatterer may leave its last lanes empty */
	c->room = sites * (each + BH_LANES);
	for (int j = 0; j < 3; j++)
		c->at[j] = bh_new(arena, double, c->room);
	for (int n = 0; n < 6; n++)
		c->beta[n] = bh_new(arena, double, c->room);
	c->weight = bh_new(arena, double, c->room);
	c->group = bh_new(arena, size_t, sites + 1);
	c->forms = bh_arena_take(arena, sites, sizeof *c->forms);
	return c->beta[5] && c->weight && c->group && c->forms && c->at[0] && c->at[1] &&
	       c->at[2] && c->beta[0] && c->beta[1] && c->beta[2] && c->beta[3] &&
	       c->beta[4];
}

/* The images of a site that lattice and inversion do not repeat. */
static void spread(crowd *c, const half_group *half, const spot *s, double occupancy)
{
	bool centric = half->group->centrosymmetric;
	double each = occupancy * (double)half->vector_count * (centric ? 2 : 1) /
		      (double)s->staying;
	size_t first = c->count;

	for (size_t i = 0; i < half->count; i++) {
		double image[3], beta[6];
		bool seen = false;

		image_of(image, &half->ops[i], s->at);
		for (int j = 0; j < 3; j++)
			image[j] -= half->origin[j];
		for (size_t k = first; k < c->count && !seen && s->staying > 1; k++) {
			const double other[3] = { c->at[0][k], c->at[1][k], c->at[2][k] };

			seen = are_one(half, image, other, 1) ||
			       (centric && are_one(half, image, other, -1));
			if (seen)
				c->weight[k] += each;
		}
		if (seen)
			continue;
		turn_tensor(beta, s->beta, &half->ops[i]);
		for (int j = 0; j < 3; j++)
			c->at[j][c->count] = image[j];
		for (int n = 0; n < 6; n++)
			c->beta[n][c->count] = beta[n];
		c->weight[c->count++] = each;
	}
}

static const bh_form_factor *form_of(const bh_site *site, bh_without without)
{
	return bh_amplitude_form(site->z, without.charges ? 0 : site->charge);
}

/* The scatterers of a phase, each once, in order of their first site; by_form: number of
 * each site's. */
static bool list_forms(crowd *c, size_t **by_form, bh_arena *arena, const bh_phase *phase,
		       bh_without without)
{
	*by_form = bh_new(arena, size_t, phase->site_count);
	if (!*by_form)
		return false;
	for (size_t i = 0; i < phase->site_count; i++) {
		const bh_form_factor *form = form_of(&phase->sites[i], without);
		size_t n = 0;

		while (n < c->forms_count && c->forms[n] != form)
			n++;
		if (n == c->forms_count)
			c->forms[c->forms_count++] = form;
		(*by_form)[i] = n;
	}
	return true;
}

static bool gather(crowd *c, bh_arena *arena, const bh_phase *phase,
		   const half_group *half, bh_without without)
{
	bh_mat3 reciprocal = { { { 0 } } };
	size_t *by_form;

	*c = (crowd){ .count = 0 };
	bh_cell_reciprocal(&reciprocal, &phase->cell);
	if (!take_room(c, arena, phase->site_count, half->count) ||
	    !list_forms(c, &by_form, arena, phase, without))
		return false;
	for (size_t n = 0; n < c->forms_count; n++) {
		c->group[n] = c->count;
		for (size_t i = 0; i < phase->site_count; i++) {
			spot s;

			if (by_form[i] != n)
				continue;
			settle(&s, phase, &phase->sites[i], &reciprocal, without);
			spread(c, half, &s, phase->sites[i].occupancy);
		}
		c->count += (BH_LANES - c->count % BH_LANES) % BH_LANES;
	}
	c->group[c->forms_count] = c->count;
	return true;
}

/* f' and f'' of every scatterer at every energy. */
typedef struct {
	double *real, *imaginary; /* form · energies + energy */
} dispersion;

static bool disperse(dispersion *d, bh_arena *arena, const crowd *c,
		     const bh_f2_query *query)
{
	size_t n = c->forms_count * query->energies;

	d->real = bh_new(arena, double, n);
	d->imaginary = bh_new(arena, double, n);
	if (!d->real || !d->imaginary)
		return false;
	for (size_t i = 0; i < n && !query->without.anomalous; i++) {
		int z = c->forms[i / query->energies]->z;
		double energy_keV = query->energy_keV[i % query->energies];

		d->real[i] = bh_xray_f_prime(z, energy_keV);
		d->imaginary[i] = bh_xray_f_double_prime(z, energy_keV);
	}
	return true;
}

/* The planes in order of h, k, l, cut into rows and these into planes of one h. */
typedef struct {
	size_t *order;
	int *l; /* in that order */
	bh_wave_row *rows;
	size_t *row_first; /* place of each row's first plane in the order */
	size_t row_count;
	size_t *sheet_first; /* first row of each h, and row_count */
	size_t sheet_count;
} rows_of_planes;

/* One pass of a sort by counting: the order by one index, what was equal stays in order. */
static bool sort_by(rows_of_planes *r, bh_arena *arena, const bh_f2_query *query, int axis)
{
	int least = query->h[0][axis], most = least;
	size_t *place, *sorted = bh_new(arena, size_t, query->planes);

	for (size_t i = 0; i < query->planes; i++) {
		least = query->h[i][axis] < least ? query->h[i][axis] : least;
		most = query->h[i][axis] > most ? query->h[i][axis] : most;
	}
	place = bh_new(arena, size_t, (size_t)(most - least) + 2);
	if (!place || !sorted)
		return false;
	for (size_t i = 0; i < query->planes; i++)
		place[query->h[i][axis] - least + 1]++;
	for (int i = 0; i <= most - least; i++)
		place[i + 1] += place[i];
	for (size_t i = 0; i < query->planes; i++) {
		size_t n = r->order[i];

		sorted[place[query->h[n][axis] - least]++] = n;
	}
	r->order = sorted;
	return true;
}

static bool cut_rows(rows_of_planes *r, bh_arena *arena, const bh_f2_query *query)
{
	size_t n = query->planes;

	r->order = bh_new(arena, size_t, n);
	r->l = bh_new(arena, int, n);
	r->rows = bh_new(arena, bh_wave_row, n);
	r->row_first = bh_new(arena, size_t, n);
	r->sheet_first = bh_new(arena, size_t, n + 1);
	if (!r->order || !r->l || !r->rows || !r->row_first || !r->sheet_first)
		return false;
	for (size_t i = 0; i < n; i++)
		r->order[i] = i;
	for (int axis = 2; axis >= 0; axis--)
		if (!sort_by(r, arena, query, axis))
			return false;
	for (size_t i = 0; i < n; i++) {
		const int *h = query->h[r->order[i]];
		const int *before = i ? query->h[r->order[i - 1]] : NULL;

		r->l[i] = h[2];
		if (!before || before[0] != h[0])
			r->sheet_first[r->sheet_count++] = r->row_count;
		if (!before || before[0] != h[0] || before[1] != h[1]) {
			r->row_first[r->row_count] = i;
			r->rows[r->row_count++] = (bh_wave_row){ h[1], r->l + i, 0 };
		}
		r->rows[r->row_count - 1].count++;
	}
	r->sheet_first[r->sheet_count] = r->row_count;
	return true;
}

/* What the taker of one h needs to finish |F|². */
typedef struct {
	double *f2;
	const bh_f2_query *query;
	const crowd *points;
	const half_group *half;
	const dispersion *anomalous;
	const rows_of_planes *rows;
	size_t first_row;
} finisher;

/* Planes that the centring extinguishes: the sums know of one lattice point only. */
static bool between_planes(const half_group *half, const int h[3])
{
	for (size_t v = 0; v < half->vector_count; v++) {
		const double *t = half->vectors[v];

		if (fabs(fraction(h[0] * t[0] + h[1] * t[1] + h[2] * t[2])) > 1e-3)
			return true;
	}
	return false;
}

/* |F|² from the sums G of each scatterer. F(h) and F(−h) differ in the sign of the phase only,
 * so the mean of their squares is |Σ (f0 + f') G|² + |Σ f'' G|². */
static void finish_plane(const finisher *f, size_t plane, const double *re,
			 const double *im, size_t stride)
{
	/* real and imaginary part of both sums, at each energy */
	double sum[4][BH_F2_ENERGIES] = { { 0 } };
	size_t energies = f->query->energies;
	double s_inv_A = 1 / (2 * f->query->d_A[plane]);
	double *f2 = f->f2 + plane * energies;
	bool dark = between_planes(f->half, f->query->h[plane]);

	for (size_t n = 0; n < f->points->forms_count && !dark; n++) {
		const double *f1 = f->anomalous->real + n * energies;
		const double *f11 = f->anomalous->imaginary + n * energies;
		double f0 = bh_amplitude_f0(f->points->forms[n], s_inv_A);
		double g_re = re[n * stride];
		double g_im = f->half->group->centrosymmetric ? 0 : im[n * stride];

		for (size_t k = 0; k < energies; k++) {
			sum[0][k] += (f0 + f1[k]) * g_re;
			sum[1][k] += (f0 + f1[k]) * g_im;
			sum[2][k] += f11[k] * g_re;
			sum[3][k] += f11[k] * g_im;
		}
	}
	for (size_t k = 0; k < energies; k++) {
		f2[k] = 0;
		for (int part = 0; part < 4; part++)
			f2[k] += sum[part][k] * sum[part][k];
	}
}

static void finish_row(void *to, size_t row, const double *re, const double *im)
{
	const finisher *f = to;
	size_t n = f->first_row + row, count = f->rows->rows[n].count;

	for (size_t i = 0; i < count; i++)
		finish_plane(f, f->rows->order[f->rows->row_first[n] + i], re + i, im + i,
			     count);
}

static bool sum_sheets(const finisher *all)
{
	const crowd *c = all->points;
	const rows_of_planes *rows = all->rows;
	bh_points points = { { c->at[0], c->at[1], c->at[2] },
			     c->weight,
			     { c->beta[0], c->beta[1], c->beta[2], c->beta[3], c->beta[4],
			       c->beta[5] },
			     c->count,
			     c->group,
			     c->forms_count,
			     all->half->group->centrosymmetric };
	/* a thread costs about as much as 10^7 terms */
	bool large = (double)c->count * (double)all->query->planes > 2e7;
	int lost = 0;

#pragma omp parallel for schedule(dynamic) reduction(| : lost) if (large)
	for (size_t i = 0; i < rows->sheet_count; i++) {
		size_t first = rows->sheet_first[i];
		finisher f = *all;
		bh_wave_sheet sheet = {
			all->query->h[rows->order[rows->row_first[first]]][0],
			rows->rows + first, rows->sheet_first[i + 1] - first, finish_row,
			&f
		};

		f.first_row = first;
		if (!bh_waves_sum(&points, &sheet))
			lost = 1;
	}
	(void)large;
	return !lost;
}

bool bh_amplitude_f2_table(double *f2, const bh_phase *phase, const bh_f2_query *query,
			   bh_err *err)
{
	bh_arena *own = bh_arena_new();
	rows_of_planes rows = { .row_count = 0 };
	half_group half;
	dispersion d;
	crowd c;
	bool good;

	assert(query->energies <= BH_F2_ENERGIES);
	good = own && halve(&half, own, &phase->group) &&
	       gather(&c, own, phase, &half, query->without) &&
	       disperse(&d, own, &c, query) &&
	       (query->planes == 0 ||
		(cut_rows(&rows, own, query) &&
		 sum_sheets(&(finisher){ f2, query, &c, &half, &d, &rows, 0 })));
	bh_arena_free(own);
	return good || bh_fail_memory(err);
}

double bh_amplitude_f2(const bh_phase *phase, const int h[3], double d_A,
		       double energy_keV, bh_without without)
{
	bh_err err = { BH_OK, 0, 0, "", "", "" };
	double f2 = 0;
	int plane[1][3] = { { h[0], h[1], h[2] } };
	bh_f2_query query = { (const int(*)[3])plane, &d_A, 1, &energy_keV, 1, without };

	return bh_amplitude_f2_table(&f2, phase, &query, &err) ? f2 : 0;
}

size_t bh_amplitude_terms(const bh_phase *phase)
{
	size_t lattice = 0, atoms = 0;

	for (size_t i = 0; i < phase->group.op_count; i++) {
		const bh_symop *op = &phase->group.ops[i];
		bool one = true;

		for (int j = 0; j < 3; j++)
			for (int k = 0; k < 3; k++)
				one = one && op->rotation[j][k] == (j == k);
		lattice += one;
	}
	for (size_t i = 0; i < phase->site_count; i++)
		atoms += (size_t)phase->sites[i].multiplicity;
	return atoms / (lattice ? lattice : 1) / (phase->group.centrosymmetric ? 2 : 1) +
	       1;
}
