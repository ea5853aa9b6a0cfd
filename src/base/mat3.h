#ifndef BASE_MAT3_H
#define BASE_MAT3_H

#include <stdbool.h>

typedef struct {
	double at[3][3];
} bh_mat3;

double bh_mat3_det(const bh_mat3 *m);

/* *inverse of m; false (inverse untouched) when m is singular. */
bool bh_mat3_invert(bh_mat3 *inverse, const bh_mat3 *m);

/* xᵀ M y */
double bh_mat3_form(const bh_mat3 *m, const double x[3], const double y[3]);

#endif
