#include <math.h>
#include <stdio.h>

#include "cli/outputs.h"
#include "plan/plan.h"
#include "render/render.h"

static bool draw(bh_text *bytes, const bh_plan *plan, bh_as as, const bh_options *options,
		 bh_err *err)
{
	bh_look look = { bh_terminal_columns(), bh_terminal_color(options),
			 options->why };

	switch (as) {
	case BH_AS_JSON:
		return bh_render_reflections_json(bytes, plan, err);
	case BH_AS_CSV:
		return bh_render_reflections_csv(bytes, plan, err);
	default:
		return bh_render_reflections_text(bytes, plan, look, err);
	}
}

static int listed(bh_arena *arena, const bh_options *options)
{
	bh_err err = { BH_OK, 0, 0, "", "", "" };
	bh_request *request;
	bh_plan plan;
	int status = bh_open_request(&request, arena, options);

	if (status != BH_EXIT_DONE)
		return status;
	request->without = options->without;
	if (options->two_theta_given) {
		request->two_theta_min_deg =
			fmax(request->two_theta_min_deg, options->two_theta_deg[0]);
		request->two_theta_max_deg =
			fmin(request->two_theta_max_deg, options->two_theta_deg[1]);
		if (!(request->two_theta_min_deg < request->two_theta_max_deg)) {
			bh_fail(&err, BH_BAD_INPUT,
				"--two-theta %g,%g lies outside the reach of the "
				"instrument\n"
				"allowed: %g to %g",
				options->two_theta_deg[0], options->two_theta_deg[1],
				request->instrument->two_theta_min_deg,
				request->instrument->two_theta_max_deg);
			return bh_report(&err);
		}
	}
	if (!bh_plan_observe(&plan, arena, request, &err))
		return bh_report(&err);
	return bh_outputs_write(&plan, options, draw);
}

int bh_cmd_reflections(const bh_options *options)
{
	int status = bh_outputs_check(options, 1u << BH_AS_TEXT | 1u << BH_AS_JSON |
						       1u << BH_AS_CSV);

	return status == BH_EXIT_DONE ? bh_with_arena(options, listed) : status;
}
