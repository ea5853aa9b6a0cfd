#include "base/mat3.h"

#include <math.h>

static double minor2(const bh_mat3 *m, int row, int col)
{
	int r0 = (row + 1) % 3, r1 = (row + 2) % 3;
	int c0 = (col + 1) % 3, c1 = (col + 2) % 3;

	return m->at[r0][c0] * m->at[r1][c1] - m->at[r0][c1] * m->at[r1][c0];
}

double bh_mat3_det(const bh_mat3 *m)
{
	double det = 0;

	for (int c = 0; c < 3; c++)
		det += m->at[0][c] * minor2(m, 0, c);
	return det;
}

bool bh_mat3_invert(bh_mat3 *inverse, const bh_mat3 *m)
{
	double det = bh_mat3_det(m);

	if (!(fabs(det) > 0))
		return false;
	for (int r = 0; r < 3; r++)
		for (int c = 0; c < 3; c++)
			inverse->at[c][r] = minor2(m, r, c) / det;
	return true;
}

double bh_mat3_form(const bh_mat3 *m, const double x[3], const double y[3])
{
	double sum = 0;

	for (int r = 0; r < 3; r++)
		for (int c = 0; c < 3; c++)
			sum += x[r] * m->at[r][c] * y[c];
	return sum;
}
