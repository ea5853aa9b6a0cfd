#include <math.h>
#include <stdint.h>
#include <stdlib.h>
#include <string.h>

#include "render/sheet_build.h"

#define COUNT(array) (sizeof(array) / sizeof *(array))

static const char *speed(bh_builder *b, const bh_range *r)
{
	switch (r->mode) {
	case BH_MODE_MOVING:
		return bh_put_short(b, 60 * r->speed_deg_s, 2);
	case BH_MODE_STANDING:
		return "stands";
	default:
		return bh_put_short(b, 60 * r->step_deg / r->time_per_step_s, 2);
	}
}

void bh_sheet_ranges(bh_builder *b)
{
	static const bh_column columns[] = {
		{ "from", "°2θ", BH_RIGHT, false },   { "to", "°2θ", BH_RIGHT, false },
		{ "step", "°", BH_RIGHT, false },     { "s/step", "", BH_RIGHT, false },
		{ "°/min", "", BH_RIGHT, false },     { "steps", "", BH_RIGHT, true },
		{ "exposure", "s", BH_RIGHT, false }, { "time", "", BH_RIGHT, false },
		{ "for", "", BH_LEFT, false },
	};
	const bh_plan *plan = b->plan;
	bh_section *s =
		bh_put_section(b, BH_PART_RANGES, "Ranges, as typed at the machine");

	bh_put_columns(b, s, columns, COUNT(columns));
	for (size_t i = 0; i < plan->range_count; i++) {
		const bh_range *r = &plan->ranges[i];
		const char *cells[COUNT(columns)] = {
			bh_put_fixed(b, r->from_deg, 1),
			bh_put_fixed(b, r->to_deg, 1),
			bh_put_short(b, r->step_deg, 3),
			bh_put_short(b, r->time_per_step_s, 2),
			speed(b, r),
			bh_put(b, "%zu", r->steps),
			bh_put_digits(b, r->exposure_s, 2),
			bh_put_duration(b, r->wall_s),
			r->purpose,
		};

		bh_put_row(b, s, cells);
	}
	if (plan->range_count == 0)
		bh_put_item(b, s,
			    (bh_item){ .lead = "",
				       .text = "No range: no aim has a rate to plan "
					       "a count time for.",
				       .then = "" });
	if (plan->step_reason)
		bh_put_item(b, s,
			    (bh_item){ .lead = "step",
				       .text = plan->step_reason,
				       .then = "" });
	if (plan->instrument->detector.kind == BH_DETECTOR_STRIP)
		bh_put_item(
			b, s,
			(bh_item){
				.lead = "exposure",
				.text = bh_put(
					b,
					"channel·s per step; a moving strip runs in and "
					"out %s° beyond each range, its time is in",
					bh_put_digits(
						b,
						plan->signal.aperture_deg *
							(double)plan->instrument->detector
								.channels /
							2,
						2)),
				.then = "" });
}

/* Why nothing can be said of an aim. */
static const char *unknown_word(const bh_plan *plan, const bh_aim_result *a)
{
	for (size_t i = 0; i < plan->target_count; i++)
		if (a->aim->kind == BH_AIM_LINE &&
		    plan->targets[i].phase == a->aim->phase &&
		    plan->targets[i].target == a->aim->target &&
		    plan->targets[i].reflection == SIZE_MAX)
			return "no angle";
	return "not known";
}

void bh_sheet_aims(bh_builder *b)
{
	static const bh_column columns[] = {
		{ "aim", "", BH_LEFT, false },	      { "wanted", "", BH_RIGHT, false },
		{ "predicted", "", BH_RIGHT, false }, { "floor", "", BH_RIGHT, false },
		{ "unit", "", BH_LEFT, false },	      { "met", "", BH_LEFT, false },
		{ "price", "", BH_RIGHT, false },
	};
	const bh_plan *plan = b->plan;
	bh_section *s;

	if (plan->aim_count == 0)
		return;
	s = bh_put_section(b, BH_PART_AIMS, "Aims, as one standard error");
	bh_put_columns(b, s, columns, COUNT(columns));
	for (size_t i = 0; i < plan->aim_count; i++) {
		const bh_aim_result *a = &plan->aims[i];
		bool floor = a->computed && a->aim->kind == BH_AIM_LINE;
		const char *cells[COUNT(columns)] = {
			a->what,
			bh_put_short(b, a->wanted, 3),
			a->computed ? bh_put_digits(b, a->predicted, 2) : "–",
			floor ? bh_put_digits(b, a->floor, 2) : "–",
			a->unit,
			!a->computed   ? unknown_word(plan, a)
			: a->met       ? "yes"
			: a->reachable ? "no"
				       : "no: floor",
			a->computed ? bh_put_duration(b, a->price_s) : "–",
		};

		bh_put_row(b, s, cells);
	}
	bh_put_item(b, s,
		    (bh_item){ .lead = "floor",
			       .text = "what no count time gets below: grains, and what "
				       "is not known "
				       "of neighbours",
			       .then = "" });
	bh_put_item(
		b, s,
		(bh_item){
			.lead = "price",
			.text = "counting time that dropping this aim alone would save",
			.then = "" });
}

void bh_sheet_targets(bh_builder *b)
{
	static const bh_column columns[] = {
		{ "target", "", BH_LEFT, false },    { "Kα1", "°2θ", BH_RIGHT, false },
		{ "FWHM", "°", BH_RIGHT, false },    { "top", "/s", BH_RIGHT, false },
		{ "below", "/s", BH_RIGHT, false },  { "own", "%", BH_RIGHT, false },
		{ "overlap", "×", BH_RIGHT, false }, { "counts", "", BH_RIGHT, false },
		{ "error", "%", BH_RIGHT, false },   { "grains", "", BH_RIGHT, true },
	};
	const bh_plan *plan = b->plan;
	bh_section *s;

	if (plan->target_count == 0)
		return;
	s = bh_put_section(b, BH_PART_TARGETS, "Targets, rates in one aperture");
	bh_put_columns(b, s, columns, COUNT(columns));
	for (size_t i = 0; i < plan->target_count; i++) {
		const bh_target_result *t = &plan->targets[i];
		const bh_phase *phase = &plan->phases[t->phase];
		bool seen = t->reflection != SIZE_MAX, rate = seen && t->top_cps > 0;
		bool counted = t->expected_counts > 0;
		const char *cells[COUNT(columns)] = {
			bh_put(b, "%s %s", phase->name, phase->targets[t->target].text),
			seen ? bh_put_fixed(b, t->ka1_deg, 3) : "no angle",
			seen ? bh_put_fixed(b, t->fwhm_deg, 3) : "–",
			rate ? bh_put_digits(b, t->top_cps, 3) : "–",
			rate ? bh_put_digits(b, t->background_cps, 3) : "–",
			rate ? bh_put_fixed(b, 100 * t->purity_frac, 0) : "–",
			rate ? bh_put_fixed(b, t->overlap_price, 2) : "–",
			counted ? bh_put_digits(b, t->expected_counts, 2) : "–",
			counted ? bh_put_digits(b, 100 * t->predicted_error_frac, 2)
				: "–",
			!(t->grains > 0)  ? "–"
			: t->grains < 1e6 ? bh_put_digits(b, t->grains, 2)
					  : "> 10⁶",
		};

		bh_put_row(b, s, cells);
	}
	bh_put_item(
		b, s,
		(bh_item){ .lead = "top, below",
			   .text = "net height of the recorded peak, and the background "
				   "under it",
			   .then = "" });
	bh_put_item(b, s,
		    (bh_item){ .lead = "own, overlap",
			       .text = "own share of the net counts in the line's "
				       "window; factor "
				       "in count time that its neighbours cost",
			       .then = "" });
}

static bool any_target(const bh_signal *signal)
{
	for (size_t i = 0; i < signal->in_range_count; i++)
		if (signal->reflections[i].target)
			return true;
	return false;
}

/* Rows of a short table: every target, then the strongest of each phase's own scale. */
static bool *choose(bh_builder *b, size_t most)
{
	const bh_signal *signal = &b->plan->signal;
	bool *chosen = bh_new(b->arena, bool, signal->in_range_count);
	size_t count = 0;

	if (!chosen) {
		b->lost = true;
		return NULL;
	}
	for (size_t i = 0; i < signal->in_range_count; i++)
		if (signal->reflections[i].target && count < most)
			chosen[i] = ++count;
	while (count < most && count < signal->in_range_count) {
		size_t best = SIZE_MAX;

		for (size_t i = 0; i < signal->in_range_count; i++)
			if (!chosen[i] &&
			    (best == SIZE_MAX ||
			     signal->reflections[i].rate_cps_deg >
				     signal->reflections[best].rate_cps_deg))
				best = i;
		chosen[best] = ++count;
	}
	return chosen;
}

void bh_sheet_reflection_table(bh_builder *b, size_t most)
{
	static const bh_column columns[] = {
		{ "reflection", "", BH_LEFT, false }, { "", "", BH_LEFT, false },
		{ "d", "Å", BH_RIGHT, false },	      { "2θ", "°", BH_RIGHT, false },
		{ "m", "", BH_RIGHT, false },	      { "|F|²", "", BH_RIGHT, false },
		{ "FWHM", "°", BH_RIGHT, true },      { "rate", "°/s", BH_RIGHT, false },
		{ "rel.", "%", BH_RIGHT, false },
	};
	const bh_signal *signal = &b->plan->signal;
	bh_section *s = bh_put_section(b, BH_PART_REFLECTIONS, "Reflections at Kα1");
	bool *chosen = choose(b, most);

	bh_put_columns(b, s, columns, COUNT(columns));
	for (size_t i = 0; chosen && i < signal->in_range_count; i++) {
		const bh_reflection *r = &signal->reflections[i];
		const bh_phase *phase = &b->plan->phases[r->phase];
		bool atoms = phase->kind == BH_PHASE_ATOMS;
		bool same = i > 0 && chosen[i - 1] && r[-1].phase == r->phase &&
			    r->d_A > r[-1].d_A * (1 - 1e-9);
		const char *cells[COUNT(columns)] = {
			bh_put_plane(b, r),
			r->target ? "*" : "",
			same ? "=" : bh_put_fixed(b, r->d_A, 4),
			same ? "=" : bh_put_fixed(b, r->two_theta_deg, 3),
			r->multiplicity ? bh_put(b, "%d", r->multiplicity) : "–",
			atoms ? bh_put_digits(b, r->f2, 4) : "–",
			isfinite(r->fwhm_deg) ? bh_put_fixed(b, r->fwhm_deg, 3) : "–",
			r->rate_known ? bh_put_digits(b, r->rate_cps_deg, 3) : "–",
			atoms || r->rate_known ? bh_put_fixed(b, r->relative, 1) : "–",
		};

		if (chosen[i])
			bh_put_row(b, s, cells);
	}
	if (signal->in_range_count > most)
		bh_put_item(
			b, s,
			(bh_item){
				.lead = "",
				.text = bh_put(
					b,
					"* asked for. The strongest %zu of %zu; all of "
					"them: beamhour reflections",
					most, signal->in_range_count),
				.then = "" });
	else if (any_target(signal))
		bh_put_item(b, s,
			    (bh_item){ .lead = "", .text = "* asked for.", .then = "" });
}
