#include "physics/symmetry.h"

#include <ctype.h>
#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

#include <spglib.h>

#include "base/nearest.h"
#include "physics/cell.h"

enum { ROWS = 530, GROUPS = 230, LONGEST = 63 };

/* A symbol without blanks, tabs and underscores. */
static void squeeze(char *to, size_t room, const char *from)
{
	size_t n = 0;

	for (; *from && n + 1 < room; from++)
		if (*from != ' ' && *from != '\t' && *from != '_')
			to[n++] = *from;
	to[n] = '\0';
}

/* Hall symbols: case does not matter, blanks and underscores neither. */
static bool same_hall(const char *text, const char *hall)
{
	char a[LONGEST + 1], b[LONGEST + 1];

	squeeze(a, sizeof a, text);
	squeeze(b, sizeof b, hall);
	for (size_t i = 0;; i++) {
		if (tolower((unsigned char)a[i]) != tolower((unsigned char)b[i]))
			return false;
		if (!a[i])
			return true;
	}
}

/* What a user wrote, taken apart: the symbol without blanks, and the choice behind ":". */
typedef struct {
	char symbol[LONGEST + 1];
	char choice[8];
	bool explicit_choice;
} wanted;

static bool take_apart(wanted *w, const char *text)
{
	char squeezed[LONGEST + 1];
	char *colon;

	if (strlen(text) > LONGEST)
		return false;
	squeeze(squeezed, sizeof squeezed, text);
	colon = strchr(squeezed, ':');
	w->explicit_choice = colon != NULL;
	w->choice[0] = '\0';
	if (colon) {
		*colon = '\0';
		if (strlen(colon + 1) == 0 || strlen(colon + 1) >= sizeof w->choice)
			return false;
		memcpy(w->choice, colon + 1, strlen(colon + 1) + 1);
		for (char *c = w->choice; *c; c++)
			*c = (char)(*c == 'h' || *c == 'r' ? toupper((unsigned char)*c) : *c);
	}
	/* the letter of the lattice is a capital, the rest is not */
	squeezed[0] = (char)toupper((unsigned char)squeezed[0]);
	memcpy(w->symbol, squeezed, sizeof squeezed);
	return w->symbol[0] != '\0';
}

/* "P n m a" or "C 2/c = C 1 2/c 1": each side of " = ". */
static bool names_it(const char *symbol, const char *listed)
{
	char squeezed[LONGEST + 1], *equal;

	squeeze(squeezed, sizeof squeezed, listed);
	equal = strchr(squeezed, '=');
	if (equal) {
		*equal = '\0';
		if (strcmp(symbol, equal + 1) == 0)
			return true;
	}
	return strcmp(symbol, squeezed) == 0;
}

/* Cubic symbols of before 1992 leave the bar of the three-fold axis out: "F d 3 m". */
static bool names_it_old(const char *symbol, const char *listed)
{
	char squeezed[LONGEST + 1], *bar;

	squeeze(squeezed, sizeof squeezed, listed);
	bar = strstr(squeezed, "-3");
	if (!bar || bar < squeezed + 2)
		return false;
	memmove(bar, bar + 1, strlen(bar));
	return strcmp(symbol, squeezed) == 0;
}

static bool in_row(const SpglibSpacegroupType *type, const char *symbol)
{
	return names_it(symbol, type->international) || names_it(symbol, type->international_full) ||
	       names_it(symbol, type->international_short) ||
	       (type->number >= 195 && (names_it_old(symbol, type->international) ||
					names_it_old(symbol, type->international_full) ||
					names_it_old(symbol, type->international_short)));
}

/* Whether a row's symbol spells this very setting: "P 1 21/n 1" does, the short symbol of the
 * type ("P 21/c" for all nine of number 14) does not. */
static bool spells_setting(const SpglibSpacegroupType *type, const char *symbol)
{
	return names_it(symbol, type->international) || names_it(symbol, type->international_full);
}

static bool fits_choice(const SpglibSpacegroupType *type, const wanted *w)
{
	size_t n = strlen(type->choice), m = strlen(w->choice);

	if (!w->explicit_choice)
		return true;
	if (strcmp(type->choice, w->choice) == 0)
		return true;
	/* "2" of an origin choice that the database writes with an axis: "2cab" */
	if (n > m && m == 1 && isdigit((unsigned char)w->choice[0]) &&
	    type->choice[0] == w->choice[0] && isalpha((unsigned char)type->choice[1]))
		return true;
	/* a group with one setting: ":1" says nothing wrong */
	return n == 0 && strcmp(w->choice, "1") == 0;
}

static bool is_text_number(const char *text, int *number)
{
	char *end;
	long value = strtol(text, &end, 10);

	if (end == text || *end || value < 1 || value > GROUPS)
		return false;
	*number = (int)value;
	return true;
}

/* The first row that a number, a symbol or a Hall symbol names, 0: none. Rows of a number
 * stand together, unique axis b, cell choice 1, origin 1, hexagonal axes first. */
static int find_row(const wanted *w, const char *text)
{
	int by_symbol = 0, by_hall = 0, number = 0;
	bool spelled = false;

	is_text_number(w->symbol, &number);
	for (int row = 1; row <= ROWS; row++) {
		SpglibSpacegroupType type = spg_get_spacegroup_type(row);

		if (!by_hall && same_hall(text, type.hall_symbol))
			by_hall = row;
		if (!fits_choice(&type, w))
			continue;
		if (number ? type.number == number : in_row(&type, w->symbol)) {
			bool spells = !number && spells_setting(&type, w->symbol);

			if (!by_symbol || (spells && !spelled)) {
				by_symbol = row;
				spelled = spells;
			}
		}
	}
	return by_symbol ? by_symbol : by_hall;
}

/* Groups with two origins: the same symbol stands in the table with choice 1 and 2. */
static bool two_origins(int row)
{
	SpglibSpacegroupType type = spg_get_spacegroup_type(row);

	for (int other = 1; other <= ROWS; other++) {
		SpglibSpacegroupType t = spg_get_spacegroup_type(other);

		if (other != row && t.number == type.number &&
		    strcmp(t.international, type.international) == 0 &&
		    type.choice[0] == '1' && t.choice[0] == '2')
			return true;
	}
	return false;
}

typedef struct {
	size_t distance;
	char name[LONGEST + 1];
} candidate;

/* Keep the nearest three names, each once. */
static void offer(candidate best[3], const char *name, size_t distance)
{
	candidate c = { distance, "" };

	snprintf(c.name, sizeof c.name, "%s", name);
	for (int i = 0; i < 3; i++)
		if (strcmp(best[i].name, name) == 0)
			return;
	for (int i = 0; i < 3; i++)
		if (c.distance < best[i].distance) {
			candidate swap = best[i];

			best[i] = c;
			c = swap;
		}
}

static bool unknown(const char *text, bh_err *err)
{
	candidate best[3] = { { 99, "" }, { 99, "" }, { 99, "" } };
	char symbol[LONGEST + 1], squeezed[LONGEST + 1];

	squeeze(symbol, sizeof symbol, text);
	symbol[strcspn(symbol, ":")] = '\0';
	for (int row = 1; row <= ROWS; row++) {
		SpglibSpacegroupType type = spg_get_spacegroup_type(row);
		char name[LONGEST + 1];

		snprintf(name, sizeof name, "%.*s", (int)strcspn(type.international, "="),
			 type.international);
		for (char *c = name; *c; c++)
			if (*c == '_')
				memmove(c, c + 1, strlen(c));
		while (*name && name[strlen(name) - 1] == ' ')
			name[strlen(name) - 1] = '\0';
		squeeze(squeezed, sizeof squeezed, name);
		offer(best, name, bh_nearest_distance(symbol, squeezed));
	}
	return bh_fail(err, BH_BAD_INPUT,
		       "unknown space group \"%s\"\nnearest: \"%s\", \"%s\", \"%s\"; allowed: a "
		       "Hermann-Mauguin or Hall symbol, or a number 1 to 230, with :1 :2 :H :R where "
		       "there is a choice",
		       text, best[0].name, best[1].name, best[2].name);
}

static bool centric(const bh_space_group *group)
{
	for (size_t i = 0; i < group->op_count; i++) {
		bool inverts = true;

		for (int j = 0; j < 3; j++)
			for (int k = 0; k < 3; k++)
				inverts = inverts && group->ops[i].rotation[j][k] == -(j == k);
		if (inverts)
			return true;
	}
	return false;
}

/* The database's symbol of a setting without underscores: "F d -3 m", "P 21/n". */
static void write_symbol(char *to, size_t room, const SpglibSpacegroupType *type)
{
	size_t n = 0;

	for (const char *s = type->international; *s && *s != '=' && n + 1 < room; s++)
		if (*s != '_')
			to[n++] = *s;
	while (n && to[n - 1] == ' ')
		n--;
	to[n] = '\0';
	if (strcmp(type->choice, "H") == 0 || strcmp(type->choice, "R") == 0 ||
	    isdigit((unsigned char)type->choice[0]))
		snprintf(to + n, room - n, ":%.6s", type->choice);
}

bool bh_symmetry_row(bh_space_group *group, bh_arena *arena, int hall_number, bh_err *err)
{
	int rotations[BH_MAX_IMAGES][3][3], count;
	double shifts[BH_MAX_IMAGES][3];
	SpglibSpacegroupType type;

	/* the database reads out of range without complaint */
	if (hall_number < 1 || hall_number > ROWS)
		return bh_fail(err, BH_BAD_INPUT, "no row %d of the space-group table\n1 to %d",
			       hall_number, ROWS);
	type = spg_get_spacegroup_type(hall_number);
	count = spg_get_symmetry_from_database(rotations, shifts, hall_number);
	*group = (bh_space_group){ .number = type.number, .hall_number = hall_number,
				   .op_count = (size_t)count };
	write_symbol(group->symbol, sizeof group->symbol, &type);
	snprintf(group->hall, sizeof group->hall, "%s", type.hall_symbol);
	snprintf(group->choice, sizeof group->choice, "%.7s", type.choice);
	group->ops = bh_new(arena, bh_symop, group->op_count);
	if (!group->ops)
		return bh_fail_memory(err);
	for (size_t i = 0; i < group->op_count; i++) {
		memcpy(group->ops[i].rotation, rotations[i], sizeof rotations[i]);
		for (int j = 0; j < 3; j++) /* all are multiples of 1/24 */
			group->ops[i].shift[j] = round(shifts[i][j] * 24) / 24;
	}
	group->centrosymmetric = centric(group);
	return true;
}

bool bh_symmetry_find(bh_space_group *group, bool *origin_open, bh_arena *arena,
		      const char *text, bh_err *err)
{
	wanted w;
	int row = take_apart(&w, text) ? find_row(&w, text) : 0;

	if (!row)
		return unknown(text, err);
	*origin_open = !w.explicit_choice && two_origins(row) &&
		       !same_hall(text, spg_get_spacegroup_type(row).hall_symbol);
	return bh_symmetry_row(group, arena, row, err);
}

/* Rᵀ G R of one operation. */
static bh_mat3 turned(const bh_mat3 *metric, const bh_symop *op)
{
	bh_mat3 out = { { { 0 } } };

	for (int i = 0; i < 3; i++)
		for (int j = 0; j < 3; j++)
			for (int k = 0; k < 3; k++)
				for (int l = 0; l < 3; l++)
					out.at[i][j] += op->rotation[k][i] * metric->at[k][l] *
							op->rotation[l][j];
	return out;
}

double bh_symmetry_misfit(const bh_space_group *group, const bh_cell *cell)
{
	bh_mat3 metric = bh_cell_metric(cell);
	double worst = 0;

	for (size_t n = 0; n < group->op_count; n++) {
		bh_mat3 other = turned(&metric, &group->ops[n]);

		for (int i = 0; i < 3; i++)
			for (int j = 0; j < 3; j++) {
				double scale = sqrt(metric.at[i][i] * metric.at[j][j]);

				/* half: an edge that is off by 1 % makes its square off by 2 % */
				worst = fmax(worst, fabs(other.at[i][j] - metric.at[i][j]) /
							    scale / 2);
			}
	}
	return worst;
}

unsigned bh_symmetry_free_cell(const bh_space_group *group)
{
	enum { A = 1, B = 2, C = 4, ALPHA = 8, BETA = 16, GAMMA = 32 };
	int n = group->number;

	if (n <= 2)
		return A | B | C | ALPHA | BETA | GAMMA;
	if (n <= 15) {
		char axis = group->choice[0] == '-' ? group->choice[1] : group->choice[0];

		return A | B | C | (axis == 'a' ? ALPHA : axis == 'c' ? GAMMA : BETA);
	}
	if (n <= 74)
		return A | B | C;
	if (n <= 142)
		return A | C;
	if (n <= 194)
		return strcmp(group->choice, "R") == 0 ? A | ALPHA : A | C;
	return A;
}

size_t bh_symmetry_orbit(const bh_space_group *group, const bh_cell *cell,
			 const double at[3], double within_A,
			 double images[BH_MAX_IMAGES][3])
{
	bh_mat3 metric = bh_cell_metric(cell);
	size_t count = 0;

	for (size_t n = 0; n < group->op_count; n++) {
		const bh_symop *op = &group->ops[n];
		double x[3];
		bool seen = false;

		for (int j = 0; j < 3; j++) {
			x[j] = op->rotation[j][0] * at[0] + op->rotation[j][1] * at[1] +
			       op->rotation[j][2] * at[2] + op->shift[j];
			x[j] -= floor(x[j]);
			if (x[j] >= 1) /* a tiny negative rounds up to 1 */
				x[j] = 0;
		}
		for (size_t i = 0; i < count && !seen; i++) {
			double away[3];

			for (int j = 0; j < 3; j++) {
				away[j] = x[j] - images[i][j];
				away[j] -= round(away[j]);
			}
			seen = bh_mat3_form(&metric, away, away) < within_A * within_A;
		}
		if (!seen)
			memcpy(images[count++], x, sizeof x);
	}
	return count;
}
