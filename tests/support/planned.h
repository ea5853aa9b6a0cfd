#ifndef TESTS_SUPPORT_PLANNED_H
#define TESTS_SUPPORT_PLANNED_H

#include "model/plan.h"
#include "physics/observe.h"

/* Plan a request given as text, with the shipped instruments; fails the test with the
 * reader's message when it cannot be read. Everything lives in the arena. */
bh_plan *planned(bh_arena *arena, const char *text);

/* The same up to the request. */
bh_request *request_of(bh_arena *arena, const char *text);

/* What a plan's machine sees; for tests that change a setting. */
bh_scene scene_of_plan(const bh_plan *plan);

/* The first finding of a kind whose place holds a word; NULL when there is none. */
const bh_finding *finding_of(const bh_plan *plan, const char *kind, const char *where);

/* A number of a finding's evidence; fails the test when it is not there. */
double evidence_of(const bh_finding *finding, const char *name);

/* Crystals of the tests, as request sections. Cells and coordinates: see structures.h. */
#define SILICON                                                                          \
	"phase \"silicon\" { space_group = \"F d -3 m:1\" cell = {5.4311946} "           \
	"site \"Si\" { element = \"Si\" at = {0, 0, 0} b_iso = 0.5 } "
#define HALITE                                                                           \
	"phase \"halite\" { space_group = \"F m -3 m\" cell = {5.6402} "                 \
	"site \"Na\" { element = \"Na\" at = {0, 0, 0} b_iso = 1.6 } "                   \
	"site \"Cl\" { element = \"Cl\" at = {0.5, 0.5, 0.5} b_iso = 1.3 } "
#define HEMATITE                                                                         \
	"phase \"hematite\" { space_group = \"R -3 c\" cell = {5.038, 13.772} "          \
	"site \"Fe\" { element = \"Fe\" at = {0, 0, 0.3553} b_iso = 0.3 } "              \
	"site \"O\" { element = \"O\" at = {0.3059, 0, 0.25} b_iso = 0.4 } "
#define CORUNDUM                                                                         \
	"phase \"corundum\" { space_group = \"R -3 c\" cell = {4.7605, 12.9956} "        \
	"site \"Al\" { element = \"Al\" at = {0, 0, 0.35216} b_iso = 0.3 } "             \
	"site \"O\" { element = \"O\" at = {0.30668, 0, 0.25} b_iso = 0.4 } "

#endif
