#ifndef RENDER_SHEET_BUILD_H
#define RENDER_SHEET_BUILD_H

#include "render/sheet.h"

/* Tools of the files that build a sheet. A failed allocation sets lost and is reported once. */
typedef struct {
	bh_arena *arena;
	const bh_plan *plan;
	bh_sheet *sheet;
	bool lost;
} bh_builder;

/* Text in the sheet's arena; "" when memory is out (lost is set). */
const char *bh_put(bh_builder *b, const char *format, ...)
	__attribute__((format(printf, 2, 3)));
const char *bh_put_digits(bh_builder *b, double value, int digits);
const char *bh_put_short(bh_builder *b, double value, int digits);
const char *bh_put_fixed(bh_builder *b, double value, int decimals);
const char *bh_put_duration(bh_builder *b, double seconds);

/* A new section; NULL when memory is out. */
bh_section *bh_put_section(bh_builder *b, bh_part part, const char *title);
void bh_put_item(bh_builder *b, bh_section *section, bh_item item);

/* A table's columns, then its rows cell by cell. */
void bh_put_columns(bh_builder *b, bh_section *section, const bh_column *columns,
		    size_t count);
void bh_put_row(bh_builder *b, bh_section *section, const char *const *cells);

/* "quartz 1 0 1", "unknown 3.29 Å" */
const char *bh_put_plane(bh_builder *b, const bh_reflection *reflection);

/* The parts. */
void bh_sheet_answer(bh_builder *b);
void bh_sheet_ranges(bh_builder *b);
void bh_sheet_targets(bh_builder *b);
void bh_sheet_aims(bh_builder *b);
void bh_sheet_reflection_table(bh_builder *b, size_t most);
void bh_sheet_structures(bh_builder *b);
void bh_sheet_findings(bh_builder *b);
void bh_sheet_steps(bh_builder *b);
void bh_sheet_notes(bh_builder *b);
void bh_sheet_cautions(bh_builder *b);
void bh_sheet_why(bh_builder *b);
void bh_sheet_sign_off(bh_builder *b);

/* How Kβ is dealt with, and the slit, in words. */
const char *bh_put_kbeta(bh_builder *b);
const char *bh_put_slit(bh_builder *b);

#endif
