#include "design/view.h"

#include <math.h>
#include <stdint.h>
#include <string.h>

#include "physics/hkl.h"
#include "physics/pattern.h"
#include "physics/profile.h"

enum { AREA, POSITION, LEVEL, SLOPE, OWN_PARAMETERS };
enum { POINTS = 240 };

static const double half_window_fwhm = 1.5;
static const double neighbour_least = 1e-3; /* of the target's area, to be looked at */
static const double many_counts = 1e10;	    /* as good as endless counting */

size_t bh_view_find(const bh_signal *signal, const bh_phase *phase, size_t phase_index,
		    const bh_target *target)
{
	int standard[3] = { 0, 0, 0 };

	if (phase->kind != BH_PHASE_LIST)
		bh_hkl_standard(standard, &phase->group, target->h);
	for (size_t i = 0; i < signal->reflection_count; i++) {
		const bh_reflection *r = &signal->reflections[i];

		if (r->phase != phase_index || !(r->two_theta_deg > 0))
			continue;
		if (phase->kind == BH_PHASE_LIST
			    ? fabs(r->d_A / target->d_A - 1) < 1e-9
			    : memcmp(r->h, standard, sizeof standard) == 0)
			return i;
	}
	return SIZE_MAX;
}

static bool is_ka(const bh_signal *signal, size_t line)
{
	int kind = signal->radiation.lines[line].kind;

	return kind == BH_KA1 || kind == BH_KA2;
}

/* Planes of the same phase at the same d share the line: they are the target too. */
static bool is_own(const bh_view_of_line *view, const bh_signal *signal,
		   const bh_peak *peak)
{
	const bh_reflection *lead = &signal->reflections[view->reflection];
	const bh_reflection *r = &signal->reflections[peak->reflection];

	return r->phase == lead->phase && fabs(r->d_A / lead->d_A - 1) < 1e-7 &&
	       is_ka(signal, peak->line);
}

static void place(bh_view_of_line *view, const bh_signal *signal)
{
	const bh_reflection *lead = &signal->reflections[view->reflection];
	double spread;

	view->ka1_deg = view->ka2_deg = lead->two_theta_deg;
	view->fwhm_deg = lead->fwhm_deg;
	for (size_t i = 0; i < signal->peak_count; i++) {
		const bh_peak *peak = &signal->peaks[i];

		if (is_own(view, signal, peak) &&
		    signal->radiation.lines[peak->line].kind == BH_KA2)
			view->ka2_deg = peak->two_theta_deg;
	}
	view->low_deg = view->ka1_deg - half_window_fwhm * view->fwhm_deg;
	view->high_deg = view->ka2_deg + half_window_fwhm * view->fwhm_deg;
	spread = fmax(4 * view->fwhm_deg, 0.4);
	view->fit_low_deg = view->ka1_deg - spread;
	view->fit_high_deg = view->ka2_deg + spread;
}

static bh_profile shape(const bh_peak *peak)
{
	return (bh_profile){ peak->fwhm_deg, peak->eta };
}

static double within(const bh_peak *peak, double low_deg, double high_deg)
{
	return peak->rate_cps_deg *
	       bh_profile_between_frac(shape(peak), low_deg - peak->two_theta_deg,
				       high_deg - peak->two_theta_deg);
}

static bh_neighbour *neighbour_of(bh_view_of_line *view, size_t reflection)
{
	for (size_t i = 0; i < view->neighbour_count; i++)
		if (view->neighbours[i].reflection == reflection)
			return &view->neighbours[i];
	return NULL;
}

static double separation_fwhm(const bh_view_of_line *view, double two_theta_deg)
{
	return fmin(fabs(two_theta_deg - view->ka1_deg),
		    fabs(two_theta_deg - view->ka2_deg)) /
	       view->fwhm_deg;
}

/* Note a neighbour's peak; of more than there is room for, the largest stay. */
static void add_neighbour(bh_view_of_line *view, const bh_peak *peak, double fit_area,
			  double window_area)
{
	bh_neighbour *n = neighbour_of(view, peak->reflection);

	if (!n && view->neighbour_count < BH_VIEW_NEIGHBOURS) {
		n = &view->neighbours[view->neighbour_count++];
		*n = (bh_neighbour){ .reflection = SIZE_MAX };
	} else if (!n) {
		n = &view->neighbours[0];
		for (size_t i = 1; i < BH_VIEW_NEIGHBOURS; i++)
			if (view->neighbours[i].area_cps_deg < n->area_cps_deg)
				n = &view->neighbours[i];
		if (n->area_cps_deg >= fit_area)
			return;
		*n = (bh_neighbour){ .reflection = SIZE_MAX };
	}
	if (n->reflection == SIZE_MAX ||
	    separation_fwhm(view, peak->two_theta_deg) < n->separation_fwhm) {
		n->reflection = peak->reflection;
		n->line = peak->line;
		n->two_theta_deg = peak->two_theta_deg;
		n->separation_fwhm = separation_fwhm(view, peak->two_theta_deg);
	}
	n->area_cps_deg += fit_area;
	n->in_window_frac += window_area; /* made a share when all is known */
}

static void survey_neighbours(bh_view_of_line *view, const bh_signal *signal)
{
	double own = 0, others = 0, reach = 3; /* degrees: tails reach in from there */
	size_t first = bh_pattern_first(signal, view->fit_low_deg - reach);

	view->neighbour_count = 0;
	for (size_t i = first; i < signal->peak_count; i++) {
		const bh_peak *peak = &signal->peaks[i];
		double window_area, fit_area;

		if (peak->two_theta_deg > view->fit_high_deg + reach)
			break;
		window_area = within(peak, view->low_deg, view->high_deg);
		if (is_own(view, signal, peak)) {
			own += window_area;
			continue;
		}
		others += window_area;
		fit_area = within(peak, view->fit_low_deg, view->fit_high_deg);
		if (fit_area > neighbour_least * view->area_cps_deg)
			add_neighbour(view, peak, fit_area, window_area);
	}
	view->inside_frac = own / view->area_cps_deg;
	view->purity_frac = own / (own + others);
	view->gross_cps_deg =
		own + others + view->background_cps * (view->high_deg - view->low_deg);
	for (size_t i = 0; i < view->neighbour_count; i++)
		view->neighbours[i].in_window_frac /= own + others;
}

static void largest_first(bh_view_of_line *view)
{
	for (size_t i = 1; i < view->neighbour_count; i++)
		for (size_t k = i; k > 0 && view->neighbours[k].area_cps_deg >
						    view->neighbours[k - 1].area_cps_deg;
		     k--) {
			bh_neighbour swap = view->neighbours[k];

			view->neighbours[k] = view->neighbours[k - 1];
			view->neighbours[k - 1] = swap;
		}
}

static double own_curve(const bh_view_of_line *view, const bh_signal *signal,
			double at_deg)
{
	double sum = 0, reach = view->ka2_deg - view->ka1_deg + 0.01;

	for (size_t i = bh_pattern_first(signal, view->ka1_deg - reach);
	     i < signal->peak_count; i++) {
		const bh_peak *peak = &signal->peaks[i];

		if (peak->two_theta_deg > view->ka2_deg + reach)
			break;
		if (is_own(view, signal, peak))
			sum += peak->rate_cps_deg *
			       bh_profile_height_inv_deg(shape(peak),
							 at_deg - peak->two_theta_deg);
	}
	return sum;
}

/* Rates of own line, each neighbour and everything, at one angle. */
static double rates_at(double *gradient, const bh_view_of_line *view,
		       const bh_signal *signal, double at_deg)
{
	double h = view->fwhm_deg / 50, total;

	memset(gradient, 0, sizeof *gradient * view->parameter_count);
	gradient[AREA] = own_curve(view, signal, at_deg);
	gradient[POSITION] = (own_curve(view, signal, at_deg - h) -
			      own_curve(view, signal, at_deg + h)) /
			     (2 * h);
	gradient[LEVEL] = view->background_cps;
	gradient[SLOPE] = view->background_cps * (at_deg - view->ka1_deg);
	total = gradient[AREA] + view->background_cps;
	for (size_t i = bh_pattern_first(signal, view->fit_low_deg - 3);
	     i < signal->peak_count; i++) {
		const bh_peak *peak = &signal->peaks[i];
		double rate;

		if (peak->two_theta_deg > view->fit_high_deg + 3)
			break;
		if (is_own(view, signal, peak))
			continue;
		rate = peak->rate_cps_deg *
		       bh_profile_height_inv_deg(shape(peak),
						 at_deg - peak->two_theta_deg);
		total += rate;
		for (size_t k = 0; k < view->neighbour_count; k++)
			if (view->neighbours[k].reflection == peak->reflection)
				gradient[OWN_PARAMETERS + k] += rate;
	}
	return total;
}

static void inform(bh_view_of_line *view, const bh_signal *signal)
{
	double gradient[BH_CHOLESKY_MOST];
	size_t n = OWN_PARAMETERS + view->neighbour_count;
	double step = (view->fit_high_deg - view->fit_low_deg) / POINTS;

	view->parameter_count = n;
	memset(view->information, 0, sizeof view->information);
	for (int i = 0; i < POINTS; i++) {
		double at_deg = view->fit_low_deg + (i + 0.5) * step;
		double total = rates_at(gradient, view, signal, at_deg);

		if (!(total > 0))
			continue;
		for (size_t a = 0; a < n; a++)
			for (size_t b = 0; b <= a; b++)
				view->information[a * n + b] +=
					gradient[a] * gradient[b] / total * step;
	}
	for (size_t a = 0; a < n; a++)
		for (size_t b = a + 1; b < n; b++)
			view->information[a * n + b] = view->information[b * n + a];
}

void bh_view_make(bh_view_of_line *view, const bh_signal *signal, size_t reflection)
{
	*view = (bh_view_of_line){
		.reflection = reflection,
		.neighbour_prior_var =
			signal->neighbour_prior_frac * signal->neighbour_prior_frac,
	};
	place(view, signal);
	view->background_cps = bh_observe_background_cps(signal, view->ka1_deg);
	if (!signal->reflections[reflection].rate_known)
		return;
	for (size_t i = 0; i < signal->peak_count; i++) {
		const bh_peak *peak = &signal->peaks[i];

		if (!is_own(view, signal, peak))
			continue;
		view->area_cps_deg += peak->rate_cps_deg;
		if (signal->radiation.lines[peak->line].kind != BH_KA1)
			continue;
		view->equal_planes++;
		view->multiplicity += signal->reflections[peak->reflection].multiplicity;
	}
	if (!(view->area_cps_deg > 0))
		return;
	for (int i = 0; i <= 40; i++)
		view->top_cps =
			fmax(view->top_cps,
			     own_curve(view, signal,
				       view->ka1_deg + (view->ka2_deg - view->ka1_deg) *
							       i / 40.0));
	survey_neighbours(view, signal);
	largest_first(view);
	inform(view, signal);
}

double bh_view_variance(const bh_view_of_line *view, double density_s_deg,
			bool with_neighbours, bh_fit_parameter parameter)
{
	double m[BH_CHOLESKY_MOST * BH_CHOLESKY_MOST], variance;
	size_t all = view->parameter_count, n = with_neighbours ? all : OWN_PARAMETERS;

	if (!(view->area_cps_deg > 0))
		return HUGE_VAL;
	for (size_t a = 0; a < n; a++)
		for (size_t b = 0; b < n; b++)
			m[a * n + b] = density_s_deg * view->information[a * all + b];
	for (size_t a = OWN_PARAMETERS; a < n; a++)
		m[a * n + a] += 1 / view->neighbour_prior_var;
	return bh_cholesky_inverse_kk(&variance, m, n,
				      parameter == BH_FIT_AREA ? AREA : POSITION)
		       ? variance
		       : HUGE_VAL;
}

double bh_view_limit(const bh_view_of_line *view, bh_fit_parameter parameter)
{
	double density = many_counts / view->area_cps_deg;
	double limit = bh_view_variance(view, density, true, parameter) -
		       bh_view_variance(view, density, false, parameter);

	return limit > 0 ? limit : 0;
}

double bh_view_net_variance(double *background_deg, const bh_view_of_line *view)
{
	double peak_deg = view->high_deg - view->low_deg, net, under;

	under = view->background_cps * peak_deg;
	*background_deg =
		fmax(peak_deg * sqrt(under / view->gross_cps_deg), 4 * view->fwhm_deg);
	net = view->area_cps_deg * view->inside_frac;
	return (view->gross_cps_deg + under * peak_deg / *background_deg) / (net * net);
}

/* Counting by summing against the bound of a fit, ≥ 1; only an area is summed. */
static double loss_of_summing(const bh_view_of_line *view, bh_fit_parameter parameter)
{
	double background_deg, loss;

	if (parameter != BH_FIT_AREA)
		return 1;
	loss = bh_view_net_variance(&background_deg, view) /
	       bh_view_variance(view, 1, false, BH_FIT_AREA);
	return loss > 1 ? loss : 1;
}

double bh_view_planned_variance(const bh_view_of_line *view, double density_s_deg,
				bh_fit_parameter parameter)
{
	double limit = bh_view_limit(view, parameter);
	double bound = bh_view_variance(view, density_s_deg, true, parameter);

	return limit + loss_of_summing(view, parameter) * fmax(bound - limit, 0);
}

double bh_view_density(const bh_view_of_line *view, double variance,
		       bh_fit_parameter parameter)
{
	double low = 1e-6, high = many_counts / view->area_cps_deg, want;

	want = variance + bh_view_limit(view, parameter);
	if (!(view->area_cps_deg > 0) ||
	    bh_view_planned_variance(view, high, parameter) > want)
		return HUGE_VAL;
	while (high / low > 1 + 1e-6) {
		double middle = sqrt(low * high);

		if (bh_view_planned_variance(view, middle, parameter) > want)
			low = middle;
		else
			high = middle;
	}
	return high;
}

double bh_view_price(const bh_view_of_line *view, double density_s_deg)
{
	double price = bh_view_variance(view, density_s_deg, true, BH_FIT_AREA) /
		       bh_view_variance(view, density_s_deg, false, BH_FIT_AREA);

	return price > 1 && isfinite(price) ? price : 1;
}
