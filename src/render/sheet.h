#ifndef RENDER_SHEET_H
#define RENDER_SHEET_H

#include <stdbool.h>
#include <stddef.h>

#include "base/arena.h"
#include "base/err.h"
#include "base/text.h"
#include "model/plan.h"

/* The one content model of paper and terminal: sections of sentences and tables, already
 * formatted by base/fmt; renderers set them, nothing more. */
typedef enum { BH_LEFT, BH_RIGHT } bh_align;

typedef struct {
	const char *head;
	const char *unit; /* "" none */
	bh_align align;
	bool wide; /* left out where there is little room */
} bh_column;

typedef struct {
	bh_column *columns;
	size_t column_count;
	const char **cells; /* row by row */
	size_t row_count;
} bh_table;

typedef enum {
	BH_PART_ANSWER,
	BH_PART_PATTERN,
	BH_PART_RANGES,
	BH_PART_TARGETS,
	BH_PART_AIMS,
	BH_PART_FINDINGS,
	BH_PART_REFLECTIONS,
	BH_PART_STEPS,
	BH_PART_NOTES,
	BH_PART_CAUTIONS,
	BH_PART_SIGN_OFF,
	BH_PART_WHY,
	BH_PARTS
} bh_part;

typedef struct {
	const char *lead; /* bold start, e.g. severity or label; "" none */
	const char *text;
	const char *then; /* the remedy; "" none                         */
	int weight;	  /* 0 plain, 1 caution, 2 severe                */
} bh_item;

typedef struct {
	bh_part part;
	const char *title;
	bh_item *items;
	size_t item_count;
	bh_table table; /* row_count 0: none */
} bh_section;

typedef struct {
	const char *title;
	const char *subtitle;
	const char *setting; /* "Cu  40 kV  40 mA", to read at arm's length */
	const char *time;    /* "3 h 35 min"                               */
	bh_section *sections;
	size_t section_count;
} bh_sheet;

bool bh_sheet_make(bh_sheet *sheet, bh_arena *arena, const bh_plan *plan, bh_err *err);

/* The reflections alone, for the command of that name. */
bool bh_sheet_reflections(bh_sheet *sheet, bh_arena *arena, const bh_plan *plan,
			  bh_err *err);

#endif
