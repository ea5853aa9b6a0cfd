#include "support/near.h"

#include <math.h>
#include <string.h>

#include "physics/cell.h"
#include "physics/hkl.h"
#include "physics/symmetry.h"

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

static bh_space_group group_of(bh_arena *arena, const char *symbol)
{
	bh_space_group group;
	bh_err err = { BH_OK, 0, 0, "", "", "" };
	bool open;

	assert_true(bh_symmetry_find(&group, &open, arena, symbol, &err));
	return group;
}

/* Multiplicities of planes by Laue class, Friedel pairs counted: B. D. Cullity, Elements of X-ray
 * Diffraction, appendix (from memory), and International Tables A, faces of crystal forms. The
 * representative has the fewest negative indices, then the largest h, k, l. */
static void equivalents(void **state)
{
	static const struct {
		const char *group;
		int h[3];
		size_t count;
		int standard[3];
	} rows[] = {
		{ "F m -3 m", { -1, 2, -3 }, 48, { 3, 2, 1 } },
		{ "F m -3 m", { 1, -3, 1 }, 24, { 3, 1, 1 } },
		{ "F m -3 m", { 0, -4, 2 }, 24, { 4, 2, 0 } },
		{ "F m -3 m", { 2, 0, -2 }, 12, { 2, 2, 0 } },
		{ "F m -3 m", { -1, -1, 1 }, 8, { 1, 1, 1 } },
		{ "F m -3 m", { 0, 0, -2 }, 6, { 2, 0, 0 } },
		{ "P a -3", { 1, 2, 3 }, 24, { 3, 1, 2 } },
		{ "P a -3", { 2, 1, 3 }, 24, { 3, 2, 1 } },
		{ "P 63/m m c", { -1, 3, 2 }, 24, { 2, 1, 2 } },
		{ "P 63/m m c", { 1, 1, -3 }, 12, { 1, 1, 3 } },
		{ "P 63/m m c", { 0, -1, 0 }, 6, { 1, 0, 0 } },
		{ "P 63/m m c", { 0, 0, -4 }, 2, { 0, 0, 4 } },
		{ "P 32 2 1", { 0, -1, 1 }, 6, { 1, 0, 1 } },
		{ "P 32 2 1", { 0, 1, 1 }, 6, { 0, 1, 1 } },
		{ "R -3 c:H", { 1, -1, 2 }, 6, { 0, 1, 2 } },
		{ "R -3 c:H", { 1, 0, 4 }, 6, { 1, 0, 4 } },
		{ "R -3 c:R", { -2, 0, 1 }, 12, { 2, 0, -1 } },
		{ "P 42/m n m", { -2, 1, -1 }, 16, { 2, 1, 1 } },
		{ "P 4/m", { 2, 1, 1 }, 8, { 2, 1, 1 } },
		{ "P 4/m", { 1, 2, 1 }, 8, { 1, 2, 1 } },
		{ "P n m a", { 1, -2, -3 }, 8, { 1, 2, 3 } },
		{ "P n m a", { 0, -2, -3 }, 4, { 0, 2, 3 } },
		{ "P 21/c", { -1, -2, 1 }, 4, { 1, 2, -1 } },
		{ "P 21/c", { 0, -2, 0 }, 2, { 0, 2, 0 } },
		{ "P 21", { 1, -2, 3 }, 4, { 1, 2, 3 } },
		{ "P -1", { -1, -2, 3 }, 2, { 1, 2, -3 } },
		{ "P 1", { -1, 2, -3 }, 2, { 1, -2, 3 } },
	};

	for (size_t i = 0; i < sizeof rows / sizeof *rows; i++) {
		bh_space_group group = group_of(*state, rows[i].group);
		int planes[BH_MAX_EQUIVALENTS][3], standard[3];
		size_t count = bh_hkl_equivalents(&group, rows[i].h, planes);

		bh_hkl_standard(standard, &group, rows[i].h);
		if (memcmp(standard, rows[i].standard, sizeof standard) != 0)
			print_error("%s: %d %d %d\n", rows[i].group, standard[0],
				    standard[1], standard[2]);
		assert_int_equal(count, rows[i].count);
		assert_memory_equal(standard, rows[i].standard, sizeof standard);
		for (size_t k = 0; k < count; k++) { /* one for all of them */
			bh_hkl_standard(standard, &group, planes[k]);
			assert_memory_equal(standard, rows[i].standard, sizeof standard);
		}
	}
}

/* Reflection conditions of International Tables A (2016), general positions. */
static bool reflects_f(const int h[3])
{
	return (h[0] + h[1]) % 2 == 0 && (h[1] + h[2]) % 2 == 0;
}

static bool reflects_diamond(const int h[3])
{
	if (!reflects_f(h))
		return false;
	for (int j = 0; j < 3; j++) /* 0kl: k + l = 4n */
		if (h[j] == 0 && (h[0] + h[1] + h[2]) % 4 != 0)
			return false;
	return true;
}

static bool reflects_p21c(const int h[3])
{
	return (h[1] != 0 || h[2] % 2 == 0) && (h[0] != 0 || h[2] != 0 || h[1] % 2 == 0);
}

static bool reflects_pnma(const int h[3])
{
	if (h[0] == 0 && (h[1] + h[2]) % 2 != 0)
		return false;
	if (h[2] == 0 && h[0] % 2 != 0)
		return false;
	return h[0] != 0 || h[2] != 0 || h[1] % 2 == 0;
}

static bool reflects_r3c(const int h[3])
{
	if ((-h[0] + h[1] + h[2]) % 3 != 0)
		return false;
	/* h −h 0 l (and its equivalents): l = 2n */
	if (h[0] == -h[1] || h[0] == 0 || h[1] == 0)
		return h[2] % 2 == 0;
	return true;
}

static bool reflects_p6322(const int h[3])
{
	return h[0] != 0 || h[1] != 0 || h[2] % 2 == 0;
}

static bool reflects_p41(const int h[3])
{
	return h[0] != 0 || h[1] != 0 || h[2] % 4 == 0;
}

static void absences(void **state)
{
	static const struct {
		const char *group;
		bool (*reflects)(const int h[3]);
	} rows[] = {
		{ "F m -3 m", reflects_f },	    { "F d -3 m:1", reflects_diamond },
		{ "F d -3 m:2", reflects_diamond }, { "P 21/c", reflects_p21c },
		{ "P n m a", reflects_pnma },	    { "R -3 c:H", reflects_r3c },
		{ "P 63 2 2", reflects_p6322 },	    { "P 41", reflects_p41 },
	};

	for (size_t i = 0; i < sizeof rows / sizeof *rows; i++) {
		bh_space_group group = group_of(*state, rows[i].group);
		int h[3];

		for (h[0] = -7; h[0] <= 7; h[0]++)
			for (h[1] = -7; h[1] <= 7; h[1]++)
				for (h[2] = -7; h[2] <= 7; h[2]++)
					assert_int_equal(bh_hkl_absent(&group, h),
							 !rows[i].reflects(h));
	}
}

static bool between(const bh_hkl *a, const bh_hkl *b)
{
	if (a->d_A > b->d_A * (1 + 1e-9))
		return true;
	if (a->d_A < b->d_A * (1 - 1e-9))
		return false;
	for (int j = 0; j < 3; j++)
		if (a->h[j] != b->h[j])
			return a->h[j] > b->h[j];
	return false;
}

/* The list against counting: the multiplicities add up to all points of the reciprocal lattice
 * inside the sphere that are not absent; each plane stands as its representative, once, in
 * order. */
static void lists(void **state)
{
	static const struct {
		const char *group;
		bh_cell cell;
		double least_d_A;
	} rows[] = {
		{ "P -1", { 7.1262, 7.852, 5.5724, 89.99, 101.11, 106.03 }, 0.9 },
		{ "P 1", { 5.1, 6.7, 8.3, 61, 75, 83 }, 0.9 },
		{ "P 21/c", { 5.169, 5.232, 5.341, 90, 99.25, 90 }, 0.7 },
		{ "P 1 1 21/b", { 5.341, 5.169, 5.232, 90, 90, 99.25 }, 0.7 },
		{ "P n m a", { 9.9613, 3.0226, 4.6017, 90, 90, 90 }, 0.7 },
		{ "I 41/a m d:1", { 3.7845, 3.7845, 9.5143, 90, 90, 90 }, 0.6 },
		{ "R -3 c:H", { 4.7605, 4.7605, 12.9956, 90, 90, 120 }, 0.6 },
		{ "R -3 c:R", { 5.1282, 5.1282, 5.1282, 55.28, 55.28, 55.28 }, 0.6 },
		{ "P 63/m", { 9.42, 9.42, 6.88, 90, 90, 120 }, 0.8 },
		{ "P a -3", { 5.4166, 5.4166, 5.4166, 90, 90, 90 }, 0.6 },
		{ "F d -3 m:2", { 8.3965, 8.3965, 8.3965, 90, 90, 90 }, 0.6 },
		{ "P m -3 m", { 4.156826, 4.156826, 4.156826, 90, 90, 90 }, 0.35 },
	};

	for (size_t i = 0; i < sizeof rows / sizeof *rows; i++) {
		bh_space_group group = group_of(*state, rows[i].group);
		bh_mat3 reciprocal;
		bh_hkl *planes;
		size_t count, points = 0, listed = 0;
		bh_err err = { BH_OK, 0, 0, "", "", "" };
		int h[3];

		assert_true(bh_cell_reciprocal(&reciprocal, &rows[i].cell));
		for (h[0] = -40; h[0] <= 40; h[0]++)
			for (h[1] = -40; h[1] <= 40; h[1]++)
				for (h[2] = -40; h[2] <= 40; h[2]++)
					points += (h[0] || h[1] || h[2]) &&
						  bh_cell_d_A(&reciprocal, h) >=
							  rows[i].least_d_A &&
						  !bh_hkl_absent(&group, h);
		assert_true(bh_hkl_list(&planes, &count, *state, &rows[i].cell, &group,
					rows[i].least_d_A, &err));
		for (size_t k = 0; k < count; k++) {
			int standard[3], equivalents[BH_MAX_EQUIVALENTS][3];

			bh_hkl_standard(standard, &group, planes[k].h);
			assert_int_equal(
				planes[k].multiplicity,
				bh_hkl_equivalents(&group, planes[k].h, equivalents));
			assert_memory_equal(standard, planes[k].h, sizeof standard);
			assert_ratio(planes[k].d_A, bh_cell_d_A(&reciprocal, planes[k].h),
				     1e-14, "d");
			assert_true(k == 0 || between(&planes[k - 1], &planes[k]));
			listed += (size_t)planes[k].multiplicity;
		}
		assert_int_equal(listed, points);
	}
}

/* Ends: nothing above the longest distance; a plane at exactly the limit counts; a cell that
 * does not close has no planes. */
static void limits(void **state)
{
	static const bh_cell cubic = { 5.431144, 5.431144, 5.431144, 90, 90, 90 };
	static const bh_cell flat = { 5.1, 6.2, 7.3, 120, 120, 120 };
	bh_space_group group = group_of(*state, "F d -3 m:1"),
		       p1 = group_of(*state, "P 1");
	bh_err err = { BH_OK, 0, 0, "", "", "" };
	bh_hkl *planes;
	size_t count;

	assert_true(bh_hkl_list(&planes, &count, *state, &cubic, &group, 3.14, &err));
	assert_int_equal(count, 0);
	assert_true(bh_hkl_list(&planes, &count, *state, &cubic, &group,
				5.431144 / sqrt(8), &err));
	assert_int_equal(count, 2);
	assert_int_equal(planes[1].multiplicity, 12);
	assert_true(bh_hkl_list(&planes, &count, *state, &flat, &p1, 1, &err));
	assert_int_equal(count, 0);
}

/* Large lists: as many planes as half the sphere holds points. */
static void large_lists(void **state)
{
	static const bh_cell large = { 20.1, 19.7, 20.3, 91, 88, 93 };
	static const bh_cell zeolite = { 24.7, 24.7, 24.7, 90, 90, 90 };
	bh_space_group p1 = group_of(*state, "P 1"),
		       fd3m = group_of(*state, "F d -3 m:2");
	bh_err err = { BH_OK, 0, 0, "", "", "" };
	bh_hkl *planes;
	size_t count;

	assert_true(bh_hkl_list(&planes, &count, *state, &large, &p1, 0.7, &err));
	/* half of the sphere: 4π/3 V/(2 d³) points */
	assert_ratio((double)count, 2.0 / 3 * 3.14159265 * 8006 / pow(0.7, 3), 0.01,
		     "points");
	assert_true(bh_hkl_list(&planes, &count, *state, &zeolite, &fd3m, 0.709, &err));
	assert_true(count > 1000 && count < 1200);
}

static void written(void **state)
{
	static const struct {
		const char *text;
		int h[3];
	} rows[] = {
		{ "1 0 4", { 1, 0, 4 } },	    { "1,0,-4", { 1, 0, -4 } },
		{ "1, 0, 4", { 1, 0, 4 } },	    { "104", { 1, 0, 4 } },
		{ "10-4", { 1, 0, -4 } },	    { "-1-1-1", { -1, -1, -1 } },
		{ "1 0 -1 4", { 1, 0, 4 } },	    { "10-14", { 1, 0, 4 } },
		{ "11-20", { 1, 1, 0 } },	    { " 1  0 4 ", { 1, 0, 4 } },
		{ " 104 ", { 1, 0, 4 } },	    { "1\t0\t4", { 1, 0, 4 } },
		{ "12 0 0", { 12, 0, 0 } },	    { "0 -10 2", { 0, -10, 2 } },
		{ "999 0 -999", { 999, 0, -999 } }, { "12-1", { 1, 2, -1 } },
	};

	(void)state;
	for (size_t i = 0; i < sizeof rows / sizeof *rows; i++) {
		int h[3];

		if (!bh_hkl_parse(h, rows[i].text) || memcmp(h, rows[i].h, sizeof h) != 0)
			print_error("\"%s\"\n", rows[i].text);
		assert_true(bh_hkl_parse(h, rows[i].text));
		assert_memory_equal(h, rows[i].h, sizeof h);
	}
}

static void not_written(void **state)
{
	static const char *const rows[] = {
		"",	     " ",
		"0 0 0",     "000",
		"1 0",	     "10",
		"1 0 4 2",   "1 0 1 4",
		"1014",	     "3.29",
		"3.29 A",    "1 0 x",
		"abc",	     "1-",
		"--104",     "1 0 --4",
		"1 0 4 0 0", "1000 0 0",
		"1;0;4",     "1 0 4.0",
		"1 0 4e0",   "12345",
		"(104",	     "1 0 4\n",
		"1/2 0 1",   "99999999999 0 0",
	};

	(void)state;
	for (size_t i = 0; i < sizeof rows / sizeof *rows; i++) {
		int h[3] = { 7, 8, 9 };

		if (bh_hkl_parse(h, rows[i]))
			print_error("\"%s\" taken as %d %d %d\n", rows[i], h[0], h[1],
				    h[2]);
		assert_true(h[0] == 7 && h[1] == 8 && h[2] == 9);
		assert_false(bh_hkl_parse(h, rows[i]));
	}
}

int main(void)
{
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(equivalents), cmocka_unit_test(absences),
		cmocka_unit_test(lists),       cmocka_unit_test(limits),
		cmocka_unit_test(large_lists),       cmocka_unit_test(written),
		cmocka_unit_test(not_written),
	};

	return cmocka_run_group_tests(tests, set_up, tear_down);
}
