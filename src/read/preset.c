#include "read/preset.h"

#include <dirent.h>
#include <errno.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <sys/stat.h>

#include "read/build.h"
#include "read/bytes.h"
#include "read/conf.h"
#include "read/scan.h"
#include "read/suggest.h"

static bool ends_in_conf(const char *name)
{
	size_t n = strlen(name);

	return n > 5 && strcmp(name + n - 5, ".conf") == 0;
}

static bool is_file(const char *path)
{
	struct stat info;

	return stat(path, &info) == 0 && S_ISREG(info.st_mode);
}

/* The title of an instrument file, "" when it cannot be read. */
static const char *title_of(bh_arena *arena, const char *path)
{
	bh_problems ignored = { .arena = arena };
	bh_scan_section *root = NULL;
	const char *title = "";
	FILE *file = fopen(path, "rb");
	size_t length;
	char *bytes;

	if (!file)
		return title;
	if (bh_bytes_load(&bytes, &length, arena, path, file, &ignored) &&
	    bh_scan(&root, arena, path, bytes, length, &ignored))
		for (size_t i = 0; i < root->key_count; i++)
			if (strcmp(root->keys[i].name, "title") == 0)
				title = root->keys[i].values[0].text;
	fclose(file);
	return title;
}

static bool known(const bh_preset *presets, size_t count, const char *name)
{
	for (size_t i = 0; i < count; i++)
		if (strcmp(presets[i].name, name) == 0)
			return true;
	return false;
}

static bool add_dir(bh_preset **presets, size_t *count, bh_arena *arena, const char *dir)
{
	DIR *open = opendir(dir);
	struct dirent *entry;
	bool good = true;

	while (open && good && (entry = readdir(open))) {
		bh_preset made, *grown;
		char *name;

		if (!ends_in_conf(entry->d_name))
			continue;
		name = bh_arena_text(arena, entry->d_name);
		made.path = bh_arena_format(arena, "%s/%s", dir, entry->d_name);
		good = name && made.path;
		if (!good)
			break;
		name[strlen(name) - 5] = '\0';
		if (known(*presets, *count, name) || !is_file(made.path))
			continue;
		made.name = name;
		made.title = title_of(arena, made.path);
		grown = bh_grow(arena, *presets, bh_preset, *count, *count + 1);
		good = grown != NULL;
		if (good) {
			*presets = grown;
			grown[(*count)++] = made;
		}
	}
	if (open)
		closedir(open);
	return good;
}

static int by_name(const void *a, const void *b)
{
	return strcmp(((const bh_preset *)a)->name, ((const bh_preset *)b)->name);
}

bool bh_preset_list(bh_preset **presets, size_t *count, bh_arena *arena,
		    const char *const *dirs, size_t dir_count, bh_err *err)
{
	*presets = NULL;
	*count = 0;
	for (size_t i = 0; i < dir_count; i++)
		if (!add_dir(presets, count, arena, dirs[i]))
			return bh_fail_memory(err);
	if (*count)
		qsort(*presets, *count, sizeof **presets, by_name);
	return true;
}

bool bh_preset_find(const char **path, bh_arena *arena, const char *name_or_path,
		    const char *const *dirs, size_t dir_count, bh_err *err)
{
	bh_suggestion near = { 0 };
	bh_preset *presets;
	char list[240] = "";
	size_t count;

	if (strchr(name_or_path, '/') || ends_in_conf(name_or_path)) {
		*path = name_or_path;
		return is_file(name_or_path) ||
		       bh_fail(err, BH_BAD_INPUT,
			       "there is no instrument file %s\nbeamhour presets "
			       "lists what is shipped",
			       name_or_path);
	}
	if (!bh_preset_list(&presets, &count, arena, dirs, dir_count, err))
		return false;
	for (size_t i = 0; i < count; i++) {
		size_t used = strlen(list);

		if (strcmp(presets[i].name, name_or_path) == 0) {
			*path = presets[i].path;
			return true;
		}
		bh_suggest(&near, name_or_path, presets[i].name);
		snprintf(list + used, sizeof list - used, "%s%s", used ? ", " : "",
			 presets[i].name);
	}
	return bh_fail(err, BH_BAD_INPUT, "there is no instrument \"%s\"\n%sshipped: %s",
		       name_or_path, bh_suggest_hint(&near),
		       *list ? list : "none was found");
}

bool bh_instrument_read(bh_instrument **instrument, bh_arena *arena, const char *name,
			const char *path, bh_problems *problems)
{
	bh_conf_section *root;
	bh_err err = { .code = BH_OK };
	FILE *file = is_file(path) ? fopen(path, "rb") : NULL;
	size_t length;
	char *bytes;
	bool good;

	if (!file) {
		bh_fail(&err, BH_BAD_SYSTEM, "cannot read the instrument file: %s",
			errno ? strerror(errno) : "it is no file");
		snprintf(err.file, sizeof err.file, "%s", path);
		return bh_problem_add(problems, &err);
	}
	good = bh_bytes_load(&bytes, &length, arena, path, file, problems);
	fclose(file);
	*instrument = bh_new(arena, bh_instrument, 1);
	if (!*instrument) {
		problems->lost = true;
		return false;
	}
	snprintf((*instrument)->name, sizeof(*instrument)->name, "%s", name);
	if (!good)
		return false;
	good = bh_conf_read(&root, arena, BH_FILE_INSTRUMENT, path, bytes, length,
			    problems);
	/* what is good is looked at all the same: one run reports all problems */
	return root && bh_build_instrument(*instrument, arena, root, problems) && good;
}
