#include "read/cif.h"

#include <stdio.h>
#include <string.h>

#include "read/suggest.h"

enum { NAME_MOST = 75, SHOWN = 40, LOOP_MOST = 512 };

typedef enum {
	END,
	NAME,  /* _tag           */
	VALUE, /* word, quoted   */
	DATA,  /* data_name      */
	SAVE,  /* save_ or save_name */
	LOOP,
	STOP, /* stop_, global_: reserved */
	FAULT
} token_kind;

typedef struct {
	token_kind kind;
	bh_cif_value value; /* of a tag or a block its name      */
} token;

typedef struct {
	bh_cif *cif;
	const char *s, *end, *line_start;
	unsigned line;
	bool version2;
	bh_problems *problems;
	bh_arena *arena;
	const char *const *wanted;
	size_t wanted_count;
	bool saving; /* inside a save frame */
	unsigned loops;
} reader;

static bh_place here(const reader *r, const char *at, unsigned line)
{
	bh_cif_value value = { .text = at, .line = line & 0x7FFFFFFF };

	return bh_cif_place(r->cif, &value);
}

bh_place bh_cif_place(const bh_cif *cif, const bh_cif_value *value)
{
	const char *s = value->text;
	int col = 1;

	/* columns count characters: bytes that begin one */
	for (; s > cif->bytes && s[-1] != '\n' && s[-1] != '\r'; s--)
		col += ((unsigned char)s[-1] & 0xC0) != 0x80;
	return (bh_place){ cif->file, (int)value->line, col };
}

static bool is_blank(char c)
{
	return c == ' ' || c == '\t' || c == '\n' || c == '\r';
}

/* Over the end of a line: "\n", "\r\n" or "\r". */
static void new_line(reader *r)
{
	if (*r->s == '\r' && r->s + 1 < r->end && r->s[1] == '\n')
		r->s++;
	r->s++;
	r->line++;
	r->line_start = r->s;
}

static bool is_end_of_line(char c)
{
	return c == '\n' || c == '\r';
}

static void skip(reader *r)
{
	while (r->s < r->end) {
		if (is_end_of_line(*r->s)) {
			new_line(r);
		} else if (is_blank(*r->s)) {
			r->s++;
		} else if (*r->s == '#') {
			while (r->s < r->end && !is_end_of_line(*r->s))
				r->s++;
		} else {
			return;
		}
	}
}

static token fault(reader *r, const char *at, unsigned line, const char *text)
{
	bh_problem(r->problems, here(r, at, line), "%s", text);
	return (token){ .kind = FAULT };
}

static token value_of(const char *from, const char *to, unsigned line, bool quoted)
{
	return (token){ VALUE,
			{ from, (unsigned)(to - from), line & 0x7FFFFFFF, quoted } };
}

/* A text field: from ";" at the start of a line to the next such ";". */
static token text_field(reader *r)
{
	const char *from = r->s + 1, *at = r->s;
	unsigned line = r->line;

	for (r->s++; r->s < r->end;) {
		if (!is_end_of_line(*r->s)) {
			r->s++;
			continue;
		}
		token t = value_of(from, r->s, line, true);

		new_line(r);
		if (r->s < r->end && *r->s == ';') {
			r->s++;
			return t;
		}
	}
	return fault(r, at, line,
		     "a text field begins here and is never closed\nit ends with a line "
		     "that begins with ;");
}

/* Three quotes begin a string of version 2.0 that may run over lines. */
static token triple(reader *r, char quote)
{
	const char *from = r->s + 3, *at = r->s;
	unsigned line = r->line;

	for (r->s += 3; r->s < r->end;) {
		if (r->end - r->s >= 3 && r->s[0] == quote && r->s[1] == quote &&
		    r->s[2] == quote) {
			token t = value_of(from, r->s, line, true);

			r->s += 3;
			return t;
		}
		if (is_end_of_line(*r->s))
			new_line(r);
		else
			r->s++;
	}
	return fault(r, at, line, "a quoted text begins here and is never closed\nadd three "
				  "quotes");
}

/* A quote ends before a blank (1.1) or at once (2.0), on the same line. */
static token quoted(reader *r)
{
	char quote = *r->s;
	const char *from = r->s + 1, *s = from;
	token t;

	if (r->version2 && r->end - r->s >= 3 && r->s[1] == quote && r->s[2] == quote)
		return triple(r, quote);
	while (s < r->end && !is_end_of_line(*s) &&
	       !(*s == quote && (r->version2 || s + 1 == r->end || is_blank(s[1]))))
		s++;
	if (s == r->end || *s != quote)
		return fault(r, r->s, r->line,
			     "a quoted text begins here and is not closed on its line\n"
			     "close it with the same quote and a blank, or write it "
			     "between lines with ;");
	t = value_of(from, s, r->line, true);
	r->s = s + 1;
	return t;
}

/* A list or table of version 2.0, passed over to the bracket that closes it. */
static token bracketed(reader *r)
{
	const char *at = r->s;
	unsigned line = r->line;
	size_t depth = 0;

	while (r->s < r->end) {
		char c = *r->s;

		if (c == '\'' || c == '"') {
			token t = quoted(r);

			if (t.kind == FAULT)
				return t;
		} else if (c == ';' && r->s == r->line_start) {
			token t = text_field(r);

			if (t.kind == FAULT)
				return t;
		} else if (is_end_of_line(c)) {
			new_line(r);
		} else if (c == '#' && is_blank(r->s[-1])) {
			skip(r);
		} else {
			depth += c == '[' || c == '{';
			depth -= c == ']' || c == '}';
			r->s++;
			if (depth == 0)
				return value_of(at, r->s, line, true);
		}
	}
	return fault(r, at, line, "a list begins here and is never closed\nclose it with ] or }");
}

/* The word begins with these letters, small or capital. */
static bool begins(const bh_cif_value *word, const char *with)
{
	size_t n = strlen(with);

	if (word->length < n)
		return false;
	for (size_t i = 0; i < n; i++)
		if ((word->text[i] | 32) != (with[i] | 32) && word->text[i] != with[i])
			return false;
	return true;
}

static token word(reader *r)
{
	const char *from = r->s;
	token t;

	while (r->s < r->end && !is_blank(*r->s))
		r->s++;
	t = value_of(from, r->s, r->line, false);
	if (*from == '_') {
		t.kind = NAME;
	} else if (begins(&t.value, "data_")) {
		t.kind = DATA;
		t.value.text += 5;
		t.value.length -= 5;
	} else if (begins(&t.value, "save_")) {
		t.kind = SAVE;
		t.value.length -= 5;
	} else if (t.value.length == 5 && begins(&t.value, "loop_")) {
		t.kind = LOOP;
	} else if ((t.value.length == 5 && begins(&t.value, "stop_")) ||
		   (t.value.length == 7 && begins(&t.value, "global_"))) {
		t.kind = STOP;
	}
	return t;
}

static token next(reader *r)
{
	skip(r);
	if (r->s == r->end)
		return (token){ END, { r->s, 0, r->line & 0x7FFFFFFF, 0 } };
	if (*r->s == ';' && r->s == r->line_start)
		return text_field(r);
	if (*r->s == '\'' || *r->s == '"')
		return quoted(r);
	if (r->version2 && (*r->s == '[' || *r->s == '{'))
		return bracketed(r);
	return word(r);
}

/* A tag in small letters with "_" for "."; and whether it is wanted. */
static const char *wanted_name(const reader *r, const bh_cif_value *tag)
{
	char name[NAME_MOST + 1];

	if (tag->length > NAME_MOST)
		return NULL;
	for (unsigned i = 0; i < tag->length; i++) {
		char c = tag->text[i];

		name[i] = (char)(c >= 'A' && c <= 'Z' ? c | 32 : c == '.' ? '_' : c);
	}
	name[tag->length] = '\0';
	for (size_t i = 0; i < r->wanted_count; i++)
		if (strcmp(r->wanted[i], name) == 0)
			return r->wanted[i];
	return NULL;
}

static bool lost(reader *r)
{
	r->problems->lost = true;
	return false;
}

static bh_cif_block *block_now(reader *r)
{
	return &r->cif->blocks[r->cif->count - 1];
}

static bool begin_block(reader *r, const bh_cif_value *name)
{
	bh_cif *cif = r->cif;
	bh_cif_block *grown;
	bh_cif_block *block;
	size_t room = cif->count == 0 ? 1 : cif->count;

	if ((cif->count & (cif->count - 1)) == 0) { /* 0 or a power of two: full */
		grown = bh_grow(r->arena, cif->blocks, bh_cif_block, cif->count, 2 * room);
		if (!grown)
			return lost(r);
		cif->blocks = grown;
	}
	block = &cif->blocks[cif->count++];
	*block = (bh_cif_block){ .line = name->line };
	snprintf(block->name, sizeof block->name, "%.*s",
		 (int)(name->length < NAME_MOST ? name->length : NAME_MOST), name->text);
	r->saving = false;
	return true;
}

/* An item of the block for a wanted name; NULL: not wanted, or out of memory (then noted). */
static bool add_item(bh_cif_item **item, reader *r, const bh_cif_value *tag, unsigned loop)
{
	const char *name = r->saving ? NULL : wanted_name(r, tag);
	bh_cif_block *block = block_now(r);
	bh_cif_item *grown;

	*item = NULL;
	if (!name)
		return true;
	for (size_t i = 0; i < block->count; i++)
		if (block->items[i].name == name)
			return bh_problem(r->problems, here(r, tag->text, tag->line),
					  "%.*s stands twice in data block \"%s\" (first on "
					  "line %u)\ngive it once",
					  (int)tag->length, tag->text, block->name,
					  block->items[i].line);
	grown = bh_grow(r->arena, block->items, bh_cif_item, block->count,
			block->count + 1);
	if (!grown)
		return lost(r);
	block->items = grown;
	*item = &block->items[block->count++];
	**item = (bh_cif_item){ .name = name, .line = tag->line, .loop = loop };
	return true;
}

static bool add_value(reader *r, bh_cif_item *item, const bh_cif_value *value)
{
	if (item->count == item->room) {
		size_t room = item->room ? 2 * item->room : 1;
		bh_cif_value *grown =
			bh_grow(r->arena, item->values, bh_cif_value, item->room, room);

		if (!grown)
			return lost(r);
		item->values = grown;
		item->room = room;
	}
	item->values[item->count++] = *value;
	return true;
}

/* A loop: its names, then values row by row. *t: the token behind it. */
static bool read_loop(reader *r, token *t)
{
	size_t columns = 0, n = 0;
	size_t wanted[LOOP_MOST]; /* item of each column + 1, 0: not wanted */
	bh_place place = here(r, t->value.text, t->value.line);
	bh_cif_item *item;

	r->loops++;
	for (*t = next(r); t->kind == NAME; *t = next(r)) {
		if (columns == LOOP_MOST)
			return bh_problem(r->problems, place,
					  "a loop of more than %d names\nsplit it",
					  LOOP_MOST);
		if (!add_item(&item, r, &t->value, r->loops))
			return false;
		wanted[columns++] = item ? block_now(r)->count : 0;
	}
	if (t->kind == FAULT)
		return false;
	if (columns == 0)
		return bh_problem(r->problems, place,
				  "loop_ has no names\nput the names of its columns behind it");
	for (; t->kind == VALUE; *t = next(r), n++) {
		size_t at = wanted[n % columns];

		if (at && !add_value(r, &block_now(r)->items[at - 1], &t->value))
			return false;
	}
	if (t->kind == FAULT)
		return false;
	if (n % columns != 0)
		return bh_problem(r->problems, place,
				  "this loop has %zu names and %zu values, no whole number of "
				  "rows\nit ends before line %u; look for a value that is "
				  "missing or split by a blank",
				  columns, n, (unsigned)t->value.line);
	return true;
}

/* A name and its value. */
static bool read_pair(reader *r, token *t)
{
	bh_cif_value tag = t->value;
	bh_cif_item *item;

	*t = next(r);
	if (t->kind == FAULT)
		return false;
	if (t->kind != VALUE) /* a name without value says nothing */
		return r->saving || !wanted_name(r, &tag) ||
		       bh_problem(r->problems, here(r, tag.text, tag.line),
				  "%.*s has no value\ngive one, or ? when it is not known",
				  (int)tag.length, tag.text);
	if (!add_item(&item, r, &tag, 0) || (item && !add_value(r, item, &t->value)))
		return false;
	*t = next(r);
	return t->kind != FAULT;
}

static bool stray(reader *r, const token *t)
{
	int n = bh_suggest_cut(t->value.text,
			       t->value.length < SHOWN ? t->value.length : SHOWN);

	return bh_problem(r->problems, here(r, t->value.text, t->value.line),
			  "\"%.*s\" belongs to no name\nlook for a quote or a name that is "
			  "missing before it",
			  n, t->value.text);
}

static bool read_blocks(reader *r)
{
	token t = next(r);

	while (t.kind != END) {
		if (t.kind == FAULT)
			return false;
		if (t.kind == DATA) {
			if (!begin_block(r, &t.value))
				return false;
			t = next(r);
			continue;
		}
		if (r->cif->count == 0)
			return bh_problem(r->problems, here(r, t.value.text, t.value.line),
					  "this is no CIF: the first word is not "
					  "data_NAME\ngive a crystallographic information "
					  "file");
		if (t.kind == LOOP ? !read_loop(r, &t) : t.kind == NAME && !read_pair(r, &t))
			return false;
		if (t.kind == VALUE)
			return stray(r, &t);
		if (t.kind == SAVE)
			r->saving = t.value.length > 0;
		if (t.kind == SAVE || t.kind == STOP)
			t = next(r);
	}
	return true;
}

/* What a file begins with: a byte-order mark, the comment of version 2.0. */
static bool begin_file(reader *r)
{
	const char magic[] = "#\\#CIF_2.0";
	size_t n = (size_t)(r->end - r->s);

	if (n >= 2 && (memcmp(r->s, "\xFF\xFE", 2) == 0 || memcmp(r->s, "\xFE\xFF", 2) == 0))
		return bh_problem(r->problems, (bh_place){ r->cif->file, 1, 1 },
				  "this file is UTF-16\nsave it as UTF-8 or ASCII");
	if (n >= 3 && memcmp(r->s, "\xEF\xBB\xBF", 3) == 0)
		r->s = r->line_start = r->s + 3;
	n = (size_t)(r->end - r->s);
	r->version2 = n >= sizeof magic - 1 && memcmp(r->s, magic, sizeof magic - 1) == 0;
	return true;
}

bool bh_cif_parse(bh_cif *cif, bh_arena *arena, const char *const *wanted, size_t wanted_count,
		  bh_problems *problems)
{
	reader r = { .cif = cif,
		     .s = cif->bytes,
		     .end = cif->bytes + cif->length,
		     .line_start = cif->bytes,
		     .line = 1,
		     .problems = problems,
		     .arena = arena,
		     .wanted = wanted,
		     .wanted_count = wanted_count };
	const char *nul = cif->length ? memchr(cif->bytes, '\0', cif->length) : NULL;

	cif->blocks = NULL;
	cif->count = 0;
	if (!begin_file(&r))
		return false;
	if (nul) {
		for (const char *s = cif->bytes; s < nul; s++)
			r.line += *s == '\n';
		return bh_problem(problems, here(&r, nul, r.line),
				  "a zero byte: this is no text\ngive a crystallographic "
				  "information file");
	}
	if (!read_blocks(&r))
		return false;
	if (cif->count == 0)
		return bh_problem(problems, (bh_place){ cif->file, 1, 1 },
				  "the file is empty\ngive a crystallographic information "
				  "file");
	return true;
}
