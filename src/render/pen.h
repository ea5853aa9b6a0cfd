#ifndef RENDER_PEN_H
#define RENDER_PEN_H

#include <stdbool.h>
#include <stddef.h>

#include "base/err.h"
#include "base/text.h"
#include "render/render.h"

/* Door to pango and cairo: words, lines, boxes and curves on A4 pages, in points (1/72 inch)
 * from the top left. Greys run from 0 (black) to 1 (white). */
#define BH_PAGE_WIDTH 595.0
#define BH_PAGE_HEIGHT 842.0

typedef struct bh_pen bh_pen;

typedef enum { BH_AT_LEFT, BH_AT_CENTRE, BH_AT_RIGHT } bh_at;

typedef struct {
	const char *text;
	double size; /* points */
	bool bold;
	bh_at at;
	double grey;
} bh_words;

typedef struct {
	double x, y, width, height;
} bh_box;

/* A document of so many pages; a measuring pen draws nothing.
 *   returns  NULL: err says why (no font, memory) */
bh_pen *bh_pen_open(bh_page_kind kind, bool measuring, size_t pages, const char *title,
		    bh_err *err);

/* Words wrapped to a width from a top left corner. Returns the height they take. */
double bh_pen_words(bh_pen *pen, bh_words words, double x, double y, double width);
double bh_pen_words_height(bh_pen *pen, bh_words words, double width);
double bh_pen_words_width(bh_pen *pen, bh_words words);

typedef struct {
	double width, grey;
	bool dashed;
} bh_stroke;

typedef struct {
	double x1, y1, x2, y2;
} bh_segment;

void bh_pen_line(bh_pen *pen, bh_segment segment, bh_stroke stroke);
void bh_pen_fill(bh_pen *pen, bh_box box, double grey);
void bh_pen_frame(bh_pen *pen, bh_box box, bh_stroke stroke);
void bh_pen_curve(bh_pen *pen, const double *x, const double *y, size_t count,
		  bh_stroke stroke);
/* A small triangle whose point is at x, y, pointing down. */
void bh_pen_marker(bh_pen *pen, double x, double y, double size);

void bh_pen_next_page(bh_pen *pen);

/* Finish, append the document's bytes (not for a measuring pen) and free the pen. */
bool bh_pen_close(bh_pen *pen, bh_text *bytes, bh_err *err);

#endif
