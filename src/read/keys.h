#ifndef READ_KEYS_H
#define READ_KEYS_H

#include <stdbool.h>
#include <stddef.h>

#include "base/text.h"

typedef enum {
	BH_KEY_NUMBER,
	BH_KEY_WHOLE,
	BH_KEY_TEXT,
	BH_KEY_WORD,
	BH_KEY_FLAG,
	BH_KEY_NUMBERS,
	BH_KEY_WHOLES,
	BH_KEY_TEXTS,
	BH_KEY_DURATION
} bh_key_type;

typedef enum { BH_FILE_REQUEST, BH_FILE_INSTRUMENT } bh_key_file;

/* One key of a request or instrument file. Everything that is known of a key stands in its
 * row: reader, messages, help and README are made from it. */
typedef struct {
	bh_key_file file;
	const char *section; /* "" at the top level; "phase", "site", "aim line", ... */
	const char *name;
	bh_key_type type;
	const char *unit; /* "" for a pure number                  */
	double low, high; /* allowed values, ends included         */
	const char
		*fallback; /* text of the default; NULL: must be given; "" : left out */
	const char *words; /* allowed words of a BH_KEY_WORD, by blanks */
	const char *help;
} bh_key;

extern const bh_key bh_keys[];
extern const size_t bh_key_count;

/* The row, or NULL. */
const bh_key *bh_key_find(bh_key_file file, const char *section, const char *name);

/* All keys of one kind of file as Markdown tables, for README. */
void bh_keys_markdown(bh_text *text, bh_key_file file);

#endif
