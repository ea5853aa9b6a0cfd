#ifndef READ_BUILD_H
#define READ_BUILD_H

#include <stdbool.h>

#include "model/request.h"
#include "read/conf.h"
#include "read/request.h"

/* From checked sections to the model. Each notes every problem it finds; false: some. A
 * section that is faulty was complained about and may lack what it must have: what is there
 * is looked at all the same, so that one run finds all problems of a file. */

bool bh_build_instrument(bh_instrument *instrument, bh_arena *arena,
			 const bh_conf_section *root, bh_problems *problems);

/* How much of a phase could be made. */
typedef enum {
	BH_BUILT_NOT,	 /* name, and share if it is given       */
	BH_BUILT_PLANES, /* also what targets need: cell and group, or the list */
	BH_BUILT	 /* all that it needs to be computed     */
} bh_built;

/* share_frac −1 when the file gives none. */
bh_built bh_build_phase(bh_phase *phase, bh_arena *arena, const bh_conf_section *section,
			bh_problems *problems);

/* A phase that is a cell with a space group, with or without atoms. */
bh_built bh_build_crystal(bh_phase *phase, bh_arena *arena, const bh_conf_section *section,
			  bh_problems *problems);

/* A phase that is a structure file. */
bh_built bh_build_file(bh_phase *phase, bh_arena *arena, const bh_conf_section *section,
		       bh_problems *problems);

/* Note an error of the physics at a place of the file; false. */
bool bh_build_note(bh_problems *problems, bh_place place, const bh_err *err);

/* Note a key that is given beside another that excludes it; true: it is not. */
bool bh_build_goes_with(const bh_conf_section *section, const char *key, const char *other,
			bh_problems *problems);

/* Add a plane (or a d of a list) to a phase's targets unless it stands there.
 *   returns  its index; SIZE_MAX: noted */
size_t bh_build_target(bh_phase *phase, bh_arena *arena, const bh_conf_value *value,
		       bh_problems *problems);

/* Phases, shares, specimen, aims, booking; anodes and limits when request->instrument is set. */
bool bh_build_request(bh_request *request, bh_arena *arena, const bh_conf_section *root,
		      const bh_read_options *options, bh_problems *problems);

#endif
