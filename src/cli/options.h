#ifndef CLI_OPTIONS_H
#define CLI_OPTIONS_H

#include <stdbool.h>
#include <stddef.h>

#include "base/err.h"
#include "read/request.h"

enum { BH_MOST_OUTPUTS = 16 };

typedef enum { BH_COLOR_AUTO, BH_COLOR_ALWAYS, BH_COLOR_NEVER } bh_color;

/* The command line, checked. Strings are borrowed from argv. */
typedef struct {
	const char *command;
	const char *arguments[4];
	int argument_count;
	const char *outputs[BH_MOST_OUTPUTS];
	size_t output_count;
	const char *format; /* NULL: not given      */
	const char *anode, *instrument;
	double within_s;	 /* 0: not given         */
	double two_theta_deg[2]; /* low < high, else not given */
	bool two_theta_given;
	double d_A[2]; /* 0, HUGE_VAL: not given */
	double least_percent;
	bh_without without;
	bool why, quiet, help, version;
	bh_color color;
	const char *preset_dirs[4];
	size_t preset_dir_count;
} bh_options;

/* Read argv. false: *err says what is wrong, with the nearest word. */
bool bh_options_read(bh_options *options, int argc, char **argv, bh_err *err);

/* One row of a help list: a head, and its help broken to 80 columns. */
void bh_options_print_row(const char *head, const char *help);

/* The list of options, for --help. */
void bh_options_print(void);

#endif
