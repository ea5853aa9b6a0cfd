#ifndef PHYSICS_OBSERVE_H
#define PHYSICS_OBSERVE_H

#include <stdbool.h>

#include "base/arena.h"
#include "base/err.h"
#include "model/request.h"
#include "model/signal.h"

/* What lies on the machine: the request, and its phases with the holder's appended. */
typedef struct {
	const bh_request *request;
	const bh_instrument *instrument;
	const bh_phase *phases;
	size_t phase_count;
	bool has_holder; /* the last phase is the holder */
	/* Where the background is wanted; both 0: within the arms' reach. To compare settings
	 * at one line only its neighbourhood is needed. */
	double background_low_deg, background_high_deg;
} bh_scene;

/* Shares of the beam at an angle: on the specimen, beside it. An automatic slit's smaller
 * opening at low angles is in both (see bh_radiation_beam_sr_mA). */
typedef struct {
	double specimen_frac, holder_frac;
} bh_lit;

bh_lit bh_lit_at(const bh_request *request, const bh_setting *setting,
		 double two_theta_deg);

/* Powder on the beam's path, g/cm²: packing · X-ray density · thickness. */
double bh_observe_areal_g_cm2(const bh_request *request, double density_g_cm3);

/* Everything the machine sees at one setting: lines, mixture, reflections of every phase,
 * peaks, background. Pure: the same arguments give the same signal.
 *   false  memory is out */
bool bh_observe(bh_signal *signal, bh_arena *arena, const bh_scene *scene,
		const bh_setting *setting, bh_err *err);

/* The setting that a tube is usually run at, with the instrument's usual slit and window. */
bh_setting bh_observe_usual(const bh_instrument *instrument, const bh_tube *tube);

/* Background at any angle inside the signal's table, counts/s in one aperture. */
double bh_observe_background_cps(const bh_signal *signal, double two_theta_deg);

#endif
