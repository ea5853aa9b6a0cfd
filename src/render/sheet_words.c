#include <string.h>

#include "data/elements.h"
#include "render/sheet_build.h"

static void say(bh_builder *b, bh_section *s, const char *lead, const char *text)
{
	bh_put_item(b, s, (bh_item){ .lead = lead, .text = text, .then = "" });
}

/* What a phase is made of, and what its structure file makes one mind. */
static void structure(bh_builder *b, bh_section *s, const bh_phase *phase)
{
	static const char *const words[] = { "note", "caution", "severe" };
	const bh_cell *cell = &phase->cell;
	size_t atoms = 0;

	for (size_t i = 0; i < phase->site_count; i++)
		atoms += (size_t)phase->sites[i].multiplicity;
	say(b, s, phase->name,
	    phase->kind == BH_PHASE_LIST
		    ? "a list of d"
		    : bh_put(b, "%s, %s × %s × %s Å, %s %s %s°, %s Å³%s%s%s",
			     phase->group.symbol, bh_put_short(b, cell->a_A, 6),
			     bh_put_short(b, cell->b_A, 6), bh_put_short(b, cell->c_A, 6),
			     bh_put_short(b, cell->alpha_deg, 6),
			     bh_put_short(b, cell->beta_deg, 6),
			     bh_put_short(b, cell->gamma_deg, 6),
			     bh_put_digits(b, phase->volume_A3, 5),
			     *phase->formula ? bh_put(b, ", %s", phase->formula) : "",
			     atoms ? bh_put(b, ", %zu atoms", atoms) : "",
			     phase->density_g_cm3 > 0
				     ? bh_put(b, ", %s g/cm³",
					      bh_put_digits(b, phase->density_g_cm3, 4))
				     : ""));
	if (*phase->source)
		say(b, s, "from", phase->source);
	for (size_t i = 0; i < phase->remark_count; i++)
		bh_put_item(b, s,
			    (bh_item){ .lead = words[phase->remarks[i].severity],
				       .text = phase->remarks[i].text,
				       .then = phase->remarks[i].remedy,
				       .weight = (int)phase->remarks[i].severity });
}

void bh_sheet_structures(bh_builder *b)
{
	bh_section *s = bh_put_section(b, BH_PART_NOTES, "Structures");

	for (size_t i = 0; i < b->plan->phase_count; i++)
		structure(b, s, &b->plan->phases[i]);
}

void bh_sheet_findings(bh_builder *b)
{
	static const char *const words[] = { "note", "caution", "severe" };
	const bh_plan *plan = b->plan;
	bh_section *s = bh_put_section(b, BH_PART_FINDINGS, "What can go wrong");

	for (size_t i = 0; i < plan->finding_count; i++) {
		const bh_finding *f = &plan->findings[i];

		bh_put_item(b, s,
			    (bh_item){ .lead = bh_put(b, "%s: %s%s%s", words[f->severity],
						      f->kind, *f->where ? ", " : "",
						      f->where),
				       .text = f->text,
				       .then = f->remedy,
				       .weight = (int)f->severity });
	}
	if (plan->finding_count == 0)
		say(b, s, "", "Nothing was found.");
}

static void step_ranges(bh_builder *b, bh_section *s)
{
	const bh_plan *plan = b->plan;

	if (plan->scout)
		say(b, s, "scout scan", plan->scout);
	if (plan->range_count == 1)
		say(b, s, "range", "Type in the range of the table and start.");
	else if (plan->range_count)
		say(b, s, "ranges",
		    bh_put(b,
			   "Type in the %zu ranges of the table, in that order, and "
			   "start.",
			   plan->range_count));
}

void bh_sheet_steps(bh_builder *b)
{
	const bh_plan *plan = b->plan;
	const bh_instrument *instrument = plan->instrument;
	const bh_setting *set = &plan->signal.setting;
	const bh_specimen *specimen = &plan->request->specimen;
	bh_section *s = bh_put_section(b, BH_PART_STEPS, "Set-up, in order");

	say(b, s, "generator",
	    bh_put(b,
		   "%s tube to %s kV and %s mA, as the lab's procedure says; let it "
		   "settle for %s.",
		   set->tube->anode->symbol, bh_put_short(b, set->kV, 3),
		   bh_put_short(b, set->mA, 3),
		   bh_put_duration(b, instrument->warm_up_s)));
	say(b, s, "optics",
	    bh_put(b, "%s; %s; axial slits %s and %s.", bh_put_slit(b), bh_put_kbeta(b),
		   instrument->soller_tube_deg > 0
			   ? bh_put(b, "%s°",
				    bh_put_short(b, instrument->soller_tube_deg, 3))
			   : "none",
		   instrument->soller_detector_deg > 0
			   ? bh_put(b, "%s°",
				    bh_put_short(b, instrument->soller_detector_deg, 3))
			   : "none"));
	say(b, s, "specimen",
	    bh_put(b,
		   "%s holder, %s × %s mm, %s mm deep; surface flat and level with the "
		   "rim (%s mm "
		   "low shifts a line at 30° by %s°)%s.",
		   specimen->holder, bh_put_short(b, specimen->length_mm, 3),
		   bh_put_short(b, specimen->width_mm, 3),
		   bh_put_short(b, specimen->thickness_mm, 3),
		   bh_put_short(b, specimen->displacement_mm, 2),
		   bh_put_fixed(b, plan->displacement_shift_deg, 3),
		   specimen->spin ? "; spinner on" : ""));
	say(b, s, "reference",
	    bh_put(b,
		   "Scan a line of the lab's reference plate (%s). If its position or "
		   "rate is off by "
		   "more than the lab allows, stop and ask.",
		   bh_put_duration(b, instrument->reference_check_s)));
	step_ranges(b, s);
	say(b, s, "end",
	    "Save the data with this plan's title. Set the generator to the lab's idle "
	    "setting, close "
	    "the shutter, take the specimen out, clean up, sign the log.");
}

void bh_sheet_notes(bh_builder *b)
{
	bh_section *s = bh_put_section(b, BH_PART_NOTES, "What was assumed");

	for (size_t i = 0; i < b->plan->note_count; i++)
		say(b, s, "", b->plan->notes[i]);
}

void bh_sheet_cautions(bh_builder *b)
{
	bh_section *s = bh_put_section(b, BH_PART_CAUTIONS, "Safety");

	for (size_t i = 0; i < b->plan->caution_count; i++)
		say(b, s, b->plan->cautions[i].topic, b->plan->cautions[i].text);
}

void bh_sheet_sign_off(bh_builder *b)
{
	bh_section *s = bh_put_section(b, BH_PART_SIGN_OFF, "Sign-off");

	say(b, s, "operator", "");
	say(b, s, "date and time", "");
	say(b, s, "released by", "");
}

void bh_sheet_why(bh_builder *b)
{
	bh_section *s = bh_put_section(b, BH_PART_WHY, "Where the numbers come from");

	for (size_t i = 0; i < b->plan->why_count; i++) {
		const bh_why *w = &b->plan->whys[i];

		bh_put_item(b, s,
			    (bh_item){ .lead = w->what,
				       .text = bh_put(b, "%s. %s, with %s.", w->value,
						      w->equation, w->inputs),
				       .then = w->source });
	}
}
