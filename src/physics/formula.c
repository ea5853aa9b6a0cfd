#include "physics/formula.h"

#include <math.h>
#include <stdlib.h>
#include <string.h>

#include "physics/xray.h"

/* Atoms of each element in a formula, and where reading stands. */
typedef struct {
	const char *start, *at;
	double atoms[BH_Z_MAX + 1];
	bh_err *err;
} reader;

static bool refuse(const reader *r, const char *why)
{
	return bh_fail(r->err, BH_BAD_INPUT,
		       "formula \"%s\": %s at character %d\nlike \"Fe2O3\", \"Ca(OH)2\", "
		       "\"Li0.5CoO2\", \"CaSO4*2H2O\"",
		       r->start, why, (int)(r->at - r->start) + 1);
}

static bool is_digit(char c)
{
	return c >= '0' && c <= '9';
}

/* A count after a symbol or bracket: 1 when there is none. */
static bool count_of(double *count, reader *r)
{
	double whole = 0, part = 0, place = 1;
	const char *s = r->at;

	*count = 1;
	if (!is_digit(*s) && !(*s == '.' && is_digit(s[1])))
		return true;
	while (is_digit(*s))
		whole = 10 * whole + (*s++ - '0');
	if (*s == '.' && is_digit(s[1]))
		for (s++; is_digit(*s); s++) {
			place /= 10;
			part += place * (*s - '0');
		}
	if (*s == '.') {
		r->at = s;
		return refuse(r,
			      "a dot that is no decimal point (write a hydrate with *)");
	}
	r->at = s;
	*count = whole + part;
	if (!(*count > 0) || *count > 1e6)
		return refuse(r, "a count that is zero or too large");
	return true;
}

static int symbol_at(reader *r)
{
	char symbol[3] = { r->at[0], 0, 0 };
	int z = 0;

	if (r->at[0] < 'A' || r->at[0] > 'Z')
		return 0;
	if (r->at[1] >= 'a' && r->at[1] <= 'z') {
		symbol[1] = r->at[1];
		z = bh_xray_z(symbol);
		if (z)
			r->at += 2;
		return z;
	}
	z = strcmp(symbol, "D") == 0 ? 1
				     : bh_xray_z(symbol); /* deuterium: hydrogen here */
	if (z)
		r->at++;
	return z;
}

static bool group(reader *r, double times, int depth);

static bool bracket(reader *r, double times, int depth)
{
	const char *inside = ++r->at;
	const char *end;
	double count;
	int open = 1;

	for (end = inside; *end && open; end++)
		open += *end == '(' ? 1 : *end == ')' ? -1 : 0;
	if (open) {
		r->at--;
		return refuse(r, "a bracket that is not closed");
	}
	/* the count stands behind the bracket: read it first, then the inside */
	r->at = end;
	if (!count_of(&count, r))
		return false;
	end = r->at;
	r->at = inside;
	if (!group(r, times * count, depth + 1))
		return false;
	if (*r->at == '*')
		return refuse(r, "a hydrate's * inside a bracket");
	r->at = end;
	return true;
}

/* Symbols and brackets up to the end, a hydrate dot, or a closing bracket. */
static bool group(reader *r, double times, int depth)
{
	const char *first = r->at;

	if (depth > BH_FORMULA_DEPTH)
		return refuse(r, "too many brackets");
	while (*r->at && *r->at != ')' && *r->at != '*') {
		double count;
		int z;

		if (*r->at == '(') {
			if (!bracket(r, times, depth))
				return false;
			continue;
		}
		z = symbol_at(r);
		if (!z)
			return refuse(r, "no element symbol");
		if (!count_of(&count, r))
			return false;
		/* "CaSO4.2H2O" */
		if (count != floor(count) && strncmp(r->at, "H2O", 3) == 0)
			return refuse(r,
				      "a decimal or a hydrate? (write a hydrate with *)");
		r->atoms[z] += times * count;
	}
	return r->at > first || refuse(r, "nothing");
}

static bool whole(reader *r)
{
	for (;;) {
		double times;

		if (!count_of(&times, r) || !group(r, times, 0))
			return false;
		if (*r->at == ')')
			return refuse(r, "a bracket that was not opened");
		if (!*r->at)
			return true;
		r->at++;
	}
}

/* "·" (U+00B7) is a hydrate's dot too. */
static bool tidy(char copy[BH_FORMULA_LENGTH + 1], const char *text)
{
	size_t n = 0;

	for (const char *s = text; *s; s++) {
		if (n == BH_FORMULA_LENGTH)
			return false;
		if ((unsigned char)s[0] == 0xC2 && (unsigned char)s[1] == 0xB7) {
			copy[n++] = '*';
			s++;
		} else {
			copy[n++] = *s;
		}
	}
	copy[n] = '\0';
	return true;
}

bool bh_formula_read(bh_composition *composition, bh_arena *arena, const char *text,
		     bh_err *err)
{
	char copy[BH_FORMULA_LENGTH + 1];
	reader r = { .start = copy, .at = copy, .err = err };
	bh_element_share *elements;
	size_t count = 0;

	if (!tidy(copy, text))
		return bh_fail(err, BH_BAD_INPUT, "a formula longer than %d characters",
			       BH_FORMULA_LENGTH);
	if (!whole(&r))
		return false;
	elements = bh_new(arena, bh_element_share, BH_Z_MAX);
	if (!elements)
		return bh_fail_memory(err);
	for (int z = 1; z <= BH_Z_MAX; z++)
		if (r.atoms[z] > 0)
			elements[count++] =
				(bh_element_share){ z, r.atoms[z] *
							       bh_xray_molar_mass_g(z) };
	*composition = (bh_composition){ elements, count };
	bh_formula_normalise(composition);
	return true;
}

double bh_formula_molar_mass_g(const char *text)
{
	char copy[BH_FORMULA_LENGTH + 1];
	bh_err err = { BH_OK, 0, 0, "", "", "" };
	reader r = { .start = copy, .at = copy, .err = &err };
	double mass = 0;

	if (!tidy(copy, text) || !whole(&r))
		return 0;
	for (int z = 1; z <= BH_Z_MAX; z++)
		mass += r.atoms[z] * bh_xray_molar_mass_g(z);
	return mass;
}

static int by_z(const void *a, const void *b)
{
	const bh_element_share *p = a, *q = b;

	return (p->z > q->z) - (p->z < q->z);
}

void bh_formula_normalise(bh_composition *composition)
{
	bh_element_share *e = composition->elements;
	double sum = 0;
	size_t n = 0;

	if (composition->count == 0)
		return;
	qsort(e, composition->count, sizeof *e, by_z);
	for (size_t i = 0; i < composition->count; i++) {
		if (!(e[i].mass_frac > 0))
			continue;
		sum += e[i].mass_frac;
		if (n && e[n - 1].z == e[i].z)
			e[n - 1].mass_frac += e[i].mass_frac;
		else
			e[n++] = e[i];
	}
	composition->count = n;
	for (size_t i = 0; i < n; i++)
		e[i].mass_frac /= sum;
}
