/* All 530 tabulated settings of the 230 groups against two general-purpose libraries of
 * crystallography (gemmi, cctbx) that agree with each other: space_groups.tsv and
 * space_group_symbols.tsv beside this file, made by make_space_groups.py. */
#include "support/near.h"

#include <math.h>
#include <stdlib.h>
#include <string.h>

#include "physics/hkl.h"
#include "physics/symmetry.h"

#define FOLDER "tests/published/"

enum { MOST_PLANES = 256, FIELDS = 6, LINE_ROOM = 4096, ROWS = 530, GROUPS = 230 };

typedef struct {
	bh_arena *arena;
	int planes[MOST_PLANES][3];
	size_t plane_count;
} fixture;

/* Next line of a table, cut at tabs; how many fields, 0 at the end. */
static size_t next_line(FILE *file, char line[LINE_ROOM], char *fields[FIELDS])
{
	size_t count = 0;

	do {
		if (!fgets(line, LINE_ROOM, file))
			return 0;
	} while (line[0] == '#');
	line[strcspn(line, "\n")] = '\0';
	for (char *s = line; s && count < FIELDS; count++) {
		fields[count] = s;
		s = strchr(s, '\t');
		if (s)
			*s++ = '\0';
	}
	return count;
}

static FILE *open_table(const char *path)
{
	FILE *file = fopen(path, "r");

	if (!file)
		print_error("%s is missing: run from the top folder\n", path);
	assert_non_null(file);
	return file;
}

static void read_planes(fixture *f, char *text)
{
	for (char *s = text; *s;) {
		assert_true(f->plane_count < MOST_PLANES);
		for (int j = 0; j < 3; j++, s += *s == ',' || *s == ' ')
			f->planes[f->plane_count][j] = (int)strtol(s, &s, 10);
		f->plane_count++;
	}
}

static int set_up(void **state)
{
	static fixture f;
	FILE *file = open_table(FOLDER "space_groups.tsv");
	char line[LINE_ROOM], *fields[FIELDS];

	f = (fixture){ .arena = bh_arena_new() };
	assert_int_equal(next_line(file, line, fields), 2);
	assert_string_equal(fields[0], "planes");
	read_planes(&f, fields[1]);
	fclose(file);
	*state = &f;
	return 0;
}

static int tear_down(void **state)
{
	fixture *f = *state;

	bh_arena_free(f->arena);
	return 0;
}

/* "." absent, else the multiplicity as the table writes it. */
static char letter(const bh_space_group *group, const int h[3])
{
	static const struct {
		size_t multiplicity;
		char letter;
	} letters[] = { { 2, '2' },  { 4, '4' },  { 6, '6' },  { 8, '8' },
			{ 12, 'c' }, { 16, 'g' }, { 24, 'o' }, { 48, 'M' } };
	int planes[BH_MAX_EQUIVALENTS][3];
	size_t count;

	if (bh_hkl_absent(group, h))
		return '.';
	count = bh_hkl_equivalents(group, h, planes);
	for (size_t i = 0; i < sizeof letters / sizeof *letters; i++)
		if (letters[i].multiplicity == count)
			return letters[i].letter;
	return '?';
}

static void check_letters(const fixture *f, const bh_space_group *group,
			  const char *letters)
{
	assert_int_equal(strlen(letters), f->plane_count);
	for (size_t i = 0; i < f->plane_count; i++) {
		const int *h = f->planes[i];

		if (letter(group, h) == letters[i])
			continue;
		print_error("%s (%s): %d %d %d is %c, want %c\n", group->symbol,
			    group->hall, h[0], h[1], h[2], letter(group, h), letters[i]);
		fail();
	}
}

static bool same_operations(const bh_space_group *a, const bh_space_group *b)
{
	if (a->op_count != b->op_count)
		return false;
	for (size_t i = 0; i < a->op_count; i++) {
		bool found = false;

		for (size_t k = 0; k < b->op_count && !found; k++) {
			found = memcmp(a->ops[i].rotation, b->ops[k].rotation,
				       sizeof a->ops[i].rotation) == 0;
			for (int j = 0; j < 3; j++) {
				double away = a->ops[i].shift[j] - b->ops[k].shift[j];

				found = found && fabs(away - round(away)) < 1e-9;
			}
		}
		if (!found)
			return false;
	}
	return true;
}

/* Number, order, inversion, absences and multiplicities of every row; the symbol that the
 * program prints for a row, read again, gives that row's operations. */
static void settings(void **state)
{
	fixture *f = *state;
	FILE *file = open_table(FOLDER "space_groups.tsv");
	char line[LINE_ROOM], *fields[FIELDS];
	bool numbers[GROUPS + 1] = { false };
	int rows = 0, groups = 0;

	assert_int_equal(next_line(file, line, fields), 2);
	while (next_line(file, line, fields) == FIELDS) {
		bh_space_group group, again;
		bh_err err = { BH_OK, 0, 0, "", "", "" };
		bool open;

		assert_true(bh_symmetry_row(&group, f->arena, atoi(fields[0]), &err));
		assert_int_equal(group.number, atoi(fields[1]));
		assert_int_equal(group.op_count, atoi(fields[2]));
		assert_int_equal(group.centrosymmetric, atoi(fields[3]));
		assert_string_equal(group.hall, fields[4]);
		check_letters(f, &group, fields[5]);
		assert_true(
			bh_symmetry_find(&again, &open, f->arena, group.symbol, &err));
		if (open || !same_operations(&group, &again))
			print_error("row %s prints as %s\n", fields[0], group.symbol);
		assert_true(!open && same_operations(&group, &again));
		groups += !numbers[group.number];
		numbers[group.number] = true;
		rows++;
	}
	fclose(file);
	assert_int_equal(rows, ROWS);
	assert_int_equal(groups, GROUPS);
}

/* Symbols that neither the table of settings nor the centred cells besides it have: the
 * program must refuse them, not take something else. Origins or cells of protein work. */
static bool is_refused(const char *symbol)
{
	static const char *const refused[] = {
		"P 21212(a)", "C 2 2 21a)", "C 2 2 2a", "F 2 2 2a", "I 2 2 2a",
		"P 42 21 2a", "I 2 3a",	    "C 4 2 21", "C -4 2 b",
	};

	for (size_t i = 0; i < sizeof refused / sizeof *refused; i++)
		if (strcmp(symbol, refused[i]) == 0)
			return true;
	return false;
}

/* Three Hall symbols read as Hermann-Mauguin symbols too, and are taken for these. */
static bool is_also_hermann_mauguin(const char *symbol)
{
	return strcmp(symbol, "P 2") == 0 || strcmp(symbol, "A 2") == 0 ||
	       strcmp(symbol, "I 2") == 0;
}

/* Every Hermann-Mauguin symbol (with choice, and short ones without blanks) and every Hall
 * symbol of both libraries finds the operations that they mean. */
static void symbols(void **state)
{
	fixture *f = *state;
	FILE *file = open_table(FOLDER "space_group_symbols.tsv");
	char line[LINE_ROOM], *fields[FIELDS];
	int seen = 0, wrong = 0;
	size_t count;

	while ((count = next_line(file, line, fields)) >= 2) {
		bh_space_group group, want;
		bh_err err = { BH_OK, 0, 0, "", "", "" };
		int row = atoi(fields[1]);
		bool open,
			good = bh_symmetry_find(&group, &open, f->arena, fields[0], &err);

		seen++;
		if (is_refused(fields[0])) {
			assert_false(good);
			assert_int_equal(err.code, BH_BAD_INPUT);
			continue;
		}
		if (is_also_hermann_mauguin(fields[0])) {
			assert_true(good && group.choice[0] == 'b');
			continue;
		}
		if (good && row) {
			assert_true(bh_symmetry_row(&want, f->arena, row, &err));
			good = same_operations(&group, &want);
		} else if (good) {
			assert_int_equal(count, 4);
			assert_int_equal(group.op_count, atoi(fields[2]));
			check_letters(f, &group, fields[3]);
		}
		if (!good)
			print_error("\"%s\": want row %d, got %s %s\n", fields[0], row,
				    err.code ? "an error" : group.symbol, err.what);
		wrong += !good;
	}
	fclose(file);
	assert_int_equal(wrong, 0);
	assert_true(seen > 1400);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(settings),
		cmocka_unit_test(symbols),
	};

	return cmocka_run_group_tests(tests, set_up, tear_down);
}
