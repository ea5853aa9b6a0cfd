#include "read/cursor.h"

#include <string.h>

char bh_cursor_char(const bh_cursor *c, size_t i)
{
	return i < c->n ? c->s[i] : '\0';
}

char bh_cursor_now(const bh_cursor *c)
{
	return bh_cursor_char(c, c->at);
}

bh_place bh_cursor_place(const bh_cursor *c)
{
	int col = 1;

	/* columns count characters, not bytes */
	for (size_t i = c->line_start; i < c->at; i++)
		col += ((unsigned char)c->s[i] & 0xC0) != 0x80;
	return (bh_place){ c->file, c->line, col };
}

bool bh_cursor_is_quote(char ch)
{
	return ch == '"' || ch == '\'';
}

static bool opens_comment(const bh_cursor *c, size_t i)
{
	return bh_cursor_char(c, i) == '#' ||
	       (bh_cursor_char(c, i) == '/' &&
		(bh_cursor_char(c, i + 1) == '/' || bh_cursor_char(c, i + 1) == '*'));
}

/* A comment; behind it lies the end of the line, or what follows. */
static void skip_comment(bh_cursor *c)
{
	bh_place place = bh_cursor_place(c);

	if (bh_cursor_char(c, c->at) == '#' || bh_cursor_char(c, c->at + 1) == '/') {
		while (c->at < c->n && c->s[c->at] != '\n')
			c->at++;
		return;
	}
	for (c->at += 2; c->at < c->n; c->at++) {
		if (bh_cursor_now(c) == '*' && bh_cursor_char(c, c->at + 1) == '/') {
			c->at += 2;
			return;
		}
		if (bh_cursor_now(c) == '\n') {
			c->line++;
			c->line_start = c->at + 1;
		}
	}
	c->torn = true;
	bh_problem(c->problems, place, "this comment is never closed\nclose it with */");
}

/* To the next character that is neither blank nor comment, or the end. */
void bh_cursor_skip(bh_cursor *c)
{
	while (c->at < c->n) {
		char ch = bh_cursor_now(c);

		if (opens_comment(c, c->at)) {
			skip_comment(c);
			continue;
		}
		if (ch != ' ' && ch != '\t' && ch != '\r' && ch != '\n')
			return;
		c->at++;
		if (ch == '\n') {
			c->line++;
			c->line_start = c->at;
		}
	}
}

static bool bare_char(char ch)
{
	return (unsigned char)ch > ' ' && !strchr("{}()=,\"'#", ch);
}

/* Where a word without quotes ends. */
size_t bh_cursor_bare_end(const bh_cursor *c, size_t i)
{
	while (i < c->n && bare_char(c->s[i]) && !opens_comment(c, i))
		i++;
	return i;
}

size_t bh_cursor_blanks_end(const bh_cursor *c, size_t i)
{
	while (bh_cursor_char(c, i) == ' ' || bh_cursor_char(c, i) == '\t')
		i++;
	return i;
}

/* Behind a quoted text, or the end of its line; *closed says which. */
size_t bh_cursor_quoted_end(const bh_cursor *c, size_t i, bool *closed)
{
	char quote = c->s[i++];

	while (i < c->n && c->s[i] != quote && c->s[i] != '\n')
		i += c->s[i] == '\\' && i + 1 < c->n && c->s[i + 1] != '\n' ? 2 : 1;
	*closed = bh_cursor_char(c, i) == quote;
	return i + *closed;
}

/* Whether an item starts at i: a name with = or {, or with a title and {. */
bool bh_cursor_at_item(const bh_cursor *c, size_t i)
{
	size_t end = bh_cursor_bare_end(c, i);
	bool closed = true;

	if (!((bh_cursor_char(c, i) | 32) >= 'a' && (bh_cursor_char(c, i) | 32) <= 'z'))
		return false;
	i = bh_cursor_blanks_end(c, end);
	if (bh_cursor_char(c, i) == '=')
		return true;
	if (bh_cursor_is_quote(bh_cursor_char(c, i)))
		i = bh_cursor_blanks_end(c, bh_cursor_quoted_end(c, i, &closed));
	return closed && bh_cursor_char(c, i) == '{';
}

/* One step over something that is not understood; inner counts its open braces. */
void bh_cursor_pass(bh_cursor *c, size_t *inner)
{
	bool closed;

	if (bh_cursor_is_quote(bh_cursor_now(c))) {
		c->at = bh_cursor_quoted_end(c, c->at, &closed);
	} else if (opens_comment(c, c->at)) {
		skip_comment(c);
	} else {
		*inner += bh_cursor_now(c) == '{';
		*inner -= bh_cursor_now(c) == '}';
		if (bh_cursor_now(c) == '\n') {
			c->line++;
			c->line_start = c->at + 1;
		}
		c->at++;
	}
}
