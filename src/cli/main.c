#include <limits.h>
#include <locale.h>
#include <stdio.h>
#include <string.h>
#include <unistd.h>

#include "base/nearest.h"
#include "cli/commands.h"
#include "render/render.h"

static void print_help(void)
{
	printf("beamhour plans powder X-ray diffraction scans.\n\nusage: beamhour "
	       "COMMAND "
	       "[OPTION...]\n\ncommands:\n");
	for (int i = 0; i < bh_command_count; i++) {
		char head[40];

		snprintf(head, sizeof head, "%s %s", bh_commands[i].name,
			 bh_commands[i].arguments);
		bh_options_print_row(head, bh_commands[i].help);
	}
	printf("\nREQUEST is a file, or - for standard input.\n\noptions:\n");
	bh_options_print();
	printf("\nexit status: 0 done; 1 done, but an aim is not met or a severe finding "
	       "stands;\n"
	       "2 the input or the usage is wrong; 3 the system failed\n");
}

/* Presets beside the program in its own tree, beside it when installed, and where it was
 * told at build time. */
static void find_presets(bh_options *options, char rooms[2][PATH_MAX + 40],
			 const char *called_as)
{
	static const char *const beside[2] = { "/../presets/instruments",
					       "/../share/beamhour/presets/instruments" };
	char own[PATH_MAX];
	ssize_t n = readlink("/proc/self/exe", own, sizeof own - 1);

	if (n <= 0 && strchr(called_as, '/')) /* no /proc: as it was called */
		n = snprintf(own, sizeof own, "%s", called_as);
	if (n > 0 && (size_t)n < sizeof own) {
		char *slash;

		own[n] = '\0';
		slash = strrchr(own, '/');
		if (slash)
			*slash = '\0';
		for (int i = 0; i < 2; i++) {
			snprintf(rooms[i], PATH_MAX + 40, "%s%s", own, beside[i]);
			options->preset_dirs[options->preset_dir_count++] = rooms[i];
		}
	}
	options->preset_dirs[options->preset_dir_count++] =
		BH_SHARE "/presets/instruments";
}

static int usage_error(const char *word)
{
	const char *best = NULL;
	size_t least = 4;
	bh_err err = { BH_OK, 0, 0, "", "", "" };

	if (!word) {
		bh_fail(&err, BH_BAD_INPUT,
			"no command given\nbeamhour --help lists them");
		return bh_report(&err);
	}
	for (int i = 0; i < bh_command_count; i++) {
		size_t d = bh_nearest_distance(word, bh_commands[i].name);

		if (d < least) {
			least = d;
			best = bh_commands[i].name;
		}
	}
	bh_fail(&err, BH_BAD_INPUT, "unknown command \"%s\"\n%s%s%s", word,
		best ? "did you mean \"" : "beamhour --help lists them", best ? best : "",
		best ? "\"?" : "");
	return bh_report(&err);
}

static int run(const bh_options *options)
{
	bh_err err = { BH_OK, 0, 0, "", "", "" };

	for (int i = 0; options->command && i < bh_command_count; i++) {
		const bh_command *command = &bh_commands[i];

		if (strcmp(options->command, command->name) != 0)
			continue;
		if (options->argument_count < command->least ||
		    options->argument_count > command->most) {
			bh_fail(&err, BH_BAD_INPUT, "%s takes %s%s\nbeamhour %s %s",
				command->name,
				command->most == 0 ? "no argument" : command->arguments,
				command->least == 1 ? ", once" : "", command->name,
				command->arguments);
			return bh_report(&err);
		}
		return command->run(options);
	}
	return usage_error(options->command);
}

int main(int argc, char **argv)
{
	char rooms[2][PATH_MAX + 40];
	bh_options options;
	bh_err err = { BH_OK, 0, 0, "", "", "" };
	int status;

	setlocale(LC_CTYPE, "");
	if (!bh_options_read(&options, argc, argv, &err))
		return bh_report(&err);
	if (options.version) {
		printf("beamhour %s\n", BH_VERSION);
		return BH_EXIT_DONE;
	}
	if (options.help) {
		print_help();
		return BH_EXIT_DONE;
	}
	find_presets(&options, rooms, argv[0]);
	status = run(&options);
	if (fflush(stdout) != 0 || ferror(stdout)) {
		fprintf(stderr, "beamhour: cannot write standard output\n");
		status = BH_EXIT_SYSTEM;
	}
	bh_page_release();
	return status;
}
