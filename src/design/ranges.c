#include "design/ranges.h"

#include <math.h>

#include "physics/detector.h"

static double digits2(double value, double (*toward)(double))
{
	double unit;

	if (!(value > 0) || !isfinite(value))
		return value;
	unit = pow(10, floor(log10(value)) - 1);
	/* 1e-9: what is already two digits stays */
	return toward(value / unit + (toward == ceil ? -1e-9 : 1e-9)) * unit;
}

double bh_ranges_round_up(double value)
{
	return digits2(value, ceil);
}

double bh_ranges_round_down(double value)
{
	return digits2(value, floor);
}

void bh_ranges_limits(double *low_deg, double *high_deg, const bh_machine *machine)
{
	const bh_instrument *instrument = machine->instrument;
	double half = instrument->detector.kind == BH_DETECTOR_STRIP
			      ? bh_detector_window_deg(instrument) / 2
			      : 0;

	*low_deg = fmax(machine->low_deg, instrument->two_theta_min_deg + half);
	*high_deg = fmin(machine->high_deg, instrument->two_theta_max_deg - half);
}

double bh_ranges_scanning_s(const bh_range *range, const bh_instrument *instrument)
{
	switch (range->mode) {
	case BH_MODE_STEP:
		return (double)range->steps *
		       (range->time_per_step_s + instrument->settle_s);
	case BH_MODE_MOVING:
		return (range->travel_to_deg - range->travel_from_deg) /
		       range->speed_deg_s;
	default:
		return range->time_per_step_s;
	}
}

static void outward(bh_range *range, const bh_machine *machine, const bh_span *span)
{
	double low, high;

	bh_ranges_limits(&low, &high, machine);
	range->from_deg =
		fmax(floor(span->from_deg * 10 + 1e-6) / 10, ceil(low * 10 - 1e-6) / 10);
	range->to_deg =
		fmin(ceil(span->to_deg * 10 - 1e-6) / 10, floor(high * 10 + 1e-6) / 10);
	if (range->to_deg < range->from_deg)
		range->to_deg = range->from_deg;
	range->steps =
		(size_t)lround((range->to_deg - range->from_deg) / machine->step_deg) + 1;
	range->step_deg = machine->step_deg;
	range->travel_from_deg = range->from_deg;
	range->travel_to_deg = range->to_deg;
	range->purpose = span->purpose;
}

static void run_steps(bh_range *range, const bh_instrument *instrument, double exposure_s)
{
	range->mode = BH_MODE_STEP;
	range->time_per_step_s =
		bh_ranges_round_up(fmax(exposure_s, instrument->shortest_step_s));
	range->exposure_s = range->time_per_step_s;
}

/* Every point of the range sees all channels: exposure per step N step/v. */
static void run_moving(bh_range *range, const bh_instrument *instrument,
		       double exposure_s)
{
	double n = (double)instrument->detector.channels;
	double window_deg = bh_detector_window_deg(instrument);
	double slowest = n * range->step_deg / exposure_s;

	range->mode = BH_MODE_MOVING;
	range->speed_deg_s =
		bh_ranges_round_down(fmin(slowest, instrument->fastest_deg_s) * 60) / 60;
	range->exposure_s = n * range->step_deg / range->speed_deg_s;
	range->time_per_step_s = range->step_deg / range->speed_deg_s;
	range->travel_from_deg -= window_deg / 2;
	range->travel_to_deg += window_deg / 2;
}

/* The strip stands over the middle: each step of the window collects T step/p. */
static void run_standing(bh_range *range, const bh_instrument *instrument,
			 double exposure_s)
{
	double pitch_deg = bh_detector_window_deg(instrument) /
			   (double)instrument->detector.channels;

	range->mode = BH_MODE_STANDING;
	range->time_per_step_s = bh_ranges_round_up(fmax(
		exposure_s * pitch_deg / range->step_deg, instrument->shortest_step_s));
	range->exposure_s = range->time_per_step_s * range->step_deg / pitch_deg;
	range->travel_from_deg = range->travel_to_deg =
		(range->from_deg + range->to_deg) / 2;
}

bh_range bh_ranges_run(const bh_machine *machine, const bh_span *span)
{
	const bh_instrument *instrument = machine->instrument;
	double window_deg = bh_detector_window_deg(instrument);
	bh_range range = { 0 }, other;

	outward(&range, machine, span);
	if (instrument->detector.kind == BH_DETECTOR_SLIT) {
		run_steps(&range, instrument,
			  span->density_s_deg[BH_VIEW_STILL] * machine->step_deg);
	} else {
		other = range;
		run_moving(&range, instrument,
			   span->density_s_deg[BH_VIEW_SWEEPING] * machine->step_deg);
		if (instrument->detector.standing &&
		    isfinite(span->density_s_deg[BH_VIEW_STILL]) &&
		    other.to_deg - other.from_deg <= window_deg) {
			run_standing(&other, instrument,
				     span->density_s_deg[BH_VIEW_STILL] *
					     machine->step_deg);
			if (bh_ranges_scanning_s(&other, instrument) <
			    bh_ranges_scanning_s(&range, instrument))
				range = other;
		}
	}
	range.wall_s = bh_ranges_scanning_s(&range, instrument) + instrument->per_range_s;
	return range;
}

static bh_span joined(const bh_span *a, const bh_span *b)
{
	bh_span both = *a;

	both.from_deg = fmin(a->from_deg, b->from_deg);
	both.to_deg = fmax(a->to_deg, b->to_deg);
	for (int i = 0; i < 2; i++)
		both.density_s_deg[i] = fmax(a->density_s_deg[i], b->density_s_deg[i]);
	return both;
}

static void by_angle(bh_span *spans, size_t count)
{
	for (size_t i = 1; i < count; i++)
		for (size_t k = i; k > 0 && spans[k].from_deg < spans[k - 1].from_deg;
		     k--) {
			bh_span swap = spans[k];

			spans[k] = spans[k - 1];
			spans[k - 1] = swap;
		}
}

bool bh_ranges_join(bh_span *spans, size_t *count, size_t most, const bh_machine *machine,
		    bh_arena *arena, bh_err *err)
{
	by_angle(spans, *count);
	while (*count > 1) {
		double best_s = HUGE_VAL;
		size_t at = 0;

		for (size_t i = 0; i + 1 < *count; i++) {
			bh_span both = joined(&spans[i], &spans[i + 1]);
			double more_s = bh_ranges_run(machine, &both).wall_s -
					bh_ranges_run(machine, &spans[i]).wall_s -
					bh_ranges_run(machine, &spans[i + 1]).wall_s;

			if (more_s < best_s) {
				best_s = more_s;
				at = i;
			}
		}
		if (best_s > 0 && *count <= most)
			break;
		spans[at] = joined(&spans[at], &spans[at + 1]);
		spans[at].purpose = bh_arena_format(arena, "%s; %s", spans[at].purpose,
						    spans[at + 1].purpose);
		if (!spans[at].purpose)
			return bh_fail_memory(err);
		for (size_t i = at + 1; i + 1 < *count; i++)
			spans[i] = spans[i + 1];
		--*count;
	}
	return true;
}
