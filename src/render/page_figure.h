#ifndef RENDER_PAGE_FIGURE_H
#define RENDER_PAGE_FIGURE_H

#include "model/plan.h"
#include "render/pen.h"

/* The pattern as it will look in one aperture, on a square-root scale, ranges shaded, targets
 * marked and named without overlap. */
void bh_page_figure(bh_pen *pen, const bh_plan *plan, bh_box box);

#endif
