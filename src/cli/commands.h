#ifndef CLI_COMMANDS_H
#define CLI_COMMANDS_H

#include "base/text.h"
#include "cli/options.h"

/* Exit status of the program. */
enum {
	BH_EXIT_DONE = 0,
	BH_EXIT_ATTENTION = 1, /* an aim is not met, or a severe finding stands */
	BH_EXIT_INPUT = 2,     /* the input or the usage is wrong                */
	BH_EXIT_SYSTEM = 3     /* a file or memory failed                        */
};

typedef struct {
	const char *name;
	int (*run)(const bh_options *options);
	int least, most;       /* arguments after the name */
	const char *arguments; /* for the usage line       */
	const char *help;
} bh_command;

extern const bh_command bh_commands[];
extern const int bh_command_count;

int bh_cmd_plan(const bh_options *options);
int bh_cmd_reflections(const bh_options *options);
int bh_cmd_check(const bh_options *options);
int bh_cmd_presets(const bh_options *options);
int bh_cmd_new(const bh_options *options);

/* What every command shares. */

/* Say an error on stderr, file:line:col first; returns the exit status it means. */
int bh_report(const bh_err *err);
int bh_report_all(const bh_problems *problems);

/* Say on stderr what a phase's structure file makes one mind. */
void bh_report_remarks(const bh_phase *phase);

/* Run a command's work with memory that lives as long as it. */
int bh_with_arena(const bh_options *options,
		  int (*work)(bh_arena *arena, const bh_options *options));

/* Read the request named by the first argument. Returns BH_EXIT_DONE or what was reported. */
int bh_open_request(bh_request **request, bh_arena *arena, const bh_options *options);

/* Write bytes to a file, whole or not at all (temporary file, fsync, rename); "-" is stdout. */
int bh_write_file(const char *path, const bh_text *bytes);

/* Columns of the terminal on stdout, 80 when it is none; and whether to colour. */
int bh_terminal_columns(void);
bool bh_terminal_color(const bh_options *options);

#endif
