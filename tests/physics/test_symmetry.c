#include "support/near.h"

#include <math.h>
#include <string.h>

#include "physics/symmetry.h"

enum { A = 1, B = 2, C = 4, ALPHA = 8, BETA = 16, GAMMA = 32, ROWS = 530 };

static int set_up(void **state)
{
	*state = bh_arena_new();
	return *state ? 0 : -1;
}

static int tear_down(void **state)
{
	bh_arena_free(*state);
	return 0;
}

/* What people write, and the setting that International Tables A gives for it: number, the
 * choice, order of the operations in the cell, and whether the origin was left open. */
static void found(void **state)
{
	static const struct {
		const char *text;
		int number;
		const char *symbol;
		size_t operations;
		bool origin_open;
	} rows[] = {
		{ "P n m a", 62, "P n m a", 8, false },
		{ "Pnma", 62, "P n m a", 8, false },
		{ "P 21/n 21/m 21/a", 62, "P n m a", 8, false },
		{ "P_n_m_a", 62, "P n m a", 8, false },
		{ "P b n m", 62, "P b n m", 8, false },
		{ "62", 62, "P n m a", 8, false },
		{ "F d -3 m:2", 227, "F d -3 m:2", 192, false },
		{ "Fd-3m :1", 227, "F d -3 m:1", 192, false },
		{ "Fd-3m", 227, "F d -3 m:1", 192, true },
		{ "227", 227, "F d -3 m:1", 192, true },
		{ "227:2", 227, "F d -3 m:2", 192, false },
		{ "F d 3 m", 227, "F d -3 m:1", 192, true },
		{ "F 4d 2 3 -1d", 227, "F d -3 m:1", 192, false },
		{ "P a 3", 205, "P a -3", 24, false },
		{ "I a 3 d", 230, "I a -3 d", 96, false },
		{ "R -3 c:H", 167, "R -3 c:H", 36, false },
		{ "R-3c:R", 167, "R -3 c:R", 12, false },
		{ "R -3 c", 167, "R -3 c:H", 36, false },
		{ "167", 167, "R -3 c:H", 36, false },
		{ "P 21/n", 14, "P 21/n", 4, false },
		{ "P 1 21/n 1", 14, "P 21/n", 4, false },
		{ "P 21/c", 14, "P 21/c", 4, false },
		{ "P 1 1 21/b", 14, "P 1 1 21/b", 4, false },
		{ "-P 2yn", 14, "P 21/n", 4, false },
		{ "C 2/c", 15, "C 2/c", 8, false },
		{ "I 1 2/a 1", 15, "I 2/a", 8, false },
		{ "I 2/c", 15, "I 2/c", 8, false },
		{ "P 2", 3, "P 2", 2, false },
		{ "P 3 2 1", 150, "P 3 2 1", 6, false },
		{ "P 63/m m c", 194, "P 63/m m c", 24, false },
		{ "P6_3/mmc", 194, "P 63/m m c", 24, false },
		{ "C m c a", 64, "C m c e", 16, false },
		{ "C m c e", 64, "C m c e", 16, false },
		{ "I 41/a m d", 141, "I 41/a m d:1", 32, true },
		{ "P n n n", 48, "P n n n:1", 8, true },
		{ "P b a n:2", 50, "P b a n:2", 8, false },
		{ "C -1", 2, "C -1", 4, false },
		{ "I-1", 2, "I -1", 4, false },
		{ "-C 1", 2, "C -1", 4, false },
		{ "F 4/m m m", 139, "F 4/m m m", 64, false },
	};

	for (size_t i = 0; i < sizeof rows / sizeof *rows; i++) {
		bh_space_group group = { .number = 0 };
		bh_err err = { BH_OK, 0, 0, "", "", "" };
		bool open = !rows[i].origin_open;

		if (!bh_symmetry_find(&group, &open, *state, rows[i].text, &err) ||
		    strcmp(group.symbol, rows[i].symbol) != 0)
			print_error("%s: %s %s\n", rows[i].text, group.symbol, err.what);
		assert_int_equal(group.number, rows[i].number);
		assert_string_equal(group.symbol, rows[i].symbol);
		assert_int_equal(group.op_count, rows[i].operations);
		assert_int_equal(open, rows[i].origin_open);
	}
}

/* What is none: what is said, and what is offered instead. */
static void refused(void **state)
{
	static const struct {
		const char *text, *says, *hint;
	} rows[] = {
		{ "", "unknown", "number 1 to 230" },
		{ "0", "unknown", "allowed" },
		{ "231", "unknown", "allowed" },
		{ "P 21/x", "\"P 21/x\"", "\"P 21/c\"" },
		{ "Fm-3n", "\"Fm-3n\"", "\"F m -3 m\"" },
		{ "P n m a:H", "no choice \":H\"", "one setting" },
		{ "F d -3 m:3", "no choice \":3\"", ":1, :2" },
		{ "R -3 c:1", "no choice \":1\"", ":H, :R" },
		{ "P 21/c:b9", "no choice \":b9\"", ":b1, :b2, :b3" },
		{ "C -1:2", "unknown", "allowed" },
	};

	for (size_t i = 0; i < sizeof rows / sizeof *rows; i++) {
		bh_space_group group = { .number = 0 };
		bh_err err = { BH_OK, 0, 0, "", "", "" };
		bool open;

		assert_false(bh_symmetry_find(&group, &open, *state, rows[i].text, &err));
		assert_int_equal(err.code, BH_BAD_INPUT);
		if (!strstr(err.what, rows[i].says) || !strstr(err.hint, rows[i].hint))
			print_error("%s: %s / %s\n", rows[i].text, err.what, err.hint);
		assert_non_null(strstr(err.what, rows[i].says));
		assert_non_null(strstr(err.hint, rows[i].hint));
	}
}

/* Rows outside of the table, where the database reads out of range. */
static void rows_outside(void **state)
{
	static const int rows[] = { -5, -1, 0, 531, 600 };

	for (size_t i = 0; i < sizeof rows / sizeof *rows; i++) {
		bh_space_group group;
		bh_err err = { BH_OK, 0, 0, "", "", "" };

		assert_false(bh_symmetry_row(&group, *state, rows[i], &err));
		assert_int_equal(err.code, BH_BAD_INPUT);
	}
}

/* Free values of the cell by crystal system, International Tables A (2016) Table 2.1.2.1: each
 * of the 530 settings by its number and axes. */
static unsigned by_system(const bh_space_group *group)
{
	int n = group->number;

	if (n <= 2)
		return A | B | C | ALPHA | BETA | GAMMA;
	if (n <= 15)
		return A | B | C |
		       (strchr(group->choice, 'a')   ? ALPHA
			: strchr(group->choice, 'c') ? GAMMA
						     : BETA);
	if (n <= 74)
		return A | B | C;
	if (n <= 142)
		return A | C;
	if (n <= 194)
		return group->choice[0] == 'R' ? A | ALPHA : A | C;
	return A;
}

static void free_cell(void **state)
{
	for (int row = 1; row <= ROWS; row++) {
		bh_space_group group;
		bh_err err = { BH_OK, 0, 0, "", "", "" };

		assert_true(bh_symmetry_row(&group, *state, row, &err));
		assert_int_equal(bh_symmetry_free_cell(&group), by_system(&group));
	}
}

/* Cells that a group allows and cells that it does not. */
static void misfit(void **state)
{
	static const struct {
		const char *group;
		bh_cell cell;
		double misfit, within;
	} rows[] = {
		{ "F m -3 m", { 5.6402, 5.6402, 5.6402, 90, 90, 90 }, 0, 1e-15 },
		{ "F m -3 m", { 4.9, 5.0, 4.95, 90, 90, 90 }, 0.02, 0.001 },
		{ "R -3 c:H", { 4.7605, 4.7605, 12.9956, 90, 90, 120 }, 0, 1e-15 },
		{ "R -3 c:R", { 5.1282, 5.1282, 5.1282, 55.28, 55.28, 55.28 }, 0, 1e-15 },
		{ "R -3 c:R", { 4.7605, 4.7605, 12.9956, 90, 90, 120 }, 1, 5 },
		{ "P 21/c", { 5.169, 5.232, 5.341, 90, 99.25, 90 }, 0, 1e-15 },
		{ "P 21/c", { 5.169, 5.232, 5.341, 90, 99.25, 91 }, 0.01745, 0.0002 },
		{ "P 4/m", { 3.7845, 3.7845, 9.5143, 90, 90, 90 }, 0, 1e-15 },
		{ "P -1", { 8.1372, 12.787, 7.1574, 94.245, 116.605, 87.809 }, 0, 1e-15 },
	};

	for (size_t i = 0; i < sizeof rows / sizeof *rows; i++) {
		bh_space_group group;
		bh_err err = { BH_OK, 0, 0, "", "", "" };
		double got;
		bool open;

		assert_true(bh_symmetry_find(&group, &open, *state, rows[i].group, &err));
		got = bh_symmetry_misfit(&group, &rows[i].cell);
		if (rows[i].within > 1)
			assert_true(got > 0.1);
		else
			assert_near(got, rows[i].misfit, rows[i].within, rows[i].group);
	}
}

/* Multiplicities of Wyckoff positions, International Tables A (2016); coordinates as printed in
 * papers, so thirds have three or four decimals. */
static void orbits(void **state)
{
	static const struct {
		const char *group;
		bh_cell cell;
		double at[3];
		size_t count;
	} rows[] = {
		{ "F d -3 m:2",
		  { 8.3965, 8.3965, 8.3965, 90, 90, 90 },
		  { .125, .125, .125 },
		  8 },
		{ "F d -3 m:2",
		  { 8.3965, 8.3965, 8.3965, 90, 90, 90 },
		  { .5, .5, .5 },
		  16 },
		{ "F d -3 m:2",
		  { 8.3965, 8.3965, 8.3965, 90, 90, 90 },
		  { .2549, .2549, .2549 },
		  32 },
		{ "F d -3 m:2",
		  { 8.3965, 8.3965, 8.3965, 90, 90, 90 },
		  { .11, .11, .31 },
		  96 },
		{ "F d -3 m:2",
		  { 8.3965, 8.3965, 8.3965, 90, 90, 90 },
		  { .11, .23, .31 },
		  192 },
		{ "P 63 m c",
		  { 3.2499, 3.2499, 5.2065, 90, 90, 120 },
		  { .3333, .6667, .3819 },
		  2 },
		{ "P 63 m c",
		  { 3.2499, 3.2499, 5.2065, 90, 90, 120 },
		  { .333, .667, .3819 },
		  2 },
		{ "P 63/m m c", { 9.5, 9.5, 15.1, 90, 90, 120 }, { .333, .667, .25 }, 2 },
		{ "R -3 c:H",
		  { 4.7605, 4.7605, 12.9956, 90, 90, 120 },
		  { 0, 0, .35216 },
		  12 },
		{ "R -3 c:H",
		  { 4.7605, 4.7605, 12.9956, 90, 90, 120 },
		  { .30668, 0, .25 },
		  18 },
		{ "R -3 c:H",
		  { 4.7605, 4.7605, 12.9956, 90, 90, 120 },
		  { .30668, 1e-17, .25 },
		  18 },
		{ "R -3 c:H",
		  { 4.7605, 4.7605, 12.9956, 90, 90, 120 },
		  { -.30668, 2, 1.25 },
		  18 },
		{ "P 32 2 1",
		  { 4.916, 4.916, 5.4054, 90, 90, 120 },
		  { .4697, 0, .6667 },
		  3 },
		{ "P 32 2 1",
		  { 4.916, 4.916, 5.4054, 90, 90, 120 },
		  { .4135, .2669, .7858 },
		  6 },
		{ "P n m a",
		  { 9.9613, 3.0226, 4.6017, 90, 90, 90 },
		  { .1459, .25, -.0486 },
		  4 },
		{ "C -1",
		  { 8.1372, 12.787, 7.1574, 94.245, 116.605, 87.809 },
		  { .1, .2, .3 },
		  4 },
		{ "C -1",
		  { 8.1372, 12.787, 7.1574, 94.245, 116.605, 87.809 },
		  { .25, .25, 0 },
		  2 },
	};

	for (size_t i = 0; i < sizeof rows / sizeof *rows; i++) {
		double images[BH_MAX_IMAGES][3];
		bh_space_group group;
		bh_err err = { BH_OK, 0, 0, "", "", "" };
		size_t count;
		bool open;

		assert_true(bh_symmetry_find(&group, &open, *state, rows[i].group, &err));
		count = bh_symmetry_orbit(&group, &rows[i].cell, rows[i].at, 0.05,
					  images);
		if (count != rows[i].count)
			print_error("%s, row %zu: %zu\n", rows[i].group, i, count);
		assert_int_equal(count, rows[i].count);
		for (size_t k = 0; k < count; k++)
			for (int j = 0; j < 3; j++)
				assert_true(images[k][j] >= 0 && images[k][j] < 1);
	}
}

/* A third printed as 0.333 is put on the axis; a site off the axis on purpose stays. */
static void settles(void **state)
{
	static const bh_cell cell = { 3.2499, 3.2499, 5.2065, 90, 90, 120 };
	const double printed[3] = { 0.333, 0.667, 0.3819 },
		     split[3] = { 0.31, 0.62, 0.3819 };
	double images[BH_MAX_IMAGES][3];
	bh_space_group group;
	bh_err err = { BH_OK, 0, 0, "", "", "" };
	bool open;

	assert_true(bh_symmetry_find(&group, &open, *state, "P 63 m c", &err));
	assert_int_equal(bh_symmetry_orbit(&group, &cell, printed, 0.05, images), 2);
	assert_near(images[0][0], 1.0 / 3, 1e-12, "x");
	assert_near(images[0][1], 2.0 / 3, 1e-12, "y");
	assert_near(images[0][2], 0.3819, 1e-12, "z");
	assert_int_equal(bh_symmetry_orbit(&group, &cell, split, 0.05, images), 6);
	assert_near(images[0][0], 0.31, 1e-12, "x");
}

int main(void)
{
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(found),	cmocka_unit_test(refused),
		cmocka_unit_test(rows_outside), cmocka_unit_test(free_cell),
		cmocka_unit_test(misfit),	cmocka_unit_test(orbits),
		cmocka_unit_test(settles),
	};

	return cmocka_run_group_tests(tests, set_up, tear_down);
}
