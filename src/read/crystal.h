#ifndef READ_CRYSTAL_H
#define READ_CRYSTAL_H

#include <stdbool.h>

#include "base/arena.h"
#include "base/err.h"
#include "base/text.h"
#include "model/phase.h"
#include "read/cif.h"

/* A structure file becomes the crystal of a phase. */

enum { BH_SITES_MOST = 100000 };

/* Read the structure of a CIF, packed by gzip or not.
 *   given    path   a file, or file#block: a data block by name, or by number from 1; without:
 *                   the first block with a cell
 *            asked  where the file was asked for, for problems that are no place in it
 *   returns  phase: kind, cell, group, sites, source, remarks; composition and density when
 *            there are no coordinates but a formula. bh_structure_resolve has run.
 *   false    noted: what cannot be read, and why */
bool bh_crystal_read(bh_phase *phase, bh_arena *arena, const char *path, bh_place asked,
		     bh_problems *problems);

/* What the parts of the reader share. */
typedef struct {
	const bh_cif *cif;
	const bh_cif_block *block;
	bh_phase *phase;
	bh_arena *arena;
	bh_problems *problems;
	const bh_cif_value *open_origin; /* a symbol that leaves two origins open; NULL */
	bh_space_group second;		 /* the group with the other origin             */
} bh_crystal;

/* Note what a user must know of; a '\n' in the text splits off what to do. */
void bh_crystal_remark(bh_crystal *crystal, bh_severity severity, bh_place place,
		       const char *format, ...) __attribute__((format(printf, 4, 5)));

/* Add a label to a list for a remark, not endlessly. */
void bh_crystal_list(bh_text *list, const char *label);

/* The place of an item's name; of the block when item is NULL. */
bh_place bh_crystal_place(const bh_crystal *crystal, const bh_cif_item *item);

/* The only value of the first of some names; NULL: not there, '?' or '.'. */
const bh_cif_value *bh_crystal_value(const bh_crystal *crystal, const char *names);

/* Operations, Hall symbol, Hermann-Mauguin symbol, number: the first that is there, for a cell
 * that is set. What the others say differently is remarked. */
bool bh_crystal_group(bh_crystal *crystal);

/* Sites with elements, places, occupancies and displacements, for a cell and group that are
 * set. Without coordinates: none, remarked. */
bool bh_crystal_sites(bh_crystal *crystal);

/* Of two origins the one that puts as many atoms into the cell as the formula says.
 *   false  noted: both do, or none */
bool bh_crystal_origin(bh_crystal *crystal);

/* Put sites that stand beside special positions on them; remark those that repeat others. */
bool bh_crystal_settle(bh_crystal *crystal);

/* Displacement tensors of the sites. */
bool bh_crystal_tensors(bh_crystal *crystal);

/* Formula, formula units, density, volume and clashes against what the file says; remarked. */
bool bh_crystal_compare(bh_crystal *crystal);

#endif
