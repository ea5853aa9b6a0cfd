/* Reading: what people's files look like, and what must not change a number. */
#include "support/near.h"

#include <locale.h>
#include <stdlib.h>
#include <string.h>

#include "read/keys.h"
#include "read/preset.h"
#include "read/request.h"
#include "read/scan.h"
#include "read/starter.h"
#include "support/planned.h"

static const char *const dirs[] = { "presets/instruments" };
static const bh_read_options options = { .preset_dirs = dirs, .preset_dir_count = 1 };

static int set_up(void **state)
{
	*state = bh_arena_new();
	return *state ? 0 : 1;
}

static int tear_down(void **state)
{
	bh_arena_free(*state);
	return 0;
}

static void starter(void **state)
{
	const bh_plan *plan = planned(*state, bh_starter());

	assert_true(plan->range_count > 0);
	assert_string_equal(plan->signal.setting.tube->anode->symbol, "Cu");
}

/* The same request in every dress. */
static void dresses(void **state)
{
	static const char *const rows[] = {
		"instrument = \"strip-200\"\nphase \"x\" { space_group = \"F m -3 m\" "
		"cell = {5.5} }\n",
		"\xEF\xBB\xBFinstrument = \"strip-200\"\nphase \"x\" { space_group = \"F "
		"m -3 m\" "
		"cell = {5.5} }\n",
		"instrument = \"strip-200\"\r\nphase \"x\" {\r\n\tspace_group = \"F m -3 "
		"m\"\r\n"
		"\tcell = {5.5}\r\n}\r\n",
		"# one\n// two\n/* three\n four */ instrument = 'strip-200' # \"five\n"
		"phase 'x' { /* { */ space_group = \"F m -3 m\" # }\n cell = 5.5 }",
		"phase \"x\" { cell = {5.50e0} space_group = 225 } instrument = "
		"\"strip-200\"",
	};

	for (size_t i = 0; i < sizeof rows / sizeof *rows; i++) {
		bh_problems problems = { .arena = *state };
		bh_request *request;

		if (!bh_request_read_text(&request, *state, "test", rows[i],
					  strlen(rows[i]), &options, &problems))
			fail_msg("row %zu: %d:%d %s", i, problems.items[0].line,
				 problems.items[0].col, problems.items[0].what);
		assert_near(request->phases[0].cell.a_A, 5.5, 0, "cell");
		assert_int_equal(request->phases[0].group.number, 225);
	}
}

/* Columns count characters: the µ and the é before the fault are two bytes each. */
static void columns(void **state)
{
	static const char text[] = "title = \"\xC2\xB5m \xC3\xA9\" nonsense = 1\n";
	bh_problems problems = { .arena = *state };
	bh_request *request;

	assert_false(bh_request_read_text(&request, *state, "test", text, strlen(text),
					  &options, &problems));
	for (size_t i = 0; i < problems.count; i++)
		if (strstr(problems.items[i].what, "nonsense")) {
			assert_int_equal(problems.items[i].line, 1);
			assert_int_equal(problems.items[i].col, 16);
			return;
		}
	fail_msg("the key was not complained about");
}

/* Bytes that are no text, and more of it than anyone writes. */
static void bytes(void **state)
{
	static const struct {
		const char *text;
		size_t length;
		int line, col;
		const char *says;
	} rows[] = {
		{ "title = \"a\0b\"\n", 14, 1, 11, "control byte" },
		{ "a = 1\nb = \"\xFF\"\n", 14, 2, 6, "not UTF-8" },
		{ "a = \"\xC3\"\n", 8, 1, 6, "not UTF-8" },
	};

	for (size_t i = 0; i < sizeof rows / sizeof *rows; i++) {
		bh_problems problems = { .arena = *state };
		bh_scan_section *root;

		assert_false(bh_scan(&root, *state, "test", rows[i].text, rows[i].length,
				     &problems));
		assert_int_equal(problems.count, 1);
		assert_int_equal(problems.items[0].line, rows[i].line);
		assert_int_equal(problems.items[0].col, rows[i].col);
		assert_non_null(strstr(problems.items[0].what, rows[i].says));
	}
	{
		bh_problems problems = { .arena = *state };
		char *line = bh_new(*state, char, 6000);
		bh_scan_section *root;

		memset(line, 'a', 5000);
		assert_false(bh_scan(&root, *state, "test", line, 5000, &problems));
		assert_non_null(strstr(problems.items[0].what, "longer than"));
	}
	{
		bh_problems problems = { .arena = *state };
		FILE *big = tmpfile();
		size_t length;
		char *text;

		assert_non_null(big);
		for (int i = 0; i < 40000; i++)
			fputs("# thirty-two bytes of a comment\n", big);
		rewind(big);
		assert_false(bh_scan_load(&text, &length, *state, "big", big, &problems));
		fclose(big);
		assert_non_null(strstr(problems.items[0].what, "larger than"));
	}
}

/* Sections in sections, thousands of them: an answer, no crash. */
static void depth(void **state)
{
	enum { DEEP = 20000 };
	bh_problems problems = { .arena = *state };
	char *text = bh_new(*state, char, DEEP * 4 + 1);
	bh_scan_section *root;

	for (int i = 0; i < DEEP; i++)
		memcpy(text + 4 * i, "a {\n", 4);
	assert_false(bh_scan(&root, *state, "test", text, DEEP * 4, &problems));
	assert_non_null(strstr(problems.items[0].what, "too deep"));
	assert_true(problems.count <= 20);
}

/* A host program with a comma in its numbers changes nothing. */
static void locales(void **state)
{
	static const char *const names[] = { "de_DE.UTF-8", "de_DE.utf8", "fr_FR.UTF-8",
					     "de_DE" };
	const char *set = NULL;
	const bh_plan *plan;

	for (size_t i = 0; i < 4 && !set; i++)
		set = setlocale(LC_NUMERIC, names[i]);
	plan = planned(*state,
		       "instrument = \"strip-200\" anodes = {\"Cu\"}\n" HALITE "}");
	setlocale(LC_NUMERIC, "C");
	assert_near(plan->phases[0].cell.a_A, 5.6402, 0, set ? set : "C");
	assert_near(plan->instrument->smallest_step_deg, 0.001, 0, "instrument");
}

static void presets(void **state)
{
	bh_err err = { BH_OK, 0, 0, "", "", "" };
	bh_preset *list;
	size_t count;

	assert_true(bh_preset_list(&list, &count, *state, dirs, 1, &err));
	assert_true(count >= 6);
	for (size_t i = 0; i < count; i++) {
		bh_problems problems = { .arena = *state };
		bh_instrument *instrument;

		assert_true(strlen(list[i].title) > 10);
		assert_true(bh_instrument_read(&instrument, *state, list[i].name,
					       list[i].path, &problems));
		assert_true(instrument->tube_count > 0);
	}
}

static void files(void **state)
{
	static const char *const rows[] = { "tests", "tests/none.conf" };

	for (size_t i = 0; i < 2; i++) {
		bh_problems problems = { .arena = *state };
		bh_request *request;

		assert_false(
			bh_request_read(&request, *state, rows[i], &options, &problems));
		assert_int_equal(problems.count, 1);
		assert_int_equal(problems.items[0].code, BH_BAD_SYSTEM);
		assert_string_equal(problems.items[0].file, rows[i]);
	}
}

/* The rule of shares: the rest, and nothing scaled in silence. */
static void shares(void **state)
{
	const bh_request *r = request_of(
		*state, "instrument = \"strip-200\"\n" HALITE "share = 12.5 }\n" SILICON
			"}\n" CORUNDUM "share = 30 }\nspecimen { amorphous = 20 }");

	assert_near(r->phases[0].share_frac, 0.125, 1e-15, "given");
	assert_near(r->phases[1].share_frac, 0.375, 1e-15, "the rest");
	assert_near(r->amorphous_frac, 0.2, 1e-15, "amorphous");
	/* without aims: 3 % of every target that has counts, and a survey at 5 wt% */
	r = request_of(*state, "instrument = \"strip-200\"\n" HALITE
			       "targets = {\"2 0 0\", \"2 2 0\"} }\n");
	assert_int_equal(r->aim_count, 3);
	assert_near(r->aims[1].area_error_frac, 0.03, 0, "area");
	assert_near(r->aims[2].at_frac, 0.05, 0, "survey");
	assert_true(r->aims[0].by_default);
	/* any equivalent of a plane is accepted; printed is the one with fewest minus signs */
	r = request_of(*state, "instrument = \"strip-200\"\n" CORUNDUM
			       "targets = {\"-1 1 4\", \"1 0 -1 4\", \"0,1,2\"} }\n");
	assert_int_equal(r->phases[0].target_count, 2);
	assert_string_equal(r->phases[0].targets[0].text, "1 0 4");
	assert_string_equal(r->phases[0].targets[1].text, "0 1 2");
}

/* One table of keys: no doubles, help for each, sane ranges, defaults inside them. */
static void keys(void **state)
{
	(void)state;
	for (size_t i = 0; i < bh_key_count; i++) {
		const bh_key *k = &bh_keys[i];

		assert_ptr_equal(bh_key_find(k->file, k->section, k->name),
				 k); /* the first */
		assert_true(strlen(k->help) > 3);
		assert_true(k->low <= k->high);
		assert_true((k->type == BH_KEY_WORD) == (k->words != NULL));
		if (k->fallback && *k->fallback &&
		    (k->type == BH_KEY_NUMBER || k->type == BH_KEY_WHOLE)) {
			double value = strtod(k->fallback, NULL);

			assert_true(value >= k->low && value <= k->high);
		}
	}
	assert_null(bh_key_find(BH_FILE_REQUEST, "phase", "nonsense"));
}

int main(void)
{
	static const struct CMUnitTest tests[] = {
		cmocka_unit_test_setup_teardown(starter, set_up, tear_down),
		cmocka_unit_test_setup_teardown(dresses, set_up, tear_down),
		cmocka_unit_test_setup_teardown(columns, set_up, tear_down),
		cmocka_unit_test_setup_teardown(bytes, set_up, tear_down),
		cmocka_unit_test_setup_teardown(depth, set_up, tear_down),
		cmocka_unit_test_setup_teardown(locales, set_up, tear_down),
		cmocka_unit_test_setup_teardown(presets, set_up, tear_down),
		cmocka_unit_test_setup_teardown(files, set_up, tear_down),
		cmocka_unit_test_setup_teardown(shares, set_up, tear_down),
		cmocka_unit_test(keys),
	};

	return cmocka_run_group_tests_name("reading", tests, NULL, NULL);
}
