#include "physics/hkl.h"

#include <math.h>
#include <stdlib.h>
#include <string.h>

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
	if (negatives(a) != negatives(b))
		return negatives(a) < negatives(b);
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

	if (fabs(p->d_A - q->d_A) > 1e-9 * q->d_A)
		return p->d_A > q->d_A ? -1 : 1;
	for (int j = 0; j < 3; j++)
		if (p->h[j] != q->h[j])
			return p->h[j] > q->h[j] ? -1 : 1;
	return 0;
}

typedef struct {
	bh_arena *arena;
	const bh_space_group *group;
	bh_mat3 reciprocal;
	double most_inv_A2;
	bh_hkl *planes;
	size_t count, capacity;
} collection;

static bool collect(collection *c, const int h[3])
{
	int equivalents[BH_MAX_EQUIVALENTS][3], standard[3];
	double x[3] = { h[0], h[1], h[2] };
	double inv_A2 = bh_mat3_form(&c->reciprocal, x, x);

	if (!(inv_A2 > 0) || inv_A2 > c->most_inv_A2)
		return true;
	bh_hkl_standard(standard, c->group, h);
	if (!same(standard, h) || bh_hkl_absent(c->group, h))
		return true;
	if (c->count == c->capacity) {
		size_t more = c->capacity ? 2 * c->capacity : 64;
		bh_hkl *grown = bh_grow(c->arena, c->planes, bh_hkl, c->capacity, more);

		if (!grown)
			return false;
		c->planes = grown;
		c->capacity = more;
	}
	c->planes[c->count++] = (bh_hkl){
		{ h[0], h[1], h[2] },
		(int)bh_hkl_equivalents(c->group, h, equivalents),
		1 / sqrt(inv_A2)
	};
	return true;
}

bool bh_hkl_list(bh_hkl **planes, size_t *count, bh_arena *arena, const bh_cell *cell,
		 const bh_space_group *group, double least_d_A, bh_err *err)
{
	collection c = { .arena = arena, .group = group,
			 .most_inv_A2 = (1 + 1e-12) / (least_d_A * least_d_A) };
	bh_mat3 metric = bh_cell_metric(cell);
	int most[3], h[3];

	*planes = NULL;
	*count = 0;
	if (!bh_cell_reciprocal(&c.reciprocal, cell))
		return true;
	/* |h| ≤ a/d: the projection of the sphere on a direct axis */
	for (int j = 0; j < 3; j++)
		most[j] = (int)floor(sqrt(metric.at[j][j]) / least_d_A + 1e-9);
	/* the printed plane of a Friedel pair has at most one negative index, or its first
	 * non-zero index positive */
	for (h[0] = -most[0]; h[0] <= most[0]; h[0]++)
		for (h[1] = -most[1]; h[1] <= most[1]; h[1]++)
			for (h[2] = -most[2]; h[2] <= most[2]; h[2]++)
				if (negatives(h) <= 1 && !collect(&c, h))
					return bh_fail_memory(err);
	if (c.count)
		qsort(c.planes, c.count, sizeof *c.planes, by_d);
	*planes = c.planes;
	*count = c.count;
	return true;
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

bool bh_hkl_parse(int h[3], const char *text)
{
	const char *s = text;
	bool packed = strpbrk(text, " ,") == NULL;
	int index[4], n = 0;

	while (*s) {
		while (!packed && (*s == ' ' || *s == ','))
			s++;
		if (!*s)
			break;
		if (n == 4 || !next_index(&index[n++], &s, packed))
			return false;
		if (!packed && *s && *s != ' ' && *s != ',')
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
