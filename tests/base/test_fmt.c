/* Numbers as people read and write them. */
#include "support/near.h"

#include <math.h>
#include <stdlib.h>
#include <string.h>

#include "base/err.h"
#include "base/fmt.h"
#include "base/nearest.h"
#include "base/number.h"
#include "base/text.h"

static void digits(void **state)
{
	static const struct {
		double value;
		int digits;
		const char *text, *brief;
	} rows[] = {
		{ 0, 3, "0", "0" },
		{ 12345.6, 3, "12 300", "12 300" },
		{ 0.0123456, 2, "0.012", "0.012" },
		{ 9.99, 2, "10", "10" },
		{ 99.96, 3, "100", "100" },
		{ 40, 3, "40.0", "40" },
		{ 0.25, 3, "0.250", "0.25" },
		{ -1234567, 4, "-1 235 000", "-1 235 000" },
		{ 1234, 4, "1234", "1234" },
		{ 3.0e-6, 2, "3.0e-06", "3.0e-06" },
		{ 0.00999, 1, "0.01", "0.01" },
		{ 5, 1, "5", "5" },
		{ INFINITY, 2, "–", "–" },
		{ NAN, 2, "–", "–" },
	};
	char room[BH_FMT_ROOM];

	(void)state;
	for (size_t i = 0; i < sizeof rows / sizeof *rows; i++) {
		assert_string_equal(bh_fmt_digits(room, rows[i].value, rows[i].digits),
				    rows[i].text);
		assert_string_equal(bh_fmt_short(room, rows[i].value, rows[i].digits),
				    rows[i].brief);
	}
	assert_string_equal(bh_fmt_fixed(room, 26.6312, 3), "26.631");
}

static void durations(void **state)
{
	static const struct {
		double s;
		const char *text;
	} rows[] = {
		{ 0.5, "0.50 s" },	    { 38.4, "38 s" },
		{ 59.6, "1 min" },	    { 250, "4 min 10 s" },
		{ 1500, "25 min" },	    { 3569, "59 min" },
		{ 3599, "1 h 00 min" },	    { 5040, "1 h 24 min" },
		{ 86400 * 2.1, "2 d 2 h" },
	};
	char room[BH_FMT_ROOM];

	(void)state;
	for (size_t i = 0; i < sizeof rows / sizeof *rows; i++)
		assert_string_equal(bh_fmt_duration(room, rows[i].s), rows[i].text);
}

/* Against the C library, which reads more than we allow. */
static void numbers(void **state)
{
	static const char *const good[] = { "0",      "1",	 "-1.5",
					    "+2.",    ".5",	 "1e3",
					    "1.5E-7", "4.91344", "123456789.123456",
					    "1e300",  "-0.0" };
	static const char *const bad[] = { "",	   "-",	       ".",	"e5",  "1e999",
					   "0x10", "nan",      "inf",	"1,5", "1 2",
					   " 1",   "1 ",       "1.2.3", "--1", "1e",
					   "1f",   "infinity", "0b1" };
	double value = 7;

	(void)state;
	for (size_t i = 0; i < sizeof good / sizeof *good; i++) {
		assert_true(bh_number_read(&value, good[i], strlen(good[i])));
		assert_near(value, strtod(good[i], NULL), 0, good[i]);
	}
	value = 7;
	for (size_t i = 0; i < sizeof bad / sizeof *bad; i++) {
		if (bh_number_read(&value, bad[i], strlen(bad[i])))
			fail_msg("\"%s\" was read as a number", bad[i]);
		assert_near(value, 7, 0, "untouched");
	}
}

static void spans(void **state)
{
	static const struct {
		const char *text;
		double s;
	} rows[] = {
		{ "2 h", 7200 },   { "90 min", 5400 },	   { "45 s", 45 },
		{ "1.5 h", 5400 }, { "1 h 30 min", 5400 }, { "2h", 7200 },
	};
	static const char *const bad[] = { "",	   "2",	  "h",	   "2 hours",
					   "-1 h", "0 s", "1 h x", "1 d" };
	double s = 7;

	(void)state;
	for (size_t i = 0; i < sizeof rows / sizeof *rows; i++) {
		assert_true(bh_duration_read(&s, rows[i].text, strlen(rows[i].text)));
		assert_near(s, rows[i].s, 1e-9, rows[i].text);
	}
	for (size_t i = 0; i < sizeof bad / sizeof *bad; i++)
		assert_false(bh_duration_read(&s, bad[i], strlen(bad[i])));
}

/* Textbook pairs: kitten, sitting 3; flaw, lawn 2. */
static void distances(void **state)
{
	(void)state;
	assert_int_equal(bh_nearest_distance("kitten", "sitting"), 3);
	assert_int_equal(bh_nearest_distance("flaw", "lawn"), 2);
	assert_int_equal(bh_nearest_distance("", "abc"), 3);
	assert_int_equal(bh_nearest_distance("plan", "plan"), 0);
}

static void texts(void **state)
{
	bh_err err = { BH_OK, 0, 0, "", "", "" };
	bh_arena *arena = bh_arena_new();
	bh_text text = { 0 };
	int *block;

	(void)state;
	for (int i = 0; i < 1000; i++)
		bh_text_format(&text, "%d,", i);
	assert_int_equal(text.length, strlen(text.bytes));
	assert_int_equal(text.length, 10 * 2 + 90 * 3 + 900 * 4);
	bh_text_free(&text);
	assert_int_equal(bh_text_columns("2θ 1\xCC\x85 Å"), 6); /* a bar has no width */
	/* the first error wins; a line break parts what from hint */
	assert_false(bh_fail(&err, BH_BAD_INPUT, "what %d\nhint", 1));
	assert_false(bh_fail(&err, BH_BAD_SYSTEM, "later"));
	assert_string_equal(err.what, "what 1");
	assert_string_equal(err.hint, "hint");
	assert_int_equal(err.code, BH_BAD_INPUT);
	/* a grown block keeps its content, the rest is zero */
	block = bh_new(arena, int, 2);
	block[0] = 3;
	block[1] = 4;
	block = bh_grow(arena, block, int, 2, 5);
	assert_int_equal(block[0] + block[1] + block[2] + block[4], 7);
	assert_null(bh_arena_take(arena, SIZE_MAX / 2, 16));
	bh_arena_free(arena);
}

int main(void)
{
	static const struct CMUnitTest tests[] = {
		cmocka_unit_test(digits),    cmocka_unit_test(durations),
		cmocka_unit_test(numbers),   cmocka_unit_test(spans),
		cmocka_unit_test(distances), cmocka_unit_test(texts),
	};

	return cmocka_run_group_tests_name("base", tests, NULL, NULL);
}
