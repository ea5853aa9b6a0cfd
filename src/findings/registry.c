#include "findings/findings.h"

#include <math.h>
#include <stdarg.h>
#include <stdint.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

#include "base/fmt.h"

/* clang-format off */
const bh_finding_row bh_finding_rows[] = {
	{ "booking",      bh_find_booking,      "the booking is too short for the aims, and what it buys" },
	{ "range",        bh_find_range,        "a target beyond the arms' reach or cut by it, and the anode that brings it in; the primary beam on the detector" },
	{ "overlap",      bh_find_overlap,      "other lines within a target's window, their share and their price" },
	{ "fluorescence", bh_find_fluorescence, "which element fluoresces, what it costs, the cures with their gain" },
	{ "ghosts",       bh_find_ghosts,       "Kβ and tungsten lines that stand above this plan's noise" },
	{ "footprint",    bh_find_footprint,    "beam longer or wider than the specimen, and the slit that cures it" },
	{ "thickness",    bh_find_thickness,    "specimen too thin or too transparent" },
	{ "grains",       bh_find_grains,       "too few crystallites in the right orientation" },
	{ "structure",    bh_find_structure,    "what a structure file contradicts itself in, or leaves open" },
	{ "saturation",   bh_find_saturation,   "strongest line beyond the detector's linear range" },
};
/* clang-format on */
const size_t bh_finding_row_count = sizeof bh_finding_rows / sizeof *bh_finding_rows;

bool bh_findings_add(bh_findings *findings, const bh_finding *finding)
{
	bh_plan *plan = findings->plan;

	if (!finding->where || !finding->text || !finding->remedy)
		return bh_fail_memory(findings->err);
	if (plan->finding_count == findings->capacity) {
		size_t more = findings->capacity ? 2 * findings->capacity : 16;
		bh_finding *grown = bh_grow(plan->arena, plan->findings, bh_finding,
					    findings->capacity, more);

		if (!grown)
			return bh_fail_memory(findings->err);
		plan->findings = grown;
		findings->capacity = more;
	}
	plan->findings[plan->finding_count++] = *finding;
	return true;
}

/* Length of a number with an exponent that a text starts with, 0: none; *digits it has. */
static size_t exponent_number(const char *text, int *digits)
{
	size_t i = strspn(text, "0123456789."), sign;

	*digits = 0;
	for (size_t k = 0; k < i; k++)
		*digits += text[k] != '.';
	if (i == 0 || text[i] != 'e' || (text[i + 1] != '+' && text[i + 1] != '-'))
		return 0;
	sign = i + 2;
	i = strspn(text + sign, "0123456789");
	return i ? sign + i : 0;
}

/* A copy with each such number written out. */
static const char *written_out(bh_arena *arena, const char *text)
{
	size_t length = strlen(text) + 1, n = 0;
	char *copy = bh_new(arena, char, length * 4);

	while (copy && *text) {
		char room[BH_FMT_ROOM];
		int digits;
		size_t skip = exponent_number(text, &digits);

		if (skip) {
			bh_fmt_digits(room, strtod(text, NULL), digits);
			n += (size_t)snprintf(copy + n, length * 4 - n, "%s", room);
		} else {
			skip = strspn(text, "0123456789.");
			skip = skip ? skip : 1;
			memcpy(copy + n, text, skip);
			n += skip;
		}
		text += skip;
	}
	return copy;
}

const char *bh_say(bh_findings *findings, const char *format, ...)
{
	bh_arena *arena = findings->plan->arena;
	va_list args;
	char *text;

	va_start(args, format);
	text = bh_arena_vformat(arena, format, args);
	va_end(args);
	return text ? written_out(arena, text) : NULL;
}

static void severe_first(bh_plan *plan)
{
	for (size_t i = 1; i < plan->finding_count; i++)
		for (size_t k = i;
		     k > 0 && plan->findings[k].severity > plan->findings[k - 1].severity;
		     k--) {
			bh_finding swap = plan->findings[k];

			plan->findings[k] = plan->findings[k - 1];
			plan->findings[k - 1] = swap;
		}
}

bool bh_findings_all(bh_plan *plan, const bh_scene *scene, bh_err *err)
{
	bh_findings findings = { plan, scene, err, 0 };

	for (size_t i = 0; i < bh_finding_row_count; i++) {
		size_t first = plan->finding_count;

		if (!bh_finding_rows[i].look(&findings))
			return false;
		for (size_t k = first; k < plan->finding_count; k++)
			plan->findings[k].kind = bh_finding_rows[i].kind;
	}
	severe_first(plan);
	return true;
}

const char *bh_findings_target(bh_findings *findings, const bh_target_result *target)
{
	const bh_phase *phase = &findings->plan->phases[target->phase];

	return bh_say(findings, "%s %s", phase->name,
		      phase->targets[target->target].text);
}

const char *bh_findings_plane(bh_findings *findings, size_t reflection)
{
	const bh_reflection *r = &findings->plan->signal.reflections[reflection];
	const bh_phase *phase = &findings->plan->phases[r->phase];

	if (phase->kind == BH_PHASE_LIST)
		return bh_say(findings, "%s %.4g Å", phase->name, r->d_A);
	return bh_say(findings, "%s %d %d %d", phase->name, r->h[0], r->h[1], r->h[2]);
}

bool bh_findings_wanted(const bh_plan *plan, const bh_target_result *target)
{
	for (size_t i = 0; i < plan->request->aim_count; i++) {
		const bh_aim *aim = &plan->request->aims[i];

		if (aim->kind == BH_AIM_LINE && aim->phase == target->phase &&
		    aim->target == target->target)
			return true;
	}
	return false;
}

double bh_findings_cost(const bh_signal *signal, const bh_scene *scene,
			const bh_target_result *target)
{
	const bh_phase *phase = &scene->phases[target->phase];
	size_t reflection = bh_view_find(signal, phase, target->phase,
					 &phase->targets[target->target]);
	bh_view_of_line line;

	if (reflection == SIZE_MAX || !signal->reflections[reflection].in_range)
		return HUGE_VAL;
	bh_view_make(&line, signal, reflection);
	return bh_view_density(&line, 0.03 * 0.03, BH_FIT_AREA);
}

const bh_target_result *bh_findings_weakest(const bh_plan *plan)
{
	const bh_target_result *weakest = NULL;

	for (size_t i = 0; i < plan->target_count; i++) {
		const bh_target_result *t = &plan->targets[i];

		if (t->reflection == SIZE_MAX || !(t->top_cps > 0))
			continue;
		if (!weakest || t->top_cps * weakest->background_cps <
					weakest->top_cps * t->background_cps)
			weakest = t;
	}
	return weakest;
}
