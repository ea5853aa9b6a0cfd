#include "base/nearest.h"

#include <string.h>

enum { LONGEST = 63 };

static size_t least(size_t a, size_t b, size_t c)
{
	size_t m = a < b ? a : b;

	return m < c ? m : c;
}

size_t bh_nearest_distance(const char *a, const char *b)
{
	size_t row[LONGEST + 1], m = strlen(a), n = strlen(b);

	m = m > LONGEST ? LONGEST : m;
	n = n > LONGEST ? LONGEST : n;
	for (size_t j = 0; j <= n; j++)
		row[j] = j;
	for (size_t i = 1; i <= m; i++) {
		size_t diagonal = row[0];

		row[0] = i;
		for (size_t j = 1; j <= n; j++) {
			size_t above = row[j];

			row[j] = least(row[j] + 1, row[j - 1] + 1,
				       diagonal + (a[i - 1] != b[j - 1]));
			diagonal = above;
		}
	}
	return row[n];
}
