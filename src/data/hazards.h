#ifndef DATA_HAZARDS_H
#define DATA_HAZARDS_H

#include <stddef.h>

/* What a specimen's elements ask of the person who grinds it. */
typedef struct {
	int z;
	const char *text;
	const char *source;
} bh_hazard;

extern const bh_hazard bh_hazards[];
extern const size_t bh_hazard_count;

const bh_hazard *bh_hazard_of(int z); /* NULL: nothing named */

/* Cautions of every plan, by when they matter. */
typedef struct {
	const char *topic;
	const char *text;
	const char *source;
} bh_caution_row;

extern const bh_caution_row bh_caution_rows[];
extern const size_t bh_caution_row_count;

extern const char *const bh_silica_text; /* crystalline silica */

#endif
