#include "read/crystal.h"

#include <string.h>

#include "physics/crowding.h"
#include "physics/symmetry.h"

/* An atom that fills its place stands once there: images up to 0.1 Å away are itself. True when
 * it was beside a special position by more than its digits say. */
static bool settle(bh_site *site, const bh_phase *phase)
{
	double exact[3];
	double next_A = bh_symmetry_image_A(&phase->group, &phase->cell, site->at,
					    site->reach_A);
	bool beside = next_A < 0.1 && site->occupancy > 0.51;

	if (beside)
		site->reach_A = 0.15;
	bh_symmetry_settle(exact, &phase->group, &phase->cell, site->at, site->reach_A);
	memcpy(site->at, exact, sizeof exact);
	return beside;
}

/* The file is taken at its word: what it lists twice scatters twice, and is said. */
static bool remark_repeated(bh_crystal *c)
{
	bh_phase *phase = c->phase;
	bool *repeats = bh_new(c->arena, bool, phase->site_count);
	bh_err err = { BH_OK, 0, 0, "", "", "" };
	bh_text labels = { 0 };

	if (!repeats || !bh_crowding_repeats(repeats, phase, &err)) {
		c->problems->lost = true;
		return false;
	}
	for (size_t i = 0; i < phase->site_count; i++)
		if (repeats[i])
			bh_crystal_list(&labels, phase->sites[i].label);
	if (labels.length)
		bh_crystal_remark(c, BH_CAUTION, bh_crystal_place(c, NULL),
				  "these sites repeat others by symmetry, so one place is "
				  "filled more than once: %s\ntake them out of the file",
				  labels.bytes);
	bh_text_free(&labels);
	return true;
}

bool bh_crystal_settle(bh_crystal *c)
{
	bh_phase *phase = c->phase;
	bh_text labels = { 0 };

	for (size_t i = 0; i < phase->site_count; i++)
		if (settle(&phase->sites[i], phase))
			bh_crystal_list(&labels, phase->sites[i].label);
	if (labels.length)
		bh_crystal_remark(c, BH_NOTE, bh_crystal_place(c, NULL),
				  "these sites stand beside a special position and are put "
				  "on it: %s",
				  labels.bytes);
	bh_text_free(&labels);
	return phase->site_count == 0 || remark_repeated(c);
}
