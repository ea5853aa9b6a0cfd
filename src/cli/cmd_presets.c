#include <errno.h>
#include <stdio.h>
#include <string.h>

#include "cli/commands.h"
#include "read/preset.h"

static int list(bh_arena *arena, const bh_options *options)
{
	bh_err err = { BH_OK, 0, 0, "", "", "" };
	bh_preset *presets;
	size_t count;

	if (!bh_preset_list(&presets, &count, arena, options->preset_dirs,
			    options->preset_dir_count, &err))
		return bh_report(&err);
	for (size_t i = 0; i < count; i++)
		printf("%-16s %s\n", presets[i].name, presets[i].title);
	return BH_EXIT_DONE;
}

static int show(bh_arena *arena, const bh_options *options)
{
	bh_err err = { BH_OK, 0, 0, "", "", "" };
	char bytes[4096];
	const char *path;
	bool bad;
	FILE *file;
	size_t n;

	if (!bh_preset_find(&path, arena, options->arguments[0], options->preset_dirs,
			    options->preset_dir_count, &err))
		return bh_report(&err);
	file = fopen(path, "rb");
	if (!file) {
		bh_fail(&err, BH_BAD_SYSTEM, "cannot read %s: %s", path, strerror(errno));
		return bh_report(&err);
	}
	while ((n = fread(bytes, 1, sizeof bytes, file)) > 0)
		fwrite(bytes, 1, n, stdout);
	bad = ferror(file);
	fclose(file);
	if (!bad)
		return BH_EXIT_DONE;
	bh_fail(&err, BH_BAD_SYSTEM, "cannot read %s", path);
	return bh_report(&err);
}

int bh_cmd_presets(const bh_options *options)
{
	return bh_with_arena(options, options->argument_count ? show : list);
}
