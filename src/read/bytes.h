#ifndef READ_BYTES_H
#define READ_BYTES_H

#include <stdbool.h>
#include <stddef.h>
#include <stdio.h>

#include "base/arena.h"
#include "base/err.h"

enum { BH_FILE_MOST = 1 << 20, BH_LINE_MOST = 4096 };

/* Read a whole stream, at most BH_FILE_MOST bytes.
 *   false  noted: unreadable (BH_BAD_SYSTEM) or too large */
bool bh_bytes_load(char **bytes, size_t *length, bh_arena *arena, const char *file,
		   FILE *stream, bh_problems *problems);

/* Whether bytes are text as people write it: UTF-8, no control characters, no endless lines.
 * The first fault of each line is noted; faults are blanked, so that what stands around them
 * can still be read.
 *   given    file  borrowed, stands in every place
 *   false    noted, and not to be read on: UTF-16, a line too long, faults in every line */
bool bh_bytes_clean(char *bytes, size_t length, const char *file, bh_problems *problems);

#endif
