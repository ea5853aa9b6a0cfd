/* Reading: what people's files look like, and what must not change a number. */
#include "support/near.h"

#include <locale.h>
#include <stdlib.h>
#include <string.h>

#include "read/bytes.h"
#include "read/check.h"
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

/* Reads a text that must be refused; returns its problems. */
static bh_problems refused(bh_arena *arena, const char *text, size_t length)
{
	bh_problems problems = { .arena = arena };
	bh_request *request;

	assert_false(bh_request_read_text(&request, arena, "test", text, length, &options,
					  &problems));
	assert_true(problems.count > 0);
	return problems;
}

/* Bytes that are no text: The Unicode Standard, table 3-7. Each at its place, once a line. */
static void bytes(void **state)
{
	static const struct {
		const char *text;
		size_t length;
		int line, col;
		const char *says;
	} rows[] = {
		{ "title = \"a\0b\"\n", 14, 1, 11, "control byte (0x00)" },
		{ "title = \"a\x1B[31m\"\n", 17, 1, 11, "control byte (0x1b)" },
		{ "title = \"a\x7F\"\n", 13, 1, 11, "control byte (0x7f)" },
		{ "# \xC2\x9B\n", 5, 1, 3, "control byte" }, /* U+009B steers terminals */
		{ "# 1\n# b \xFF \xFF\n", 12, 2, 5, "not UTF-8" },
		{ "# a \xC3\n", 6, 1, 5, "not UTF-8" },
		{ "# \xC0\xAF\n", 5, 1, 3, "not UTF-8" },	  /* overlong / */
		{ "# \xE0\x80\xAF\n", 6, 1, 3, "not UTF-8" },	  /* overlong / */
		{ "# \xED\xA0\x80\n", 6, 1, 3, "not UTF-8" },	  /* a surrogate */
		{ "# \xF4\x90\x80\x80\n", 7, 1, 3, "not UTF-8" }, /* above U+10FFFF */
		{ "# \xC2\xB5 \xB5m\n", 8, 1, 5, "not UTF-8" }, /* Latin-1 after UTF-8 */
		{ "\xFF\xFE#\0", 4, 1, 1, "UTF-16" },
		{ "\xFE\xFF\0#", 4, 1, 1, "UTF-16" },
	};

	for (size_t i = 0; i < sizeof rows / sizeof *rows; i++) {
		bh_problems problems = refused(*state, rows[i].text, rows[i].length);
		const bh_err *first = &problems.items[0];

		if (first->line != rows[i].line || first->col != rows[i].col ||
		    !strstr(first->what, rows[i].says))
			fail_msg("row %zu: %d:%d %s", i, first->line, first->col,
				 first->what);
		assert_int_equal(first->code, BH_BAD_INPUT);
	}
}

/* More of it than anyone writes: an answer, and soon. */
static void sizes(void **state)
{
	char *line = bh_new(*state, char, BH_FILE_MOST);
	bh_problems problems;
	size_t n = 0;

	memset(line, '#', BH_LINE_MOST + 2);
	problems = refused(*state, line, BH_LINE_MOST);
	assert_null(strstr(problems.items[0].what, "longer than"));
	problems = refused(*state, line, BH_LINE_MOST + 2);
	assert_non_null(strstr(problems.items[0].what, "longer than"));
	assert_int_equal(problems.items[0].line, 1);
	for (n = 0; n + 8 < BH_FILE_MOST; n += 8)
		memcpy(line + n, "a = {1}\n", 8);
	problems = refused(*state, line, n);
	assert_true(problems.count < 100);
	for (n = 0; n + 5 < BH_FILE_MOST; n += 5)
		memcpy(line + n, "a {}\n", 5);
	problems = refused(*state, line, n);
	assert_true(problems.count < 2000);
	memset(line, '{', 4000);
	assert_true(refused(*state, line, 4000).count < 100);
	memset(line, '}', 4000);
	assert_true(refused(*state, line, 4000).count < 100);
	memset(line, '"', 3999);
	assert_true(refused(*state, line, 3999).count < 100);
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

/* What cannot be read is the system's fault, and no place in the file is named. */
static void files(void **state)
{
	static const struct {
		const char *path, *says;
	} rows[] = {
		{ "tests", "folder" },
		{ "tests/none.conf", "No such file" },
		{ "tests/read/test_read.c/none.conf", "Not a directory" },
	};

	for (size_t i = 0; i < sizeof rows / sizeof *rows; i++) {
		bh_problems problems = { .arena = *state };
		bh_request *request;

		assert_false(bh_request_read(&request, *state, rows[i].path, &options,
					     &problems));
		assert_int_equal(problems.count, 1);
		assert_int_equal(problems.items[0].code, BH_BAD_SYSTEM);
		assert_int_equal(problems.items[0].line, 0);
		assert_string_equal(problems.items[0].file, rows[i].path);
		assert_non_null(strstr(problems.items[0].what, rows[i].says));
	}
}

/* The request as it comes through a pipe. */
static void standard_input(void **state)
{
	static const char *const texts[] = { "instrument = \"strip-200\"\n" HALITE "}\n",
					     "", "nonsense = 1\n" };
	bh_read_options piped = options;

	for (size_t i = 0; i < 3; i++) {
		bh_problems problems = { .arena = *state };
		bh_request *request;
		bool good;

		piped.stdin_stream = tmpfile();
		assert_non_null(piped.stdin_stream);
		fputs(texts[i], piped.stdin_stream);
		rewind(piped.stdin_stream);
		good = bh_request_read(&request, *state, "-", &piped, &problems);
		fclose(piped.stdin_stream);
		assert_int_equal(good, i == 0);
		for (size_t k = 0; k < problems.count; k++)
			assert_string_equal(problems.items[k].file, "standard input");
	}
}

static void too_large(void **state)
{
	bh_problems problems = { .arena = *state };
	bh_request *request;
	bh_read_options piped = options;

	piped.stdin_stream = tmpfile();
	assert_non_null(piped.stdin_stream);
	for (int i = 0; i < 40000; i++)
		fputs("# thirty-two bytes of a comment\n", piped.stdin_stream);
	rewind(piped.stdin_stream);
	assert_false(bh_request_read(&request, *state, "-", &piped, &problems));
	fclose(piped.stdin_stream);
	assert_int_equal(problems.count, 1);
	assert_non_null(strstr(problems.items[0].what, "larger than"));
	assert_int_equal(problems.items[0].code, BH_BAD_INPUT);
}

/* All problems of one run, by line and column, whichever stage found them. */
static void sorted(void **state)
{
	static const char text[] =
		"instrument = \"strip-20\"\n"
		"two_theta = {80, 10}\n"
		"phase \"b\" { space_group = \"P q\" cell = {5} share = 5 }\n"
		"phase \"c\" { space_group = \"P 1\" cell = {5, 6} }\n"
		"specimen { holder = \"wood\" length_mm = nan }\n"
		"colour 7\n"
		"booking { longest = \"soon\" most_ranges = 0 }\n";
	bh_problems problems = refused(*state, text, strlen(text));
	int last = 0, seen = 0;

	for (size_t i = 0; i < problems.count; i++) {
		const bh_err *p = &problems.items[i];
		int at = 1000 * p->line + p->col;

		assert_true(at >= last);
		last = at;
		seen |= 1 << p->line;
	}
	/* the limits of line 2 wait for the instrument that is not there */
	assert_int_equal(seen & ~(1 << 2),
			 1 << 1 | 1 << 3 | 1 << 4 | 1 << 5 | 1 << 6 | 1 << 7);
	assert_true(problems.count >= 8);
}

static double mass_frac(const bh_composition *c, int z)
{
	for (size_t i = 0; i < c->count; i++)
		if (c->elements[i].z == z)
			return c->elements[i].mass_frac;
	return 0;
}

/* Gypsum and its water: Ca 23.28, S 18.62, O 55.76, H 2.34 wt% from the atomic weights 40.078,
 * 32.06, 15.999, 1.008 (IUPAC abridged, from memory). */
static void hydrate(void **state)
{
	static const struct {
		int z;
		double percent;
		const char *symbol;
	} rows[] = { { 20, 23.28, "Ca" },
		     { 16, 18.62, "S" },
		     { 8, 55.76, "O" },
		     { 1, 2.34, "H" } };
	static const char *const formulas[] = { "CaSO4*2H2O", "CaSO4(H2O)2", "CaH4O6S" };

	for (size_t f = 0; f < 3; f++) {
		const bh_request *r = request_of(
			*state,
			bh_arena_format(
				*state,
				"instrument = \"strip-200\"\nphase \"gypsum\" { d "
				"= {7.63, 4.28} formula = \"%s\" density = 2.32 }",
				formulas[f]));

		for (size_t i = 0; i < 4; i++)
			assert_near(100 * mass_frac(&r->phases[0].composition, rows[i].z),
				    rows[i].percent, 0.02, rows[i].symbol);
		assert_near(r->phases[0].density_g_cm3, 2.32, 0, "density");
	}
}

/* Without aims: what has counts is asked for, and nothing else. */
static void default_aims(void **state)
{
	const bh_request *r = request_of(
		*state,
		"instrument = \"strip-200\"\n" HALITE
		"share = 60 targets = {\"2 0 0\"} }\n"
		"phase \"bare\" { space_group = \"F m -3 m\" cell = {4} share = 0 "
		"targets "
		"= {\"1 1 1\"} }\n"
		"phase \"list\" { d = {3.34, 2.46} intensity = {100, 8} corundum_ratio = "
		"3 formula = \"SiO2\" density = 2.65 targets = {\"3.34\"} }\n" SILICON
		"share = 0 targets = {\"2 2 0\"} }");

	assert_int_equal(r->aim_count, 3);
	assert_int_equal(r->aims[0].phase, 0);
	assert_int_equal(r->aims[1].phase, 2);
	assert_int_equal(r->aims[2].kind, BH_AIM_SURVEY);
	assert_near(r->phases[2].share_frac, 0.4, 1e-15, "the rest");
	for (size_t i = 0; i < 3; i++)
		assert_true(r->aims[i].by_default);
	r = request_of(*state, "instrument = \"strip-200\"\n" HALITE
			       "} aim \"survey\" { at = 2 }");
	assert_int_equal(r->aim_count, 1);
	assert_false(r->aims[0].by_default);
	assert_near(r->aims[0].at_frac, 0.02, 1e-15, "as asked");
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

static bool known_section(const bh_key *key)
{
	if (!*key->section)
		return true;
	for (size_t i = 0; i < bh_section_kind_count; i++) {
		const bh_section_kind *kind = &bh_section_kinds[i];
		size_t n = strlen(kind->name);

		/* "aim line" is a section "aim" */
		if (kind->file == key->file &&
		    strncmp(kind->name, key->section, n) == 0 &&
		    (key->section[n] == '\0' || key->section[n] == ' '))
			return true;
	}
	return false;
}

/* A default must be what the reader itself would take. */
static bool good_default(const bh_key *key)
{
	char words[300], fallback[100];
	double value;

	switch (key->type) {
	case BH_KEY_NUMBER:
	case BH_KEY_WHOLE:
	case BH_KEY_DURATION:
	case BH_KEY_FLAG:
		if (!bh_check_number(&value, key, key->fallback))
			return false;
		return key->type == BH_KEY_FLAG ||
		       (value >= key->low && value <= key->high &&
			(key->type != BH_KEY_WHOLE || !(fabs(value - round(value)) > 0)));
	case BH_KEY_WORD:
		snprintf(words, sizeof words, " %s ", key->words);
		snprintf(fallback, sizeof fallback, " %s ", key->fallback);
		return strstr(words, fallback) != NULL;
	default:
		return false; /* texts and lists have none */
	}
}

/* One table of keys: no doubles, help for each, sane ranges, defaults inside them. */
static void keys(void **state)
{
	(void)state;
	for (size_t i = 0; i < bh_key_count; i++) {
		const bh_key *k = &bh_keys[i];

		assert_ptr_equal(bh_key_find(k->file, k->section, k->name),
				 k); /* the first */
		if (strlen(k->help) < 4 || !(k->low <= k->high) || !known_section(k) ||
		    (k->type == BH_KEY_WORD) != (k->words != NULL) || !k->unit)
			fail_msg("the row of \"%s\" in \"%s\"", k->name, k->section);
		if (k->fallback && *k->fallback && !good_default(k))
			fail_msg("the default of \"%s\" is \"%s\"", k->name, k->fallback);
	}
	assert_null(bh_key_find(BH_FILE_REQUEST, "phase", "nonsense"));
	assert_null(bh_key_find(BH_FILE_INSTRUMENT, "phase", "cell"));
}

/* Sections: none twice, and each has keys. */
static void sections(void **state)
{
	(void)state;
	for (size_t i = 0; i < bh_section_kind_count; i++) {
		const bh_section_kind *kind = &bh_section_kinds[i];
		size_t n = strlen(kind->name), count = 0;

		for (size_t k = 0; k < i; k++)
			assert_false(bh_section_kinds[k].file == kind->file &&
				     strcmp(bh_section_kinds[k].name, kind->name) == 0);
		for (size_t k = 0; k < bh_key_count; k++)
			count += bh_keys[k].file == kind->file &&
				 strncmp(bh_keys[k].section, kind->name, n) == 0;
		assert_true(count > 0);
	}
}

int main(void)
{
	static const struct CMUnitTest tests[] = {
		cmocka_unit_test_setup_teardown(starter, set_up, tear_down),
		cmocka_unit_test_setup_teardown(dresses, set_up, tear_down),
		cmocka_unit_test_setup_teardown(columns, set_up, tear_down),
		cmocka_unit_test_setup_teardown(bytes, set_up, tear_down),
		cmocka_unit_test_setup_teardown(sizes, set_up, tear_down),
		cmocka_unit_test_setup_teardown(depth, set_up, tear_down),
		cmocka_unit_test_setup_teardown(locales, set_up, tear_down),
		cmocka_unit_test_setup_teardown(presets, set_up, tear_down),
		cmocka_unit_test_setup_teardown(files, set_up, tear_down),
		cmocka_unit_test_setup_teardown(standard_input, set_up, tear_down),
		cmocka_unit_test_setup_teardown(too_large, set_up, tear_down),
		cmocka_unit_test_setup_teardown(sorted, set_up, tear_down),
		cmocka_unit_test_setup_teardown(hydrate, set_up, tear_down),
		cmocka_unit_test_setup_teardown(shares, set_up, tear_down),
		cmocka_unit_test_setup_teardown(default_aims, set_up, tear_down),
		cmocka_unit_test(keys),
		cmocka_unit_test(sections),
	};

	return cmocka_run_group_tests_name("reading", tests, NULL, NULL);
}
