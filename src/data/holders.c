#include "data/holders.h"

#include <string.h>

/* Cells: NBS Circular 539, vol. 1 (1953) Al, vol. 4 (1955) Fe, from memory; B: common
 * practice for metals at room temperature. Entered 2026-12. */
/* clang-format off */
const bh_holder bh_holders[] = {
	{ "aluminium",       "Al", "F m -3 m", 4.0495, 0.8,
	  "aluminium plate: its lines show where the beam spills", "NBS Circular 539 v. 1" },
	{ "flat",            "",   "",         0,      0,
	  "plastic well: no lines, a broad hump at low angle",      "common practice" },
	{ "glass",           "",   "",         0,      0,
	  "glass slide: no lines, a hump near 22° for copper",      "common practice" },
	{ "steel",           "Fe", "I m -3 m", 2.8665, 0.35,
	  "ferritic steel: its lines show, and it fluoresces",      "NBS Circular 539 v. 4" },
	{ "zero-background", "",   "",         0,      0,
	  "single crystal cut off any plane: no lines, no hump",    "common practice" },
};
/* clang-format on */
const size_t bh_holder_count = sizeof bh_holders / sizeof *bh_holders;

const bh_holder *bh_holder_find(const char *name)
{
	for (size_t i = 0; i < bh_holder_count; i++)
		if (strcmp(bh_holders[i].name, name) == 0)
			return &bh_holders[i];
	return NULL;
}
