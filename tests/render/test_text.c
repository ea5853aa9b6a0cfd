/* The plan on terminals of several widths. */
#include "support/near.h"

#include <string.h>

#include "base/text.h"
#include "render/render.h"
#include "support/planned.h"

static const char *const examples[] = {
	"examples/battery-cathode.conf",      "examples/cement-dust-quartz.conf",
	"examples/gear-steel-austenite.conf", "examples/glaze-pigment.conf",
	"examples/harbour-steel.conf",	      "examples/paint-scraping.conf",
};

static bh_plan *example(bh_arena *arena, const char *path)
{
	char text[20000];
	FILE *file = fopen(path, "rb");
	size_t n;

	assert_non_null(file);
	n = fread(text, 1, sizeof text - 1, file);
	fclose(file);
	text[n] = '\0';
	return planned(arena, text);
}

static size_t widest_line(const char *text)
{
	size_t widest = 0;

	while (*text) {
		char line[2000];
		size_t n = strcspn(text, "\n"), columns;

		assert_true(n < sizeof line);
		memcpy(line, text, n);
		line[n] = '\0';
		columns = bh_text_columns(line);
		widest = columns > widest ? columns : widest;
		text += n + (text[n] == '\n');
	}
	return widest;
}

static void widths(void **state)
{
	static const int columns[] = { 60, 80, 120 };
	bh_arena *arena = bh_arena_new();

	(void)state;
	for (size_t i = 0; i < sizeof examples / sizeof *examples; i++) {
		const bh_plan *plan = example(arena, examples[i]);

		for (size_t k = 0; k < 3; k++) {
			bh_text text = { 0 };
			bh_err err = { BH_OK, 0, 0, "", "", "" };

			assert_true(bh_render_text(
				&text, plan, (bh_look){ columns[k], false, true }, &err));
			if (widest_line(text.bytes) > (size_t)columns[k])
				fail_msg("%s: %zu of %d columns", examples[i],
					 widest_line(text.bytes), columns[k]);
			assert_null(strchr(text.bytes, '\033'));
			bh_text_free(&text);
		}
	}
	bh_arena_free(arena);
}

/* Words of a text without line breaks and indents. */
static void squeeze(char *text)
{
	char *to = text;

	for (const char *s = text; *s; s++) {
		bool blank = *s == ' ' || *s == '\n';

		if (!blank)
			*to++ = *s;
	}
	*to = '\0';
}

/* Everything that a plan knows stands on the screen. */
static void complete(void **state)
{
	bh_arena *arena = bh_arena_new();

	(void)state;
	for (size_t i = 0; i < sizeof examples / sizeof *examples; i++) {
		const bh_plan *plan = example(arena, examples[i]);
		bh_err err = { BH_OK, 0, 0, "", "", "" };
		bh_text text = { 0 };

		assert_true(
			bh_render_text(&text, plan, (bh_look){ 80, false, false }, &err));
		assert_null(strstr(text.bytes, "Where the numbers come from"));
		if (plan->booking_short)
			assert_true(strstr(text.bytes, "too short") <
				    strstr(text.bytes, "Pattern"));
		squeeze(text.bytes);
		for (size_t k = 0; k < plan->finding_count; k++) {
			char *words = bh_arena_text(arena, plan->findings[k].text);

			squeeze(words);
			assert_non_null(strstr(text.bytes, words));
		}
		for (size_t k = 0; k < plan->caution_count; k++) {
			char *words = bh_arena_text(arena, plan->cautions[k].text);

			squeeze(words);
			assert_non_null(strstr(text.bytes, words));
		}
		for (size_t k = 0; k < plan->note_count; k++) {
			char *words = bh_arena_text(arena, plan->notes[k]);

			squeeze(words);
			assert_non_null(strstr(text.bytes, words));
		}
		bh_text_free(&text);
	}
	bh_arena_free(arena);
}

/* Every plan carries the usual cautions and the hazards of its elements. */
static void cautions(void **state)
{
	static const char *const topics[] = {
		"who may work", "before the beam", "beam on",
		"machine",	"specimen",	   "if an exposure is suspected"
	};
	bh_arena *arena = bh_arena_new();
	const bh_plan *plan;
	bool nickel = false, cobalt = false, silica = false;

	(void)state;
	for (size_t i = 0; i < sizeof examples / sizeof *examples; i++) {
		plan = example(arena, examples[i]);
		for (size_t k = 0; k < sizeof topics / sizeof *topics; k++) {
			bool found = false;

			for (size_t m = 0; m < plan->caution_count; m++)
				found = found ||
					strcmp(plan->cautions[m].topic, topics[k]) == 0;
			assert_true(found);
		}
	}
	plan = example(arena, examples[0]);
	for (size_t m = 0; m < plan->caution_count; m++) {
		nickel = nickel || strstr(plan->cautions[m].text, "Nickel");
		cobalt = cobalt || strstr(plan->cautions[m].text, "Cobalt");
	}
	assert_true(nickel && cobalt);
	plan = example(arena, examples[1]);
	for (size_t m = 0; m < plan->caution_count; m++)
		silica = silica || strstr(plan->cautions[m].text, "silica");
	assert_true(silica);
	bh_arena_free(arena);
}

int main(void)
{
	static const struct CMUnitTest tests[] = {
		cmocka_unit_test(widths),
		cmocka_unit_test(complete),
		cmocka_unit_test(cautions),
	};

	return cmocka_run_group_tests_name("text", tests, NULL, NULL);
}
