#include "data/hazards.h"

/* General knowledge of laboratory safety, worded here; local rules and the safety data sheet
 * of the material decide. Entered 2026-12. */
/* clang-format off */
const bh_hazard bh_hazards[] = {
	{ 4,  "Beryllium: dust causes lasting lung disease; closed handling, no dry grinding.", "common practice" },
	{ 24, "Chromium: chromates (Cr VI) cause cancer; find out which state it is in.",     "common practice" },
	{ 25, "Manganese: do not breathe the dust.",                                          "common practice" },
	{ 27, "Cobalt: dust harms the lungs and sensitises; hood and gloves.",                "common practice" },
	{ 28, "Nickel: dust of its compounds can cause cancer and sensitises; hood and gloves.", "common practice" },
	{ 33, "Arsenic: poisonous and causes cancer; hood, gloves, separate waste.",          "common practice" },
	{ 48, "Cadmium: poisonous and causes cancer; hood, gloves, separate waste.",          "common practice" },
	{ 51, "Antimony: poisonous dust; hood and gloves.",                                   "common practice" },
	{ 80, "Mercury: poisonous, gives off vapour; no grinding, no vacuum path.",           "common practice" },
	{ 81, "Thallium: highly poisonous, also through the skin; gloves, separate waste.",   "common practice" },
	{ 82, "Lead: poisonous dust; hood, wash hands, separate waste.",                      "common practice" },
	{ 90, "Thorium: radioactive; needs the radiation protection officer's agreement.",    "common practice" },
	{ 92, "Uranium: radioactive and poisonous; needs the radiation protection officer's agreement.", "common practice" },
};

const char *const bh_silica_text =
	"Crystalline silica: fine dust causes silicosis and lung cancer; hood or mask, wet cleaning.";

const bh_caution_row bh_caution_rows[] = {
	{ "who may work",
	  "Only trained and authorised persons, under the local rules. This plan is a calculation, not a permission: "
	  "local codes, the radiation protection officer and the maker's manual decide.", "common practice" },
	{ "before the beam",
	  "Check the warning lamps, the shutter and the interlocks. Never bypass an interlock, not even to align. "
	  "Wear the dosimeter if one is issued.", "common practice; ITC C (2004), 10.2" },
	{ "beam on",
	  "Keep fingers and face out of the beam path: the primary beam burns within a second. Change the specimen with the "
	  "shutter closed only.", "ITC C (2004), 10.2.2" },
	{ "machine",
	  "High voltage and cooling water: on a leak, a trip or an odd sound stop and report. Do not touch or clean beryllium "
	  "windows; they are brittle and poisonous.", "common practice" },
	{ "after work on the beam path",
	  "Have the machine surveyed for stray radiation before it is used again.", "common practice" },
	{ "specimen",
	  "Fine powder: grind and fill under a hood; keep it off the machine. Tell the lab what the specimen is.", "common practice" },
	{ "if an exposure is suspected",
	  "Beam off, leave the settings as they are, report at once, seek medical advice.", "common practice" },
};
/* clang-format on */
const size_t bh_hazard_count = sizeof bh_hazards / sizeof *bh_hazards;
const size_t bh_caution_row_count = sizeof bh_caution_rows / sizeof *bh_caution_rows;

const bh_hazard *bh_hazard_of(int z)
{
	for (size_t i = 0; i < bh_hazard_count; i++)
		if (bh_hazards[i].z == z)
			return &bh_hazards[i];
	return NULL;
}
