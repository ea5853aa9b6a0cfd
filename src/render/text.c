#include <math.h>
#include <stdint.h>
#include <string.h>

#include "base/arena.h"
#include "base/fmt.h"
#include "render/plot.h"
#include "render/render.h"
#include "render/sheet.h"

enum { MOST_COLUMNS = 16, INDENT = 2 };

typedef struct {
	bh_text *to;
	size_t columns;
	bool color;
} page;

/* Bold, and colour by weight; the words say the same without. */
static void style(const page *p, int weight)
{
	static const char *const codes[] = { "\033[1m", "\033[1;33m", "\033[1;31m" };

	if (p->color)
		bh_text_add(p->to, codes[weight]);
}

static void plain(const page *p)
{
	if (p->color)
		bh_text_add(p->to, "\033[0m");
}

static bool is_digit(char c)
{
	return c >= '0' && c <= '9';
}

/* Not between digits: "1 0 4", "12 300" stay together. */
static bool may_break(const char *text, size_t blank)
{
	return blank == 0 || !is_digit(text[blank - 1]) ||
	       !(is_digit(text[blank + 1]) || text[blank + 1] == '-');
}

/* Bytes of text that fit into a width, broken at a blank where there is one. */
static size_t fitting(const char *text, size_t width)
{
	size_t used = 0, last_blank = 0, i = 0;

	while (text[i]) {
		size_t next = i + 1;

		while (((unsigned char)text[next] & 0xC0) == 0x80)
			next++;
		used += bh_text_columns(
			(char[5]){ text[i], next > i + 1 ? text[i + 1] : '\0',
				   next > i + 2 ? text[i + 2] : '\0',
				   next > i + 3 ? text[i + 3] : '\0', '\0' });
		if (used > width)
			return last_blank ? last_blank : i ? i : next;
		i = next;
		if (text[i] == '\0' || (text[i] == ' ' && may_break(text, i)))
			last_blank = i;
	}
	return i;
}

static size_t part_columns(const char *text, size_t bytes)
{
	char copy[400];

	if (bytes >= sizeof copy)
		bytes = sizeof copy - 1;
	memcpy(copy, text, bytes);
	copy[bytes] = '\0';
	return bh_text_columns(copy);
}

/* Text broken to the page's width, later lines indented; the first starts at column `used`. */
static void flow(const page *p, const char *text, size_t indent, size_t used)
{
	bool first = true;

	if (!*text)
		bh_text_add(p->to, "\n");
	while (*text) {
		size_t start = first ? used : indent, bytes;

		if (!first)
			bh_text_repeat(p->to, " ", indent);
		/* a word too long for what is left of the first line goes to the next */
		bytes = fitting(text, p->columns > start ? p->columns - start : 1);
		if (first && used > indent && text[bytes] && text[bytes] != ' ') {
			bh_text_add(p->to, "\n");
		} else {
			bh_text_add_bytes(p->to, text, bytes);
			bh_text_add(p->to, "\n");
			text += bytes;
			text += strspn(text, " ");
		}
		first = false;
	}
}

static void item(const page *p, const bh_item *i, size_t label)
{
	size_t used = INDENT;

	bh_text_repeat(p->to, " ", INDENT);
	if (*i->lead) {
		style(p, i->weight);
		bh_text_add(p->to, i->lead);
		plain(p);
		used += bh_text_columns(i->lead);
	}
	if (label && *i->lead) { /* short labels stand in a column of their own */
		size_t pad = INDENT + label > used ? INDENT + label - used : 1;

		bh_text_repeat(p->to, " ", pad);
		flow(p, i->text, INDENT + label, used + pad);
	} else if (*i->lead) {
		bh_text_add(p->to, "\n");
		bh_text_repeat(p->to, " ", (size_t)2 * INDENT);
		flow(p, i->text, (size_t)2 * INDENT, (size_t)2 * INDENT);
	} else {
		flow(p, i->text, INDENT, INDENT);
	}
	if (*i->then) {
		bh_text_repeat(p->to, " ", (size_t)2 * INDENT);
		bh_text_add(p->to, "→ ");
		flow(p, i->then, (size_t)2 * INDENT + 2, (size_t)2 * INDENT + 2);
	}
}

/* Width of the label column, 0: the leads are sentences. */
static size_t label_width(const bh_section *s)
{
	size_t widest = 0;

	for (size_t i = 0; i < s->item_count; i++) {
		size_t n = bh_text_columns(s->items[i].lead);

		if (n > widest)
			widest = n;
	}
	return widest && widest <= 14 ? widest + 2 : 0;
}

/* Columns that are shown, and their widths. */
typedef struct {
	size_t index[MOST_COLUMNS], width[MOST_COLUMNS], count;
} layout;

static size_t natural_width(const bh_table *t, size_t column)
{
	const bh_column *c = &t->columns[column];
	size_t widest = bh_text_columns(c->head), unit = bh_text_columns(c->unit);

	widest = unit > widest ? unit : widest;
	for (size_t i = 0; i < t->row_count; i++) {
		size_t n = bh_text_columns(t->cells[i * t->column_count + column]);

		widest = n > widest ? n : widest;
	}
	return widest;
}

static size_t total(const layout *l)
{
	size_t sum = INDENT;

	for (size_t i = 0; i < l->count; i++)
		sum += l->width[i] + (i ? 2 : 0);
	return sum;
}

static void choose_columns(layout *l, const bh_table *t, bool wide)
{
	l->count = 0;
	for (size_t i = 0; i < t->column_count && l->count < MOST_COLUMNS; i++)
		if (wide || !t->columns[i].wide) {
			l->width[l->count] = natural_width(t, i);
			l->index[l->count++] = i;
		}
}

/* The widest column of words, SIZE_MAX when all are narrow. */
static size_t wordy_column(const layout *l, const bh_table *t)
{
	size_t widest = SIZE_MAX;

	for (size_t i = 0; i < l->count; i++)
		if (t->columns[l->index[i]].align == BH_LEFT && l->width[i] > 8 &&
		    (widest == SIZE_MAX || l->width[i] > l->width[widest]))
			widest = i;
	return widest;
}

/* Leave out what is dispensable, narrow the columns of words, and on a very narrow terminal
 * leave out numbers from the last but one on. */
static void fit(layout *l, const bh_table *t, size_t columns)
{
	choose_columns(l, t, true);
	if (total(l) > columns)
		choose_columns(l, t, false);
	while (total(l) > columns && l->count > 2) {
		size_t widest = wordy_column(l, t);

		if (widest != SIZE_MAX) {
			l->width[widest]--;
			continue;
		}
		l->count--;
		l->index[l->count - 1] = l->index[l->count];
		l->width[l->count - 1] = l->width[l->count];
	}
}

static void pad(const page *p, const char *text, size_t bytes, size_t width,
		bh_align align)
{
	size_t used = part_columns(text, bytes), left = width > used ? width - used : 0;

	if (align == BH_RIGHT)
		bh_text_repeat(p->to, " ", left);
	bh_text_add_bytes(p->to, text, bytes);
	if (align == BH_LEFT)
		bh_text_repeat(p->to, " ", left);
}

static void trim_line(bh_text *text)
{
	while (text->length && text->bytes[text->length - 1] == ' ')
		text->bytes[--text->length] = '\0';
	bh_text_add(text, "\n");
}

/* One row over as many lines as its longest cell needs. */
static void row(const page *p, const layout *l, const bh_table *t,
		const char *const *cells)
{
	const char *left[MOST_COLUMNS];
	bool more = true;

	for (size_t i = 0; i < l->count; i++)
		left[i] = cells[l->index[i]];
	while (more) {
		more = false;
		bh_text_repeat(p->to, " ", INDENT);
		for (size_t i = 0; i < l->count; i++) {
			size_t bytes = fitting(left[i], l->width[i]);

			if (i)
				bh_text_add(p->to, "  ");
			pad(p, left[i], bytes, l->width[i],
			    t->columns[l->index[i]].align);
			left[i] += bytes;
			left[i] += strspn(left[i], " ");
			more = more || *left[i];
		}
		trim_line(p->to);
	}
}

static void heads(const page *p, const layout *l, const bh_table *t)
{
	const char *names[MOST_COLUMNS] = { "" }, *units[MOST_COLUMNS] = { "" };
	bool any = false;

	for (size_t i = 0; i < t->column_count && i < MOST_COLUMNS; i++) {
		names[i] = t->columns[i].head;
		units[i] = t->columns[i].unit;
		any = any || *units[i];
	}
	style(p, 0);
	row(p, l, t, names);
	plain(p);
	if (any)
		row(p, l, t, units);
}

static void table(const page *p, const bh_table *t)
{
	layout l;

	fit(&l, t, p->columns);
	heads(p, &l, t);
	for (size_t i = 0; i < t->row_count; i++)
		row(p, &l, t, t->cells + i * t->column_count);
}

static void section(const page *p, const bh_section *s, const bh_plan *plan)
{
	if (s->part != BH_PART_PATTERN && s->item_count == 0 && s->table.row_count == 0)
		return;
	bh_text_add(p->to, "\n");
	if (*s->title) {
		style(p, 0);
		bh_text_add(p->to, s->title);
		plain(p);
		bh_text_add(p->to, "\n");
	}
	if (s->part == BH_PART_PATTERN)
		bh_plot(p->to, plan, p->columns);
	if (s->table.row_count)
		table(p, &s->table);
	for (size_t i = 0; i < s->item_count; i++) {
		if (s->part == BH_PART_SIGN_OFF) {
			bh_text_format(p->to, "  %-14s ____________________________\n",
				       s->items[i].lead);
			continue;
		}
		item(p, &s->items[i], label_width(s));
	}
}

static bool render(bh_text *to, const bh_plan *plan, const bh_sheet *sheet, bh_look look)
{
	page p = { to, (size_t)(look.columns < 40 ? 40 : look.columns), look.color };

	style(&p, 0);
	flow(&p, sheet->title, 0, 0);
	plain(&p);
	flow(&p, sheet->subtitle, 0, 0);
	for (size_t i = 0; i < sheet->section_count; i++)
		if (sheet->sections[i].part != BH_PART_WHY || look.why)
			section(&p, &sheet->sections[i], plan);
	return !to->lost;
}

bool bh_render_text(bh_text *text, const bh_plan *plan, bh_look look, bh_err *err)
{
	bh_arena *arena = bh_arena_new();
	bh_sheet sheet;
	bool good = arena && bh_sheet_make(&sheet, arena, plan, err) &&
		    render(text, plan, &sheet, look);

	bh_arena_free(arena);
	return good || bh_fail_memory(err);
}

bool bh_render_reflections_text(bh_text *text, const bh_plan *plan, bh_look look,
				bh_err *err)
{
	bh_arena *arena = bh_arena_new();
	bh_sheet sheet;
	bool good = arena && bh_sheet_reflections(&sheet, arena, plan, err) &&
		    render(text, plan, &sheet, look);

	bh_arena_free(arena);
	return good || bh_fail_memory(err);
}
