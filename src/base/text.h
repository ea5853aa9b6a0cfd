#ifndef BASE_TEXT_H
#define BASE_TEXT_H

#include <stdbool.h>
#include <stddef.h>

/* A growing buffer of bytes, kept NUL-terminated. Zero-initialise it. A failed allocation
 * sets `lost`, drops what follows, and is reported once by the owner. */
typedef struct {
	char *bytes;
	size_t length, capacity;
	bool lost;
} bh_text;

void bh_text_add(bh_text *text, const char *bytes);
void bh_text_add_bytes(bh_text *text, const void *bytes, size_t count);
void bh_text_format(bh_text *text, const char *format, ...)
	__attribute__((format(printf, 2, 3)));
void bh_text_repeat(bh_text *text, const char *bytes, size_t times);
void bh_text_free(bh_text *text);

/* Columns that a UTF-8 string takes on a terminal: code points, combining marks (U+0300 to
 * U+036F) not counted. */
size_t bh_text_columns(const char *utf8);

#endif
