#include "base/text.h"

#include <stdarg.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

static bool reserve(bh_text *text, size_t more)
{
	size_t want = text->length + more + 1, capacity = text->capacity;
	char *bytes;

	if (text->lost)
		return false;
	if (want < more) {
		text->lost = true;
		return false;
	}
	if (want <= capacity)
		return true;
	if (capacity < 256)
		capacity = 256;
	while (capacity < want)
		capacity += capacity / 2;
	bytes = realloc(text->bytes, capacity);
	if (!bytes) {
		text->lost = true;
		return false;
	}
	text->bytes = bytes;
	text->capacity = capacity;
	return true;
}

void bh_text_add_bytes(bh_text *text, const void *bytes, size_t count)
{
	if (!reserve(text, count))
		return;
	memcpy(text->bytes + text->length, bytes, count);
	text->length += count;
	text->bytes[text->length] = '\0';
}

void bh_text_add(bh_text *text, const char *bytes)
{
	bh_text_add_bytes(text, bytes, strlen(bytes));
}

void bh_text_format(bh_text *text, const char *format, ...)
{
	va_list args, again;
	int n;

	va_start(args, format);
	va_copy(again, args);
	n = vsnprintf(NULL, 0, format, args);
	if (n < 0)
		text->lost = true;
	else if (reserve(text, (size_t)n)) {
		vsnprintf(text->bytes + text->length, (size_t)n + 1, format, again);
		text->length += (size_t)n;
	}
	va_end(again);
	va_end(args);
}

void bh_text_repeat(bh_text *text, const char *bytes, size_t times)
{
	while (times-- > 0)
		bh_text_add(text, bytes);
}

void bh_text_free(bh_text *text)
{
	free(text->bytes);
	*text = (bh_text){ 0 };
}

size_t bh_text_columns(const char *utf8)
{
	size_t columns = 0;

	for (const unsigned char *p = (const unsigned char *)utf8; *p; p++) {
		bool combining = (p[0] == 0xCC && p[1] >= 0x80) ||
				 (p[0] == 0xCD && p[1] >= 0x80 && p[1] <= 0xAF);

		if ((*p & 0xC0) != 0x80 && !combining)
			columns++;
	}
	return columns;
}
