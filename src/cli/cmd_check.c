#include <stdio.h>

#include "cli/commands.h"

static void summary(const bh_request *request)
{
	printf("%s: good. %zu phase%s, %zu aim%s, instrument %s, anodes", request->file,
	       request->phase_count, request->phase_count == 1 ? "" : "s",
	       request->aim_count, request->aim_count == 1 ? "" : "s",
	       request->instrument->name);
	for (size_t i = 0; i < request->anode_count; i++)
		printf(" %s", request->anodes[i]->symbol);
	printf(", 2θ %.4g to %.4g°\n", request->two_theta_min_deg,
	       request->two_theta_max_deg);
}

static int checked(bh_arena *arena, const bh_options *options)
{
	bh_request *request;
	int status = bh_open_request(&request, arena, options);

	if (status == BH_EXIT_DONE && !options->quiet) {
		for (size_t i = 0; i < request->phase_count; i++)
			bh_report_remarks(&request->phases[i]);
		summary(request);
	}
	return status;
}

int bh_cmd_check(const bh_options *options)
{
	return bh_with_arena(options, checked);
}
