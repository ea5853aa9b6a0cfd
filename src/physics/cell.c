#include "physics/cell.h"

#include <math.h>
#include <string.h>

#include "base/units.h"

/* Exact at 90° and 120°, where cos() leaves 6e-17. */
static double cosine(double angle_deg)
{
	if (fabs(angle_deg - 90) < 1e-12)
		return 0;
	if (fabs(angle_deg - 120) < 1e-12)
		return -0.5;
	return cos(bh_rad(angle_deg));
}

bh_mat3 bh_cell_metric(const bh_cell *cell)
{
	double a = cell->a_A, b = cell->b_A, c = cell->c_A;
	double bc = b * c * cosine(cell->alpha_deg), ac = a * c * cosine(cell->beta_deg);
	double ab = a * b * cosine(cell->gamma_deg);

	return (bh_mat3){ { { a * a, ab, ac }, { ab, b * b, bc }, { ac, bc, c * c } } };
}

bool bh_cell_reciprocal(bh_mat3 *reciprocal, const bh_cell *cell)
{
	bh_mat3 metric = bh_cell_metric(cell);

	return bh_cell_volume_A3(cell) > 0 && bh_mat3_invert(reciprocal, &metric);
}

double bh_cell_volume_A3(const bh_cell *cell)
{
	bh_mat3 metric = bh_cell_metric(cell);
	double square = bh_mat3_det(&metric);
	double edges = cell->a_A * cell->b_A * cell->c_A;

	return square > 1e-12 * edges * edges ? sqrt(square) : 0;
}

void bh_cell_axes(double axes[3][3], const bh_cell *cell)
{
	bh_mat3 g = bh_cell_metric(cell);

	/* the triangular factor of the metric */
	memset(axes, 0, 9 * sizeof(double));
	axes[0][0] = sqrt(g.at[0][0]);
	axes[0][1] = g.at[0][1] / axes[0][0];
	axes[0][2] = g.at[0][2] / axes[0][0];
	axes[1][1] = sqrt(fmax(0, g.at[1][1] - axes[0][1] * axes[0][1]));
	axes[1][2] = axes[1][1] > 0
			     ? (g.at[1][2] - axes[0][1] * axes[0][2]) / axes[1][1]
			     : 0;
	axes[2][2] = sqrt(fmax(0, g.at[2][2] - axes[0][2] * axes[0][2] -
					  axes[1][2] * axes[1][2]));
}

/* Exact where the cosine is 0 or −1/2. */
static double angle_deg(double cosine)
{
	if (fabs(cosine) < 1e-15)
		return 90;
	if (fabs(cosine + 0.5) < 1e-15)
		return 120;
	return bh_deg(acos(cosine));
}

void bh_cell_of_metric(bh_cell *cell, const bh_mat3 *metric)
{
	double edge[3];

	for (int i = 0; i < 3; i++)
		edge[i] = sqrt(metric->at[i][i]);
	*cell = (bh_cell){ edge[0],
			   edge[1],
			   edge[2],
			   angle_deg(metric->at[1][2] / (edge[1] * edge[2])),
			   angle_deg(metric->at[0][2] / (edge[0] * edge[2])),
			   angle_deg(metric->at[0][1] / (edge[0] * edge[1])) };
}

static double form(const bh_mat3 *m, const int h[3], const int k[3])
{
	double x[3] = { h[0], h[1], h[2] }, y[3] = { k[0], k[1], k[2] };

	return bh_mat3_form(m, x, y);
}

double bh_cell_d_A(const bh_mat3 *reciprocal, const int h[3])
{
	return 1 / sqrt(form(reciprocal, h, h));
}

double bh_cell_cosine(const bh_mat3 *reciprocal, const int h[3], const int k[3])
{
	return form(reciprocal, h, k) /
	       sqrt(form(reciprocal, h, h) * form(reciprocal, k, k));
}
