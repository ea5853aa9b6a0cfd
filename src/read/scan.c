#include "read/scan.h"

#include <string.h>

#include "read/bytes.h"
#include "read/cursor.h"
#include "read/suggest.h"

enum { MOST_PROBLEMS = 20, SHOWN = 60 };

/* What follows a problem is found again in one of two ways: the function that noted it knows
 * where the next item starts (resumed), or the rest of the line is passed over. */
typedef struct {
	bh_cursor k;
	size_t ids, keys; /* so far                                */
	bh_arena *arena;
	size_t before; /* problems of other files               */
	bool spoiled;  /* a value was read that cannot be used  */
	bool resumed;
	bool lost;
} scanner;

static char now(const scanner *c)
{
	return bh_cursor_now(&c->k);
}

static bh_place here(const scanner *c)
{
	return bh_cursor_place(&c->k);
}

static void skip(scanner *c)
{
	bh_cursor_skip(&c->k);
}

static bool at_item(const scanner *c)
{
	return bh_cursor_at_item(&c->k, c->k.at);
}

static char *take(scanner *c, size_t from, size_t to)
{
	char *text = bh_new(c->arena, char, to - from + 1);

	if (!text) {
		c->lost = true;
		return NULL;
	}
	memcpy(text, c->k.s + from, to - from);
	return text;
}

static bool quoted(scanner *c, bh_scan_value *value)
{
	size_t from = c->k.at;
	bool closed;

	value->quote = now(c);
	c->k.at = bh_cursor_quoted_end(&c->k, from, &closed);
	if (!closed) { /* braces of this line: inside the text or not? */
		c->k.torn = c->k.torn || memchr(c->k.s + from, '{', c->k.at - from) ||
			    memchr(c->k.s + from, '}', c->k.at - from);
		return bh_problem(
			c->k.problems, value->place,
			"this text is not closed before the line ends\nclose it "
			"with %c",
			value->quote);
	}
	value->text = take(c, from + 1, c->k.at - 1);
	return value->text != NULL;
}

/* What the parser would replace: environment, and escapes other than of quote and backslash,
 * which could smuggle in control characters. */
static void look_into(scanner *c, const bh_scan_value *value)
{
	const char *text = value->text;

	if (strstr(text, "${")) {
		c->spoiled = true;
		bh_problem(c->k.problems, value->place,
			   "\"${\" is not allowed in a value\nwrite the value itself");
	}
	for (size_t i = 0; text[i]; i++) {
		if (text[i] != '\\')
			continue;
		if (value->quote &&
		    (text[i + 1] == value->quote || text[i + 1] == '\\')) {
			i++;
			continue;
		}
		c->spoiled = true;
		bh_problem(
			c->k.problems, value->place,
			"a lone backslash is not allowed in a value\nin quotes \\\\ is a "
			"backslash and \\\" a quote; other characters stand for "
			"themselves");
		return;
	}
}

static bool value_at(scanner *c, bh_scan_value *value)
{
	size_t from = c->k.at;

	*value = (bh_scan_value){ .place = here(c) };
	if (bh_cursor_is_quote(now(c))) {
		if (!quoted(c, value))
			return false;
	} else {
		c->k.at = bh_cursor_bare_end(&c->k, from);
		if (c->k.at == from)
			return bh_problem(
				c->k.problems, value->place,
				"a value is missing here\nlike 12.5, \"text\" or "
				"{1, 2}");
		value->text = take(c, from, c->k.at);
		if (!value->text)
			return false;
	}
	look_into(c, value);
	return true;
}

/* One more of something that a file holds too many of: read no further. */
static bool too_many(scanner *c, bh_place place, const char *what, int most)
{
	c->k.at = c->k.n;
	c->k.torn = true;
	return bh_problem(c->k.problems, place, "more than %d %s\nallowed: %d", most,
			  what, most);
}

static bool add_value(scanner *c, bh_scan_key *key, bh_scan_value value)
{
	bh_scan_value *grown;

	if (key->count == BH_VALUES_MOST)
		return too_many(c, value.place, "values in a list", BH_VALUES_MOST);
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

/* Pass over an item: to the end of its line, or before the } of its section; a section that
 * opens on the line is passed over whole. */
static void recover(scanner *c)
{
	size_t inner = 0;

	while (c->k.at < c->k.n) {
		if (inner == 0 && (now(c) == '\n' || now(c) == '}'))
			return;
		bh_cursor_pass(&c->k, &inner);
	}
	c->k.torn = c->k.torn || inner > 0;
}

/* After a problem in a list: behind its }, or where the next item starts. */
static bool leave_list(scanner *c)
{
	size_t inner = 1;

	c->resumed = true;
	while (c->k.at < c->k.n && inner > 0) {
		bool new_line = now(c) == '\n';

		if (new_line)
			skip(c);
		if (new_line && at_item(c))
			return false;
		/* a } on a later line: of this list, or of its section? */
		c->k.torn = c->k.torn || (new_line && now(c) == '}');
		if (c->k.at < c->k.n)
			bh_cursor_pass(&c->k, &inner);
	}
	c->k.torn = c->k.torn || inner > 0;
	return false;
}

static bool list_open(scanner *c, bh_place open)
{
	c->resumed = true;
	c->k.torn = c->k.torn || c->k.at >= c->k.n;
	return bh_problem(c->k.problems, open,
			  "this list is never closed\nclose it with }");
}

static bool list(scanner *c, bh_scan_key *key)
{
	bh_place open = here(c);

	key->list = true;
	for (;;) {
		bh_scan_value value;

		c->k.at++; /* the { or a comma */
		skip(c);
		if (now(c) == '}' && key->count == 0) {
			c->k.at++;
			c->resumed = true;
			return bh_problem(c->k.problems, open,
					  "\"%.*s\" has an empty list\ngive at least one "
					  "value",
					  bh_suggest_cut(key->name, SHOWN), key->name);
		}
		if (c->k.at >= c->k.n || at_item(c))
			return list_open(c, open);
		if (!value_at(c, &value))
			return leave_list(c);
		if (!add_value(c, key, value))
			return false;
		skip(c);
		if (now(c) == '}') {
			c->k.at++;
			return true;
		}
		if (c->k.at >= c->k.n || at_item(c))
			return list_open(c, open);
		if (now(c) == ',')
			continue;
		bh_problem(c->k.problems, here(c),
			   "a comma is missing in the list of \"%.*s\"\nlike {1, 2, 3}",
			   bh_suggest_cut(key->name, SHOWN), key->name);
		return leave_list(c);
	}
}

static bool add_key(scanner *c, bh_scan_section *section, bh_scan_key key)
{
	for (size_t i = 0; i < section->key_count; i++)
		if (strcmp(section->keys[i].name, key.name) == 0) {
			key.bad = true;
			bh_problem(
				c->k.problems, key.place,
				"\"%.*s\" is given twice\nit stands in line %d already",
				bh_suggest_cut(key.name, SHOWN), key.name,
				section->keys[i].place.line);
			break;
		}
	if (++c->keys > BH_KEYS_MOST)
		return too_many(c, key.place, "keys in a file", BH_KEYS_MOST);
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

static bool assignment(scanner *c, bh_scan_section *section, bh_scan_key key)
{
	bh_scan_value value;
	char after;

	c->k.at++;
	c->spoiled = false;
	skip(c);
	after = now(c);
	if (after == '\0' || after == '}' || at_item(c)) {
		c->resumed = true;
		return bh_problem(c->k.problems, key.place,
				  "\"%.*s\" has no value: a value is missing behind the "
				  "=\nlike 12.5, \"text\" or {1, 2}",
				  bh_suggest_cut(key.name, SHOWN), key.name);
	}
	if (after == '{') {
		if (!list(c, &key))
			return false;
	} else if (!value_at(c, &value) || !add_value(c, &key, value)) {
		return false;
	}
	key.bad = c->spoiled;
	return add_key(c, section, key);
}

static void items(scanner *c, bh_scan_section *section, int depth);

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

/* The { of a section whose head holds something else; false: it does not follow. */
static bool to_brace(scanner *c, const char *name, bh_place place)
{
	int width = bh_suggest_cut(name, SHOWN);
	size_t inner = 0;

	c->resumed = now(c) == '}' || at_item(c);
	bh_problem(c->k.problems, c->resumed || c->k.line != place.line ? place : here(c),
		   "\"%.*s\" needs = and a value, or a section in { }\nlike %.*s = 1, or "
		   "%.*s \"name\" { ... }",
		   width, name, width, name, width, name);
	while (!c->resumed && c->k.at < c->k.n && !strchr("\n{}=", now(c)))
		bh_cursor_pass(&c->k, &inner);
	return now(c) == '{';
}

/* The name in quotes before the {. */
static bool title_at(scanner *c, bh_scan_section *made)
{
	bh_scan_value title;

	if (!value_at(c, &title))
		return false;
	made->title = title.text;
	made->title_place = title.place;
	if (!c->spoiled && strchr(title.text, '\\'))
		bh_problem(c->k.problems, title.place,
			   "a backslash is not allowed in a name\nchoose another name");
	skip(c);
	return true;
}

/* `name {` or `name "title" {`: the title gives way to the id in the parser's copy. */
static bool section_at(scanner *c, bh_scan_section *parent, const char *name,
		       bh_place place, int depth)
{
	bh_scan_section *made;

	if (c->ids == BH_SECTIONS_MOST)
		return too_many(c, place, "sections in a file", BH_SECTIONS_MOST);
	made = add_section(c, parent);
	if (!made)
		return false;
	made->name = name;
	made->place = place;
	c->spoiled = false;
	made->bad = true; /* until its head is known to be good */
	if (now(c) != '{' && !title_at(c, made))
		return false;
	if (now(c) != '{' && !to_brace(c, name, place)) {
		c->k.torn = true;
		return false;
	}
	if (depth == BH_DEPTH_MOST)
		return bh_problem(c->k.problems, here(c),
				  "sections stand too deep in each other\nallowed: %d",
				  BH_DEPTH_MOST);
	made->bad = false;
	c->k.at++;
	items(c, made, depth + 1);
	if (now(c) == '}') {
		c->k.at++;
		return true;
	}
	if (!c->k.torn)
		bh_problem(c->k.problems, place,
			   "the section \"%.*s\" that starts here is never closed\nclose "
			   "it with }",
			   bh_suggest_cut(name, SHOWN), name);
	c->k.torn = true;
	return false;
}

/* A name that nothing good follows. */
static bool lonely(scanner *c, bh_scan_section *section, const char *name, bh_place place,
		   int depth)
{
	int width = bh_suggest_cut(name, SHOWN);
	size_t end = bh_cursor_bare_end(&c->k, c->k.at);

	if (end == c->k.at ||
	    bh_cursor_char(&c->k, bh_cursor_blanks_end(&c->k, end)) != '{')
		return bh_problem(
			c->k.problems, place,
			"\"%.*s\" is followed by neither = nor {\nlike %.*s = 1", width,
			name, width, name);
	bh_problem(
		c->k.problems, here(c),
		"the name of this \"%.*s\" is not in quotes\nlike %.*s \"name\" { ... }",
		width, name, width, name);
	return section_at(c, section, name, place, depth);
}

static bool item(scanner *c, bh_scan_section *section, int depth)
{
	bh_place place = here(c);
	size_t end = bh_cursor_bare_end(&c->k, c->k.at);
	char *name;

	if (end == c->k.at)
		return bh_problem(c->k.problems, place, "a %c has no place here\n%s",
				  now(c),
				  now(c) == ',' ? "a list stands in braces: {1, 2}"
						: "a key, a section or } may follow");
	name = take(c, c->k.at, end);
	if (!name)
		return false;
	c->k.at = end;
	skip(c);
	if (now(c) == '=' && name[strlen(name) - 1] == '+')
		name = NULL;
	if (!name || (now(c) == '+' && bh_cursor_char(&c->k, c->k.at + 1) == '='))
		return bh_problem(c->k.problems, place,
				  "\"+=\" is not allowed\nwrite = and the whole list");
	if (now(c) == '=')
		return assignment(c, section,
				  (bh_scan_key){ .name = name, .place = place });
	if (now(c) == '{' || bh_cursor_is_quote(now(c)))
		return section_at(c, section, name, place, depth);
	return lonely(c, section, name, place, depth);
}

static void items(scanner *c, bh_scan_section *section, int depth)
{
	for (;;) {
		if (c->k.problems->count - c->before >= MOST_PROBLEMS &&
		    c->k.at < c->k.n) {
			c->k.torn = true;
			c->k.at = c->k.n;
		}
		skip(c);
		if (c->lost || c->k.at >= c->k.n || (now(c) == '}' && depth > 0))
			return;
		if (now(c) == '}') {
			if (!c->k.torn)
				bh_problem(
					c->k.problems, here(c),
					"this } closes nothing\ntake it out, or open a "
					"section with {");
			c->k.torn = true;
			c->k.at++;
			continue;
		}
		if (item(c, section, depth))
			continue;
		section->lacks = section->faulty = true;
		if (!c->resumed)
			recover(c);
		c->resumed = false;
	}
}

bool bh_scan(bh_scan_section **root, bh_arena *arena, const char *file, const char *bytes,
	     size_t length, bh_problems *problems)
{
	scanner c = { .k = { .file = file, .line = 1, .problems = problems },
		      .arena = arena,
		      .before = problems->count };
	size_t mark = length >= 3 && memcmp(bytes, "\xEF\xBB\xBF", 3) == 0 ? 3 : 0;
	char *copy = bh_new(arena, char, length + 1);

	*root = bh_new(arena, bh_scan_section, 1);
	if (!*root || !copy) {
		problems->lost = true;
		return false;
	}
	memcpy(copy, bytes + mark, length - mark);
	(*root)->name = "";
	(*root)->place = (bh_place){ file, 1, 1 };
	c.k.s = copy;
	c.k.n = length - mark;
	if (bh_bytes_clean(copy, c.k.n, file, problems))
		items(&c, *root, 0);
	else
		c.k.torn = true;
	(*root)->torn = c.k.torn;
	if (c.lost)
		problems->lost = true;
	return problems->count == c.before && !problems->lost;
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
