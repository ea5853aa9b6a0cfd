#include "render/sheet.h"

#include <stdarg.h>
#include <stdio.h>
#include <string.h>

#include "base/fmt.h"
#include "render/sheet_build.h"

const char *bh_put(bh_builder *b, const char *format, ...)
{
	va_list args;
	char *text;

	va_start(args, format);
	text = bh_arena_vformat(b->arena, format, args);
	va_end(args);
	b->lost = b->lost || !text;
	return text ? text : "";
}

const char *bh_put_digits(bh_builder *b, double value, int digits)
{
	char room[BH_FMT_ROOM];

	return bh_put(b, "%s", bh_fmt_digits(room, value, digits));
}

const char *bh_put_short(bh_builder *b, double value, int digits)
{
	char room[BH_FMT_ROOM];

	return bh_put(b, "%s", bh_fmt_short(room, value, digits));
}

const char *bh_put_fixed(bh_builder *b, double value, int decimals)
{
	char room[BH_FMT_ROOM];

	return bh_put(b, "%s", bh_fmt_fixed(room, value, decimals));
}

const char *bh_put_duration(bh_builder *b, double seconds)
{
	char room[BH_FMT_ROOM];

	return bh_put(b, "%s", bh_fmt_duration(room, seconds));
}

bh_section *bh_put_section(bh_builder *b, bh_part part, const char *title)
{
	bh_sheet *sheet = b->sheet;
	bh_section *grown = bh_grow(b->arena, sheet->sections, bh_section,
				    sheet->section_count, sheet->section_count + 1);

	if (!grown) {
		b->lost = true;
		return NULL;
	}
	sheet->sections = grown;
	grown[sheet->section_count] = (bh_section){ .part = part, .title = title };
	return &grown[sheet->section_count++];
}

void bh_put_item(bh_builder *b, bh_section *section, bh_item item)
{
	bh_item *grown;

	if (!section)
		return;
	grown = bh_grow(b->arena, section->items, bh_item, section->item_count,
			section->item_count + 1);
	if (!grown) {
		b->lost = true;
		return;
	}
	section->items = grown;
	grown[section->item_count++] = item;
}

void bh_put_columns(bh_builder *b, bh_section *section, const bh_column *columns,
		    size_t count)
{
	if (!section)
		return;
	section->table.columns = bh_new(b->arena, bh_column, count);
	if (!section->table.columns) {
		b->lost = true;
		return;
	}
	memcpy(section->table.columns, columns, count * sizeof *columns);
	section->table.column_count = count;
}

void bh_put_row(bh_builder *b, bh_section *section, const char *const *cells)
{
	bh_table *table;
	const char **grown;

	if (!section)
		return;
	table = &section->table;
	if ((table->row_count & (table->row_count - 1)) == 0) { /* 0 or a power of two: full */
		grown = bh_grow(b->arena, table->cells, const char *,
				table->row_count * table->column_count,
				(2 * table->row_count + 1) * table->column_count);
		if (!grown) {
			b->lost = true;
			return;
		}
		table->cells = grown;
	}
	memcpy(table->cells + table->row_count * table->column_count, cells,
	       table->column_count * sizeof *cells);
	table->row_count++;
}

const char *bh_put_plane(bh_builder *b, const bh_reflection *reflection)
{
	const bh_phase *phase = &b->plan->phases[reflection->phase];

	if (phase->kind == BH_PHASE_LIST)
		return bh_put(b, "%s %.4g Å", phase->name, reflection->d_A);
	return bh_put(b, "%s %d %d %d", phase->name, reflection->h[0], reflection->h[1],
		      reflection->h[2]);
}

static const char *title_of(const bh_plan *plan)
{
	return *plan->request->title ? plan->request->title : plan->request->file;
}

bool bh_sheet_make(bh_sheet *sheet, bh_arena *arena, const bh_plan *plan, bh_err *err)
{
	bh_builder b = { arena, plan, sheet, false };

	*sheet = (bh_sheet){ .title = title_of(plan) };
	sheet->subtitle = bh_put(&b, "Scan plan for %s, %s tube", plan->instrument->name,
				 plan->signal.setting.tube->anode->symbol);
	sheet->setting = bh_put(
		&b, "%s  %s kV  %s mA%s", plan->signal.setting.tube->anode->symbol,
		bh_put_short(&b, plan->signal.setting.kV, 3),
		bh_put_short(&b, plan->signal.setting.mA, 3),
		plan->signal.setting.divergence_deg > 0
			? bh_put(&b, "  slit %s°",
				 bh_put_short(&b, plan->signal.setting.divergence_deg, 3))
			: "");
	sheet->time = bh_put_duration(&b, plan->times.total_s);
	bh_sheet_answer(&b);
	bh_put_section(&b, BH_PART_PATTERN, "Pattern");
	bh_sheet_ranges(&b);
	bh_sheet_aims(&b);
	bh_sheet_targets(&b);
	bh_sheet_findings(&b);
	bh_sheet_reflection_table(&b, 24);
	bh_sheet_steps(&b);
	bh_sheet_notes(&b);
	bh_sheet_cautions(&b);
	bh_sheet_sign_off(&b);
	bh_sheet_why(&b);
	return !b.lost || bh_fail_memory(err);
}

bool bh_sheet_reflections(bh_sheet *sheet, bh_arena *arena, const bh_plan *plan,
			  bh_err *err)
{
	bh_builder b = { arena, plan, sheet, false };

	*sheet = (bh_sheet){ .title = title_of(plan) };
	sheet->subtitle =
		bh_put(&b, "Reflections%s%s, %s Kα1 %.6f Å",
		       plan->instrument ? " on " : "",
		       plan->instrument ? plan->instrument->name : "",
		       plan->anode->symbol,
		       plan->signal.radiation.lines[0].wavelength_A);
	bh_sheet_structures(&b);
	bh_sheet_reflection_table(&b, plan->signal.in_range_count);
	return !b.lost || bh_fail_memory(err);
}
