#include "read/bytes.h"

#include <errno.h>
#include <string.h>

bool bh_bytes_load(char **bytes, size_t *length, bh_arena *arena, const char *file,
		   FILE *stream, bh_problems *problems)
{
	bh_place place = { file, 0, 0 };
	bh_err err = { .code = BH_OK };
	size_t n;

	*bytes = bh_new(arena, char, BH_FILE_MOST + 2);
	if (!*bytes) {
		problems->lost = true;
		return false;
	}
	n = fread(*bytes, 1, BH_FILE_MOST + 1, stream);
	if (ferror(stream)) {
		bh_fail(&err, BH_BAD_SYSTEM, "cannot read: %s", strerror(errno));
		snprintf(err.file, sizeof err.file, "%s", file);
		return bh_problem_add(problems, &err);
	}
	if (n > BH_FILE_MOST)
		return bh_problem(problems, place,
				  "the file is larger than 1 MB\nallowed: up to %d "
				  "bytes",
				  BH_FILE_MOST);
	*length = n;
	return true;
}

/* Bytes of one UTF-8 character, 0 when it is none.
 *   from  The Unicode Standard 15.0, table 3-7: no overlong forms, no surrogates */
static size_t utf8_length(const unsigned char *s, size_t n)
{
	size_t need = s[0] < 0x80		    ? 1
		      : s[0] >= 0xC2 && s[0] < 0xE0 ? 2
		      : (s[0] & 0xF0) == 0xE0	    ? 3
		      : s[0] >= 0xF0 && s[0] < 0xF5 ? 4
						    : 0;

	if (need == 0 || need > n)
		return 0;
	for (size_t i = 1; i < need; i++)
		if ((s[i] & 0xC0) != 0x80)
			return 0;
	if ((s[0] == 0xE0 && s[1] < 0xA0) || (s[0] == 0xED && s[1] > 0x9F) ||
	    (s[0] == 0xF0 && s[1] < 0x90) || (s[0] == 0xF4 && s[1] > 0x8F))
		return 0;
	return need;
}

/* Control characters steer terminals: none but tab and the ends of lines. */
static bool is_control(const unsigned char *s, size_t length)
{
	if (length == 2)
		return s[0] == 0xC2 && s[1] < 0xA0;
	return length == 1 &&
	       ((s[0] < ' ' && s[0] != '\t' && s[0] != '\r' && s[0] != '\n') ||
		s[0] == 0x7F);
}

static bool is_utf16(const char *bytes, size_t length)
{
	return length >= 2 &&
	       (memcmp(bytes, "\xFF\xFE", 2) == 0 || memcmp(bytes, "\xFE\xFF", 2) == 0);
}

typedef struct {
	bh_place place;
	size_t start;  /* of the line */
	bool noted;    /* in this line */
	size_t faults; /* lines with one */
} cursor;

static void note(cursor *at, bh_problems *problems, unsigned byte, bool control)
{
	if (at->noted)
		return;
	at->noted = true;
	at->faults++;
	if (control)
		bh_problem(problems, at->place,
			   "a control byte (0x%02x) in the file\nplain UTF-8 text is "
			   "allowed",
			   byte);
	else
		bh_problem(problems, at->place,
			   "a byte (0x%02x) that is not UTF-8\nsave the file as UTF-8",
			   byte);
}

bool bh_bytes_clean(char *bytes, size_t length, const char *file, bh_problems *problems)
{
	enum { MOST_FAULTS = 20 };
	cursor at = { .place = { file, 1, 1 } };

	if (is_utf16(bytes, length))
		return bh_problem(problems, at.place,
				  "the file is UTF-16\nsave it as UTF-8");
	for (size_t i = 0; i < length;) {
		const unsigned char *s = (const unsigned char *)bytes + i;
		size_t n = utf8_length(s, length - i);
		bool control = is_control(s, n);

		if (i - at.start > BH_LINE_MOST)
			return bh_problem(problems, at.place,
					  "a line longer than %d bytes\nbreak it",
					  BH_LINE_MOST);
		if (n == 0 || control) {
			note(&at, problems, s[0], control);
			n = n ? n : 1;
			memset(bytes + i, control ? ' ' : '?', n);
		}
		i += n;
		at.place.col++;
		if (bytes[i - 1] == '\n')
			at = (cursor){
				{ file, at.place.line + 1, 1 }, i, false, at.faults
			};
		if (at.faults == MOST_FAULTS)
			return false;
	}
	return true;
}
