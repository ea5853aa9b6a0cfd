#ifndef READ_CURSOR_H
#define READ_CURSOR_H

#include <stdbool.h>
#include <stddef.h>

#include "base/err.h"

/* A place in a file that is being scanned, and the steps that mind quotes and comments. */
typedef struct {
	const char *file, *s;
	size_t n, at, line_start;
	int line;
	bool torn; /* quotes, comments or braces are so wrong that what stands in which
		      section is a guess */
	bh_problems *problems;
} bh_cursor;

/* The character at i, '\0' behind the end. */
char bh_cursor_char(const bh_cursor *c, size_t i);
char bh_cursor_now(const bh_cursor *c);

bool bh_cursor_is_quote(char ch);

/* Line and column; columns count characters, not bytes. */
bh_place bh_cursor_place(const bh_cursor *c);

/* To the next character that is neither blank nor comment, or the end. A comment that is never
 * closed is noted. */
void bh_cursor_skip(bh_cursor *c);

/* One step over something that is not understood: a quoted text, a comment, a character; inner
 * counts its open braces. */
void bh_cursor_pass(bh_cursor *c, size_t *inner);

/* Where the word without quotes that starts at i ends; i: there is none. */
size_t bh_cursor_bare_end(const bh_cursor *c, size_t i);

/* Behind the blanks of this line. */
size_t bh_cursor_blanks_end(const bh_cursor *c, size_t i);

/* Behind a quoted text, or the end of its line; *closed says which. */
size_t bh_cursor_quoted_end(const bh_cursor *c, size_t i, bool *closed);

/* Whether an item starts at i: a name with = or {, or with a title and {. */
bool bh_cursor_at_item(const bh_cursor *c, size_t i);

#endif
