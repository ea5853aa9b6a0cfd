#include "cli/commands.h"

/* clang-format off */
const bh_command bh_commands[] = {
	{ "plan",        bh_cmd_plan,        1, 1, "REQUEST", "the scan plan: to the terminal, and to each -o FILE" },
	{ "reflections", bh_cmd_reflections, 1, 1, "REQUEST|FILE.cif", "every reflection of every phase in range: table, CSV or JSON" },
	{ "check",       bh_cmd_check,       1, 1, "REQUEST", "read and resolve only: every problem with file:line:column" },
	{ "presets",     bh_cmd_presets,     0, 1, "[NAME]",  "the instruments that are shipped; with a name, that file" },
	{ "new",         bh_cmd_new,         0, 0, "",        "a commented starter request" },
};
/* clang-format on */
const int bh_command_count = sizeof bh_commands / sizeof *bh_commands;
