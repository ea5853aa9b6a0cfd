#ifndef CLI_OUTPUTS_H
#define CLI_OUTPUTS_H

#include "cli/commands.h"
#include "model/plan.h"

/* Kinds of output, by word and by the ending of a file name. */
typedef enum {
	BH_AS_TEXT,
	BH_AS_JSON,
	BH_AS_CSV,
	BH_AS_PDF,
	BH_AS_SVG,
	BH_AS_PNG,
	BH_AS_COUNT
} bh_as;

/* What a command makes of a plan in one kind; false: err says why. */
typedef bool (*bh_draw)(bh_text *bytes, const bh_plan *plan, bh_as as,
			const bh_options *options, bh_err *err);

/* Check every -o and --format against the kinds that a command has (a bit for each bh_as)
 * before any work is done. Returns BH_EXIT_DONE or what was reported. */
int bh_outputs_check(const bh_options *options, unsigned kinds);

/* Write all outputs of a plan: to the terminal, unless --quiet or only "-o -", and to each
 * file. */
int bh_outputs_write(const bh_plan *plan, const bh_options *options, bh_draw draw);

#endif
