#ifndef TESTS_SUPPORT_NEAR_H
#define TESTS_SUPPORT_NEAR_H

/* cmocka compares floats only, and takes NaN for equal: this compares doubles. */
#include <math.h>
#include <setjmp.h>
#include <stdarg.h>
#include <stddef.h>
#include <stdint.h>
#include <stdio.h>

#include <cmocka.h>

/* |got − want| ≤ within, with both finite; `what` names the row. */
#define assert_near(got, want, within, what)                                             \
	near_check((got), (want), (within), (what), __FILE__, __LINE__)
/* |got/want − 1| ≤ within_frac. */
#define assert_ratio(got, want, within_frac, what)                                       \
	near_check((got), (want), fabs((double)(want)) * (within_frac), (what),          \
		   __FILE__, __LINE__)

static inline void near_check(double got, double want, double within, const char *what,
			      const char *file, int line)
{
	if (isfinite(got) && isfinite(want) && fabs(got - want) <= within)
		return;
	print_error("%s: got %.12g, want %.12g, within %.3g\n", what, got, want, within);
	_fail(file, line);
}

#endif
