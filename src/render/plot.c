#include "render/plot.h"

#include <math.h>
#include <stdint.h>
#include <stdio.h>
#include <string.h>

#include "base/fmt.h"

enum { HEIGHT = 8, MOST = 120, MARGIN = 9 };

typedef struct {
	const bh_plan *plan;
	size_t width;
	double from_deg, per_column_deg;
} axis;

static size_t column_of(const axis *a, double two_theta_deg)
{
	double x = (two_theta_deg - a->from_deg) / a->per_column_deg;

	if (!(x > 0))
		return 0;
	return x >= (double)a->width ? a->width - 1 : (size_t)x;
}

static void highest(double top_cps[MOST], const axis *a)
{
	const bh_plan *plan = a->plan;

	memset(top_cps, 0, sizeof *top_cps * MOST);
	for (size_t i = 0; i < plan->pattern_count; i++) {
		size_t column = column_of(a, plan->pattern_from_deg +
						     (double)i * plan->pattern_step_deg);

		top_cps[column] = fmax(top_cps[column], plan->pattern_cps[i]);
	}
}

static void bars(bh_text *text, const axis *a, const double top_cps[MOST])
{
	static const char *const blocks[] = {
		" ", "▁", "▂", "▃", "▄", "▅", "▆", "▇", "█"
	};
	double most = 0, least = HUGE_VAL, root, span;

	for (size_t i = 0; i < a->width; i++) {
		most = fmax(most, top_cps[i]);
		least = fmin(least, top_cps[i]);
	}
	root = sqrt(least);
	span = sqrt(most) - root > 0 ? sqrt(most) - root : 1;
	for (int line = HEIGHT - 1; line >= 0; line--) {
		char room[BH_FMT_ROOM];
		double half = root + span / 2;
		double at = line == HEIGHT - 1	     ? most
			    : line == HEIGHT / 2 - 1 ? half * half
			    : line == 0		     ? least
						     : 0;

		if (at > 0)
			bh_text_format(text, "%*s ", MARGIN - 1,
				       bh_fmt_digits(room, at, 2));
		else
			bh_text_repeat(text, " ", MARGIN);
		for (size_t i = 0; i < a->width; i++) {
			double eighths =
				(sqrt(top_cps[i]) - root) / span * HEIGHT * 8 - line * 8;

			bh_text_add(text, blocks[eighths <= 0	? 0
						 : eighths >= 8 ? 8
								: (int)(eighths + 0.5)]);
		}
		while (text->length && text->bytes[text->length - 1] == ' ')
			text->bytes[--text->length] = '\0';
		bh_text_add(text, "\n");
	}
}

/* A line of marks under the axis; label in the margin. */
static void marks(bh_text *text, const axis *a, const bool marked[MOST], const char *mark,
		  const char *label)
{
	size_t used = bh_text_columns(label), last = 0;

	for (size_t i = 0; i < a->width; i++)
		if (marked[i])
			last = i + 1;
	if (last == 0)
		return;
	bh_text_repeat(text, " ", used < MARGIN - 1 ? MARGIN - 1 - used : 0);
	bh_text_format(text, "%s ", label);
	for (size_t i = 0; i < last; i++)
		bh_text_add(text, marked[i] ? mark : " ");
	bh_text_add(text, "\n");
}

static void mark_plan(bh_text *text, const axis *a)
{
	const bh_plan *plan = a->plan;
	bool scanned[MOST] = { false }, targets[MOST] = { false };

	for (size_t i = 0; i < plan->range_count; i++)
		for (size_t k = column_of(a, plan->ranges[i].from_deg);
		     k <= column_of(a, plan->ranges[i].to_deg); k++)
			scanned[k] = true;
	for (size_t i = 0; i < plan->target_count; i++)
		if (plan->targets[i].reflection != SIZE_MAX)
			targets[column_of(a, plan->targets[i].ka1_deg)] = true;
	marks(text, a, targets, "▲", "targets");
	marks(text, a, scanned, "━", "ranges");
}

static void numbers(bh_text *text, const axis *a)
{
	double span = a->per_column_deg * (double)a->width;
	double step = span > 100 ? 20 : span > 40 ? 10 : span > 20 ? 5 : span > 8 ? 2 : 1;
	size_t at = 0;

	bh_text_repeat(text, " ", MARGIN);
	for (double x = ceil(a->from_deg / step) * step; x < a->from_deg + span;
	     x += step) {
		char label[16];
		size_t column = column_of(a, x), n;

		snprintf(label, sizeof label, "%.0f°", x);
		n = bh_text_columns(label);
		if (column < at + (at > 0) || column + n > a->width)
			continue;
		bh_text_repeat(text, " ", column - at);
		bh_text_add(text, label);
		at = column + n;
	}
	bh_text_add(text, "\n");
}

void bh_plot(bh_text *text, const bh_plan *plan, size_t columns)
{
	axis a = { plan, columns > MOST + MARGIN ? MOST : columns - MARGIN - 1,
		   plan->pattern_from_deg, 0 };
	double top_cps[MOST], most = 0;

	if (plan->pattern_count == 0)
		return;
	a.per_column_deg =
		(plan->pattern_to_deg - plan->pattern_from_deg) / (double)a.width;
	highest(top_cps, &a);
	for (size_t i = 0; i < a.width; i++)
		most = fmax(most, top_cps[i]);
	if (plan->signal.rates_known && most > 0) {
		bh_text_add(text,
			    "  counts/s in one aperture, √ scale from the background\n");
		bars(text, &a, top_cps);
	}
	numbers(text, &a);
	mark_plan(text, &a);
}
