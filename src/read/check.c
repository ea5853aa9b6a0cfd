#include "read/check.h"

#include <math.h>
#include <stdio.h>
#include <string.h>

#include "base/number.h"
#include "read/suggest.h"

/* clang-format off */
const bh_section_kind bh_section_kinds[] = {
	/* file                name          parent   titled many   needed */
	{ BH_FILE_REQUEST,    "phase",      "",      true,  true,  true  },
	{ BH_FILE_REQUEST,    "site",       "phase", true,  true,  false },
	{ BH_FILE_REQUEST,    "specimen",   "",      false, false, false },
	{ BH_FILE_REQUEST,    "aim",        "",      true,  true,  false },
	{ BH_FILE_REQUEST,    "unsure",     "",      false, false, false },
	{ BH_FILE_REQUEST,    "booking",    "",      false, false, false },
	{ BH_FILE_INSTRUMENT, "goniometer", "",      false, false, true  },
	{ BH_FILE_INSTRUMENT, "tube",       "",      true,  true,  true  },
	{ BH_FILE_INSTRUMENT, "slits",      "",      false, false, true  },
	{ BH_FILE_INSTRUMENT, "detector",   "",      false, false, true  },
	{ BH_FILE_INSTRUMENT, "path",       "",      false, false, false },
	{ BH_FILE_INSTRUMENT, "profile",    "",      false, false, true  },
	{ BH_FILE_INSTRUMENT, "blank",      "",      false, false, false },
	{ BH_FILE_INSTRUMENT, "overhead",   "",      false, false, false },
	{ BH_FILE_INSTRUMENT, "continuum",  "",      false, false, false },
};
/* clang-format on */
const size_t bh_section_kind_count = sizeof bh_section_kinds / sizeof *bh_section_kinds;

enum { SHOWN = 60 };

typedef struct {
	bh_key_file file;
	bool whole; /* nothing was passed over in scanning              */
	bool torn;  /* what stands in which section is a guess          */
	bh_problems *problems;
} checker;

static const bh_section_kind *kind_of(bh_key_file file, const char *parent,
				      const char *name)
{
	for (size_t i = 0; i < bh_section_kind_count; i++) {
		const bh_section_kind *k = &bh_section_kinds[i];

		if (k->file == file && strcmp(k->parent, parent) == 0 &&
		    strcmp(k->name, name) == 0)
			return k;
	}
	return NULL;
}

/* "phase, specimen, aim": names joined, cut where the room ends. */
static void join(char *list, size_t room, const char *name)
{
	size_t used = strlen(list);

	if (used + strlen(name) + 6 < room)
		snprintf(list + used, room - used, "%s%s", used ? ", " : "", name);
	else if (used + 5 < room && strcmp(list + used - 3, "...") != 0)
		snprintf(list + used, room - used, ", ...");
}

/* A key of this file's kind, in whatever section. */
static const bh_key *key_anywhere(bh_key_file file, const char *name)
{
	for (size_t i = 0; i < bh_key_count; i++)
		if (bh_keys[i].file == file && strcmp(bh_keys[i].name, name) == 0)
			return &bh_keys[i];
	return NULL;
}

static const bh_section_kind *kind_anywhere(bh_key_file file, const char *name)
{
	for (size_t i = 0; i < bh_section_kind_count; i++)
		if (bh_section_kinds[i].file == file &&
		    strcmp(bh_section_kinds[i].name, name) == 0)
			return &bh_section_kinds[i];
	return NULL;
}

/* Where a misplaced word would be right, as the start of a hint. */
static const char *belongs(char hint[120], const checker *c, const char *name)
{
	const bh_section_kind *kind = kind_anywhere(c->file, name);
	const bh_key *key = key_anywhere(c->file, name);

	*hint = '\0';
	if (kind)
		snprintf(hint, 120, "it is a section%s%s: %s %s{ ... }. ",
			 *kind->parent ? " of " : "", kind->parent, name,
			 kind->titled ? "\"name\" " : "");
	else if (key)
		snprintf(hint, 120, "it is a key of %s. ",
			 *key->section ? key->section : "the top level");
	return hint;
}

static bool unknown_section(const checker *c, const bh_scan_section *s,
			    const char *parent, const char *section)
{
	int width = bh_suggest_cut(s->name, SHOWN);
	bh_suggestion near = { 0 };
	char list[200] = "", hint[120];

	if (c->torn && kind_anywhere(c->file, s->name))
		return false; /* its place is a guess */
	if (bh_key_find(c->file, section, s->name))
		return bh_problem(c->problems, s->place,
				  "\"%.*s\" is a key, not a section\nlike %.*s = ...",
				  width, s->name, width, s->name);
	for (size_t i = 0; i < bh_section_kind_count; i++)
		if (bh_section_kinds[i].file == c->file &&
		    strcmp(bh_section_kinds[i].parent, parent) == 0) {
			bh_suggest(&near, s->name, bh_section_kinds[i].name);
			join(list, sizeof list, bh_section_kinds[i].name);
		}
	return bh_problem(c->problems, s->place,
			  "unknown section \"%.*s\"%s%s%s\n%s%sallowed here: %s", width,
			  s->name, *parent ? " in \"" : "", parent, *parent ? "\"" : "",
			  belongs(hint, c, s->name), bh_suggest_hint(&near),
			  *list ? list : "no section");
}

static bool unknown_key(const checker *c, const bh_scan_key *key, const char *section)
{
	int width = bh_suggest_cut(key->name, SHOWN);
	bh_suggestion near = { 0 };
	char list[240] = "", hint[120];

	if (c->torn && key_anywhere(c->file, key->name))
		return false; /* its place is a guess */
	for (size_t i = 0; i < bh_key_count; i++)
		if (bh_keys[i].file == c->file &&
		    strcmp(bh_keys[i].section, section) == 0) {
			bh_suggest(&near, key->name, bh_keys[i].name);
			join(list, sizeof list, bh_keys[i].name);
		}
	return bh_problem(c->problems, key->place,
			  "unknown key \"%.*s\"%s%s%s\n%s%sallowed here: %s", width,
			  key->name, *section ? " in \"" : "", section,
			  *section ? "\"" : "", belongs(hint, c, key->name),
			  bh_suggest_hint(&near), list);
}

static bool one_of(const char *words, const char *text)
{
	size_t n = strlen(text);

	for (const char *w = words; *w;) {
		size_t length = strcspn(w, " ");

		if (length == n && memcmp(w, text, n) == 0)
			return true;
		w += length;
		w += *w == ' ';
	}
	return false;
}

static bool bad_word(const checker *c, const bh_key *key, const bh_scan_value *value)
{
	bh_suggestion near = { 0 };
	char words[200], *save = words;
	const char *list = key->type == BH_KEY_FLAG ? "true false" : key->words;

	snprintf(words, sizeof words, "%s", list);
	while (*save) {
		size_t n = strcspn(save, " ");
		bool last = save[n] == '\0';

		save[n] = '\0';
		bh_suggest(&near, value->text, save);
		save += n + !last;
	}
	return bh_problem(c->problems, value->place, "\"%s\" is \"%.*s\"\n%sallowed: %s",
			  key->name, bh_suggest_cut(value->text, SHOWN), value->text,
			  bh_suggest_hint(&near), list);
}

bool bh_check_number(double *number, const bh_key *key, const char *text)
{
	switch (key->type) {
	case BH_KEY_DURATION:
		return bh_duration_read(number, text, strlen(text));
	case BH_KEY_FLAG:
		*number = strcmp(text, "true") == 0;
		return *number > 0 || strcmp(text, "false") == 0;
	default:
		return bh_number_read(number, text, strlen(text));
	}
}

static bool check_numeric(const checker *c, const bh_key *key, const bh_scan_value *value)
{
	bool whole = key->type == BH_KEY_WHOLE || key->type == BH_KEY_WHOLES;
	const char *unit = *key->unit ? " " : "";
	int width = bh_suggest_cut(value->text, SHOWN);
	double number;

	if (!bh_check_number(&number, key, value->text) ||
	    (whole && fabs(number - round(number)) > 0))
		return bh_problem(
			c->problems, value->place,
			"\"%s\" is \"%.*s\", not a %snumber\nallowed: %g to %g%s%s",
			key->name, width, value->text, whole ? "whole " : "", key->low,
			key->high, unit, key->unit);
	if (!(number >= key->low && number <= key->high))
		return bh_problem(c->problems, value->place,
				  "\"%s\" is %.*s\nallowed: %g to %g%s%s", key->name,
				  width, value->text, key->low, key->high, unit,
				  key->unit);
	return true;
}

static bool check_duration(const checker *c, const bh_key *key,
			   const bh_scan_value *value)
{
	double seconds;

	if (!bh_check_number(&seconds, key, value->text))
		return bh_problem(
			c->problems, value->place,
			"\"%s\" is \"%.*s\", not a duration\nlike \"2 h\", \"90 "
			"min\", \"1 h 30 min\"",
			key->name, bh_suggest_cut(value->text, SHOWN), value->text);
	if (!(seconds >= key->low && seconds <= key->high))
		return bh_problem(c->problems, value->place,
				  "\"%s\" is \"%.*s\"\nallowed: %g s to %g h", key->name,
				  bh_suggest_cut(value->text, SHOWN), value->text,
				  key->low, key->high / 3600);
	return true;
}

static bool check_text(const checker *c, const bh_key *key, const bh_scan_value *value)
{
	if (strlen(value->text) > (size_t)key->high)
		return bh_problem(c->problems, value->place,
				  "\"%s\" is longer than %g bytes\nshorten it", key->name,
				  key->high);
	return *value->text || (key->fallback && !*key->fallback) ||
	       bh_problem(c->problems, value->place, "\"%s\" is empty\n%s", key->name,
			  key->help);
}

static bool check_value(const checker *c, const bh_key *key, const bh_scan_value *value)
{
	switch (key->type) {
	case BH_KEY_WORD:
		return one_of(key->words, value->text) || bad_word(c, key, value);
	case BH_KEY_FLAG:
		return one_of("true false", value->text) || bad_word(c, key, value);
	case BH_KEY_DURATION:
		return check_duration(c, key, value);
	case BH_KEY_TEXT:
		return check_text(c, key, value);
	case BH_KEY_TEXTS:
		return *value->text ||
		       bh_problem(c->problems, value->place,
				  "\"%s\" holds an empty text\n%s", key->name, key->help);
	default:
		return check_numeric(c, key, value);
	}
}

static bool is_list(const bh_key *key)
{
	return key->type == BH_KEY_NUMBERS || key->type == BH_KEY_WHOLES ||
	       key->type == BH_KEY_TEXTS;
}

static bool check_key(const checker *c, const bh_scan_key *written, const bh_key *key)
{
	bool good = true;

	if (written->list && !is_list(key))
		return bh_problem(c->problems, written->place,
				  "\"%s\" is a list\nit takes one value, without braces",
				  key->name);
	for (size_t i = 0; i < written->count; i++)
		good = check_value(c, key, &written->values[i]) && good;
	return good;
}

static bool is_written(const bh_scan_section *s, const char *name)
{
	for (size_t i = 0; i < s->key_count; i++)
		if (strcmp(s->keys[i].name, name) == 0)
			return true;
	return false;
}

static bool check_missing(const checker *c, const bh_scan_section *s, const char *section)
{
	bool good = true;

	for (size_t i = 0; i < bh_key_count; i++) {
		const bh_key *key = &bh_keys[i];

		if (key->file != c->file || key->fallback ||
		    strcmp(key->section, section) != 0 || is_written(s, key->name))
			continue;
		good = false;
		if (!c->whole) /* it may stand in a line that was passed over */
			continue;
		bh_problem(c->problems, s->place, "%s%s%s has no \"%s\"\n%s%s%s%s",
			   *s->name ? "section \"" : "the file", s->name,
			   *s->name ? "\"" : "", key->name, key->help,
			   *key->unit ? " (" : "", key->unit, *key->unit ? ")" : "");
	}
	return good;
}

const char *bh_check_key_section(const bh_scan_section *section, bh_key_file file,
				 bh_problems *problems)
{
	static const char *const aims[] = { "aim line", "aim survey" };
	bh_suggestion near = { 0 };

	if (file != BH_FILE_REQUEST || strcmp(section->name, "aim") != 0)
		return section->name;
	for (size_t i = 0; i < sizeof aims / sizeof *aims; i++) {
		const char *kind = aims[i] + strlen("aim ");

		if (section->title && strcmp(section->title, kind) == 0)
			return aims[i];
		bh_suggest(&near, section->title ? section->title : "", kind);
	}
	if (section->title && *section->title) /* else its lack is noted */
		bh_problem(problems, section->title_place,
			   "no such aim: \"%.*s\"\n%sallowed: line, survey",
			   bh_suggest_cut(section->title, SHOWN), section->title,
			   bh_suggest_hint(&near));
	return NULL;
}

static bool check_section(const checker *c, bh_scan_section *s, const char *section);

static bool check_titles(const checker *c, const bh_scan_section *s,
			 const bh_section_kind *kind)
{
	static const struct {
		const char *section, *title;
	} examples[] = { { "tube", "Cu" }, { "aim", "line" }, { "site", "Fe" } };
	const char *example = "quartz";

	for (size_t i = 0; i < sizeof examples / sizeof *examples; i++)
		if (strcmp(s->name, examples[i].section) == 0)
			example = examples[i].title;
	if (kind->titled && (!s->title || !*s->title))
		return bh_problem(c->problems, s->place,
				  "\"%s\" needs a name\nlike %s \"%s\" { ... }", s->name,
				  s->name, example);
	if (!kind->titled && s->title)
		return bh_problem(c->problems, s->title_place,
				  "\"%s\" takes no name\nlike %s { ... }", s->name,
				  s->name);
	return true;
}

/* Sections that may stand once only, and names that may. Any number of aims and sites of one
 * name is good. */
static bool check_once(const checker *c, const bh_scan_section *parent,
		       const bh_scan_section *s, const bh_section_kind *kind)
{
	for (size_t i = 0; parent->sections[i] != s; i++) {
		const bh_scan_section *other = parent->sections[i];

		if (strcmp(other->name, s->name) != 0)
			continue;
		if (!kind->many)
			return bh_problem(c->problems, s->place,
					  "\"%s\" is given twice\nit stands in line %d "
					  "already",
					  s->name, other->place.line);
		if (strcmp(s->name, "aim") != 0 && strcmp(s->name, "site") != 0 &&
		    s->title && other->title && strcmp(other->title, s->title) == 0)
			return bh_problem(c->problems, s->title_place,
					  "%s \"%.*s\" is given twice\nit stands in "
					  "line %d already",
					  s->name, bh_suggest_cut(s->title, SHOWN),
					  s->title, other->place.line);
	}
	return true;
}

static bool check_section(const checker *c, bh_scan_section *s, const char *section);

/* A section within another; false: it is left out of what is parsed. */
static bool check_subsection(const checker *c, const bh_scan_section *parent,
			     bh_scan_section *s, const char *section)
{
	const bh_section_kind *kind = kind_of(c->file, parent->name, s->name);
	const char *keys;
	bool good;

	if (!kind)
		return unknown_section(c, s, parent->name, section);
	good = check_titles(c, s, kind);
	good = check_once(c, parent, s, kind) && good;
	keys = bh_check_key_section(s, c->file, c->problems);
	if (keys && !check_section(c, s, keys))
		s->faulty = true;
	return good && keys;
}

static bool check_needed(const checker *c, const bh_scan_section *s)
{
	bool good = true;

	for (size_t i = 0; c->whole && i < bh_section_kind_count; i++) {
		const bh_section_kind *kind = &bh_section_kinds[i];
		bool found = false;

		if (kind->file != c->file || !kind->needed ||
		    strcmp(kind->parent, s->name) != 0)
			continue;
		for (size_t k = 0; k < s->section_count; k++)
			found = found || strcmp(s->sections[k]->name, kind->name) == 0;
		if (!found)
			good = bh_problem(c->problems, s->place,
					  "there is no section \"%s\"\nit must be given",
					  kind->name);
	}
	return good;
}

/* A key that is bad already was noted in scanning. */
static bool check_section(const checker *c, bh_scan_section *s, const char *section)
{
	bool good = true;

	for (size_t i = 0; i < s->key_count; i++) {
		bh_scan_key *written = &s->keys[i];
		const bh_key *key = bh_key_find(c->file, section, written->name);

		if (!written->bad)
			written->bad = !(key ? check_key(c, written, key)
					     : unknown_key(c, written, section));
		good = good && !written->bad;
	}
	good = check_missing(c, s, section) && good;
	for (size_t i = 0; i < s->section_count; i++) {
		bh_scan_section *sub = s->sections[i];

		if (!sub->bad)
			sub->bad = !check_subsection(c, s, sub, section);
		s->lacks = s->lacks || sub->bad;
		good = good && !sub->bad && !sub->faulty;
	}
	good = check_needed(c, s) && good;
	s->faulty = s->faulty || s->lacks || c->torn || !good;
	return !s->faulty;
}

bool bh_check(bh_scan_section *root, bh_key_file file, bool whole, bh_problems *problems)
{
	checker c = { file, whole, root->torn, problems };

	return check_section(&c, root, "");
}
