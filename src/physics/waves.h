#ifndef PHYSICS_WAVES_H
#define PHYSICS_WAVES_H

#include <stdbool.h>
#include <stddef.h>

/* Sums of exp(2πi h·x) over many points for many h, by recurrence: from one l to the next each
 * point's wave is multiplied by exp(2πi z), from one k to the next by exp(2πi y). Damping
 * exp(−Σ β_ij h_i h_j) goes along: its steps are a geometric sequence. */

/* Points stand in groups; each group begins at a multiple of BH_LANES, what is left of its
 * last lanes has weight 0. */
enum { BH_LANES = 4 };

typedef struct {
	const double *at[3];   /* fractional                     */
	const double *weight;  /* what a wave begins with        */
	const double *beta[6]; /* β11 β22 β33 β12 β13 β23        */
	size_t count;	       /* with the empty lanes           */
	const size_t *group;   /* first point of each, and count */
	size_t groups;
	bool centric; /* for each point its opposite is meant too: real parts are all */
} bh_points;

/* A row of one h and k: its l, rising. */
typedef struct {
	int k;
	const int *l;
	size_t count;
} bh_wave_row;

/* A row's sums, as they come: re and im of group g and l number i stand at g · count + i. */
typedef void bh_wave_taker(void *to, size_t row, const double *re, const double *im);

/* The rows of one h, k rising. */
typedef struct {
	int h;
	const bh_wave_row *rows;
	size_t count;
	bh_wave_taker *take;
	void *to;
} bh_wave_sheet;

/* Sum all rows of one h and hand each over.
 *   false  memory is out */
bool bh_waves_sum(const bh_points *points, const bh_wave_sheet *sheet);

#endif
