#ifndef PHYSICS_CELL_H
#define PHYSICS_CELL_H

#include <stdbool.h>

#include "base/mat3.h"
#include "model/phase.h"

/* Metric tensor G of the direct cell, Å²: |u|² = uᵀ G u for fractional u.
 *   from  International Tables A (2016), 1.5 */
bh_mat3 bh_cell_metric(const bh_cell *cell);

/* Metric tensor of the reciprocal cell, Å⁻²: 1/d² = hᵀ G* h.
 *   false  when the six values close no cell (zero or negative volume) */
bool bh_cell_reciprocal(bh_mat3 *reciprocal, const bh_cell *cell);

/* Volume, Å³; 0 when the angles close no cell. */
double bh_cell_volume_A3(const bh_cell *cell);

/* Axes as columns, Å: a along x, b in the xy plane. */
void bh_cell_axes(double axes[3][3], const bh_cell *cell);

/* Edges and angles of a metric tensor. */
void bh_cell_of_metric(bh_cell *cell, const bh_mat3 *metric);

/* Interplanar distance, Å, of hkl ≠ 0 0 0. */
double bh_cell_d_A(const bh_mat3 *reciprocal, const int h[3]);

/* Cosine of the angle between two reciprocal vectors. */
double bh_cell_cosine(const bh_mat3 *reciprocal, const int h[3], const int k[3]);

#endif
