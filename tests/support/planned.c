#include "support/planned.h"

#include <string.h>

#include "plan/plan.h"
#include "read/request.h"
#include "support/near.h"

bh_request *request_of(bh_arena *arena, const char *text)
{
	static const char *const dirs[] = { "presets/instruments" };
	bh_read_options options = { .preset_dirs = dirs, .preset_dir_count = 1 };
	bh_problems problems = { .arena = arena };
	bh_request *request = NULL;

	if (!bh_request_read_text(&request, arena, "test", text, strlen(text), &options,
				  &problems))
		fail_msg("%zu problems, first at %d:%d: %s", problems.count,
			 problems.count ? problems.items[0].line : 0,
			 problems.count ? problems.items[0].col : 0,
			 problems.count ? problems.items[0].what : "?");
	return request;
}

bh_plan *planned(bh_arena *arena, const char *text)
{
	bh_plan *plan = bh_new(arena, bh_plan, 1);
	bh_err err = { BH_OK, 0, 0, "", "", "" };

	if (!bh_plan_make(plan, arena, request_of(arena, text), &err))
		fail_msg("%s", err.what);
	return plan;
}

bh_scene scene_of_plan(const bh_plan *plan)
{
	return (bh_scene){ .request = plan->request,
			   .instrument = plan->instrument,
			   .phases = plan->phases,
			   .phase_count = plan->phase_count,
			   .has_holder = plan->has_holder };
}

const bh_finding *finding_of(const bh_plan *plan, const char *kind, const char *where)
{
	for (size_t i = 0; i < plan->finding_count; i++)
		if (strcmp(plan->findings[i].kind, kind) == 0 &&
		    strstr(plan->findings[i].where, where))
			return &plan->findings[i];
	return NULL;
}

double evidence_of(const bh_finding *finding, const char *name)
{
	assert_non_null(finding);
	for (size_t i = 0; i < finding->evidence_count; i++)
		if (strcmp(finding->evidence[i].name, name) == 0)
			return finding->evidence[i].value;
	fail_msg("no evidence \"%s\" in %s", name, finding->kind);
	return 0;
}
