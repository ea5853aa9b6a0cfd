#ifndef FINDINGS_FINDINGS_H
#define FINDINGS_FINDINGS_H

#include <stdbool.h>
#include <stddef.h>

#include "base/err.h"
#include "design/view.h"
#include "model/plan.h"
#include "physics/observe.h"

/* What a finding may look at, and where it puts what it finds. */
typedef struct {
	bh_plan *plan;
	const bh_scene *scene;
	bh_err *err;
	size_t capacity;
} bh_findings;

/* One kind of finding. Adding one: a file, a row in registry.c, a test. */
typedef struct {
	const char *kind;
	bool (*look)(bh_findings *findings); /* false: memory is out */
	const char *help;
} bh_finding_row;

extern const bh_finding_row bh_finding_rows[];
extern const size_t bh_finding_row_count;

/* All findings of a designed plan, severe first. */
bool bh_findings_all(bh_plan *plan, const bh_scene *scene, bh_err *err);

/* Append a finding; false when memory is out or one of its texts is NULL. */
bool bh_findings_add(bh_findings *findings, const bh_finding *finding);

/* Text in the plan's arena, numbers without exponents ("2.3e+06" becomes "2 300 000"); NULL:
 * memory is out (bh_findings_add reports it). */
const char *bh_say(bh_findings *findings, const char *format, ...)
	__attribute__((format(printf, 2, 3)));

/* "goethite 1 0 1" of a target, "quartz 1 0 1" of a reflection ("3.29 Å" in a list). */
const char *bh_findings_target(bh_findings *findings, const bh_target_result *target);
const char *bh_findings_plane(bh_findings *findings, size_t reflection);

/* Whether an aim asks for a target. */
bool bh_findings_wanted(const bh_plan *plan, const bh_target_result *target);

/* Exposure that a target needs in a signal for an area error of 3 %, relative unit: to
 * compare settings. HUGE_VAL when it is out of reach there. */
double bh_findings_cost(const bh_signal *signal, const bh_scene *scene,
			const bh_target_result *target);

/* The target at which a background or fluorescence hurts most: lowest top/background with a
 * known rate; NULL when there is none. */
const bh_target_result *bh_findings_weakest(const bh_plan *plan);

/* the looks, one file each */
bool bh_find_booking(bh_findings *findings);
bool bh_find_range(bh_findings *findings);
bool bh_find_overlap(bh_findings *findings);
bool bh_find_fluorescence(bh_findings *findings);
bool bh_find_ghosts(bh_findings *findings);
bool bh_find_footprint(bh_findings *findings);
bool bh_find_thickness(bh_findings *findings);
bool bh_find_grains(bh_findings *findings);
bool bh_find_saturation(bh_findings *findings);
bool bh_find_structure(bh_findings *findings);

#endif
