#include "cli/outputs.h"

#include <stdio.h>
#include <string.h>

/* clang-format off */
static const struct { const char *word, *ending; } kinds_of[BH_AS_COUNT] = {
	[BH_AS_TEXT] = { "text", ".txt"  },
	[BH_AS_JSON] = { "json", ".json" },
	[BH_AS_CSV]  = { "csv",  ".csv"  },
	[BH_AS_PDF]  = { "pdf",  ".pdf"  },
	[BH_AS_SVG]  = { "svg",  ".svg"  },
	[BH_AS_PNG]  = { "png",  ".png"  },
};
/* clang-format on */

static int as_of_path(const char *path)
{
	size_t n = strlen(path);

	for (int i = 0; i < BH_AS_COUNT; i++) {
		size_t m = strlen(kinds_of[i].ending);

		if (n > m && strcmp(path + n - m, kinds_of[i].ending) == 0)
			return i;
	}
	return -1;
}

static int as_of_word(const char *word)
{
	for (int i = 0; i < BH_AS_COUNT; i++)
		if (strcmp(word, kinds_of[i].word) == 0)
			return i;
	return -1;
}

static int complain(const char *what, const char *given, unsigned kinds, bool words)
{
	bh_err err = { BH_OK, 0, 0, "", "", "" };
	char list[100] = "";

	for (int i = 0; i < BH_AS_COUNT; i++)
		if (kinds & 1u << i) {
			size_t used = strlen(list);

			snprintf(list + used, sizeof list - used, "%s%s",
				 used ? ", " : "",
				 words ? kinds_of[i].word : kinds_of[i].ending);
		}
	bh_fail(&err, BH_BAD_INPUT, "%s %s\nallowed: %s", what, given, list);
	return bh_report(&err);
}

int bh_outputs_check(const bh_options *options, unsigned kinds)
{
	if (options->format) {
		int as = as_of_word(options->format);

		if (as < 0 || !(kinds & 1u << as))
			return complain("no such format:", options->format, kinds, true);
	}
	for (size_t i = 0; i < options->output_count; i++) {
		int as = as_of_path(options->outputs[i]);

		if (strcmp(options->outputs[i], "-") == 0)
			continue;
		if (as < 0 || !(kinds & 1u << as))
			return complain("the ending says no kind of output:",
					options->outputs[i], kinds, false);
	}
	return BH_EXIT_DONE;
}

static int write_one(const bh_plan *plan, const bh_options *options, bh_draw draw,
		     const char *path, bh_as as)
{
	bh_err err = { BH_OK, 0, 0, "", "", "" };
	bh_text bytes = { 0 };
	int status;

	if (!draw(&bytes, plan, as, options, &err))
		status = bh_report(&err);
	else if (bytes.lost && bh_fail_memory(&err))
		status = BH_EXIT_SYSTEM;
	else
		status = bytes.lost ? bh_report(&err) : bh_write_file(path, &bytes);
	bh_text_free(&bytes);
	return status;
}

int bh_outputs_write(const bh_plan *plan, const bh_options *options, bh_draw draw)
{
	bh_as shown = options->format ? (bh_as)as_of_word(options->format) : BH_AS_TEXT;
	bool to_stdout = !options->quiet;
	int status;

	for (size_t i = 0; i < options->output_count; i++) {
		bool dash = strcmp(options->outputs[i], "-") == 0;

		if (dash) {
			to_stdout = true;
			continue;
		}
		status = write_one(plan, options, draw, options->outputs[i],
				   (bh_as)as_of_path(options->outputs[i]));
		if (status != BH_EXIT_DONE)
			return status;
	}
	return to_stdout ? write_one(plan, options, draw, "-", shown) : BH_EXIT_DONE;
}
