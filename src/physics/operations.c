#include "physics/operations.h"

#include <math.h>
#include <stdlib.h>
#include <string.h>

#include "base/number.h"

/* More operations than any group has in a cell that is centred once over F. */
enum { MOST_OPS = 192 };

static bool not_one(const char *text, size_t length, bh_err *err)
{
	return bh_fail(err, BH_BAD_INPUT,
		       "\"%.*s\" is no symmetry operation\nlike x,y,z or -x+y, 1/2-x, z+1/3",
		       (int)(length < 60 ? length : 60), text);
}

/* A number: "1/2", "0.25", ".5", "3". */
static bool read_shift(double *value, const char **text, const char *end)
{
	const char *s = *text, *from = s;
	double over = 1;

	while (s < end && ((*s >= '0' && *s <= '9') || *s == '.'))
		s++;
	if (!bh_number_read(value, from, (size_t)(s - from)))
		return false;
	while (s < end && *s == ' ')
		s++;
	if (s < end && *s == '/') {
		for (s++; s < end && *s == ' ';)
			s++;
		for (from = s; s < end && ((*s >= '0' && *s <= '9') || *s == '.');)
			s++;
		if (!bh_number_read(&over, from, (size_t)(s - from)) || !(over > 0))
			return false;
	}
	*value /= over;
	*text = s;
	return true;
}

/* One component: signed terms x, y, z (small or capital, each once) and a shift. */
static bool read_component(int rotation[3], double *shift, const char *s, const char *end)
{
	int terms = 0, sign = 1;
	bool pending = false;

	memset(rotation, 0, 3 * sizeof *rotation);
	*shift = 0;
	for (; s < end; terms++) {
		int axis = *s >= 'x' && *s <= 'z'   ? *s - 'x'
			   : *s >= 'X' && *s <= 'Z' ? *s - 'X'
						    : -1;
		double value;

		if (*s == ' ' || *s == '\t' || *s == '*') {
			s++;
			continue;
		}
		if (*s == '+' || *s == '-') {
			if (pending)
				return false;
			sign = *s++ == '-' ? -1 : 1;
			pending = true;
			continue;
		}
		if (axis >= 0) {
			if (rotation[axis] != 0)
				return false;
			rotation[axis] = sign;
			s++;
		} else if (read_shift(&value, &s, end)) {
			*shift += sign * value;
		} else {
			return false;
		}
		sign = 1;
		pending = false;
	}
	return terms > 0 && !pending;
}

static int determinant(const int r[3][3])
{
	return r[0][0] * (r[1][1] * r[2][2] - r[1][2] * r[2][1]) -
	       r[0][1] * (r[1][0] * r[2][2] - r[1][2] * r[2][0]) +
	       r[0][2] * (r[1][0] * r[2][1] - r[1][1] * r[2][0]);
}

/* Into [0, 1); what is within 0.002 of a multiple of 1/24 is that: 0.333, 0.66667. */
static double tidy(double shift)
{
	double part = round(shift * 24) / 24;

	if (fabs(part - shift) < 0.002)
		shift = part;
	shift -= floor(shift);
	return shift >= 1 ? 0 : shift;
}

bool bh_operations_read(bh_symop *op, const char *text, size_t length, bh_err *err)
{
	const char *s = text, *end = text + length;

	for (int i = 0; i < 3; i++) {
		const char *comma = s < end ? memchr(s, ',', (size_t)(end - s)) : NULL;
		const char *stop = comma ? comma : end;

		if ((i < 2) != (comma != NULL) ||
		    !read_component(op->rotation[i], &op->shift[i], s, stop))
			return not_one(text, length, err);
		op->shift[i] = tidy(op->shift[i]);
		s = stop + 1;
	}
	if (abs(determinant((const int(*)[3])op->rotation)) != 1)
		return not_one(text, length, err);
	return true;
}

static bool same_shift(double a, double b)
{
	double apart = a - b;

	return fabs(apart - round(apart)) < 1e-4;
}

bool bh_operations_same(const bh_symop *a, const bh_symop *b)
{
	return memcmp(a->rotation, b->rotation, sizeof a->rotation) == 0 &&
	       same_shift(a->shift[0], b->shift[0]) &&
	       same_shift(a->shift[1], b->shift[1]) &&
	       same_shift(a->shift[2], b->shift[2]);
}

static bool holds(const bh_symop *ops, size_t count, const bh_symop *op)
{
	for (size_t i = 0; i < count; i++)
		if (bh_operations_same(&ops[i], op))
			return true;
	return false;
}

bool bh_operations_equal(const bh_space_group *a, const bh_space_group *b)
{
	if (a->op_count != b->op_count)
		return false;
	for (size_t i = 0; i < a->op_count; i++)
		if (!holds(b->ops, b->op_count, &a->ops[i]))
			return false;
	return true;
}

/* First b, then a. */
static bh_symop product(const bh_symop *a, const bh_symop *b)
{
	bh_symop p;

	for (int i = 0; i < 3; i++) {
		p.shift[i] = a->shift[i];
		for (int j = 0; j < 3; j++) {
			p.shift[i] += a->rotation[i][j] * b->shift[j];
			p.rotation[i][j] = 0;
			for (int k = 0; k < 3; k++)
				p.rotation[i][j] += a->rotation[i][k] * b->rotation[k][j];
		}
		p.shift[i] = tidy(p.shift[i]);
	}
	return p;
}

/* All products of the operations, as far as MOST_OPS + 1: with each new generator, every
 * element so far times every generator. */
static size_t generate(bh_symop all[MOST_OPS + 1], const bh_symop *ops, size_t count)
{
	const bh_symop *generators[MOST_OPS];
	size_t n = 1, many = 0;

	for (size_t i = 0; i < count; i++) {
		if (holds(all, n, &ops[i]))
			continue;
		generators[many++] = &ops[i];
		/* elements that are there have met all earlier generators */
		for (size_t k = 0; k < n; k++)
			for (size_t g = 0; g < many; g++) {
				bh_symop p = product(&all[k], generators[g]);

				if (holds(all, n, &p))
					continue;
				if (n > MOST_OPS)
					return n;
				all[n++] = p;
			}
	}
	return n;
}

bool bh_operations_group(bh_space_group *group, size_t *repeated, bh_arena *arena,
			 const bh_symop *ops, size_t count, bh_err *err)
{
	static const bh_symop one = { { { 1, 0, 0 }, { 0, 1, 0 }, { 0, 0, 1 } },
				      { 0 } };
	bh_symop all[MOST_OPS + 1] = { one };
	size_t distinct = 0, closed;

	*group = (bh_space_group){ .number = 0 };
	*repeated = 0;
	group->ops = bh_new(arena, bh_symop, count);
	if (!group->ops)
		return bh_fail_memory(err);
	for (size_t i = 0; i < count; i++)
		if (!holds(group->ops, distinct, &ops[i]))
			group->ops[distinct++] = ops[i];
		else
			++*repeated;
	group->op_count = distinct;
	if (!holds(group->ops, distinct, &one))
		return bh_fail(err, BH_BAD_INPUT,
			       "the list of operations lacks x,y,z\nadd what is missing, or "
			       "take the list out and give the symbol");
	closed = distinct > MOST_OPS ? distinct : generate(all, group->ops, distinct);
	if (closed != distinct || distinct > MOST_OPS)
		return bh_fail(err, BH_BAD_INPUT,
			       "the %zu operations are no group: their products give %s%zu\n"
			       "add what is missing, or take the list out and give the "
			       "symbol",
			       distinct, closed > MOST_OPS ? "more than " : "",
			       closed > MOST_OPS ? (size_t)MOST_OPS : closed);
	group->centrosymmetric = bh_operations_centric(group);
	return true;
}

bool bh_operations_centric(const bh_space_group *group)
{
	for (size_t i = 0; i < group->op_count; i++) {
		bool inverts = true;

		for (int j = 0; j < 3; j++)
			for (int k = 0; k < 3; k++)
				inverts = inverts &&
					  group->ops[i].rotation[j][k] == -(j == k);
		if (inverts)
			return true;
	}
	return false;
}
