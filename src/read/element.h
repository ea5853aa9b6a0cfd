#ifndef READ_ELEMENT_H
#define READ_ELEMENT_H

#include <stdbool.h>
#include <stddef.h>

#include "data/elements.h"

/* Elements as structure files write them. Deuterium and tritium count as hydrogen. */

/* A type symbol: "Fe", "FE", "Fe3+", "Fe+3", "O2-", "Na+", "Siva", "D".
 *   false  no element from H to U */
bool bh_element_type(int *z, int *charge, const char *text, size_t length);

/* How many atoms of each element a formula names: "C28 H10 Co4 O12", "Ca(OH)2" is none. */
typedef struct {
	double atoms[BH_Z_MAX + 1];
	bool known;
} bh_element_counts;

void bh_element_formula(bh_element_counts *counts, const char *text, size_t length);

/* What a label may stand for, the likelier first: "Fe1" is Fe, then F; "CO(1)" is C, then Co;
 * "Wat1" is O; "OH2", "Ow", "O-H(1)" are O.
 *   returns  how many, 0 to 2 */
int bh_element_label(int z[2], const char *text, size_t length);

#endif
