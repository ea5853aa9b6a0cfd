/* The public header alone: plan, render, free, errors. */
#include "support/near.h"

#include <string.h>

#include "beamhour.h"

static const char *const dirs[] = { "presets/instruments" };

static beamhour_plan *plan_of(const char *text, beamhour_error *errors, size_t room,
			      size_t *count)
{
	beamhour_input input = { "test", text, strlen(text), dirs, 1 };

	return beamhour_plan_text(&input, errors, room, count);
}

static void renders(void **state)
{
	static const struct {
		const char *kind, *start;
	} rows[] = { { "text", "Salt" },
		     { "json", "{" },
		     { "pdf", "%PDF-" },
		     { "svg", "<?xml" },
		     { "png", "\x89PNG" } };
	beamhour_error errors[4];
	size_t count;
	beamhour_plan *plan =
		plan_of("title = \"Salt\" instrument = \"strip-200\" anodes = {\"Cu\"}\n"
			"phase \"halite\" { space_group = \"F m -3 m\" cell = {5.6402}\n"
			"site \"Na\" { element = \"Na\" at = {0, 0, 0} }\n"
			"site \"Cl\" { element = \"Cl\" at = {0.5, 0.5, 0.5} }\n"
			"targets = {\"2 0 0\"} }\n"
			"specimen { grain_um = 2 spin = true }\n"
			"aim \"line\" { phase = \"halite\" plane = \"2 0 0\" "
			"area_error = 5 }",
			errors, 4, &count);

	(void)state;
	assert_non_null(plan);
	assert_int_equal(beamhour_plan_wants_attention(plan), 0);
	for (size_t i = 0; i < sizeof rows / sizeof *rows; i++) {
		size_t length;
		char *bytes = beamhour_render(plan, rows[i].kind, &length, &errors[0]);

		assert_non_null(bytes);
		assert_true(length > 1000);
		assert_memory_equal(bytes, rows[i].start, strlen(rows[i].start));
		beamhour_bytes_free(bytes);
	}
	memset(errors, 0, sizeof errors);
	assert_null(beamhour_render(plan, "docx", &count, &errors[0]));
	assert_int_equal(errors[0].status, 2);
	beamhour_plan_free(plan);
	beamhour_plan_free(NULL);
	beamhour_release();
}

static void errors(void **state)
{
	beamhour_error list[2];
	size_t count;

	(void)state;
	assert_null(plan_of("instrument = \"strip-200\"\nphase \"x\" { cel = {1} }\n",
			    list, 2, &count));
	assert_int_equal(count, 1);
	assert_int_equal(list[0].status, 2);
	assert_int_equal(list[0].line, 2);
	assert_int_equal(list[0].col, 13);
	assert_non_null(strstr(list[0].hint, "cell"));
	assert_null(plan_of("", list, 2, &count));
	assert_true(count >= 1);
	assert_true(strlen(beamhour_version()) >= 5);
}

int main(void)
{
	static const struct CMUnitTest tests[] = {
		cmocka_unit_test(renders),
		cmocka_unit_test(errors),
	};

	return cmocka_run_group_tests_name("public face", tests, NULL, NULL);
}
