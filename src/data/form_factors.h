#ifndef DATA_FORM_FACTORS_H
#define DATA_FORM_FACTORS_H

#include <stddef.h>

/* X-ray form factors of atoms and ions as five Gaussians and a constant:
 * f0(s) = Σ a exp(−b s²) + c, s = sinθ/λ from 0 to 6 Å⁻¹, electrons. */
typedef struct {
	int z, charge;
	double a[5], b_A2[5], c;
} bh_form_factor;

extern const bh_form_factor bh_form_factors[];
extern const size_t bh_form_factor_count;

/* The row of an atom or ion; NULL when the table has none. Every Z from 1 to 92 has charge 0. */
const bh_form_factor *bh_form_factor_find(int z, int charge);

#endif
