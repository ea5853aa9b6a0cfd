#include "physics/crowding.h"

#include <math.h>
#include <string.h>

#include "physics/cell.h"
#include "physics/symmetry.h"

/* Occupancies are printed with three decimals: 0.334 three times. */
static const double full = 1.0025;

enum { BOXES_MOST = 48 };

/* All atoms of the cell in boxes along its axes, at least as wide as one looks. */
typedef struct {
	const bh_phase *phase;
	bh_mat3 metric;
	double spacing_A[3]; /* of the planes 1 0 0, 0 1 0, 0 0 1 */
	double within_A;
	double (*at)[3];
	size_t *site, *next, *head; /* next and head: index + 1, 0: none */
	int boxes[3];
} neighbourhood;

/* Shortest distance between a point and another's images in the neighbouring cells. */
static double distance_A(const bh_mat3 *metric, const double a[3], const double b[3])
{
	double best = HUGE_VAL, x[3];

	for (int m = 0; m < 3; m++)
		x[m] = a[m] - b[m] - round(a[m] - b[m]);
	for (int i = -1; i <= 1; i++)
		for (int j = -1; j <= 1; j++)
			for (int k = -1; k <= 1; k++) {
				double y[3] = { x[0] + i, x[1] + j, x[2] + k };

				best = fmin(best, bh_mat3_form(metric, y, y));
			}
	return sqrt(best);
}

/* Points apart by more than within_A along one axis, counted in its planes. */
static bool far_apart(const neighbourhood *n, const double a[3], const double b[3])
{
	for (int j = 0; j < 3; j++) {
		double x = a[j] - b[j];

		if (fabs(x - round(x)) * n->spacing_A[j] >= n->within_A)
			return true;
	}
	return false;
}

static int box_along(const neighbourhood *n, double x, int axis)
{
	int box = (int)((x - floor(x)) * n->boxes[axis]);

	return box < n->boxes[axis] ? box : 0;
}

static size_t box_at(const neighbourhood *n, const int box[3])
{
	int wrapped[3];

	for (int j = 0; j < 3; j++)
		wrapped[j] = (box[j] % n->boxes[j] + n->boxes[j]) % n->boxes[j];
	return ((size_t)wrapped[0] * (size_t)n->boxes[1] + (size_t)wrapped[1]) *
		       (size_t)n->boxes[2] +
	       (size_t)wrapped[2];
}

static bool sort_in(neighbourhood *n, bh_arena *arena)
{
	const bh_phase *phase = n->phase;
	size_t room = phase->site_count * phase->group.op_count, count = 0;

	n->at = bh_arena_take(arena, room, sizeof *n->at);
	n->site = bh_new(arena, size_t, room);
	n->next = bh_new(arena, size_t, room);
	n->head = bh_new(arena, size_t,
			 (size_t)n->boxes[0] * (size_t)n->boxes[1] * (size_t)n->boxes[2]);
	if (!n->at || !n->site || !n->next || !n->head)
		return false;
	for (size_t i = 0; i < phase->site_count; i++) {
		const bh_site *site = &phase->sites[i];
		double images[BH_MAX_IMAGES][3];
		size_t many = bh_symmetry_orbit(&phase->group, &phase->cell, site->at,
						site->reach_A, images);

		for (size_t k = 0; k < many; k++, count++) {
			int box[3];
			size_t in;

			for (int j = 0; j < 3; j++)
				box[j] = box_along(n, images[k][j], j);
			in = box_at(n, box);
			memcpy(n->at[count], images[k], sizeof images[k]);
			n->site[count] = i;
			n->next[count] = n->head[in];
			n->head[in] = count + 1;
		}
	}
	return true;
}

static bool settle_down(neighbourhood *n, bh_arena *arena, const bh_phase *phase,
			double within_A)
{
	bh_mat3 reciprocal;

	*n = (neighbourhood){ .phase = phase, .within_A = within_A };
	n->metric = bh_cell_metric(&phase->cell);
	if (!bh_cell_reciprocal(&reciprocal, &phase->cell))
		return false;
	for (int j = 0; j < 3; j++) {
		double fit;

		n->spacing_A[j] = 1 / sqrt(reciprocal.at[j][j]);
		fit = floor(n->spacing_A[j] / within_A);
		n->boxes[j] = fit < 3 ? 1 : fit > BOXES_MOST ? BOXES_MOST : (int)fit;
	}
	return sort_in(n, arena);
}

typedef void pair_taker(void *to, size_t i, size_t j, double distance_A);

/* All atoms within_A of site i, its own first image among them at 0. */
static void look_around(const neighbourhood *n, size_t i, pair_taker *take, void *to)
{
	const double *at = n->phase->sites[i].at;
	int home[3], low[3], high[3];

	for (int j = 0; j < 3; j++) {
		home[j] = box_along(n, at[j], j);
		low[j] = n->boxes[j] == 1 ? 0 : -1;
		high[j] = n->boxes[j] == 1 ? 0 : 1;
	}
	for (int a = low[0]; a <= high[0]; a++)
		for (int b = low[1]; b <= high[1]; b++)
			for (int c = low[2]; c <= high[2]; c++) {
				const int box[3] = { home[0] + a, home[1] + b,
						     home[2] + c };

				for (size_t k = n->head[box_at(n, box)]; k;
				     k = n->next[k - 1]) {
					double d_A = far_apart(n, at, n->at[k - 1])
							     ? HUGE_VAL
							     : distance_A(&n->metric, at,
									  n->at[k - 1]);

					if (d_A < n->within_A)
						take(to, i, n->site[k - 1], d_A);
				}
			}
}

/* Alternatives of one assembly are never there together; neither are the images of a site whose
 * disorder is about its own special position: such groups have negative numbers. */
static bool never_meet(const bh_site *a, const bh_site *b)
{
	if (a == b)
		return a->alternative[0] == '-';
	return a->alternative[0] && b->alternative[0] &&
	       strcmp(a->assembly, b->assembly) == 0 &&
	       strcmp(a->alternative, b->alternative) != 0;
}

/* How full the surroundings of a site are, and who stands nearest. */
typedef struct {
	const bh_phase *phase;
	double occupancy, nearest_A;
	size_t other;
} surroundings;

static void add_neighbour(void *to, size_t i, size_t j, double d_A)
{
	surroundings *s = to;
	const bh_site *sites = s->phase->sites;
	double reach_A = sites[i].reach_A > 0 ? sites[i].reach_A : BH_REACH_DEFAULT_A;
	bool itself = i == j && d_A < reach_A;

	if (!itself && never_meet(&sites[i], &sites[j]))
		return;
	s->occupancy += sites[j].occupancy;
	if (!itself && d_A < s->nearest_A) {
		s->nearest_A = d_A;
		s->other = j;
	}
}

bool bh_crowding_clash(const bh_phase *phase, double within_A, size_t *i, size_t *j,
		       double *distance)
{
	bh_arena *arena = bh_arena_new();
	neighbourhood n;
	bool found = false;

	if (arena && settle_down(&n, arena, phase, within_A))
		for (*i = 0; *i < phase->site_count; ++*i) {
			surroundings s = { phase, 0, HUGE_VAL, *i };

			look_around(&n, *i, add_neighbour, &s);
			found = s.occupancy > full && s.nearest_A < within_A;
			if (!found)
				continue;
			*j = s.other;
			*distance = s.nearest_A;
			break;
		}
	bh_arena_free(arena);
	return found;
}

typedef struct {
	const bh_phase *phase;
	bool *repeats;
} repetition;

static void note_repetition(void *to, size_t i, size_t j, double d_A)
{
	repetition *r = to;
	const bh_site *a = &r->phase->sites[i], *b = &r->phase->sites[j];

	if (j < i && !r->repeats[j] && a->z == b->z &&
	    a->occupancy + b->occupancy > full && d_A < fmax(a->reach_A, b->reach_A))
		r->repeats[i] = true;
}

bool bh_crowding_repeats(bool *repeats, const bh_phase *phase, bh_err *err)
{
	bh_arena *arena = bh_arena_new();
	repetition r = { phase, repeats };
	double reach_A = BH_REACH_DEFAULT_A;
	neighbourhood n;
	bool good;

	for (size_t i = 0; i < phase->site_count; i++)
		reach_A = fmax(reach_A, phase->sites[i].reach_A);
	good = arena && settle_down(&n, arena, phase, reach_A);
	for (size_t i = 0; good && i < phase->site_count; i++)
		look_around(&n, i, note_repetition, &r);
	bh_arena_free(arena);
	return good || bh_fail_memory(err);
}
