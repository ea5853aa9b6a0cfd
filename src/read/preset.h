#ifndef READ_PRESET_H
#define READ_PRESET_H

#include <stdbool.h>
#include <stddef.h>

#include "base/arena.h"
#include "base/err.h"
#include "base/text.h"
#include "model/instrument.h"

typedef struct {
	const char *name; /* "strip-200"             */
	const char *path;
	const char *title; /* the file's own title    */
} bh_preset;

/* Every *.conf of the folders, by name, the first folder that has a name wins.
 *   false  memory is out (a folder that is not there is skipped) */
bool bh_preset_list(bh_preset **presets, size_t *count, bh_arena *arena,
		    const char *const *dirs, size_t dir_count, bh_err *err);

/* The path of an instrument: a preset's name, or a path (it has a '/' or ends in .conf).
 *   false  nothing found: BH_BAD_INPUT, hint names the nearest presets */
bool bh_preset_find(const char **path, bh_arena *arena, const char *name_or_path,
		    const char *const *dirs, size_t dir_count, bh_err *err);

/* Read and check an instrument file.
 *   false  problems filled */
bool bh_instrument_read(bh_instrument **instrument, bh_arena *arena, const char *name,
			const char *path, bh_problems *problems);

#endif
