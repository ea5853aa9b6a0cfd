#ifndef RENDER_PLOT_H
#define RENDER_PLOT_H

#include <stddef.h>

#include "base/text.h"
#include "model/plan.h"

/* The pattern in Unicode blocks on a square-root scale, with the planned ranges and the
 * targets beneath; `columns` wide at most. Nothing when no rate is known. */
void bh_plot(bh_text *text, const bh_plan *plan, size_t columns);

#endif
