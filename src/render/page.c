#include <stdio.h>
#include <string.h>

#include "base/arena.h"
#include "render/page_figure.h"
#include "render/pen.h"
#include "render/render.h"
#include "render/sheet.h"

static const double left = 42, right = 553, top = 40, bottom = 796;
static const double body_size = 8, small_size = 7.2, head_size = 9.5;
static const double figure_height = 176;
enum { MOST_COLUMNS = 16 };

typedef struct {
	bh_pen *pen;
	const bh_plan *plan;
	const bh_sheet *sheet;
	double y;
	size_t page, pages; /* pages 0 while measuring */
} paper;

static bh_words words(const char *text, double size, bool bold)
{
	return (bh_words){ text, size, bold, BH_AT_LEFT, 0 };
}

static void footer(const paper *p)
{
	bh_words line = { NULL, 6.8, false, BH_AT_LEFT, 0.35 };
	char text[400], number[40];

	snprintf(text, sizeof text, "beamhour %s · %.120s · %.120s", BH_VERSION,
		 p->sheet->title, p->plan->request->file);
	snprintf(number, sizeof number, "page %zu of %zu", p->page, p->pages);
	bh_pen_line(p->pen, (bh_segment){ left, 806, right, 806 },
		    (bh_stroke){ 0.4, 0.6, false });
	line.text = text;
	bh_pen_words(p->pen, line, left, 809, right - left - 70);
	line.text = number;
	line.at = BH_AT_RIGHT;
	bh_pen_words(p->pen, line, right - 70, 809, 70);
}

static void turn_page(paper *p)
{
	footer(p);
	bh_pen_next_page(p->pen);
	p->page++;
	p->y = top;
}

/* Make sure that so much fits below. True when a new page was begun. */
static bool need(paper *p, double height)
{
	if (p->y + height <= bottom || p->y <= top)
		return false;
	turn_page(p);
	return true;
}

static void header(paper *p)
{
	p->y += bh_pen_words(p->pen, words(p->sheet->title, 14, true), left, p->y,
			     right - left);
	p->y += 1 +
		bh_pen_words(p->pen,
			     (bh_words){ p->sheet->subtitle, 9, false, BH_AT_LEFT, 0.3 },
			     left, p->y, right - left);
	p->y += 6;
}

/* Height of an item whose label stands in a column. */
static double row_height(const paper *p, const bh_item *i, double label, double size)
{
	double text = bh_pen_words_height(p->pen, words(i->text, size, false),
					  right - left - label);
	double lead = bh_pen_words_height(p->pen, words(i->lead, size, true), label);

	return text > lead ? text : lead;
}

static void labelled(paper *p, const bh_item *i, double label, double size)
{
	double height = row_height(p, i, label, size);

	need(p, height);
	bh_pen_words(p->pen, words(i->lead, size, true), left, p->y, label - 4);
	bh_pen_words(p->pen, words(i->text, size, false), left + label, p->y,
		     right - left - label);
	p->y += height + 1.5;
}

static void warning_bar(paper *p, const bh_item *i)
{
	bh_words line = { i->text, 10, true, BH_AT_CENTRE, 1 };
	double height = bh_pen_words_height(p->pen, line, right - left - 16) + 8;

	bh_pen_fill(p->pen, (bh_box){ left, p->y, right - left, height }, 0);
	bh_pen_words(p->pen, line, left + 8, p->y + 4, right - left - 16);
	p->y += height + 5;
}

/* What to set and how long, to read from a step away; the rest of the answer below. */
static void answer(paper *p, const bh_section *s)
{
	bh_words big = words(p->sheet->setting, 20, true);
	bh_words time = { p->sheet->time, 20, true, BH_AT_RIGHT, 0 };

	for (size_t i = 0; i < s->item_count; i++)
		if (s->items[i].weight > 0)
			warning_bar(p, &s->items[i]);
	bh_pen_fill(p->pen, (bh_box){ left, p->y, right - left, 36 }, 0.92);
	bh_pen_words(p->pen, big, left + 10, p->y + 5, 350);
	bh_pen_words(p->pen, time, right - 170, p->y + 5, 160);
	p->y += 42;
	for (size_t i = 0; i < s->item_count; i++)
		if (s->items[i].weight == 0 && strcmp(s->items[i].lead, "tube") != 0)
			labelled(p, &s->items[i], 60, body_size);
	p->y += 2;
}

static void heading(paper *p, const char *text, double keep)
{
	p->y += 7;
	need(p, 18 + keep);
	bh_pen_line(p->pen, (bh_segment){ left, p->y, right, p->y },
		    (bh_stroke){ 0.7, 0, false });
	p->y += 3;
	p->y += 3 + bh_pen_words(p->pen, words(text, head_size, true), left, p->y,
				 right - left);
}

static void figure(paper *p)
{
	need(p, figure_height);
	bh_page_figure(p->pen, p->plan,
		       (bh_box){ left, p->y, right - left, figure_height });
	p->y += figure_height;
}

typedef struct {
	double x[MOST_COLUMNS], width[MOST_COLUMNS];
} columns; /* a table has at least one column */

static double natural(const paper *p, const bh_table *t, size_t column)
{
	const bh_column *c = &t->columns[column];
	double widest = bh_pen_words_width(p->pen, words(c->head, body_size, true));
	double unit = bh_pen_words_width(p->pen, words(c->unit, body_size, false));

	widest = unit > widest ? unit : widest;
	for (size_t i = 0; i < t->row_count; i++) {
		double w = bh_pen_words_width(
			p->pen,
			words(t->cells[i * t->column_count + column], body_size, false));

		widest = w > widest ? w : widest;
	}
	return widest + 1;
}

/* Natural widths; what is too much is taken from the widest column of words, what is left
 * over is put between the columns. */
static void arrange(columns *c, const paper *p, const bh_table *t)
{
	static const double gap = 9, widest_gap = 20;
	double sum = 0, space, x = left;
	size_t n = t->column_count, wordy = 0;

	for (size_t i = 0; i < n; i++) {
		c->width[i] = natural(p, t, i);
		sum += c->width[i];
		if (t->columns[i].align == BH_LEFT &&
		    (t->columns[wordy].align != BH_LEFT || c->width[i] > c->width[wordy]))
			wordy = i;
	}
	space = (right - left - sum) / (double)(n - 1);
	if (space < gap) {
		c->width[wordy] -= gap * (double)(n - 1) - (right - left - sum);
		space = gap;
	}
	if (c->width[wordy] < 60)
		c->width[wordy] = 60;
	space = space > widest_gap ? widest_gap : space;
	for (size_t i = 0; i < n; i++) {
		c->x[i] = x;
		x += c->width[i] + space;
	}
}

static double cells_height(const paper *p, const columns *c, const bh_table *t,
			   const char *const *cells, bool bold)
{
	double tallest = 0;

	for (size_t i = 0; i < t->column_count; i++) {
		double h = bh_pen_words_height(p->pen, words(cells[i], body_size, bold),
					       c->width[i]);

		tallest = h > tallest ? h : tallest;
	}
	return tallest;
}

static void cells(const paper *p, const columns *c, const bh_table *t,
		  const char *const *texts, bh_words look)
{
	for (size_t i = 0; i < t->column_count; i++) {
		look.text = texts[i];
		look.at = t->columns[i].align == BH_RIGHT ? BH_AT_RIGHT : BH_AT_LEFT;
		bh_pen_words(p->pen, look, c->x[i], p->y, c->width[i]);
	}
}

static void table_head(paper *p, const columns *c, const bh_table *t)
{
	const char *names[MOST_COLUMNS] = { "" }, *units[MOST_COLUMNS] = { "" };
	bool any = false;

	for (size_t i = 0; i < t->column_count && i < MOST_COLUMNS; i++) {
		names[i] = t->columns[i].head;
		units[i] = t->columns[i].unit;
		any = any || *units[i];
	}
	cells(p, c, t, names, words("", body_size, true));
	p->y += cells_height(p, c, t, names, true);
	if (any) {
		cells(p, c, t, units,
		      (bh_words){ "", small_size, false, BH_AT_LEFT, 0.35 });
		p->y += cells_height(p, c, t, units, false) - 1;
	}
	bh_pen_line(p->pen, (bh_segment){ left, p->y, right, p->y },
		    (bh_stroke){ 0.4, 0.4, false });
	p->y += 2;
}

static void table(paper *p, const bh_table *t)
{
	columns c = { { 0 }, { 0 } };

	arrange(&c, p, t);
	table_head(p, &c, t);
	for (size_t i = 0; i < t->row_count; i++) {
		const char *const *row = t->cells + i * t->column_count;
		double height = cells_height(p, &c, t, row, false);

		if (need(p, height + 2))
			table_head(p, &c, t);
		cells(p, &c, t, row, words("", body_size, false));
		p->y += height + 1.5;
	}
	p->y += 2;
}

/* Severity by shape and word, good in black and white: filled, framed, or plain. */
static void badge(const paper *p, int weight)
{
	static const char *const names[] = { "note", "caution", "severe" };
	bh_box box = { left, p->y, 44, 11.5 };

	if (weight == 2)
		bh_pen_fill(p->pen, box, 0);
	else
		bh_pen_frame(p->pen, box,
			     (bh_stroke){ weight ? 1 : 0.4, weight ? 0 : 0.6, false });
	bh_pen_words(p->pen,
		     (bh_words){ names[weight], 7, weight > 0, BH_AT_CENTRE,
				 weight == 2 ? 1 : 0 },
		     box.x, box.y + 1.4, box.width);
}

static const char *after_colon(const char *lead)
{
	const char *colon = strstr(lead, ": ");

	return colon ? colon + 2 : lead;
}

static void finding(paper *p, const bh_item *i)
{
	double x = left + 52, width = right - x;
	bh_words lead = words(after_colon(i->lead), body_size, true);
	bh_words text = words(i->text, body_size, false);
	char remedy[1400];
	double height;

	snprintf(remedy, sizeof remedy, "→ %s", i->then);
	height = bh_pen_words_height(p->pen, lead, width) +
		 bh_pen_words_height(p->pen, text, width) +
		 (*i->then ? bh_pen_words_height(p->pen, words(remedy, body_size, false),
						 width)
			   : 0);
	need(p, height);
	badge(p, i->weight);
	p->y += bh_pen_words(p->pen, lead, x, p->y, width);
	p->y += bh_pen_words(p->pen, text, x, p->y, width);
	if (*i->then)
		p->y += bh_pen_words(p->pen, words(remedy, body_size, false), x, p->y,
				     width);
	p->y += 4;
}

static void sign_off(paper *p, const bh_section *s)
{
	double width = (right - left) / (double)s->item_count, height = 40;

	need(p, height + 4);
	for (size_t i = 0; i < s->item_count; i++) {
		bh_box box = { left + width * (double)i, p->y, width, height };

		bh_pen_frame(p->pen, box, (bh_stroke){ 0.6, 0, false });
		bh_pen_words(p->pen,
			     (bh_words){ s->items[i].lead, small_size, false, BH_AT_LEFT,
					 0.35 },
			     box.x + 4, box.y + 3, width - 8);
	}
	p->y += height + 4;
}

static double label_column(const paper *p, const bh_section *s)
{
	double widest = 0;

	for (size_t i = 0; i < s->item_count; i++) {
		double w = bh_pen_words_width(p->pen,
					      words(s->items[i].lead, body_size, true));

		widest = w > widest ? w : widest;
	}
	return widest > 0 ? (widest < 96 ? widest + 10 : 106) : 0;
}

static void lines(paper *p, const bh_section *s, double size)
{
	double label = label_column(p, s);

	for (size_t i = 0; i < s->item_count; i++)
		if (label > 0 && *s->items[i].lead)
			labelled(p, &s->items[i], label, size);
		else {
			double h = bh_pen_words_height(
				p->pen, words(s->items[i].text, size, false),
				right - left);

			need(p, h);
			p->y += 1.5 + bh_pen_words(p->pen,
						   words(s->items[i].text, size, false),
						   left, p->y, right - left);
		}
}

static void section(paper *p, const bh_section *s)
{
	switch (s->part) {
	case BH_PART_ANSWER:
		answer(p, s);
		return;
	case BH_PART_PATTERN:
		figure(p);
		return;
	case BH_PART_WHY:
		return; /* --why is for the screen */
	default:
		break;
	}
	if (s->item_count == 0 && s->table.row_count == 0)
		return;
	heading(p, s->title, s->part == BH_PART_FINDINGS ? 60 : 44);
	if (s->table.row_count)
		table(p, &s->table);
	if (s->part == BH_PART_FINDINGS && p->plan->finding_count)
		for (size_t i = 0; i < s->item_count; i++)
			finding(p, &s->items[i]);
	else if (s->part == BH_PART_SIGN_OFF)
		sign_off(p, s);
	else
		lines(p, s, s->table.row_count ? small_size : body_size);
}

static size_t lay(bh_pen *pen, const bh_plan *plan, const bh_sheet *sheet, size_t pages)
{
	paper p = { pen, plan, sheet, top, 1, pages };

	header(&p);
	for (size_t i = 0; i < sheet->section_count; i++)
		section(&p, &sheet->sections[i]);
	footer(&p);
	return p.page;
}

static bool draw(bh_text *bytes, const bh_plan *plan, const bh_sheet *sheet,
		 bh_page_kind kind, bh_err *err)
{
	bh_pen *pen = bh_pen_open(kind, true, 1, sheet->title, err);
	size_t pages;

	if (!pen)
		return false;
	pages = lay(pen, plan, sheet, 0);
	if (!bh_pen_close(pen, NULL, err))
		return false;
	pen = bh_pen_open(kind, false, pages, sheet->title, err);
	if (!pen)
		return false;
	lay(pen, plan, sheet, pages);
	return bh_pen_close(pen, bytes, err);
}

bool bh_render_page(bh_text *bytes, const bh_plan *plan, bh_page_kind kind, bh_err *err)
{
	bh_arena *arena = bh_arena_new();
	bh_sheet sheet;
	bool good;

	if (!arena)
		return bh_fail_memory(err);
	good = bh_sheet_make(&sheet, arena, plan, err) &&
	       draw(bytes, plan, &sheet, kind, err);
	bh_arena_free(arena);
	return good && (!bytes->lost || bh_fail_memory(err));
}
