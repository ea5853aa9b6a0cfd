#ifndef READ_SCAN_H
#define READ_SCAN_H

#include <stdbool.h>
#include <stddef.h>

#include "base/arena.h"
#include "base/err.h"
#include "base/text.h"

/* More than any request or instrument needs; what is beyond is a mistake, and would cost the
 * parser seconds. */
enum {
	BH_DEPTH_MOST = 4,
	BH_KEYS_MOST = 5000,
	BH_SECTIONS_MOST = 1000,
	BH_VALUES_MOST = 4000
};

/* One value as written. */
typedef struct {
	const char *text; /* inside the quotes, escapes not resolved (conf does that) */
	char quote;	  /* ' or ", 0: none */
	bh_place place;
} bh_scan_value;

typedef struct {
	const char *name;
	bh_place place;
	bool list; /* written in braces */
	bool bad;  /* noted, here or by check: left out of what is parsed */
	bh_scan_value *values;
	size_t count;
} bh_scan_key;

/* A section, or the file itself (name ""). */
typedef struct bh_scan_section {
	const char *name, *title; /* title NULL: none written */
	bh_place place, title_place;
	size_t id;   /* counts all sections of the file */
	bool bad;    /* noted, here or by check: left out of what is parsed          */
	bool lacks;  /* a line or a section of it could not be used                  */
	bool faulty; /* as lacks, or a key is bad: what it does not give may be given */
	bool torn;   /* of the file: quotes or braces are so wrong that what stands in
			which section is a guess */
	bh_scan_key *keys;
	size_t key_count, key_room;
	struct bh_scan_section **sections;
	size_t section_count, section_room;
} bh_scan_section;

/* Take a file apart: every key, value and section with its place. What the parser behind it
 * would take silently (an open brace, a stray NUL, ${...}, +=, include()) is a problem here.
 * After a problem it goes on with the next item, so that one run finds them all.
 *   given    file  borrowed, stands in every place
 *   returns  *root, as much of it as could be read; NULL when memory is out
 *   false    problems noted */
bool bh_scan(bh_scan_section **root, bh_arena *arena, const char *file, const char *bytes,
	     size_t length, bh_problems *problems);

/* What is good of a scanned file, for the parser: no comments, titles replaced by the
 * section's id (the parser lets a second section of one title replace the first). */
void bh_scan_write(bh_text *text, const bh_scan_section *root);

#endif
