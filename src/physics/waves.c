#include "physics/waves.h"

#include <math.h>
#include <stdlib.h>
#include <string.h>

#include "base/units.h"

/* No function that takes lanes is ever called: all of them are inlined. */
#pragma GCC diagnostic ignored "-Wpsabi"
#define INLINE static inline __attribute__((always_inline))

/* Four points side by side; loads need no alignment. */
typedef double lanes __attribute__((vector_size(8 * BH_LANES), aligned(8), may_alias));

/* What each point carries through the rows of one h. Arrays of points->count. */
enum {
	PHASE_RE, /* the wave at k and l = 0, damped       */
	PHASE_IM,
	STEP_RE, /* to the next k                         */
	STEP_IM,
	STEP_DAMP, /* what that step is damped by each time */
	UP,	   /* damping from l = 0 to 1               */
	UP_STEP,   /* of that, to the next k                */
	DOWN,	   /* damping from l = 0 to −1              */
	DOWN_STEP,
	TURN_RE, /* exp(2πi z)                            */
	TURN_IM,
	CURVE, /* what a step in l is damped by each time */
	ARRAYS
};

typedef struct {
	double *of[ARRAYS];
	lanes *re, *im;	  /* sums of one group, by step in l */
	double *out[2];	  /* of all groups, for the taker    */
	double *start[2]; /* waves at k = 0                  */
} state;

/* The l of a row on one side: start, start + stride, ... */
typedef struct {
	size_t start, stride, steps;
} side;

/* Begin at k = 0 and go towards direction · k. */
static void begin(state *s, const bh_points *p, int h, int direction)
{
	for (size_t i = 0; i < p->count; i++) {
		double b22 = p->beta[1][i], b33 = p->beta[2][i], b12 = p->beta[3][i];
		double b13 = p->beta[4][i], b23 = p->beta[5][i];
		double y = 2 * BH_PI * direction * p->at[1][i];
		double step = exp(-(b22 + 2 * direction * b12 * h));

		s->of[PHASE_RE][i] = s->start[0][i];
		s->of[PHASE_IM][i] = s->start[1][i];
		s->of[STEP_RE][i] = step * cos(y);
		s->of[STEP_IM][i] = step * sin(y);
		s->of[STEP_DAMP][i] = exp(-2 * b22);
		s->of[UP][i] = exp(-(b33 + 2 * b13 * h));
		s->of[UP_STEP][i] = exp(-2 * direction * b23);
		s->of[DOWN][i] = exp(-(b33 - 2 * b13 * h));
		s->of[DOWN_STEP][i] = exp(2 * direction * b23);
	}
}

static void begin_plane(state *s, const bh_points *p, int h)
{
	for (size_t i = 0; i < p->count; i++) {
		double x = 2 * BH_PI * h * p->at[0][i], z = 2 * BH_PI * p->at[2][i];
		double wave = p->weight[i] * exp(-p->beta[0][i] * h * h);

		s->start[0][i] = wave * cos(x);
		s->start[1][i] = wave * sin(x);
		s->of[TURN_RE][i] = cos(z);
		s->of[TURN_IM][i] = sin(z);
		s->of[CURVE][i] = exp(-2 * p->beta[2][i]);
	}
}

INLINE lanes load(const double *from)
{
	return *(const lanes *)from;
}

INLINE void store(double *to, lanes value)
{
	*(lanes *)to = value;
}

INLINE void multiply(lanes *re, lanes *im, lanes by_re, lanes by_im)
{
	lanes r = *re * by_re - *im * by_im;

	*im = *re * by_im + *im * by_re;
	*re = r;
}

INLINE void next_k(state *s, size_t count)
{
	for (size_t i = 0; i < count; i += BH_LANES) {
		lanes re = load(s->of[PHASE_RE] + i), im = load(s->of[PHASE_IM] + i);
		lanes a = load(s->of[STEP_RE] + i), b = load(s->of[STEP_IM] + i);
		lanes damp = load(s->of[STEP_DAMP] + i);

		multiply(&re, &im, a, b);
		store(s->of[PHASE_RE] + i, re);
		store(s->of[PHASE_IM] + i, im);
		store(s->of[STEP_RE] + i, a * damp);
		store(s->of[STEP_IM] + i, b * damp);
		store(s->of[UP] + i, load(s->of[UP] + i) * load(s->of[UP_STEP] + i));
		store(s->of[DOWN] + i,
		      load(s->of[DOWN] + i) * load(s->of[DOWN_STEP] + i));
	}
}

/* One wave on its way along l. */
typedef struct {
	lanes re, im, turn_re, turn_im, curve;
} runner;

/* Go to the first l, then take stride steps at once: their turns multiplied, curve^(stride²). */
INLINE void prepare(runner *r, const side *to)
{
	lanes turn_re, turn_im, curve = r->curve;

	for (size_t i = 0; i < to->start; i++) {
		multiply(&r->re, &r->im, r->turn_re, r->turn_im);
		r->turn_re *= r->curve;
		r->turn_im *= r->curve;
	}
	if (to->stride == 1)
		return;
	turn_re = r->turn_re;
	turn_im = r->turn_im;
	for (size_t i = 1; i < to->stride; i++) {
		r->turn_re *= r->curve;
		r->turn_im *= r->curve;
		multiply(&turn_re, &turn_im, r->turn_re, r->turn_im);
	}
	for (size_t i = 1; i < to->stride * to->stride; i++)
		curve *= r->curve;
	r->turn_re = turn_re;
	r->turn_im = turn_im;
	r->curve = curve;
}

/* Add the waves of `many` runners, 1 or 2, to the sums of each step. */
INLINE void run(const state *s, const runner *r, int many, size_t steps, bool centric)
{
	lanes *restrict re = s->re, *restrict im = s->im;
	runner a = r[0], b = r[many - 1];

	for (size_t i = 0; i < steps; i++) {
		re[i] += a.re;
		if (many == 2)
			re[i] += b.re;
		if (!centric)
			im[i] += a.im;
		if (!centric && many == 2)
			im[i] += b.im;
		multiply(&a.re, &a.im, a.turn_re, a.turn_im);
		a.turn_re *= a.curve;
		a.turn_im *= a.curve;
		if (many == 2) {
			multiply(&b.re, &b.im, b.turn_re, b.turn_im);
			b.turn_re *= b.curve;
			b.turn_im *= b.curve;
		}
	}
}

INLINE runner runner_at(const state *s, size_t i, bool down)
{
	lanes damp = load(s->of[down ? DOWN : UP] + i);
	lanes turn_im = load(s->of[TURN_IM] + i) * damp;

	return (runner){ load(s->of[PHASE_RE] + i), load(s->of[PHASE_IM] + i),
			 load(s->of[TURN_RE] + i) * damp, down ? -turn_im : turn_im,
			 load(s->of[CURVE] + i) };
}

INLINE void sum_side(const state *s, const size_t group[2], const side *along, bool down,
		     bool centric)
{
	size_t from = group[0], to = group[1];

	memset(s->re, 0, along->steps * sizeof *s->re);
	memset(s->im, 0, along->steps * sizeof *s->im);
	for (size_t i = from; along->steps > 0 && i < to; i += 2 * BH_LANES) {
		bool two = i + BH_LANES < to;
		runner r[2] = { runner_at(s, i, down) };

		prepare(&r[0], along);
		if (two) {
			r[1] = runner_at(s, i + BH_LANES, down);
			prepare(&r[1], along);
			run(s, r, 2, along->steps, centric);
		} else {
			run(s, r, 1, along->steps, centric);
		}
	}
}

INLINE double total(lanes v)
{
	return (v[0] + v[1]) + (v[2] + v[3]);
}

/* l of one side as even steps: the greatest stride that meets all of them. */
static side side_of(const int *l, size_t count, bool down)
{
	side s = { 0, 0, 0 };

	if (count == 0)
		return s;
	s.start = (size_t)abs(down ? l[count - 1] : l[0]);
	for (size_t i = 1; i < count; i++) {
		size_t a = s.stride, b = (size_t)(l[i] - l[i - 1]);

		while (b) {
			size_t rest = a % b;

			a = b;
			b = rest;
		}
		s.stride = a;
	}
	s.stride = s.stride ? s.stride : 1;
	s.steps = (size_t)(l[count - 1] - l[0]) / s.stride + 1;
	return s;
}

/* The sums of one row, all groups, into out. */
INLINE void sum_row(state *s, const bh_points *p, const bh_wave_row *row, bool centric)
{
	size_t below = 0;
	side sides[2];

	while (below < row->count && row->l[below] < 0)
		below++;
	sides[0] = side_of(row->l + below, row->count - below, false);
	sides[1] = side_of(row->l, below, true);
	for (size_t g = 0; g < p->groups; g++)
		for (int down = 0; down < 2; down++) {
			const side *along = &sides[down];
			size_t from = down ? 0 : below, to = down ? below : row->count;

			sum_side(s, &p->group[g], along, down, centric);
			for (size_t i = from; i < to; i++) {
				size_t step =
					((size_t)abs(row->l[i]) - along->start) /
					along->stride;

				s->out[0][g * row->count + i] = total(s->re[step]);
				s->out[1][g * row->count + i] = total(s->im[step]);
			}
		}
}

/* Rows with k ≥ 0 rising, or with k < 0 falling. */
INLINE void sum_half(state *s, const bh_points *p, const bh_wave_sheet *r, int direction)
{
	int k = 0;
	size_t first = 0;

	while (first < r->count && r->rows[first].k < 0)
		first++;
	if (direction > 0 ? first == r->count : first == 0)
		return;
	begin(s, p, r->h, direction);
	for (size_t i = 0; i < (direction > 0 ? r->count - first : first); i++) {
		size_t n = direction > 0 ? first + i : first - 1 - i;

		for (; k != r->rows[n].k; k += direction)
			next_k(s, p->count);
		if (p->centric)
			sum_row(s, p, &r->rows[n], true);
		else
			sum_row(s, p, &r->rows[n], false);
		r->take(r->to, n, s->out[0], s->out[1]);
	}
}

static void sum_plainly(state *s, const bh_points *p, const bh_wave_sheet *r)
{
	sum_half(s, p, r, 1);
	sum_half(s, p, r, -1);
}

#if defined(__x86_64__) && defined(__GNUC__)
__attribute__((target("avx2,fma"))) static void
sum_wide(state *s, const bh_points *p, const bh_wave_sheet *r)
{
	sum_half(s, p, r, 1);
	sum_half(s, p, r, -1);
}

static bool is_wide(void)
{
	return __builtin_cpu_supports("avx2") && __builtin_cpu_supports("fma");
}
#else
#define sum_wide sum_plainly
static bool is_wide(void)
{
	return false;
}
#endif

/* Steps of the longest side, and l of the longest row. */
static void extent(size_t *longest, size_t *widest, const bh_wave_sheet *sheet)
{
	*longest = *widest = 0;
	for (size_t i = 0; i < sheet->count; i++) {
		const bh_wave_row *row = &sheet->rows[i];
		int low = abs(row->l[0]), high = abs(row->l[row->count - 1]);
		size_t reach = (size_t)(low > high ? low : high) + 1;

		*longest = reach > *longest ? reach : *longest;
		*widest = row->count > *widest ? row->count : *widest;
	}
}

bool bh_waves_sum(const bh_points *points, const bh_wave_sheet *sheet)
{
	state s;
	size_t longest, widest, room;
	double *block;

	extent(&longest, &widest, sheet);
	room = (ARRAYS + 2) * points->count + 2 * BH_LANES * longest +
	       2 * widest * points->groups;
	block = calloc(room, sizeof *block);
	if (!block)
		return false;
	for (int i = 0; i < ARRAYS; i++)
		s.of[i] = block + (size_t)i * points->count;
	s.start[0] = block + ARRAYS * points->count;
	s.start[1] = s.start[0] + points->count;
	s.re = (lanes *)(s.start[1] + points->count);
	s.im = s.re + longest;
	s.out[0] = (double *)(s.im + longest);
	s.out[1] = s.out[0] + widest * points->groups;
	begin_plane(&s, points, sheet->h);
	if (is_wide())
		sum_wide(&s, points, sheet);
	else
		sum_plainly(&s, points, sheet);
	free(block);
	return true;
}
