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
		return bh_render_json(bytes, plan, err);
	case BH_AS_PDF:
		return bh_render_page(bytes, plan, BH_PAGE_PDF, err);
	case BH_AS_SVG:
		return bh_render_page(bytes, plan, BH_PAGE_SVG, err);
	case BH_AS_PNG:
		return bh_render_page(bytes, plan, BH_PAGE_PNG, err);
	default:
		return bh_render_text(bytes, plan, look, err);
	}
}

static int made(bh_arena *arena, const bh_options *options)
{
	bh_err err = { BH_OK, 0, 0, "", "", "" };
	bh_request *request;
	bh_plan plan;
	int status = bh_open_request(&request, arena, options);

	if (status != BH_EXIT_DONE)
		return status;
	if (!bh_plan_make(&plan, arena, request, &err))
		return bh_report(&err);
	status = bh_outputs_write(&plan, options, draw);
	if (status != BH_EXIT_DONE)
		return status;
	return bh_plan_wants_attention(&plan) ? BH_EXIT_ATTENTION : BH_EXIT_DONE;
}

int bh_cmd_plan(const bh_options *options)
{
	int status = bh_outputs_check(options, 1u << BH_AS_TEXT | 1u << BH_AS_JSON |
						       1u << BH_AS_PDF | 1u << BH_AS_SVG |
						       1u << BH_AS_PNG);

	return status == BH_EXIT_DONE ? bh_with_arena(options, made) : status;
}
