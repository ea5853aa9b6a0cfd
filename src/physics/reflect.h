#ifndef PHYSICS_REFLECT_H
#define PHYSICS_REFLECT_H

#include <stdbool.h>

#include "physics/observe.h"

/* The reflections of every phase and their peaks at every line, rates in, for a signal whose
 * radiation, mixture, aperture and axial acceptance are set.
 *   false  memory is out */
bool bh_reflect(bh_signal *signal, bh_arena *arena, const bh_scene *scene, bh_err *err);

/* One phase, its number, and what to compute of it. */
typedef struct {
	const bh_phase *phase;
	size_t index;
	double least_d_A;
	const bh_radiation *radiation;
	bh_without without;
} bh_reflect_query;

/* A phase's reflections with d, indices, multiplicity, targets marked; of a phase with atoms
 * |F|² at every line of the radiation and texture. Angles and rates are left 0.
 *   false  memory is out; too many to compute (BH_BAD_INPUT) */
bool bh_reflect_planes(bh_reflection **list, size_t *count, bh_arena *arena,
		       const bh_reflect_query *query, bh_err *err);

/* m|F|²/(v²ρ) of a reflection at a line, cm³/(g·Å⁶), texture included; for a phase given as a
 * list, what its corundum ratio gives. 0: not known. */
double bh_reflect_strength(const bh_reflection *reflection, const bh_phase *phase,
			   size_t line);

/* Integrated rate of a reflection at a line and angle from a body of areal_g_cm2 and
 * attenuation, per photon/s, with share 1: counts·rad/s. D and G are not in. */
double bh_reflect_per_photon(const bh_signal *signal, double strength,
			     double wavelength_A, double two_theta_deg,
			     double attenuation_cm2_g);

#endif
