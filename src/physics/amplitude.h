#ifndef PHYSICS_AMPLITUDE_H
#define PHYSICS_AMPLITUDE_H

#include <stdbool.h>
#include <stddef.h>

#include "base/err.h"
#include "data/form_factors.h"
#include "model/phase.h"

/* Form factor of an atom or ion at s = sinθ/λ, electrons.
 *   from  D. Waasmaier & A. Kirfel, Acta Cryst. A51 (1995) 416 */
double bh_amplitude_f0(const bh_form_factor *row, double s_inv_A);

/* The row of an atom or ion, of the neutral atom when the table has no such charge. */
const bh_form_factor *bh_amplitude_form(int z, int charge);

enum { BH_F2_ENERGIES = 8 };

/* Many planes at up to BH_F2_ENERGIES photon energies. */
typedef struct {
	const int (*h)[3];
	const double *d_A; /* as many as planes */
	size_t planes;
	const double *energy_keV;
	size_t energies;
	bh_without without;
} bh_f2_query;

/* |F|² of each plane at each energy, electrons²: f2[plane · energies + energy] =
 * ½(|F(h)|² + |F(−h)|²), F = Σ occ (f0(s) + f' + i f'') T(h) exp(2πi h·x) over all atoms of the
 * cell, T = exp(−B s²) or exp(−Σ β_ij h_i h_j). Atoms that a lattice vector or the inversion
 * repeats are summed once. The work is divided among threads when it is large; the result does
 * not depend on their number.
 *   false  memory is out
 *   from   International Tables C (2004), 6.1; tensors: K. N. Trueblood et al., Acta Cryst. A52
 *          (1996) 770 */
bool bh_amplitude_f2_table(double *f2, const bh_phase *phase, const bh_f2_query *query,
			   bh_err *err);

/* The same of one plane at one energy; 0 when memory is out. */
double bh_amplitude_f2(const bh_phase *phase, const int h[3], double d_A,
		       double energy_keV, bh_without without);

/* How many terms the sums over the atoms have for one plane: what the work grows with. */
size_t bh_amplitude_terms(const bh_phase *phase);

#endif
