#include "render/page_figure.h"

#include <math.h>
#include <stdint.h>
#include <stdio.h>
#include <stdlib.h>

#include "base/fmt.h"

enum { POINTS = 1600, MOST_LABELS = 24 };

static const double foot = 22, head = 30, margin = 34; /* room for axis, names, numbers */

typedef struct {
	bh_pen *pen;
	const bh_plan *plan;
	bh_box plot; /* inside the axes */
	double least_root, most_root;
} figure;

static double x_of(const figure *f, double two_theta_deg)
{
	const bh_plan *plan = f->plan;

	return f->plot.x + f->plot.width * (two_theta_deg - plan->pattern_from_deg) /
				   (plan->pattern_to_deg - plan->pattern_from_deg);
}

static double y_of(const figure *f, double cps)
{
	double share = (sqrt(cps) - f->least_root) / (f->most_root - f->least_root);

	return f->plot.y + f->plot.height * (1 - (share < 0 ? 0 : share));
}

static void scale(figure *f)
{
	const bh_plan *plan = f->plan;
	double least = HUGE_VAL, most = 0;

	for (size_t i = 0; i < plan->pattern_count; i++) {
		least = fmin(least, plan->pattern_background_cps[i]);
		most = fmax(most, plan->pattern_cps[i]);
	}
	/* a little air under the background */
	f->most_root = sqrt(most);
	f->least_root = fmax(0, sqrt(least) - 0.06 * (sqrt(most) - sqrt(least)));
	if (!(f->most_root > f->least_root))
		f->most_root = f->least_root + 1;
}

static void shade_ranges(const figure *f)
{
	for (size_t i = 0; i < f->plan->range_count; i++) {
		const bh_range *r = &f->plan->ranges[i];
		double from = x_of(f, r->from_deg), to = x_of(f, r->to_deg);

		bh_pen_fill(f->pen,
			    (bh_box){ from, f->plot.y, to - from, f->plot.height }, 0.9);
		bh_pen_fill(f->pen,
			    (bh_box){ from, f->plot.y + f->plot.height, to - from, 2.5 },
			    0.25);
	}
}

/* Peaks are narrower than a point of paper: each abscissa takes the highest of its stretch. */
static void curves(const figure *f)
{
	const bh_plan *plan = f->plan;
	double x[POINTS], y[POINTS], base[POINTS];
	size_t n = plan->pattern_count < POINTS ? plan->pattern_count : POINTS;

	for (size_t i = 0; i < n; i++) {
		size_t from = i * plan->pattern_count / n,
		       to = (i + 1) * plan->pattern_count / n;
		double most = 0;

		for (size_t k = from; k < to; k++)
			most = fmax(most, plan->pattern_cps[k]);
		x[i] = x_of(f, plan->pattern_from_deg + ((double)(from + to - 1) / 2) *
								plan->pattern_step_deg);
		y[i] = y_of(f, most);
		base[i] = y_of(f, plan->pattern_background_cps[from]);
	}
	bh_pen_curve(f->pen, x, base, n, (bh_stroke){ 0.5, 0.45, true });
	bh_pen_curve(f->pen, x, y, n, (bh_stroke){ 0.6, 0, false });
}

static double nice_step(double span)
{
	static const double steps[] = { 0.5, 1, 2, 5, 10, 20 };

	for (size_t i = 0; i < sizeof steps / sizeof *steps; i++)
		if (span / steps[i] <= 16)
			return steps[i];
	return 20;
}

static void axes(const figure *f)
{
	const bh_plan *plan = f->plan;
	double step = nice_step(plan->pattern_to_deg - plan->pattern_from_deg);
	double base = f->plot.y + f->plot.height;
	bh_stroke thin = { 0.6, 0, false };

	bh_pen_line(f->pen,
		    (bh_segment){ f->plot.x, base, f->plot.x + f->plot.width, base },
		    thin);
	for (double at = ceil(plan->pattern_from_deg / step - 1e-9) * step;
	     at <= plan->pattern_to_deg + 1e-9; at += step) {
		char room[BH_FMT_ROOM];
		double x = x_of(f, at);

		bh_pen_line(f->pen, (bh_segment){ x, base, x, base + 4 }, thin);
		bh_pen_words(f->pen,
			     (bh_words){ bh_fmt_short(room, at, 4), 7, false,
					 BH_AT_CENTRE, 0 },
			     x - 15, base + 5, 30);
	}
	bh_pen_words(f->pen, (bh_words){ "°2θ", 7, false, BH_AT_RIGHT, 0 },
		     f->plot.x + f->plot.width - 40, base + 13, 40);
}

static void counts_axis(const figure *f)
{
	static const double shares[] = { 0, 0.25, 0.5, 0.75, 1 };

	for (size_t i = 0; i < 5; i++) {
		double root = f->least_root + shares[i] * (f->most_root - f->least_root);
		double y = f->plot.y + f->plot.height * (1 - shares[i]);
		char room[BH_FMT_ROOM];

		bh_pen_line(f->pen, (bh_segment){ f->plot.x - 3, y, f->plot.x, y },
			    (bh_stroke){ 0.6, 0, false });
		bh_pen_words(f->pen,
			     (bh_words){ bh_fmt_digits(room, root * root, 2), 7, false,
					 BH_AT_RIGHT, 0 },
			     f->plot.x - margin, y - 5, margin - 5);
	}
	bh_pen_words(f->pen,
		     (bh_words){ "counts/s, √ scale", 6.5, false, BH_AT_LEFT, 0.35 },
		     f->plot.x - margin + 4, f->plot.y - head, 90);
}

typedef struct {
	double x, left, width;
	char text[112];
	int row;
} label;

static int by_x(const void *a, const void *b)
{
	const label *p = a, *q = b;

	return (p->x > q->x) - (p->x < q->x);
}

static size_t gather(label labels[MOST_LABELS], const figure *f)
{
	const bh_plan *plan = f->plan;
	size_t n = 0;

	for (size_t i = 0; i < plan->target_count && n < MOST_LABELS; i++) {
		const bh_target_result *t = &plan->targets[i];
		const bh_phase *phase = &plan->phases[t->phase];
		label *l = &labels[n];

		if (t->reflection == SIZE_MAX)
			continue;
		snprintf(l->text, sizeof l->text, "%s %s", phase->name,
			 phase->targets[t->target].text);
		l->x = x_of(f, t->ka1_deg);
		l->width = bh_pen_words_width(
			f->pen, (bh_words){ l->text, 6.5, false, BH_AT_LEFT, 0 });
		n++;
	}
	qsort(labels, n, sizeof *labels, by_x);
	return n;
}

/* Names stand in up to three rows above the plot; each goes to the first row with room. What
 * finds none is marked but not named: the table below names it. */
static void name_targets(const figure *f)
{
	enum { ROWS = 3 };
	double free_from[ROWS] = { 0, 0, 0 };
	label labels[MOST_LABELS];
	size_t n = gather(labels, f);

	for (size_t i = 0; i < n; i++) {
		label *l = &labels[i];
		double right = f->plot.x + f->plot.width;
		int row = 0;

		l->left = fmin(fmax(l->x - l->width / 2, f->plot.x), right - l->width);
		while (row < ROWS && free_from[row] > l->left)
			row++;
		bh_pen_marker(f->pen, l->x, f->plot.y + 2, 5);
		if (row == ROWS)
			continue;
		free_from[row] = l->left + l->width + 6;
		bh_pen_words(f->pen, (bh_words){ l->text, 6.5, false, BH_AT_LEFT, 0 },
			     l->left, f->plot.y - 13 - 9 * row, l->width + 2);
	}
}

void bh_page_figure(bh_pen *pen, const bh_plan *plan, bh_box box)
{
	figure f = { pen,
		     plan,
		     { box.x + margin, box.y + head + 8, box.width - margin,
		       box.height - head - foot - 8 },
		     0,
		     1 };

	if (plan->pattern_count == 0)
		return;
	scale(&f);
	shade_ranges(&f);
	if (plan->signal.rates_known) {
		curves(&f);
		counts_axis(&f);
	}
	axes(&f);
	name_targets(&f);
}
