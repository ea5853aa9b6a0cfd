#include "base/cholesky.h"

#include <math.h>

static bool factor(double *a, size_t n)
{
	for (size_t j = 0; j < n; j++) {
		double d = a[j * n + j];

		for (size_t k = 0; k < j; k++)
			d -= a[j * n + k] * a[j * n + k];
		if (!(d > 1e-14 * a[j * n + j]))
			return false;
		a[j * n + j] = sqrt(d);
		for (size_t i = j + 1; i < n; i++) {
			double s = a[i * n + j];

			for (size_t k = 0; k < j; k++)
				s -= a[i * n + k] * a[j * n + k];
			a[i * n + j] = s / a[j * n + j];
		}
	}
	return true;
}

bool bh_cholesky_inverse_kk(double *inverse_kk, double *a, size_t n, size_t k)
{
	double x[BH_CHOLESKY_MOST] = { 0 }, sum = 0;

	if (n > BH_CHOLESKY_MOST || !factor(a, n))
		return false;
	/* e_kᵀ (L Lᵀ)⁻¹ e_k = |L⁻¹ e_k|² */
	for (size_t i = k; i < n; i++) {
		double s = i == k ? 1 : 0;

		for (size_t j = k; j < i; j++)
			s -= a[i * n + j] * x[j];
		x[i] = s / a[i * n + i];
		sum += x[i] * x[i];
	}
	*inverse_kk = sum;
	return true;
}
