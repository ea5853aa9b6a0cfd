#include "plan/words.h"

#include <math.h>

#include "physics/filter.h"
#include "physics/structure.h"

enum { MOST_NOTES = 16 };

static bool add(bh_plan *plan, const char *note, bh_err *err)
{
	if (!note)
		return bh_fail_memory(err);
	if (plan->note_count < MOST_NOTES)
		plan->notes[plan->note_count++] = note;
	return true;
}

static bool about_throughput(bh_plan *plan, bh_err *err)
{
	const bh_tube *tube = plan->signal.setting.tube;

	if (!(tube->throughput_factor > 1))
		return true;
	return add(
		plan,
		bh_arena_format(
			plan->arena,
			"Throughput of the %s tube (%.3g) has not been measured on this "
			"machine: every rate and time is good to a factor %.2g either "
			"way. "
			"Begin with the scout scan.",
			tube->anode->symbol, tube->throughput, tube->throughput_factor),
		err);
}

static bool about_anodes(bh_plan *plan, bh_err *err)
{
	const char *others = "";

	for (size_t i = 0; i < plan->request->anode_count && others; i++)
		if (plan->request->anodes[i] != plan->signal.setting.tube->anode)
			others = bh_arena_format(plan->arena, "%s%s%s", others,
						 *others ? ", " : "",
						 plan->request->anodes[i]->symbol);
	if (!others)
		return bh_fail_memory(err);
	return !*others ||
	       add(plan,
		   bh_arena_format(plan->arena,
				   "Planned for %s, the first anode asked for. Also on "
				   "offer: %s; plan "
				   "again with --anode to weigh them.",
				   plan->signal.setting.tube->anode->symbol, others),
		   err);
}

static bool about_displacement_b(bh_plan *plan, bh_err *err)
{
	const char *names = "";

	for (size_t i = 0; i < plan->request->phase_count && names; i++) {
		const bh_phase *phase = &plan->request->phases[i];
		bool missing = false;

		for (size_t k = 0; k < phase->site_count; k++)
			missing = missing || (!phase->sites[k].b_known &&
					      !phase->sites[k].tensor_known);
		if (missing)
			names = bh_arena_format(plan->arena, "%s%s%s", names,
						*names ? ", " : "", phase->name);
	}
	if (!names)
		return bh_fail_memory(err);
	return !*names ||
	       add(plan,
		   bh_arena_format(plan->arena,
				   "B = %.1f Å² where no displacement is given (%s): "
				   "strong at high "
				   "angle, there intensities may be off by 20 %%.",
				   BH_B_ISO_DEFAULT_A2, names),
		   err);
}

static bool about_phases(bh_plan *plan, bh_err *err)
{
	for (size_t i = 0; i < plan->request->phase_count; i++) {
		const bh_phase *phase = &plan->request->phases[i];
		const char *note = NULL;

		if (phase->kind == BH_PHASE_LIST && phase->corundum_ratio > 0)
			note = bh_arena_format(
				plan->arena,
				"Rates of %s come from its corundum ratio %.3g: good to "
				"±20 %%.",
				phase->name, phase->corundum_ratio);
		else if (phase->kind != BH_PHASE_ATOMS)
			note = bh_arena_format(
				plan->arena,
				"%s has no atoms: positions only, its lines take no part "
				"in overlap prices or count times.",
				phase->name);
		if (note && !add(plan, note, err))
			return false;
		if (*phase->source &&
		    !add(plan,
			 bh_arena_format(plan->arena, "Structure of %s: %s.", phase->name,
					 phase->source),
			 err))
			return false;
	}
	return true;
}

static bool about_positions(bh_plan *plan, bh_err *err)
{
	bool asked = false;

	for (size_t i = 0; i < plan->request->aim_count; i++)
		asked = asked || plan->request->aims[i].position_error_deg > 0;
	return !asked || add(plan,
			     bh_arena_format(plan->arena,
					     "The errors of positions are those of "
					     "counting. A specimen %.2g mm "
					     "off the axis shifts a line at 30° by "
					     "%.3f°: refine that shift, or "
					     "mix in a standard.",
					     plan->request->specimen.displacement_mm,
					     plan->displacement_shift_deg),
			     err);
}

static bool about_model(bh_plan *plan, bh_err *err)
{
	const bh_request *request = plan->request;

	if (!plan->signal.rates_known &&
	    !add(plan,
		 "The specimen's composition or a density is not known: no rates, no "
		 "count times, "
		 "no fluorescence. Give formula and density to the phases without atoms.",
		 err))
		return false;
	if (request->amorphous_frac > 0 && request->amorphous.count == 0 &&
	    !add(plan,
		 "The amorphous part counts with the composition of the crystalline "
		 "mixture.",
		 err))
		return false;
	return add(plan,
		   "Form factors are those of neutral atoms, of ions where a structure file "
		   "gives charges; f′ and f″ are good to 0.05 electrons, "
		   "0.3 near an edge. Grains are taken as randomly oriented unless march "
		   "is given.",
		   err);
}

bool bh_words_notes(bh_plan *plan, bh_err *err)
{
	plan->notes = bh_new(plan->arena, const char *, MOST_NOTES);
	if (!plan->notes)
		return bh_fail_memory(err);
	return about_throughput(plan, err) && about_anodes(plan, err) &&
	       about_displacement_b(plan, err) && about_phases(plan, err) &&
	       about_positions(plan, err) && about_model(plan, err);
}
