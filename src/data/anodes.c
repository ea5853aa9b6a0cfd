#include "data/anodes.h"

#include <string.h>

/* Wavelengths: R. D. Deslattes et al., Rev. Mod. Phys. 75 (2003) 35 = NIST SRD 128 =
 * International Tables for Crystallography C (2004), Table 4.2.2.4. Widths of the summed
 * Kα1 profile: G. Hölzer et al., Phys. Rev. A 56 (1997) 4554 for Cr, Fe, Co, Cu; level
 * widths of J. L. Campbell & T. Papp (2001) for Mo, Ag. Vintage 2003; entered 2026-12. */
#define LINES "Deslattes et al. 2003, Rev. Mod. Phys. 75, 35"

/* clang-format off */
const bh_anode bh_anodes[] = {
	/* symbol  Z   ka1_A      ka2_A      kb_A       ka1_fwhm_eV  source */
	{ "Cr",   24, 2.2897260, 2.2936510, 2.0848810, 1.93,        LINES },
	{ "Fe",   26, 1.9360410, 1.9399730, 1.7566040, 2.62,        LINES },
	{ "Co",   27, 1.7889960, 1.7928350, 1.6208260, 2.39,        LINES },
	{ "Cu",   29, 1.5405929, 1.5444274, 1.3922340, 2.41,        LINES },
	{ "Mo",   42, 0.7093171, 0.7136070, 0.6323030, 6.21,        LINES },
	{ "Ag",   47, 0.5594218, 0.5638131, 0.4970817, 8.91,        LINES },
};
/* clang-format on */
const size_t bh_anode_count = sizeof bh_anodes / sizeof *bh_anodes;

const double bh_w_la1_A = 1.47631; /* same source */

const bh_anode *bh_anode_find(const char *symbol)
{
	for (size_t i = 0; i < bh_anode_count; i++)
		if (strcmp(bh_anodes[i].symbol, symbol) == 0)
			return &bh_anodes[i];
	return NULL;
}
