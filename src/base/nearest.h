#ifndef BASE_NEAREST_H
#define BASE_NEAREST_H

#include <stddef.h>

/* Edits (insert, delete, replace one byte) that turn one word into another; words longer than
 * 63 bytes count by their first 63.
 *   from  V. I. Levenshtein, Sov. Phys. Dokl. 10 (1966) 707 */
size_t bh_nearest_distance(const char *a, const char *b);

#endif
