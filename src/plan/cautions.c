#include "plan/words.h"

#include <stdbool.h>

#include "data/hazards.h"

static bool is_silica(const bh_phase *phase)
{
	bool silicon = false, oxygen = false;

	for (size_t i = 0; i < phase->composition.count; i++) {
		int z = phase->composition.elements[i].z;

		silicon = silicon || z == 14;
		oxygen = oxygen || z == 8;
	}
	return phase->composition.count == 2 && silicon && oxygen;
}

static void add(bh_plan *plan, const char *topic, const char *text)
{
	plan->cautions[plan->caution_count++] = (bh_caution){ topic, text };
}

bool bh_words_cautions(bh_plan *plan, bh_err *err)
{
	bool named[128] = { false }, silica = false;

	plan->cautions = bh_new(plan->arena, bh_caution,
				bh_caution_row_count + bh_hazard_count + 1);
	if (!plan->cautions)
		return bh_fail_memory(err);
	for (size_t i = 0; i < bh_caution_row_count; i++)
		add(plan, bh_caution_rows[i].topic, bh_caution_rows[i].text);
	for (size_t i = 0; i < plan->request->phase_count; i++) {
		const bh_phase *phase = &plan->request->phases[i];

		silica = silica || is_silica(phase);
		for (size_t k = 0; k < phase->composition.count; k++) {
			int z = phase->composition.elements[k].z;
			const bh_hazard *hazard = bh_hazard_of(z);

			if (hazard && !named[z])
				add(plan, "this specimen", hazard->text);
			named[z] = true;
		}
	}
	for (size_t k = 0; k < plan->request->amorphous.count; k++) {
		const bh_hazard *hazard =
			bh_hazard_of(plan->request->amorphous.elements[k].z);

		if (hazard && !named[hazard->z])
			add(plan, "this specimen", hazard->text);
	}
	if (silica)
		add(plan, "this specimen", bh_silica_text);
	return true;
}
