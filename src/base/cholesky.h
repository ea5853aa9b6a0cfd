#ifndef BASE_CHOLESKY_H
#define BASE_CHOLESKY_H

#include <stdbool.h>
#include <stddef.h>

enum { BH_CHOLESKY_MOST = 24 };

/* Element (k, k) of the inverse of a symmetric positive definite matrix.
 *   given    a   n×n, row by row; overwritten
 *            n   1 to BH_CHOLESKY_MOST
 *   returns  *inverse_kk
 *   false    not positive definite: the data do not determine all parameters
 *   from     G. H. Golub & C. F. Van Loan, Matrix Computations, 4.2 */
bool bh_cholesky_inverse_kk(double *inverse_kk, double *a, size_t n, size_t k);

#endif
