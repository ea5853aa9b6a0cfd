#include "base/err.h"

#include <stdarg.h>
#include <stdio.h>
#include <string.h>

/* Text that did not fit may end within a UTF-8 character: that part goes, so that a message
 * stays text for terminal, JSON and PDF. */
static void copy(char *to, size_t room, const char *from, size_t length)
{
	size_t n = length < room ? length : room - 1, start = n, need;

	while (start > 0 && n - start < 3 &&
	       ((unsigned char)from[start - 1] & 0xC0) == 0x80)
		start--;
	if (start > 0) {
		unsigned char lead = (unsigned char)from[start - 1];

		need = lead >= 0xF0 ? 4 : lead >= 0xE0 ? 3 : lead >= 0xC0 ? 2 : 1;
		if (need > n - start + 1)
			n = start - 1;
	}
	memcpy(to, from, n);
	to[n] = '\0';
}

static void split_hint(bh_err *err, const char *text)
{
	const char *cut = strchr(text, '\n');
	size_t n = cut ? (size_t)(cut - text) : strlen(text);
	const char *hint = cut ? cut + 1 : "";

	copy(err->what, sizeof err->what, text, n);
	copy(err->hint, sizeof err->hint, hint, strlen(hint));
}

bool bh_fail(bh_err *err, bh_code code, const char *format, ...)
{
	char text[sizeof err->what + sizeof err->hint];
	va_list args;

	if (!err || err->code != BH_OK)
		return false;
	va_start(args, format);
	vsnprintf(text, sizeof text, format, args);
	va_end(args);
	err->code = code;
	split_hint(err, text);
	return false;
}

bool bh_fail_memory(bh_err *err)
{
	return bh_fail(err, BH_BAD_SYSTEM, "out of memory");
}

bool bh_problem_add(bh_problems *problems, const bh_err *err)
{
	if (problems->count == problems->capacity) {
		size_t more = problems->capacity ? 2 * problems->capacity : 8;
		bh_err *items = bh_grow(problems->arena, problems->items, bh_err,
					problems->capacity, more);

		if (!items) {
			problems->lost = true;
			return false;
		}
		problems->items = items;
		problems->capacity = more;
	}
	problems->items[problems->count++] = *err;
	return false;
}

bool bh_problem(bh_problems *problems, bh_place place, const char *format, ...)
{
	bh_err err = { .code = BH_BAD_INPUT, .line = place.line, .col = place.col };
	char text[sizeof err.what + sizeof err.hint];
	va_list args;

	va_start(args, format);
	vsnprintf(text, sizeof text, format, args);
	va_end(args);
	if (place.file)
		copy(err.file, sizeof err.file, place.file, strlen(place.file));
	split_hint(&err, text);
	return bh_problem_add(problems, &err);
}
