#ifndef READ_REQUEST_H
#define READ_REQUEST_H

#include <stdbool.h>
#include <stddef.h>
#include <stdio.h>

#include "base/arena.h"
#include "base/err.h"
#include "model/request.h"

/* What the command line adds to a request. Pointers are borrowed; NULL: not given. */
typedef struct {
	const char *instrument;		/* instead of the request's               */
	const char *anode;		/* instead of the request's               */
	const char *const *preset_dirs; /* searched in order for instruments     */
	size_t preset_dir_count;
	FILE *stdin_stream; /* read when path is "-"                  */
} bh_read_options;

/* Read, check and resolve a request and its instrument.
 *   given    path        a file, or "-"
 *   returns  *request in the arena, complete: groups with operations, compositions,
 *            densities, d of every target, shares that sum to 1, default aims
 *   false    problems->items hold every problem found, in order of line */
bool bh_request_read(bh_request **request, bh_arena *arena, const char *path,
		     const bh_read_options *options, bh_problems *problems);

/* The same from text in memory; name stands for the file in messages. */
bool bh_request_read_text(bh_request **request, bh_arena *arena, const char *name,
			  const char *text, size_t length, const bh_read_options *options,
			  bh_problems *problems);

#endif
