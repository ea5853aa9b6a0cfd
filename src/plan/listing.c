#include "plan/plan.h"

#include <math.h>
#include <string.h>

#include "base/units.h"
#include "physics/absorb.h"
#include "physics/amplitude.h"
#include "physics/bragg.h"
#include "physics/geometry.h"
#include "physics/hkl.h"
#include "physics/reflect.h"

static bool fill_signal(bh_signal *signal, bh_arena *arena, const bh_request *request,
			const bh_anode *anode, bh_err *err)
{
	bh_line *line = &signal->radiation.lines[0];
	bh_mix_part *parts = bh_new(arena, bh_mix_part, request->phase_count);
	double volume = 0;

	*line = (bh_line){ .name = "Ka1",
			   .kind = BH_KA1,
			   .wavelength_A = anode->ka1_A,
			   .energy_keV = bh_energy_keV(anode->ka1_A) };
	signal->radiation.count = 1;
	signal->radiation.polarization = 1;
	if (!parts)
		return bh_fail_memory(err);
	signal->rates_known = true;
	for (size_t i = 0; i < request->phase_count; i++) {
		const bh_phase *phase = &request->phases[i];

		parts[i] = (bh_mix_part){ &phase->composition, phase->share_frac };
		volume += phase->share_frac / phase->density_g_cm3;
		signal->rates_known = signal->rates_known && phase->composition.count > 0 &&
				      phase->density_g_cm3 > 0;
	}
	if (!signal->rates_known)
		return true;
	signal->density_g_cm3 = 1 / volume;
	if (!bh_absorb_mix(&signal->mixture, arena, parts, request->phase_count, err))
		return false;
	line->mass_attenuation_cm2_g = bh_absorb_cm2_g(&signal->mixture, line->energy_keV);
	return true;
}

/* Angle, and intensity but for what is the same for all lines: m|F|² LP. */
static void fill_lines(bh_reflection *list, size_t count, const bh_signal *signal,
		       const bh_request *request)
{
	double most = 0;

	for (size_t i = 0; i < count; i++) {
		bh_reflection *r = &list[i];

		r->fwhm_deg = NAN;
		if (!bh_bragg_two_theta_deg(&r->two_theta_deg, r->d_A,
					    signal->radiation.lines[0].wavelength_A))
			continue;
		r->in_range = r->two_theta_deg >= request->two_theta_min_deg &&
			      r->two_theta_deg <= request->two_theta_max_deg;
		r->relative = r->multiplicity * r->f2 *
			      bh_geometry_lorentz_polarization(
				      1, bh_rad(r->two_theta_deg / 2));
		if (r->in_range)
			most = fmax(most, r->relative);
	}
	for (size_t i = 0; i < count; i++)
		list[i].relative = most > 0 ? 100 * list[i].relative / most : 0;
}

bool bh_plan_list(bh_plan *plan, bh_arena *arena, const bh_request *request,
		  const bh_anode *anode, bh_err *err)
{
	double least_d_A = bh_bragg_d_A(request->two_theta_max_deg, anode->ka1_A);
	bh_signal *signal = &plan->signal;

	*plan = (bh_plan){ .arena = arena,
			   .request = request,
			   .anode = anode,
			   .phases = request->phases,
			   .phase_count = request->phase_count };
	if (!fill_signal(signal, arena, request, anode, err))
		return false;
	for (size_t i = 0; i < request->phase_count; i++) {
		bh_reflection *list;
		size_t count, old = signal->reflection_count;

		if (!bh_reflect_planes(&list, &count, arena,
				       &(bh_reflect_query){ &request->phases[i], i,
							    least_d_A,
							    &signal->radiation,
							    request->without },
				       err))
			return false;
		fill_lines(list, count, signal, request);
		signal->reflections = bh_grow(arena, signal->reflections, bh_reflection,
					      old, old + count);
		if (!signal->reflections)
			return bh_fail_memory(err);
		if (count)
			memcpy(signal->reflections + old, list, count * sizeof *list);
		signal->reflection_count = old + count;
	}
	bh_plan_filter(plan, &(bh_list_filter){ 0, HUGE_VAL, 0 });
	return true;
}

void bh_plan_filter(bh_plan *plan, const bh_list_filter *filter)
{
	bh_signal *signal = &plan->signal;
	size_t n = 0;

	for (size_t i = 0; i < signal->reflection_count; i++) {
		const bh_reflection r = signal->reflections[i];

		if (r.in_range && r.d_A >= filter->d_min_A && r.d_A <= filter->d_max_A &&
		    (filter->least_percent <= 0 || r.relative >= filter->least_percent))
			signal->reflections[n++] = r;
	}
	/* what is left out is not looked at again: a list has no peaks */
	signal->in_range_count = n;
	signal->reflection_count = n;
}
