#include "read/request.h"

#include <errno.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <sys/stat.h>

#include "read/build.h"
#include "read/bytes.h"
#include "read/preset.h"

static bool unreadable(bh_problems *problems, const char *path, const char *why)
{
	bh_err err = { .code = BH_OK };

	bh_fail(&err, BH_BAD_SYSTEM, "cannot read: %s", why);
	snprintf(err.file, sizeof err.file, "%s", path);
	return bh_problem_add(problems, &err);
}

static bool is_path(const char *name)
{
	size_t n = strlen(name);

	return strchr(name, '/') || (n > 5 && strcmp(name + n - 5, ".conf") == 0);
}

/* A path that stands in a request leads on from the request's folder; where nothing lies
 * there, from the working folder. NULL: memory is out. */
static const char *from_folder_of(bh_arena *arena, const char *file, const char *name)
{
	const char *slash = strrchr(file, '/');
	struct stat info;
	char *path;

	if (!is_path(name) || name[0] == '/' || !slash)
		return name;
	path = bh_arena_format(arena, "%.*s/%s", (int)(slash - file), file, name);
	return !path || stat(path, &info) == 0 ? path : name;
}

static bool load_instrument(bh_request *request, bh_arena *arena,
			    const bh_conf_section *root, const bh_read_options *options,
			    bh_problems *problems)
{
	const bh_conf_entry *given = bh_conf_entry_of(root, "instrument");
	const char *name = options->instrument ? options->instrument
			   : given	       ? given->values[0].text
					       : "";
	bh_place place = options->instrument ? (bh_place){ "--instrument", 0, 0 }
			 : given	     ? given->values[0].place
					     : root->place;
	bh_err err = { BH_OK, 0, 0, "", "", "" };
	bh_instrument *instrument;
	const char *path;

	if (!options->instrument)
		name = from_folder_of(arena, root->place.file, name);
	if (!name) {
		problems->lost = true;
		return false;
	}
	if (!*name && problems->count > 0) /* it may stand in a line that is wrong */
		return false;
	if (!*name)
		return bh_problem(problems, place,
				  "the request names no instrument\nadd instrument = "
				  "\"strip-200\" or the path of a file; beamhour presets "
				  "lists them");
	if (!bh_preset_find(&path, arena, name, options->preset_dirs,
			    options->preset_dir_count, &err)) {
		problems->lost = problems->lost || err.code == BH_BAD_SYSTEM;
		return bh_problem(problems, place, "%s\n%s", err.what, err.hint);
	}
	if (!bh_instrument_read(&instrument, arena, name, path, problems))
		return false;
	request->instrument = instrument;
	return true;
}

bool bh_request_read_text(bh_request **request, bh_arena *arena, const char *name,
			  const char *text, size_t length, const bh_read_options *options,
			  bh_problems *problems)
{
	bh_conf_section *root;
	const char *file = bh_arena_text(arena, name);
	bool good;

	*request = bh_new(arena, bh_request, 1);
	if (!*request || !file) {
		problems->lost = true;
		return false;
	}
	snprintf((*request)->file, sizeof(*request)->file, "%s", file);
	good = bh_conf_read(&root, arena, BH_FILE_REQUEST, file, text, length, problems);
	if (!root)
		return false;
	/* go on with what is good: one run reports all problems */
	good = load_instrument(*request, arena, root, options, problems) && good;
	good = bh_build_request(*request, arena, root, options, problems) && good;
	if (problems->count > 1)
		qsort(problems->items, problems->count, sizeof *problems->items,
		      bh_conf_by_place);
	return good && !problems->lost && problems->count == 0;
}

bool bh_request_read(bh_request **request, bh_arena *arena, const char *path,
		     const bh_read_options *options, bh_problems *problems)
{
	bool standard = strcmp(path, "-") == 0, good;
	const char *name = standard ? "standard input" : path;
	struct stat info;
	FILE *stream;
	size_t length;
	char *bytes;

	if (!standard && stat(path, &info) == 0 && S_ISDIR(info.st_mode))
		return unreadable(problems, path, "it is a folder");
	stream = standard ? options->stdin_stream : fopen(path, "rb");
	if (!stream)
		return unreadable(problems, path, strerror(errno));
	good = bh_bytes_load(&bytes, &length, arena, name, stream, problems);
	if (!standard)
		fclose(stream);
	return good && bh_request_read_text(request, arena, name, bytes, length, options,
					    problems);
}
