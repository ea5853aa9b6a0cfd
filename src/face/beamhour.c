#include "beamhour.h"

#include <stdlib.h>
#include <string.h>

#include "plan/plan.h"
#include "read/request.h"
#include "render/render.h"

struct beamhour_plan {
	bh_arena *arena;
	bh_plan plan;
};

const char *beamhour_version(void)
{
	return BH_VERSION;
}

static void hand_over(beamhour_error *to, const bh_err *from)
{
	to->status = (int)from->code;
	to->line = from->line;
	to->col = from->col;
	memcpy(to->file, from->file, sizeof to->file);
	memcpy(to->what, from->what, sizeof to->what);
	memcpy(to->hint, from->hint, sizeof to->hint);
}

static void hand_over_one(beamhour_error *errors, size_t room, size_t *count,
			  const bh_err *err)
{
	if (*count < room)
		hand_over(&errors[(*count)++], err);
}

beamhour_plan *beamhour_plan_text(const beamhour_input *input, beamhour_error *errors,
				  size_t error_room, size_t *error_count)
{
	beamhour_plan *made = calloc(1, sizeof *made);
	bh_arena *arena = bh_arena_new();
	bh_problems problems = { .arena = arena };
	bh_read_options options = { .preset_dirs = input->preset_dirs,
				    .preset_dir_count = input->preset_dir_count };
	bh_err err = { BH_OK, 0, 0, "", "", "" };
	bh_request *request;

	*error_count = 0;
	if (made && arena &&
	    bh_request_read_text(&request, arena, input->name, input->text, input->length,
				 &options, &problems) &&
	    bh_plan_make(&made->plan, arena, request, &err)) {
		made->arena = arena;
		return made;
	}
	for (size_t i = 0; i < problems.count; i++)
		hand_over_one(errors, error_room, error_count, &problems.items[i]);
	if (*error_count == 0) {
		bh_fail_memory(&err); /* keeps an error that is already there */
		hand_over_one(errors, error_room, error_count, &err);
	}
	bh_arena_free(arena);
	free(made);
	return NULL;
}

int beamhour_plan_wants_attention(const beamhour_plan *plan)
{
	return bh_plan_wants_attention(&plan->plan);
}

char *beamhour_render(const beamhour_plan *plan, const char *kind, size_t *length,
		      beamhour_error *error)
{
	static const bh_look look = { 80, false, true };
	bh_err err = { BH_OK, 0, 0, "", "", "" };
	bh_text bytes = { 0 };
	bool good;

	if (strcmp(kind, "text") == 0)
		good = bh_render_text(&bytes, &plan->plan, look, &err);
	else if (strcmp(kind, "json") == 0)
		good = bh_render_json(&bytes, &plan->plan, &err);
	else if (strcmp(kind, "pdf") == 0)
		good = bh_render_page(&bytes, &plan->plan, BH_PAGE_PDF, &err);
	else if (strcmp(kind, "svg") == 0)
		good = bh_render_page(&bytes, &plan->plan, BH_PAGE_SVG, &err);
	else if (strcmp(kind, "png") == 0)
		good = bh_render_page(&bytes, &plan->plan, BH_PAGE_PNG, &err);
	else
		good = bh_fail(&err, BH_BAD_INPUT,
			       "no such kind: %s\nallowed: text, json, pdf, svg, png",
			       kind);
	if (bytes.lost)
		good = bh_fail_memory(&err);
	if (!good) {
		hand_over(error, &err);
		bh_text_free(&bytes);
		return NULL;
	}
	*length = bytes.length;
	return bytes.bytes;
}

void beamhour_bytes_free(char *bytes)
{
	free(bytes);
}

void beamhour_plan_free(beamhour_plan *plan)
{
	if (!plan)
		return;
	bh_arena_free(plan->arena);
	free(plan);
}

void beamhour_release(void)
{
	bh_page_release();
}
