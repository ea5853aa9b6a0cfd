#include "physics/structure.h"

#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

#include "base/units.h"
#include "physics/cell.h"
#include "physics/formula.h"
#include "physics/symmetry.h"
#include "physics/xray.h"

/* Sites of one composition: how many atoms of each element are in the cell. */
static void count_atoms(double atoms[BH_Z_MAX + 1], const bh_phase *phase)
{
	memset(atoms, 0, sizeof *atoms * (BH_Z_MAX + 1));
	for (size_t i = 0; i < phase->site_count; i++)
		atoms[phase->sites[i].z] +=
			phase->sites[i].multiplicity * phase->sites[i].occupancy;
}

/* Within 1 % of a whole number other than 0. */
static bool is_whole(double n)
{
	return n > 0.5 && fabs(n - round(n)) < 0.01;
}

/* The largest number of formulas that leaves whole atoms of every element; 0: none does. */
static int whole_units(const double atoms[BH_Z_MAX + 1])
{
	double fewest = HUGE_VAL;

	for (int z = 1; z <= BH_Z_MAX; z++)
		if (atoms[z] > 0)
			fewest = fmin(fewest, atoms[z]);
	for (int units = fewest < 1e4 ? (int)round(fewest) : 0; units > 0; units--) {
		bool whole = true;

		for (int z = 1; z <= BH_Z_MAX && whole; z++)
			whole = atoms[z] <= 0 || is_whole(atoms[z] / units);
		if (whole)
			return units;
	}
	return 0;
}

/* With shared or partly filled sites: what the numbers of places have in common. */
static int common_places(const bh_phase *phase)
{
	int common = 0;

	for (size_t i = 0; i < phase->site_count; i++) {
		int a = common, b = phase->sites[i].multiplicity;

		while (b) {
			int rest = a % b;

			a = b;
			b = rest;
		}
		common = a;
	}
	return common;
}

static void add_symbol(char *formula, size_t room, int z, double n)
{
	size_t used = strlen(formula);

	if (fabs(n - 1) < 0.01)
		snprintf(formula + used, room - used, "%s", bh_xray_symbol(z));
	else if (is_whole(n))
		snprintf(formula + used, room - used, "%s%.0f", bh_xray_symbol(z),
			 round(n));
	else
		snprintf(formula + used, room - used, "%s%.3g", bh_xray_symbol(z), n);
}

/* "Fe2O3": elements in the order of their first site, hydrogen last. */
static void write_formula(bh_phase *phase, const double atoms[BH_Z_MAX + 1])
{
	bool done[BH_Z_MAX + 1] = { false };

	phase->formula[0] = '\0';
	for (size_t i = 0; i < phase->site_count; i++) {
		int z = phase->sites[i].z;

		if (!done[z] && z != 1)
			add_symbol(phase->formula, sizeof phase->formula, z,
				   atoms[z] / phase->formula_units);
		done[z] = true;
	}
	if (atoms[1] > 0)
		add_symbol(phase->formula, sizeof phase->formula, 1,
			   atoms[1] / phase->formula_units);
}

bool bh_structure_resolve(bh_phase *phase, bh_arena *arena, bh_err *err)
{
	double images[BH_MAX_IMAGES][3], atoms[BH_Z_MAX + 1], mass_g = 0;
	bh_element_share *elements;
	size_t n = 0;
	int units;

	phase->volume_A3 = bh_cell_volume_A3(&phase->cell);
	if (phase->site_count == 0)
		return true;
	for (size_t i = 0; i < phase->site_count; i++)
		phase->sites[i].multiplicity =
			(int)bh_symmetry_orbit(&phase->group, &phase->cell,
					       phase->sites[i].at, phase->sites[i].reach_A,
					       images);
	count_atoms(atoms, phase);
	elements = bh_new(arena, bh_element_share, BH_Z_MAX);
	if (!elements)
		return bh_fail_memory(err);
	for (int z = 1; z <= BH_Z_MAX; z++)
		if (atoms[z] > 0) {
			double part_g = atoms[z] * bh_xray_molar_mass_g(z);

			elements[n++] = (bh_element_share){ z, part_g };
			mass_g += part_g;
		}
	phase->composition = (bh_composition){ elements, n };
	bh_formula_normalise(&phase->composition);
	units = whole_units(atoms);
	phase->formula_units = units ? units : common_places(phase);
	write_formula(phase, atoms);
	if (phase->volume_A3 > 0)
		phase->density_g_cm3 = mass_g / BH_AVOGADRO_PER_MOL /
				       (phase->volume_A3 * pow(BH_CM_PER_A, 3));
	return true;
}
