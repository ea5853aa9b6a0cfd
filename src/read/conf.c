#include "read/conf.h"

#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

#include <confuse.h>

#include "base/number.h"
#include "base/text.h"
#include "read/check.h"
#include "read/scan.h"

/* The parser sees every value as text and every title as the section's id; what a value means
 * is decided by the key table, in no locale. Its message, if it ever refuses what the scan let
 * pass, is caught here: it may only be called from one thread at a time. */
static bh_problems *complaints;
static const char *complaint_file;

static void on_error(cfg_t *cfg, const char *format, va_list args)
{
	char text[256];

	vsnprintf(text, sizeof text, format, args);
	bh_problem(complaints, (bh_place){ complaint_file, cfg ? cfg->line : 0, 1 },
		   "%s\ncheck the "
		   "line",
		   text);
}

static bool is_list(const bh_key *key)
{
	return key->type == BH_KEY_NUMBERS || key->type == BH_KEY_WHOLES ||
	       key->type == BH_KEY_TEXTS;
}

/* Whether a key belongs to a section kind: "aim line" and "aim survey" are one to the parser. */
static bool belongs(const bh_key *key, bh_key_file file, const char *section)
{
	size_t n = strlen(section);

	return key->file == file &&
	       (strcmp(key->section, section) == 0 ||
		(n && strncmp(key->section, section, n) == 0 && key->section[n] == ' '));
}

static bool has(const cfg_opt_t *options, size_t count, const char *name)
{
	for (size_t i = 0; i < count; i++)
		if (strcmp(options[i].name, name) == 0)
			return true;
	return false;
}

/* Options of a section for the parser, sub-sections included. */
static cfg_opt_t *options_of(bh_arena *arena, bh_key_file file, const char *section)
{
	cfg_opt_t *options =
		bh_new(arena, cfg_opt_t, bh_key_count + bh_section_kind_count + 1);
	size_t n = 0;

	if (!options)
		return NULL;
	for (size_t i = 0; i < bh_key_count; i++) {
		const bh_key *key = &bh_keys[i];

		if (!belongs(key, file, section) || has(options, n, key->name))
			continue;
		if (is_list(key))
			options[n++] =
				(cfg_opt_t)CFG_STR_LIST(key->name, NULL, CFGF_NODEFAULT);
		else
			options[n++] =
				(cfg_opt_t)CFG_STR(key->name, NULL, CFGF_NODEFAULT);
	}
	for (size_t i = 0; i < bh_section_kind_count; i++) {
		const bh_section_kind *kind = &bh_section_kinds[i];
		cfg_opt_t *inside;

		if (kind->file != file || strcmp(kind->parent, section) != 0)
			continue;
		inside = options_of(arena, file, kind->name);
		if (!inside)
			return NULL;
		options[n++] = (cfg_opt_t)CFG_SEC(kind->name, inside,
						  kind->titled ? CFGF_MULTI | CFGF_TITLE
							       : CFGF_NONE);
	}
	options[n] = (cfg_opt_t)CFG_END();
	return options;
}

typedef struct {
	bh_arena *arena;
	bh_key_file file;
	bool lost;
} builder;

static bool fill_entry(builder *b, bh_conf_entry *entry, const bh_scan_key *written,
		       cfg_t *cfg)
{
	entry->place = written->place;
	entry->count = written->count;
	entry->values = bh_new(b->arena, bh_conf_value, written->count);
	if (!entry->values)
		return false;
	for (size_t i = 0; i < written->count; i++) {
		const char *text = cfg_getnstr(cfg, written->name, (unsigned)i);
		bh_conf_value *value = &entry->values[i];

		value->place = written->values[i].place;
		value->text = bh_arena_text(b->arena, text ? text : "");
		value->number = NAN;
		if (!value->text)
			return false;
		if (entry->key->type != BH_KEY_TEXT && entry->key->type != BH_KEY_TEXTS)
			bh_check_number(&value->number, entry->key, value->text);
	}
	return true;
}

/* The parser's section that carries a scanned section's values. */
static cfg_t *partner(cfg_t *cfg, const bh_scan_section *s)
{
	char id[24];

	if (!s->title)
		return cfg_getsec(cfg, s->name);
	snprintf(id, sizeof id, "%zu", s->id);
	return cfg_gettsec(cfg, s->name, id);
}

static bh_conf_section *build(builder *b, const bh_scan_section *s, cfg_t *cfg)
{
	bh_conf_section *made = bh_new(b->arena, bh_conf_section, 1);
	bh_problems none = { .arena = b->arena };

	if (!made || !cfg)
		return NULL;
	made->name = s->name;
	made->title = s->title ? s->title : "";
	made->place = s->place;
	made->title_place = s->title_place;
	made->lacks = s->lacks;
	made->faulty = s->faulty;
	made->key_section = bh_check_key_section(s, b->file, &none);
	made->entries = bh_new(b->arena, bh_conf_entry, s->key_count);
	made->sections = bh_new(b->arena, bh_conf_section *, s->section_count);
	if (!made->entries || !made->sections)
		return NULL;
	for (size_t i = 0; i < s->key_count; i++) {
		bh_conf_entry *entry = &made->entries[made->entry_count];

		if (s->keys[i].bad)
			continue;
		made->entry_count++;
		entry->key = bh_key_find(b->file, made->key_section, s->keys[i].name);
		if (!fill_entry(b, entry, &s->keys[i], cfg))
			return NULL;
	}
	for (size_t i = 0; i < s->section_count; i++) {
		bh_conf_section *sub;

		if (s->sections[i]->bad)
			continue;
		sub = build(b, s->sections[i], partner(cfg, s->sections[i]));
		if (!sub)
			return NULL;
		made->sections[made->section_count++] = sub;
	}
	return made;
}

static bool parse(bh_conf_section **root, bh_arena *arena, bh_key_file kind,
		  const bh_scan_section *scanned, const char *text, bh_problems *problems)
{
	builder b = { arena, kind, false };
	cfg_opt_t *options = options_of(arena, kind, "");
	cfg_t *cfg = options ? cfg_init(options, CFGF_NONE) : NULL;
	size_t before = problems->count;
	bool good = false;

	if (!cfg) {
		problems->lost = true;
		return false;
	}
	complaints = problems;
	complaint_file = scanned->place.file;
	cfg_set_error_function(cfg, on_error);
	if (cfg_parse_buf(cfg, text) == CFG_SUCCESS) {
		*root = build(&b, scanned, cfg);
		good = *root != NULL;
		problems->lost = problems->lost || !good;
	} else if (problems->count == before) {
		bh_problem(problems, scanned->place,
			   "the file cannot be parsed\ncheck its quotes and "
			   "braces");
	}
	cfg_free(cfg);
	complaints = NULL;
	return good;
}

int bh_conf_by_place(const void *a, const void *b)
{
	const bh_err *p = a, *q = b;
	int files = strcmp(p->file, q->file);

	if (files != 0)
		return files;
	if (p->line != q->line)
		return p->line < q->line ? -1 : 1;
	return (p->col > q->col) - (p->col < q->col);
}

bool bh_conf_read(bh_conf_section **root, bh_arena *arena, bh_key_file kind,
		  const char *file, const char *bytes, size_t length,
		  bh_problems *problems)
{
	bh_scan_section *scanned = NULL;
	size_t before = problems->count;
	bh_text text = { 0 };
	bool whole;

	*root = NULL;
	whole = bh_scan(&scanned, arena, file, bytes, length, problems);
	if (scanned) { /* what is good is read even beside what is bad */
		bh_check(scanned, kind, whole, problems);
		bh_scan_write(&text, scanned);
		problems->lost = problems->lost || text.lost;
		if (!problems->lost)
			parse(root, arena, kind, scanned, text.bytes ? text.bytes : "",
			      problems);
	}
	bh_text_free(&text);
	if (problems->count > before)
		qsort(problems->items + before, problems->count - before,
		      sizeof *problems->items, bh_conf_by_place);
	return *root && problems->count == before && !problems->lost;
}

const bh_conf_entry *bh_conf_entry_of(const bh_conf_section *section, const char *key)
{
	for (size_t i = 0; section && i < section->entry_count; i++)
		if (strcmp(section->entries[i].key->name, key) == 0)
			return &section->entries[i];
	return NULL;
}

const bh_conf_section *bh_conf_section_of(const bh_conf_section *parent, const char *name)
{
	for (size_t i = 0; i < parent->section_count; i++)
		if (strcmp(parent->sections[i]->name, name) == 0)
			return parent->sections[i];
	return NULL;
}

double bh_conf_number(bh_key_file kind, const bh_conf_section *section,
		      const char *key_section, const char *key)
{
	const bh_conf_entry *entry = bh_conf_entry_of(section, key);
	const bh_key *row = bh_key_find(kind, key_section, key);
	double number = NAN;

	if (entry)
		return entry->values[0].number;
	if (row && row->fallback && *row->fallback)
		bh_check_number(&number, row, row->fallback);
	return number;
}

const char *bh_conf_text(bh_key_file kind, const bh_conf_section *section,
			 const char *key_section, const char *key)
{
	const bh_conf_entry *entry = bh_conf_entry_of(section, key);
	const bh_key *row = bh_key_find(kind, key_section, key);

	return entry ? entry->values[0].text : row && row->fallback ? row->fallback : "";
}
