#include "plan/plan.h"

#include <math.h>
#include <stdio.h>
#include <string.h>

#include "data/holders.h"
#include "design/design.h"
#include "findings/findings.h"
#include "physics/geometry.h"
#include "physics/observe.h"
#include "physics/pattern.h"
#include "physics/structure.h"
#include "physics/symmetry.h"
#include "physics/xray.h"
#include "plan/unsure.h"
#include "plan/words.h"

static const bh_tube *tube_of(const bh_request *request)
{
	for (size_t i = 0; i < request->instrument->tube_count; i++)
		if (request->instrument->tubes[i].anode == request->anodes[0])
			return &request->instrument->tubes[i];
	return &request->instrument->tubes[0];
}

/* A crystalline holder is a phase of its own, one atom at the origin of a cubic cell. */
static bool build_holder(bh_phase *phase, bh_arena *arena, const bh_holder *holder,
			 bh_err *err)
{
	bool origin_open;

	*phase = (bh_phase){
		.kind = BH_PHASE_ATOMS,
		.cell = { holder->a_A, holder->a_A, holder->a_A, 90, 90, 90 },
		.site_count = 1,
		.sites = bh_new(arena, bh_site, 1),
		.share_frac = 1,
		.march = 1,
	};
	if (!phase->sites)
		return bh_fail_memory(err);
	snprintf(phase->name, sizeof phase->name, "holder (%s)", holder->name);
	phase->sites[0] = (bh_site){ .z = bh_xray_z(holder->element),
				     .occupancy = 1,
				     .b_iso_A2 = holder->b_iso_A2,
				     .b_known = true };
	return bh_symmetry_find(&phase->group, &origin_open, arena, holder->space_group,
				err) &&
	       bh_structure_resolve(phase, arena, err);
}

static bool gather_phases(bh_plan *plan, bh_err *err)
{
	const bh_request *request = plan->request;
	const bh_holder *holder = bh_holder_find(request->specimen.holder);

	plan->has_holder = holder && *holder->element;
	plan->phase_count = request->phase_count + plan->has_holder;
	plan->phases = bh_new(plan->arena, bh_phase, plan->phase_count);
	if (!plan->phases)
		return bh_fail_memory(err);
	memcpy(plan->phases, request->phases,
	       request->phase_count * sizeof *plan->phases);
	return !plan->has_holder || build_holder(&plan->phases[request->phase_count],
						 plan->arena, holder, err);
}

static bh_scene scene_of(const bh_plan *plan)
{
	return (bh_scene){ .request = plan->request,
			   .instrument = plan->instrument,
			   .phases = plan->phases,
			   .phase_count = plan->phase_count,
			   .has_holder = plan->has_holder };
}

bool bh_plan_observe(bh_plan *plan, bh_arena *arena, const bh_request *request,
		     bh_err *err)
{
	bh_setting setting = bh_observe_usual(request->instrument, tube_of(request));
	bh_scene scene;

	*plan = (bh_plan){ .arena = arena,
			   .request = request,
			   .instrument = request->instrument,
			   .anode = tube_of(request)->anode };
	plan->displacement_shift_deg = bh_geometry_displacement_deg(
		request->specimen.displacement_mm, request->instrument->radius_mm, 30);
	if (!gather_phases(plan, err))
		return false;
	scene = scene_of(plan);
	return bh_observe(&plan->signal, arena, &scene, &setting, err);
}

/* The curve on a grid fine enough to draw, over the limits of the request. */
static bool draw(bh_plan *plan, bh_err *err)
{
	const bh_request *request = plan->request;
	double span_deg = request->two_theta_max_deg - request->two_theta_min_deg;

	plan->pattern_from_deg = request->two_theta_min_deg;
	plan->pattern_to_deg = request->two_theta_max_deg;
	plan->pattern_count = (size_t)ceil(span_deg / 0.01) + 1;
	if (plan->pattern_count > 10001)
		plan->pattern_count = 10001;
	plan->pattern_step_deg = span_deg / (double)(plan->pattern_count - 1);
	plan->pattern_cps = bh_new(plan->arena, double, plan->pattern_count);
	plan->pattern_background_cps = bh_new(plan->arena, double, plan->pattern_count);
	if (!plan->pattern_cps || !plan->pattern_background_cps)
		return bh_fail_memory(err);
	bh_pattern(plan->pattern_cps, plan->pattern_background_cps,
		   (bh_grid){ plan->pattern_from_deg, plan->pattern_step_deg,
			      plan->pattern_count },
		   &plan->signal);
	return true;
}

bool bh_plan_make(bh_plan *plan, bh_arena *arena, const bh_request *request, bh_err *err)
{
	bh_scene scene;

	if (!bh_plan_observe(plan, arena, request,
			     err)) /* where peaks fall, how strong */
		return false;
	scene = scene_of(plan);
	return draw(plan, err)		       /* the whole curve              */
	       && bh_design(plan, &scene, err) /* step, ranges, times, errors  */
	       && bh_unsure_find(plan, &scene,
				 err) /* what is not known, and what it moves */
	       && bh_findings_all(plan, &scene, err) /* what can go wrong            */
	       && bh_words_notes(plan, err)	     /* what was assumed             */
	       && bh_words_why(plan, &scene, err)    /* where numbers come from      */
	       && bh_words_cautions(plan, err);	     /* what keeps people safe       */
}

bool bh_plan_wants_attention(const bh_plan *plan)
{
	for (size_t i = 0; i < plan->aim_count; i++)
		if (plan->aims[i].computed && !plan->aims[i].met)
			return true;
	for (size_t i = 0; i < plan->finding_count; i++)
		if (plan->findings[i].severity == BH_SEVERE)
			return true;
	return false;
}
