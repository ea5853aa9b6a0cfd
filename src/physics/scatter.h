#ifndef PHYSICS_SCATTER_H
#define PHYSICS_SCATTER_H

#include <stdbool.h>

#include "physics/observe.h"
#include "physics/radiation.h"

/* All that lies under the lines: blank, fluorescence, Compton, diffuse and continuum of the
 * specimen, and of the holder where the beam spills. Needs the signal's reflections.
 *   given    continuum  at the specimen
 *   fills    background, fluorescence
 *   false    memory is out */
bool bh_scatter(bh_signal *signal, bh_arena *arena, const bh_scene *scene,
		const bh_continuum *continuum, bh_err *err);

#endif
