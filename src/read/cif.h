#ifndef READ_CIF_H
#define READ_CIF_H

#include <stdbool.h>
#include <stddef.h>

#include "base/arena.h"
#include "base/err.h"

/* Reader of the crystallographic information file, versions 1.1 and 2.0 (S. R. Hall & B. McMahon,
 * International Tables G (2005), 2.2; H. J. Bernstein et al., J. Appl. Cryst. 49 (2016) 277).
 * Values stay where they stand in the file; only those of wanted names are kept, so that memory
 * grows with what is asked for. Lists and tables of version 2.0 are passed over as one value;
 * what stands inside save frames is passed over. Bytes above 127 may be anything. */

typedef struct {
	const char *text; /* not terminated                      */
	unsigned length;
	unsigned line : 31;
	unsigned quoted : 1; /* in quotes, or a text field           */
} bh_cif_value;

typedef struct {
	const char *name; /* the wanted name                     */
	unsigned line;	  /* where the name stands               */
	unsigned loop;	  /* number of its loop, 0: not in a loop */
	bh_cif_value *values;
	size_t count, room;
} bh_cif_item;

typedef struct {
	char name[76];
	unsigned line;
	bh_cif_item *items;
	size_t count;
} bh_cif_block;

typedef struct {
	const char *file; /* borrowed; stands in every place */
	const char *bytes;
	size_t length;
	bh_cif_block *blocks;
	size_t count;
} bh_cif;

/* Take a file apart.
 *   given    wanted  names as bh_cif_item holds them: small letters, "_" for ".": the names of
 *                    the dictionaries before and after DDLm and DDL2 become one
 *   false    noted, with line and column: what is no CIF, or memory */
bool bh_cif_parse(bh_cif *cif, bh_arena *arena, const char *const *wanted, size_t wanted_count,
		  bh_problems *problems);

/* An item of a block by the first of its names (separated by blanks) that is there with a value;
 * NULL when none is. */
const bh_cif_item *bh_cif_find(const bh_cif_block *block, const char *names);

/* '?' or '.', not in quotes: not known, does not apply. value NULL: as '.'. */
bool bh_cif_is_unknown(const bh_cif_value *value);

/* Where a value begins. */
bh_place bh_cif_place(const bh_cif *cif, const bh_cif_value *value);

/* A number with or without standard uncertainty: 4.7602(4), -.5, 1.2E-3.
 *   returns  *number; decimals, when not NULL: digits behind the point, as the precision
 *   false    no number */
bool bh_cif_number(double *number, int *decimals, const bh_cif_value *value);

/* The same with fractions, "1/3"; *fraction: it was one. */
bool bh_cif_coordinate(double *number, int *decimals, bool *fraction,
		       const bh_cif_value *value);

/* Copy a value as a terminated text, blanks around and line ends inside removed, cut to room. */
void bh_cif_text(char *to, size_t room, const bh_cif_value *value);

#endif
