#ifndef READ_CONF_H
#define READ_CONF_H

#include <stdbool.h>
#include <stddef.h>

#include "base/arena.h"
#include "base/err.h"
#include "read/keys.h"

/* Door to libconfuse. A file becomes a tree of sections with checked values, each with its
 * place. */
typedef struct {
	const char *text; /* escapes resolved            */
	double number;	  /* of a number, whole, flag (0 or 1) or duration (s) */
	bh_place place;
} bh_conf_value;

typedef struct {
	const bh_key *key;
	bh_place place;
	bh_conf_value *values;
	size_t count;
} bh_conf_entry;

typedef struct bh_conf_section {
	const char *name;	 /* "phase"; "" for the file            */
	const char *title;	 /* "" when there is none               */
	const char *key_section; /* of the key table: "aim line"        */
	bh_place place, title_place;
	bool lacks;		/* a line or section of it was noted and left out    */
	bool faulty;		/* as lacks, or a key was: it may not be complete    */
	bh_conf_entry *entries; /* only what is written in the file, and good        */
	size_t entry_count;
	struct bh_conf_section **sections;
	size_t section_count;
} bh_conf_section;

/* Parse and check a file: syntax, known sections and keys, types, ranges, words, what must be
 * given. All problems are noted in one run.
 *   given    file  borrowed; stands in every place
 *   returns  *root: what is good of the file, NULL when nothing is
 *   false    problems noted */
bool bh_conf_read(bh_conf_section **root, bh_arena *arena, bh_key_file kind,
		  const char *file, const char *bytes, size_t length,
		  bh_problems *problems);

/* Order of problems for qsort: file, line, column. */
int bh_conf_by_place(const void *a, const void *b);

/* The entry of a key, NULL when the file does not give it. */
const bh_conf_entry *bh_conf_entry_of(const bh_conf_section *section, const char *key);

/* The first section of a name, NULL when there is none. */
const bh_conf_section *bh_conf_section_of(const bh_conf_section *parent,
					  const char *name);

/* A scalar: what is written, else the key's fallback, else NAN or "". section NULL: as if
 * nothing were written in a section of key_section. */
double bh_conf_number(bh_key_file kind, const bh_conf_section *section,
		      const char *key_section, const char *key);
const char *bh_conf_text(bh_key_file kind, const bh_conf_section *section,
			 const char *key_section, const char *key);

#endif
