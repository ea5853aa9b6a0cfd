#ifndef DATA_HOLDERS_H
#define DATA_HOLDERS_H

#include <stddef.h>

/* What a specimen lies in. Where the beam spills beside the specimen, a crystalline holder
 * shows its own lines. */
typedef struct {
	const char *name;	 /* the word of a request file               */
	const char *element;	 /* "" : no lines (plastic, glass, oriented) */
	const char *space_group; /* database symbol                          */
	double a_A;		 /* cubic cell; one atom at the origin       */
	double b_iso_A2;
	const char *help;
	const char *source;
} bh_holder;

extern const bh_holder bh_holders[];
extern const size_t bh_holder_count;

/* NULL when there is no such holder. */
const bh_holder *bh_holder_find(const char *name);

#endif
