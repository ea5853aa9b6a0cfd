#ifndef BASE_NUMBER_H
#define BASE_NUMBER_H

#include <stdbool.h>
#include <stddef.h>

/* Strict readers of what people type; independent of the locale. */

/* A decimal number: optional sign, digits with at most one point, optional exponent. No hex,
 * no nan, no inf, nothing before or after.
 *   false  not a number, or beyond the range of a double; *value untouched */
bool bh_number_read(double *value, const char *text, size_t length);

/* A duration: "90 min", "2 h", "1 h 30 min", "45 s", "1.5 h".
 *   false  not a duration, or not above 0 */
bool bh_duration_read(double *seconds, const char *text, size_t length);

#endif
