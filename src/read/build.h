#ifndef READ_BUILD_H
#define READ_BUILD_H

#include <stdbool.h>

#include "model/request.h"
#include "read/conf.h"
#include "read/request.h"

/* From checked sections to the model. Each notes every problem it finds; false: some. */

bool bh_build_instrument(bh_instrument *instrument, bh_arena *arena,
			 const bh_conf_section *root, bh_problems *problems);

/* A phase with all it needs to be computed; share_frac −1 when the file gives none. */
bool bh_build_phase(bh_phase *phase, bh_arena *arena, const bh_conf_section *section,
		    bh_problems *problems);

/* Add a plane (or a d of a list) to a phase's targets unless it stands there.
 *   returns  its index; SIZE_MAX: noted */
size_t bh_build_target(bh_phase *phase, bh_arena *arena, const bh_conf_value *value,
		       bh_problems *problems);

/* Phases, shares, specimen, aims, booking. */
bool bh_build_request(bh_request *request, bh_arena *arena, const bh_conf_section *root,
		      const bh_read_options *options, bh_problems *problems);

#endif
