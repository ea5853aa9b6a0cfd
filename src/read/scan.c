#include "read/scan.h"

#include <errno.h>
#include <string.h>

typedef struct {
	const char *file, *s;
	size_t n, at, line_start;
	int line;
	size_t ids;
	bh_arena *arena;
	bh_problems *problems;
	bool recovered; /* a line was given up: braces may not balance any more */
	bool lost;
} scanner;

bool bh_scan_load(char **bytes, size_t *length, bh_arena *arena, const char *file,
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

static bh_place place_at(const scanner *c, size_t at)
{
	int col = 1;

	/* columns count characters, not bytes */
	for (size_t i = c->line_start; i < at; i++)
		col += ((unsigned char)c->s[i] & 0xC0) != 0x80;
	return (bh_place){ c->file, c->line, col };
}

static bh_place here(const scanner *c)
{
	return place_at(c, c->at);
}

static void new_line(scanner *c)
{
	c->line++;
	c->line_start = c->at + 1;
}

static void skip_line_comment(scanner *c)
{
	while (c->at < c->n && c->s[c->at] != '\n')
		c->at++;
}

static bool skip_block_comment(scanner *c)
{
	bh_place place = here(c);

	for (c->at += 2; c->at + 1 < c->n; c->at++) {
		if (c->s[c->at] == '*' && c->s[c->at + 1] == '/') {
			c->at += 2;
			return true;
		}
		if (c->s[c->at] == '\n')
			new_line(c);
	}
	c->at = c->n;
	return bh_problem(c->problems, place,
			  "this comment is never closed\nclose it with */");
}

/* To the next character that is neither blank nor comment. */
static bool skip(scanner *c)
{
	while (c->at < c->n) {
		char now = c->s[c->at], next = c->at + 1 < c->n ? c->s[c->at + 1] : 0;

		if (now == '\n') {
			new_line(c);
			c->at++;
		} else if (now == ' ' || now == '\t' || now == '\r') {
			c->at++;
		} else if (now == '#' || (now == '/' && next == '/')) {
			skip_line_comment(c);
		} else if (now == '/' && next == '*') {
			if (!skip_block_comment(c))
				return false;
		} else {
			break;
		}
	}
	return true;
}

static char *take(scanner *c, size_t from, size_t to)
{
	char *text = bh_new(c->arena, char, to - from + 1);

	if (!text) {
		c->lost = true;
		return NULL;
	}
	memcpy(text, c->s + from, to - from);
	return text;
}

static bool bare_char(char ch)
{
	return (unsigned char)ch > ' ' && !strchr("{}()=,\"'#", ch);
}

/* A word without quotes; "//" starts a comment. */
static size_t bare_end(const scanner *c)
{
	size_t i = c->at;

	while (i < c->n && bare_char(c->s[i]) &&
	       !(c->s[i] == '/' && i + 1 < c->n &&
		 (c->s[i + 1] == '/' || c->s[i + 1] == '*')))
		i++;
	return i;
}

static bool quoted(scanner *c, bh_scan_value *value)
{
	char quote = c->s[c->at];
	size_t from = ++c->at;

	while (c->at < c->n && c->s[c->at] != quote) {
		if (c->s[c->at] == '\n')
			return bh_problem(
				c->problems, value->place,
				"this text is not closed before the line ends\nclose it "
				"with %c",
				quote);
		c->at +=
			c->s[c->at] == '\\' && c->at + 1 < c->n && c->s[c->at + 1] != '\n'
				? 2
				: 1;
	}
	if (c->at >= c->n)
		return bh_problem(c->problems, value->place,
				  "this text is not closed\nclose it with %c", quote);
	value->text = take(c, from, c->at);
	value->quote = quote;
	c->at++;
	return value->text != NULL;
}

static bool value_at(scanner *c, bh_scan_value *value)
{
	size_t end;

	*value = (bh_scan_value){ .place = here(c) };
	if (c->at < c->n && (c->s[c->at] == '"' || c->s[c->at] == '\'')) {
		if (!quoted(c, value))
			return false;
	} else {
		end = bare_end(c);
		if (end == c->at)
			return bh_problem(
				c->problems, value->place,
				"a value is missing here\nlike 12.5, \"text\" or {1, 2}");
		value->text = take(c, c->at, end);
		c->at = end;
	}
	if (value->text && strstr(value->text, "${"))
		return bh_problem(
			c->problems, value->place,
			"\"${\" is not allowed in a value\nwrite the value itself");
	return value->text != NULL;
}

static bool add_value(scanner *c, bh_scan_key *key, bh_scan_value value)
{
	bh_scan_value *grown;

	if ((key->count & (key->count - 1)) == 0) { /* room doubles at powers of two */
		grown = bh_grow(c->arena, key->values, bh_scan_value, key->count,
				key->count ? 2 * key->count : 1);
		if (!grown) {
			c->lost = true;
			return false;
		}
		key->values = grown;
	}
	key->values[key->count++] = value;
	return true;
}

static bool list(scanner *c, bh_scan_key *key)
{
	bh_place open = here(c);

	key->list = true;
	c->at++;
	for (;;) {
		bh_scan_value value;

		if (!skip(c))
			return false;
		if (c->at < c->n && c->s[c->at] == '}' && key->count == 0)
			return bh_problem(c->problems, open,
					  "\"%s\" has an empty list\ngive at least "
					  "one value",
					  key->name);
		if (c->at >= c->n)
			return bh_problem(c->problems, open,
					  "this list is never closed\nclose it "
					  "with }");
		if (!value_at(c, &value) || !add_value(c, key, value) || !skip(c))
			return false;
		if (c->at < c->n && c->s[c->at] == '}') {
			c->at++;
			return true;
		}
		if (c->at >= c->n)
			return bh_problem(c->problems, open,
					  "this list is never closed\nclose it "
					  "with }");
		if (c->s[c->at] != ',')
			return bh_problem(c->problems, here(c),
					  "a comma is missing in the list of "
					  "\"%s\"\nlike {1, 2, 3}",
					  key->name);
		c->at++;
	}
}

static bool add_key(scanner *c, bh_scan_section *section, bh_scan_key key)
{
	for (size_t i = 0; i < section->key_count; i++)
		if (strcmp(section->keys[i].name, key.name) == 0)
			bh_problem(c->problems, key.place,
				   "\"%s\" is given twice\nit stands in line %d already",
				   key.name, section->keys[i].place.line);
	if (section->key_count == section->key_room) {
		size_t more = section->key_room ? 2 * section->key_room : 8;
		bh_scan_key *grown = bh_grow(c->arena, section->keys, bh_scan_key,
					     section->key_room, more);

		if (!grown) {
			c->lost = true;
			return false;
		}
		section->keys = grown;
		section->key_room = more;
	}
	section->keys[section->key_count++] = key;
	return true;
}

static bool assignment(scanner *c, bh_scan_section *section, const char *name,
		       bh_place place)
{
	bh_scan_key key = { .name = name, .place = place };
	bh_scan_value value;

	c->at++;
	if (!skip(c))
		return false;
	if (c->at < c->n && c->s[c->at] == '{') {
		if (!list(c, &key))
			return false;
	} else if (!value_at(c, &value) || !add_value(c, &key, value)) {
		return false;
	}
	return add_key(c, section, key);
}

static bool items(scanner *c, bh_scan_section *section, int depth);

static bh_scan_section *add_section(scanner *c, bh_scan_section *parent)
{
	bh_scan_section *made = bh_new(c->arena, bh_scan_section, 1);

	if (made && parent->section_count == parent->section_room) {
		size_t more = parent->section_room ? 2 * parent->section_room : 4;
		bh_scan_section **grown =
			bh_grow(c->arena, parent->sections, bh_scan_section *,
				parent->section_room, more);

		if (!grown)
			made = NULL;
		else {
			parent->sections = grown;
			parent->section_room = more;
		}
	}
	if (!made) {
		c->lost = true;
		return NULL;
	}
	parent->sections[parent->section_count++] = made;
	made->id = ++c->ids;
	return made;
}

/* `name {` or `name "title" {`: the title gives way to the id in the parser's copy. */
static bool section_at(scanner *c, bh_scan_section *parent, const char *name,
		       bh_place place, int depth)
{
	bh_scan_section *made = add_section(c, parent);
	bh_scan_value title;

	if (!made)
		return false;
	made->name = name;
	made->place = place;
	if (c->s[c->at] != '{') {
		if (!value_at(c, &title))
			return false;
		made->title = title.text;
		made->title_place = title.place;
		if (!skip(c))
			return false;
	}
	if (c->at >= c->n || c->s[c->at] != '{')
		return bh_problem(c->problems, here(c),
				  "\"%s\" needs = and a value, or a section in "
				  "{ }\nlike %s = 1",
				  name, name);
	if (depth == BH_DEPTH_MOST)
		return bh_problem(c->problems, here(c),
				  "sections stand too deep in each other\n"
				  "allowed: %d",
				  BH_DEPTH_MOST);
	c->at++;
	if (!items(c, made, depth + 1))
		return false;
	if (c->at >= c->n)
		return c->recovered ||
		       bh_problem(c->problems, place,
				  "the section \"%s\" that starts here is never "
				  "closed\nclose it with }",
				  name);
	c->at++;
	return true;
}

static bool item(scanner *c, bh_scan_section *section, int depth)
{
	bh_place place = here(c);
	size_t end = bare_end(c);
	char *name;

	if (end == c->at)
		return bh_problem(c->problems, place,
				  "a \"%c\" has no place here\na key, a section or "
				  "} may follow",
				  c->s[c->at]);
	name = take(c, c->at, end);
	c->at = end;
	if (!name || !skip(c))
		return false;
	if (c->at + 1 < c->n && ((c->s[c->at] == '+' && c->s[c->at + 1] == '=') ||
				 (c->s[c->at] == '=' && name[strlen(name) - 1] == '+')))
		return bh_problem(c->problems, place,
				  "\"+=\" is not allowed\nwrite = and the whole list");
	if (c->at < c->n && c->s[c->at] == '=')
		return assignment(c, section, name, place);
	if (c->at < c->n &&
	    (c->s[c->at] == '{' || c->s[c->at] == '"' || c->s[c->at] == '\''))
		return section_at(c, section, name, place, depth);
	return bh_problem(c->problems, place,
			  "\"%s\" is followed by neither = nor {\nlike %s = 1", name,
			  name);
}

/* After a problem: go on behind this line, so that one run finds the next problem too. */
static bool give_up_line(scanner *c)
{
	enum { MOST_PROBLEMS = 20 };

	if (c->lost || c->at >= c->n || c->problems->count >= MOST_PROBLEMS)
		return false;
	while (c->at < c->n && c->s[c->at] != '\n')
		c->at++;
	c->recovered = true;
	return true;
}

static bool items(scanner *c, bh_scan_section *section, int depth)
{
	for (;;) {
		if (!skip(c))
			return false;
		if (c->at >= c->n)
			return true;
		if (c->s[c->at] == '}') {
			if (depth > 0)
				return true;
			if (c->recovered) {
				c->at++;
				continue;
			}
			return bh_problem(c->problems, here(c),
					  "this } closes nothing\ntake it out, "
					  "or open a section with {");
		}
		if (!item(c, section, depth) && !give_up_line(c))
			return false;
	}
}

/* Bytes of one UTF-8 character, 0 when it is none. */
static size_t utf8_length(const unsigned char *s, size_t n)
{
	size_t need = s[0] < 0x80		    ? 1
		      : s[0] >= 0xC2 && s[0] < 0xE0 ? 2
		      : (s[0] & 0xF0) == 0xE0	    ? 3
		      : s[0] >= 0xF0 && s[0] < 0xF5 ? 4
						    : 0;

	if (need > n)
		return 0;
	for (size_t i = 1; i < need; i++)
		if ((s[i] & 0xC0) != 0x80)
			return 0;
	return need;
}

/* Bytes that no text holds, and lines that no person writes. */
static bool clean(scanner *c)
{
	bool good = true;

	for (size_t i = 0; i < c->n && good;) {
		size_t length = utf8_length((const unsigned char *)c->s + i, c->n - i);

		c->at = i;
		if (c->s[i] == '\n') {
			new_line(c);
		} else if ((unsigned char)c->s[i] < ' ' && c->s[i] != '\t' &&
			   c->s[i] != '\r') {
			good = bh_problem(c->problems, here(c),
					  "a control byte (0x%02x) in the "
					  "file\nplain UTF-8 text is allowed",
					  (unsigned)(unsigned char)c->s[i]);
		} else if (length == 0) {
			good = bh_problem(c->problems, here(c),
					  "a byte (0x%02x) that is not UTF-8\n"
					  "save the file as UTF-8",
					  (unsigned)(unsigned char)c->s[i]);
		} else if (i - c->line_start > BH_LINE_MOST) {
			good = bh_problem(c->problems, here(c),
					  "a line longer than %d bytes\nbreak "
					  "it",
					  BH_LINE_MOST);
		}
		i += length ? length : 1;
	}
	c->at = c->line_start = 0;
	c->line = 1;
	return good;
}

bool bh_scan(bh_scan_section **root, bh_arena *arena, const char *file, const char *bytes,
	     size_t length, bh_problems *problems)
{
	scanner c = { .file = file,
		      .s = bytes,
		      .n = length,
		      .line = 1,
		      .arena = arena,
		      .problems = problems };
	size_t before = problems->count;
	bool good;

	if (length >= 3 && memcmp(bytes, "\xEF\xBB\xBF", 3) == 0) { /* byte-order mark */
		c.s += 3;
		c.n -= 3;
	}
	*root = bh_new(arena, bh_scan_section, 1);
	if (!*root) {
		problems->lost = true;
		return false;
	}
	(*root)->name = "";
	(*root)->place = (bh_place){ file, 1, 1 };
	good = clean(&c) && items(&c, *root, 0);
	if (c.lost)
		problems->lost = true;
	return good && problems->count == before && !problems->lost;
}

/* Quotes as written: the parser resolves escapes inside double ones only. */
static void write_value(bh_text *text, const bh_scan_value *value)
{
	char quote = value->quote ? value->quote : '\'';

	bh_text_format(text, "%c%s%c", quote, value->text, quote);
}

void bh_scan_write(bh_text *text, const bh_scan_section *section)
{
	for (size_t i = 0; i < section->key_count; i++) {
		const bh_scan_key *key = &section->keys[i];

		if (key->bad)
			continue;
		bh_text_format(text, "%s = %s", key->name, key->list ? "{" : "");
		for (size_t k = 0; k < key->count; k++) {
			bh_text_add(text, k ? ", " : "");
			write_value(text, &key->values[k]);
		}
		bh_text_add(text, key->list ? "}\n" : "\n");
	}
	for (size_t i = 0; i < section->section_count; i++) {
		const bh_scan_section *sub = section->sections[i];

		if (sub->bad)
			continue;
		bh_text_add(text, sub->name);
		if (sub->title)
			bh_text_format(text, " \"%zu\"", sub->id);
		bh_text_add(text, " {\n");
		bh_scan_write(text, sub);
		bh_text_add(text, "}\n");
	}
}
