#ifndef RENDER_RENDER_H
#define RENDER_RENDER_H

#include <stdbool.h>

#include "base/err.h"
#include "base/text.h"
#include "model/plan.h"

typedef struct {
	int columns; /* of the terminal; 80 when unknown      */
	bool color;
	bool why; /* append where each number comes from   */
} bh_look;

typedef enum { BH_PAGE_PDF, BH_PAGE_SVG, BH_PAGE_PNG } bh_page_kind;

/* Each appends one whole document to text (bytes for pages). false: err says why. */
bool bh_render_text(bh_text *text, const bh_plan *plan, bh_look look, bh_err *err);
bool bh_render_json(bh_text *text, const bh_plan *plan, bh_err *err);
bool bh_render_page(bh_text *bytes, const bh_plan *plan, bh_page_kind kind, bh_err *err);

/* Give back what the drawing libraries keep until the end of the process. */
void bh_page_release(void);

/* The reflections only. */
bool bh_render_reflections_text(bh_text *text, const bh_plan *plan, bh_look look,
				bh_err *err);
bool bh_render_reflections_json(bh_text *text, const bh_plan *plan, bh_err *err);
bool bh_render_reflections_csv(bh_text *text, const bh_plan *plan, bh_err *err);

#endif
