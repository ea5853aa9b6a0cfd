#include "physics/hkl.h"

#include <math.h>
#include <stdlib.h>
#include <string.h>

#include "base/units.h"
#include "physics/cell.h"

/* k = h R, row vector times rotation. */
static void turn(int k[3], const int h[3], const bh_symop *op)
{
	for (int j = 0; j < 3; j++)
		k[j] = h[0] * op->rotation[0][j] + h[1] * op->rotation[1][j] +
		       h[2] * op->rotation[2][j];
}

static bool same(const int a[3], const int b[3])
{
	return a[0] == b[0] && a[1] == b[1] && a[2] == b[2];
}

bool bh_hkl_absent(const bh_space_group *group, const int h[3])
{
	for (size_t i = 0; i < group->op_count; i++) {
		const bh_symop *op = &group->ops[i];
		int k[3];
		double phase;

		turn(k, h, op);
		if (!same(k, h))
			continue;
		phase = h[0] * op->shift[0] + h[1] * op->shift[1] + h[2] * op->shift[2];
		/* shifts are multiples of 1/24: 1e-3 tells whole from not */
		if (fabs(phase - round(phase)) > 1e-3)
			return true;
	}
	return false;
}

static size_t add_plane(int planes[][3], size_t count, const int h[3])
{
	for (size_t i = 0; i < count; i++)
		if (same(planes[i], h))
			return count;
	memcpy(planes[count], h, 3 * sizeof *h);
	return count + 1;
}

size_t bh_hkl_equivalents(const bh_space_group *group, const int h[3],
			  int planes[BH_MAX_EQUIVALENTS][3])
{
	size_t count = 0;

	for (size_t i = 0; i < group->op_count; i++) {
		int k[3], opposite[3];

		turn(k, h, &group->ops[i]);
		count = add_plane(planes, count, k);
		for (int j = 0; j < 3; j++)
			opposite[j] = -k[j];
		count = add_plane(planes, count, opposite);
	}
	return count;
}

static int negatives(const int h[3])
{
	return (h[0] < 0) + (h[1] < 0) + (h[2] < 0);
}

/* Whether a is printed rather than b. */
static bool comes_first(const int a[3], const int b[3])
{
	int more = negatives(a) - negatives(b);

	if (more != 0)
		return more < 0;
	for (int j = 0; j < 3; j++)
		if (a[j] != b[j])
			return a[j] > b[j];
	return false;
}

void bh_hkl_standard(int standard[3], const bh_space_group *group, const int h[3])
{
	memcpy(standard, h, 3 * sizeof *h);
	for (size_t i = 0; i < group->op_count; i++) {
		int k[3];

		turn(k, h, &group->ops[i]);
		if (comes_first(k, standard))
			memcpy(standard, k, sizeof k);
		for (int j = 0; j < 3; j++)
			k[j] = -k[j];
		if (comes_first(k, standard))
			memcpy(standard, k, sizeof k);
	}
}

static int by_d(const void *a, const void *b)
{
	const bh_hkl *p = a, *q = b;

	return (p->d_A < q->d_A) - (p->d_A > q->d_A);
}

static int by_index(const void *a, const void *b)
{
	const bh_hkl *p = a, *q = b;

	for (int j = 0; j < 3; j++)
		if (p->h[j] != q->h[j])
			return p->h[j] > q->h[j] ? -1 : 1;
	return 0;
}

/* d falling; planes of one d, apart by rounding only, by their indices. */
static void sort(bh_hkl *planes, size_t count)
{
	size_t from = 0;

	if (count == 0)
		return;
	qsort(planes, count, sizeof *planes, by_d);
	for (size_t i = 1; i <= count; i++)
		if (i == count || planes[i].d_A < planes[from].d_A * (1 - 1e-9)) {
			qsort(planes + from, i - from, sizeof *planes, by_index);
			from = i;
		}
}

/* A rotation of the group with its opposite: which planes they turn into which, and the shifts
 * of the operations that have them. */
typedef struct {
	int by[3][3];
	double shift[2][3]; /* of the rotation, of its opposite */
	bool has[2];
} turning;

typedef struct {
	bh_arena *arena;
	const bh_space_group *group;
	turning turnings[BH_MAX_EQUIVALENTS];
	size_t turning_count;
	double lattice[BH_MAX_EQUIVALENTS][3]; /* vectors besides whole cells */
	size_t lattice_count;
	bh_mat3 reciprocal;
	double most_inv_A2; /* 1/d² of the smallest d */
	bh_hkl *planes;
	size_t count, capacity;
} collection;

static bool is_turning(const turning *t, const bh_symop *op, int sign)
{
	for (int j = 0; j < 3; j++)
		for (int k = 0; k < 3; k++)
			if (op->rotation[j][k] != sign * t->by[j][k])
				return false;
	return true;
}

/* Sort an operation in: a lattice vector, a known rotation or its opposite, or a new one. */
static void sort_in(collection *c, const bh_symop *op)
{
	turning *t;

	for (size_t i = 0; i < c->turning_count; i++)
		for (int side = 0; side < 2; side++) {
			t = &c->turnings[i];
			if (!is_turning(t, op, side ? -1 : 1))
				continue;
			if (t->has[side] && i == 0 && side == 0)
				memcpy(c->lattice[c->lattice_count++], op->shift,
				       sizeof op->shift);
			else if (!t->has[side])
				memcpy(t->shift[side], op->shift, sizeof op->shift);
			t->has[side] = true;
			return;
		}
	t = &c->turnings[c->turning_count++];
	memcpy(t->by, op->rotation, sizeof t->by);
	memcpy(t->shift[0], op->shift, sizeof op->shift);
	t->has[0] = true;
}

static void collect_turnings(collection *c)
{
	static const bh_symop one = { { { 1, 0, 0 }, { 0, 1, 0 }, { 0, 0, 1 } },
				      { 0 } };

	sort_in(c, &one);
	for (size_t i = 0; i < c->group->op_count; i++) {
		const bh_symop *op = &c->group->ops[i];
		bool identity = is_turning(&c->turnings[0], op, 1);

		/* the identity itself is in already */
		if (!identity || fabs(op->shift[0]) + fabs(op->shift[1]) +
						 fabs(op->shift[2]) >
					 1e-9)
			sort_in(c, op);
	}
}

static bool is_whole(const double shift[3], const int h[3])
{
	double phase = h[0] * shift[0] + h[1] * shift[1] + h[2] * shift[2];

	return fabs(phase - round(phase)) < 1e-3;
}

/* Whether h is the printed one of its equivalents and is not extinguished; how many there
 * are: all rotations over those that leave h, up to sign. */
static bool is_listed(const collection *c, const int h[3], int *multiplicity)
{
	const int friedel[3] = { -h[0], -h[1], -h[2] };
	int staying = 0;

	if (comes_first(friedel, h))
		return false;
	for (size_t i = 0; i < c->lattice_count; i++)
		if (!is_whole(c->lattice[i], h))
			return false;
	for (size_t i = 0; i < c->turning_count; i++) {
		const turning *t = &c->turnings[i];
		int k[3], opposite[3];

		for (int j = 0; j < 3; j++) {
			k[j] = h[0] * t->by[0][j] + h[1] * t->by[1][j] +
			       h[2] * t->by[2][j];
			opposite[j] = -k[j];
		}
		if (same(k, h) || same(opposite, h)) {
			int side = same(k, h) ? 0 : 1;

			if (t->has[side] && !is_whole(t->shift[side], h))
				return false;
			staying++;
		} else if (comes_first(k, h) || comes_first(opposite, h)) {
			return false;
		}
	}
	*multiplicity = 2 * (int)c->turning_count / staying;
	return true;
}

static bool collect(collection *c, const int h[3], double inv_A2)
{
	int many;

	if (!(inv_A2 > 0) || inv_A2 > c->most_inv_A2 || !is_listed(c, h, &many))
		return true;
	if (c->count == c->capacity) {
		size_t more = c->capacity ? 2 * c->capacity : 64;
		bh_hkl *grown = bh_grow(c->arena, c->planes, bh_hkl, c->capacity, more);

		if (!grown)
			return false;
		c->planes = grown;
		c->capacity = more;
	}
	c->planes[c->count++] = (bh_hkl){ { h[0], h[1], h[2] }, many, 1 / sqrt(inv_A2) };
	return true;
}

/* All l of one h k inside the sphere: G33 l² + 2 (G13 h + G23 k) l + rest ≤ 1/d². */
static bool collect_row(collection *c, int h, int k)
{
	const bh_mat3 *g = &c->reciprocal;
	double half = (g->at[0][2] * h + g->at[1][2] * k) / g->at[2][2];
	double rest = g->at[0][0] * h * h + 2 * g->at[0][1] * h * k + g->at[1][1] * k * k;
	double root = half * half - (rest - c->most_inv_A2) / g->at[2][2];
	int low, high;

	if (root < 0)
		return true;
	/* one more at each end: collect() looks at d itself */
	low = (int)ceil(-half - sqrt(root)) - 1;
	high = (int)floor(-half + sqrt(root)) + 1;
	for (int l = low; l <= high; l++) {
		int plane[3] = { h, k, l };
		double x[3] = { h, k, l };

		/* the printed one of a Friedel pair has at most one negative index */
		if (negatives(plane) <= 1 &&
		    !collect(c, plane, bh_mat3_form(&c->reciprocal, x, x)))
			return false;
	}
	return true;
}

bool bh_hkl_list(bh_hkl **planes, size_t *count, bh_arena *arena, const bh_cell *cell,
		 const bh_space_group *group, double least_d_A, bh_err *err)
{
	collection c = { .arena = arena,
			 .group = group,
			 .most_inv_A2 = (1 + 1e-12) / (least_d_A * least_d_A) };
	bh_mat3 metric = bh_cell_metric(cell);
	int most_h, most_k;

	*planes = NULL;
	*count = 0;
	if (!bh_cell_reciprocal(&c.reciprocal, cell))
		return true;
	collect_turnings(&c);
	/* |h| ≤ a/d: the projection of the sphere on a direct axis */
	most_h = (int)floor(sqrt(metric.at[0][0]) / least_d_A + 1e-9);
	most_k = (int)floor(sqrt(metric.at[1][1]) / least_d_A + 1e-9);
	for (int h = -most_h; h <= most_h; h++)
		for (int k = h < 0 ? 0 : -most_k; k <= most_k; k++)
			if (!collect_row(&c, h, k))
				return bh_fail_memory(err);
	sort(c.planes, c.count);
	*planes = c.planes;
	*count = c.count;
	return true;
}

double bh_hkl_estimate(const bh_cell *cell, const bh_space_group *group, double least_d_A)
{
	collection c = { .group = group };

	collect_turnings(&c);
	return 2 * BH_PI / 3 * bh_cell_volume_A3(cell) /
	       (least_d_A * least_d_A * least_d_A) /
	       ((double)c.turning_count * (double)(c.lattice_count + 1));
}

/* Next index of a text: an optional minus and digits (one digit when packed). */
static bool next_index(int *index, const char **text, bool packed)
{
	const char *s = *text;
	bool minus = *s == '-';
	int value = 0, digits = 0;

	if (*s == '-' || *s == '+')
		s++;
	while (*s >= '0' && *s <= '9' && digits < 3 && !(packed && digits == 1)) {
		value = 10 * value + (*s++ - '0');
		digits++;
	}
	if (digits == 0)
		return false;
	*index = minus ? -value : value;
	*text = s;
	return true;
}

static bool is_separator(char c)
{
	return c == ' ' || c == ',' || c == '\t';
}

/* One word: indices without separators. */
static bool is_packed(const char *text)
{
	size_t word = strcspn(text, " ,\t");

	return text[word + strspn(text + word, " \t")] == '\0';
}

bool bh_hkl_parse(int h[3], const char *text)
{
	const char *s = text + strspn(text, " \t");
	bool packed = is_packed(s);
	int index[4], n = 0;

	for (;;) {
		s += strspn(s, packed ? " \t" : " ,\t");
		if (!*s)
			break;
		if (n == 4 || !next_index(&index[n++], &s, packed))
			return false;
		if (!packed && *s && !is_separator(*s))
			return false;
	}
	if (n == 4) {
		if (index[2] != -(index[0] + index[1]))
			return false;
		index[2] = index[3];
	} else if (n != 3) {
		return false;
	}
	if (index[0] == 0 && index[1] == 0 && index[2] == 0)
		return false;
	memcpy(h, index, 3 * sizeof *h);
	return true;
}
