/* One error and many. */
#include "support/near.h"

#include <string.h>

#include "base/err.h"

static void first_wins(void **state)
{
	bh_err err = { .code = BH_OK };

	(void)state;
	assert_false(bh_fail(NULL, BH_BAD_INPUT, "nowhere to put it"));
	assert_false(bh_fail(&err, BH_BAD_INPUT, "what %d\nhint %s", 1, "two"));
	assert_false(bh_fail(&err, BH_BAD_SYSTEM, "later"));
	assert_false(bh_fail_memory(&err));
	assert_int_equal(err.code, BH_BAD_INPUT);
	assert_string_equal(err.what, "what 1");
	assert_string_equal(err.hint, "hint two");
	err = (bh_err){ .code = BH_OK };
	assert_false(bh_fail_memory(&err));
	assert_int_equal(err.code, BH_BAD_SYSTEM);
	assert_string_equal(err.hint, "");
}

static void splits(void **state)
{
	static const struct {
		const char *text, *what, *hint;
	} rows[] = {
		{ "alone", "alone", "" },
		{ "what\nhint", "what", "hint" },
		{ "what\n", "what", "" },
		{ "\nhint", "", "hint" },
		{ "a\nb\nc", "a", "b\nc" }, /* the first line break parts */
		{ "", "", "" },
	};

	(void)state;
	for (size_t i = 0; i < sizeof rows / sizeof *rows; i++) {
		bh_err err = { .code = BH_OK };

		bh_fail(&err, BH_BAD_INPUT, "%s", rows[i].text);
		assert_string_equal(err.what, rows[i].what);
		assert_string_equal(err.hint, rows[i].hint);
	}
}

/* Whether text ends in a whole UTF-8 character, all of them being Å (two bytes). */
static bool whole(const char *text)
{
	return strlen(text) % 2 == 0;
}

/* More text than room: cut, ended, and no half of a character (JSON could not hold it). */
static void overlong(void **state)
{
	bh_problems problems = { .arena = bh_arena_new() };
	bh_err err = { .code = BH_OK };
	char text[2001] = "", file[401] = "";
	bh_place place = { file, 3, 4 };
	const bh_err *p;

	(void)state;
	for (size_t i = 0; i < 1000; i++)
		memcpy(text + 2 * i, "Å", 2);
	for (size_t i = 0; i < 200; i++)
		memcpy(file + 2 * i, "Å", 2);
	bh_fail(&err, BH_BAD_INPUT, "%s", text);
	assert_in_range(strlen(err.what), sizeof err.what - 3, sizeof err.what - 1);
	assert_true(whole(err.what));
	for (int odd = 0; odd < 2; odd++) {
		problems.count = 0;
		bh_problem(&problems, place, "x\n%s%s", odd ? "yz" : "z", text);
		p = &problems.items[0];
		assert_string_equal(p->what, "x");
		assert_true(whole(p->hint + 1 + odd));
		assert_in_range(strlen(p->hint), sizeof p->hint - 3, sizeof p->hint - 1);
		assert_true(whole(p->file));
		assert_in_range(strlen(p->file), sizeof p->file - 3, sizeof p->file - 1);
	}
	bh_arena_free(problems.arena);
}

static void many(void **state)
{
	enum { COUNT = 1000 };
	bh_problems problems = { .arena = bh_arena_new() };
	bh_err one = { .code = BH_BAD_SYSTEM, .what = "added" };

	(void)state;
	for (int i = 0; i < COUNT; i++)
		assert_false(bh_problem(&problems, (bh_place){ "file", i, i + 1 },
					"problem %d\nhint", i));
	assert_false(bh_problem_add(&problems, &one));
	assert_false(bh_problem(&problems, (bh_place){ NULL, 0, 0 }, "no file"));
	assert_int_equal(problems.count, COUNT + 2);
	assert_false(problems.lost);
	for (int i = 0; i < COUNT; i++) {
		const bh_err *p = &problems.items[i];
		char what[40];

		snprintf(what, sizeof what, "problem %d", i);
		assert_string_equal(p->what, what);
		assert_int_equal(p->code, BH_BAD_INPUT);
		assert_int_equal(p->line, i);
		assert_int_equal(p->col, i + 1);
		assert_string_equal(p->file, "file");
	}
	assert_string_equal(problems.items[COUNT].what, "added");
	assert_int_equal(problems.items[COUNT].code, BH_BAD_SYSTEM);
	assert_string_equal(problems.items[COUNT + 1].file, "");
	bh_arena_free(problems.arena);
}

int main(void)
{
	static const struct CMUnitTest tests[] = {
		cmocka_unit_test(first_wins),
		cmocka_unit_test(splits),
		cmocka_unit_test(overlong),
		cmocka_unit_test(many),
	};

	return cmocka_run_group_tests_name("errors", tests, NULL, NULL);
}
