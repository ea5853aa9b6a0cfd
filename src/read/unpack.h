#ifndef READ_UNPACK_H
#define READ_UNPACK_H

#include <stdbool.h>
#include <stddef.h>
#include <stdio.h>

#include "base/arena.h"
#include "base/err.h"

/* Door to zlib. */

enum { BH_UNPACKED_MOST = 256 << 20 };

/* Read a whole stream, unpacked when it is gzip (by its first bytes, not by name), at most
 * BH_UNPACKED_MOST bytes.
 *   given    file  borrowed; stands in the place of problems
 *   false    noted: unreadable (BH_BAD_SYSTEM), too large, damaged */
bool bh_unpack(char **bytes, size_t *length, bh_arena *arena, const char *file, FILE *stream,
	       bh_problems *problems);

#endif
