#include "data/elements.h"

#include <string.h>

/* IUPAC symbols, H to U. */
static const char symbols[BH_Z_MAX][3] = {
	"H",  "He", "Li", "Be", "B",  "C",  "N",  "O",	"F",  "Ne", "Na", "Mg",
	"Al", "Si", "P",  "S",	"Cl", "Ar", "K",  "Ca", "Sc", "Ti", "V",  "Cr",
	"Mn", "Fe", "Co", "Ni", "Cu", "Zn", "Ga", "Ge", "As", "Se", "Br", "Kr",
	"Rb", "Sr", "Y",  "Zr", "Nb", "Mo", "Tc", "Ru", "Rh", "Pd", "Ag", "Cd",
	"In", "Sn", "Sb", "Te", "I",  "Xe", "Cs", "Ba", "La", "Ce", "Pr", "Nd",
	"Pm", "Sm", "Eu", "Gd", "Tb", "Dy", "Ho", "Er", "Tm", "Yb", "Lu", "Hf",
	"Ta", "W",  "Re", "Os", "Ir", "Pt", "Au", "Hg", "Tl", "Pb", "Bi", "Po",
	"At", "Rn", "Fr", "Ra", "Ac", "Th", "Pa", "U"
};

const char *bh_element_symbol(int z)
{
	return z >= 1 && z <= BH_Z_MAX ? symbols[z - 1] : "?";
}

int bh_element_z(const char *symbol)
{
	for (int z = 1; z <= BH_Z_MAX; z++)
		if (strcmp(symbols[z - 1], symbol) == 0)
			return z;
	return 0;
}
