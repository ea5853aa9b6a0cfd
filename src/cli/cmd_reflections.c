#include <math.h>
#include <stdio.h>
#include <string.h>
#include <strings.h>

#include "cli/outputs.h"
#include "data/anodes.h"
#include "plan/plan.h"
#include "read/crystal.h"
#include "render/render.h"

/* Where a list begins and ends when no instrument says how far its arms reach. */
static const double list_from_deg = 1, list_to_deg = 150;

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

static int write(bh_plan *plan, const bh_options *options)
{
	bh_plan_filter(plan, &(bh_list_filter){ options->d_A[0], options->d_A[1],
						options->least_percent });
	for (size_t i = 0; i < plan->phase_count && !options->quiet; i++)
		bh_report_remarks(&plan->phases[i]);
	return bh_outputs_write(plan, options, draw);
}

/* Narrow the limits to what --two-theta asks for. */
static bool narrow(bh_request *request, const bh_options *options, bh_err *err)
{
	double low_deg = request->two_theta_min_deg, high_deg = request->two_theta_max_deg;

	if (!options->two_theta_given)
		return true;
	request->two_theta_min_deg = fmax(low_deg, options->two_theta_deg[0]);
	request->two_theta_max_deg = fmin(high_deg, options->two_theta_deg[1]);
	return request->two_theta_min_deg < request->two_theta_max_deg ||
	       bh_fail(err, BH_BAD_INPUT,
		       "--two-theta %g,%g lies outside the reach of the instrument\n"
		       "allowed: %g to %g",
		       options->two_theta_deg[0], options->two_theta_deg[1], low_deg,
		       high_deg);
}

static int from_request(bh_arena *arena, const bh_options *options)
{
	bh_err err = { BH_OK, 0, 0, "", "", "" };
	bh_request *request;
	bh_plan plan;
	int status = bh_open_request(&request, arena, options);

	if (status != BH_EXIT_DONE)
		return status;
	request->without = options->without;
	if (!narrow(request, options, &err) ||
	    !bh_plan_observe(&plan, arena, request, &err))
		return bh_report(&err);
	return write(&plan, options);
}

/* The name of a file without folder, ending and block. */
static void name_phase(char *to, size_t room, const char *path)
{
	const char *slash = strrchr(path, '/');
	char *cut;

	snprintf(to, room, "%s", slash ? slash + 1 : path);
	cut = strstr(to, ".cif");
	cut = cut ? cut : strstr(to, ".mcif");
	if (cut && cut > to)
		*cut = '\0';
}

static bool find_anode(const bh_anode **anode, const bh_options *options, bh_err *err)
{
	const char *symbol = options->anode ? options->anode : "Cu";

	*anode = bh_anode_find(symbol);
	return *anode || bh_fail(err, BH_BAD_INPUT,
				 "--anode %s\nallowed: Cr, Fe, Co, Cu, Mo, Ag", symbol);
}

/* A structure file alone: its lines at an anode's Kα1, no instrument asked. */
static int from_file(bh_arena *arena, const bh_options *options)
{
	bh_err err = { BH_OK, 0, 0, "", "", "" };
	bh_problems problems = { .arena = arena };
	bh_phase phase = { .share_frac = 1, .march = 1 };
	bh_request request = { .phases = &phase,
			       .phase_count = 1,
			       .two_theta_min_deg = list_from_deg,
			       .two_theta_max_deg = list_to_deg,
			       .without = options->without };
	const bh_anode *anode;
	bh_plan plan;

	if (!find_anode(&anode, options, &err))
		return bh_report(&err);
	if (!bh_crystal_read(&phase, arena, options->arguments[0],
			     (bh_place){ NULL, 0, 0 }, &problems))
		return bh_report_all(&problems);
	name_phase(phase.name, sizeof phase.name, options->arguments[0]);
	snprintf(request.title, sizeof request.title, "%s", phase.name);
	if (options->two_theta_given) {
		request.two_theta_min_deg = options->two_theta_deg[0];
		request.two_theta_max_deg = options->two_theta_deg[1];
	}
	if (!bh_plan_list(&plan, arena, &request, anode, &err))
		return bh_report(&err);
	return write(&plan, options);
}

/* Whether an argument is a structure file, by its ending before a "#". */
static bool is_structure(const char *path)
{
	static const char *const endings[] = { ".cif", ".mcif", ".cif.gz", ".mcif.gz" };
	const char *cut = strrchr(path, '#');
	size_t n = cut ? (size_t)(cut - path) : strlen(path);

	for (size_t i = 0; i < sizeof endings / sizeof *endings; i++) {
		size_t m = strlen(endings[i]);

		if (n > m && strncasecmp(path + n - m, endings[i], m) == 0)
			return true;
	}
	return false;
}

int bh_cmd_reflections(const bh_options *options)
{
	int status = bh_outputs_check(options, 1u << BH_AS_TEXT | 1u << BH_AS_JSON |
						       1u << BH_AS_CSV);

	if (status != BH_EXIT_DONE)
		return status;
	return bh_with_arena(options, is_structure(options->arguments[0]) ? from_file
									  : from_request);
}
