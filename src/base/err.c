#include "base/err.h"

#include <stdarg.h>
#include <stdio.h>
#include <string.h>

static void split_hint(bh_err *err, const char *text)
{
	const char *cut = strchr(text, '\n');
	size_t n = cut ? (size_t)(cut - text) : strlen(text);

	if (n >= sizeof err->what)
		n = sizeof err->what - 1;
	memcpy(err->what, text, n);
	err->what[n] = '\0';
	snprintf(err->hint, sizeof err->hint, "%s", cut ? cut + 1 : "");
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
	snprintf(err.file, sizeof err.file, "%s", place.file ? place.file : "");
	split_hint(&err, text);
	return bh_problem_add(problems, &err);
}
