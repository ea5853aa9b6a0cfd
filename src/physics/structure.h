#ifndef PHYSICS_STRUCTURE_H
#define PHYSICS_STRUCTURE_H

#include <stdbool.h>

#include "base/arena.h"
#include "base/err.h"
#include "model/phase.h"

/* Displacement parameter used where a site gives none, Å²: common practice for inorganic
 * solids at room temperature; a plan says where it is used. */
#define BH_B_ISO_DEFAULT_A2 0.5

/* What of a structure factor to leave out, for comparison with tables. */
typedef struct {
	bool anomalous; /* f' = f'' = 0 */
} bh_without;

/* Fill volume, site multiplicities, composition, formula text (lowest whole numbers where
 * they exist, else as many formulas as the numbers of places have in common), formula units
 * in the cell and X-ray density of a phase with atoms; volume alone for one without atoms.
 * Images of a site closer than 0.06 Å are one atom.
 *   false  memory is out */
bool bh_structure_resolve(bh_phase *phase, bh_arena *arena, bh_err *err);

/* A place that holds more than one atom: the occupancies of all images within within_A of a
 * site exceed 1. Returns true and names the nearest pair and its distance (site i against an
 * image of site j; i == j: two images of one site). */
bool bh_structure_clash(const bh_phase *phase, double within_A, size_t *i, size_t *j,
			double *distance_A);

/* |F|² of one plane, electrons²: ½(|F(h)|² + |F(−h)|²),
 * F = Σ occ (f0(s) + f' + i f'') exp(−B s²) exp(2πi h·x), all atoms of the cell.
 *   from  International Tables C (2004), 6.1 */
double bh_structure_f2(const bh_phase *phase, const int h[3], double d_A,
		       double energy_keV, bh_without without);

/* Many planes at many photon energies. */
typedef struct {
	const int (*h)[3];
	const double *d_A; /* as many as planes */
	size_t planes;
	const double *energy_keV;
	size_t energies;
	bh_without without;
} bh_f2_query;

/* |F|² of each plane at each energy: f2[plane · energies + energy]. Atoms of the cell are
 * expanded once.
 *   false  memory is out */
bool bh_structure_f2_table(double *f2, bh_arena *arena, const bh_phase *phase,
			   const bh_f2_query *query, bh_err *err);

#endif
