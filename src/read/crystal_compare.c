#include "read/crystal.h"

#include <math.h>
#include <stdio.h>
#include <string.h>

#include "base/text.h"
#include "physics/crowding.h"
#include "physics/formula.h"
#include "physics/structure.h"
#include "physics/symmetry.h"
#include "physics/xray.h"
#include "read/element.h"

/* What the file says of contents and size, and what its cell and sites give. */
typedef struct {
	bh_element_counts formula;
	double cell[BH_Z_MAX + 1]; /* atoms in the cell by the sites */
	double units;		   /* formulas in the cell           */
	bool units_said;
} contents;

static void count_cell(double atoms[BH_Z_MAX + 1], const bh_phase *phase,
		       const bh_space_group *group)
{
	memset(atoms, 0, sizeof *atoms * (BH_Z_MAX + 1));
	for (size_t i = 0; i < phase->site_count; i++) {
		const bh_site *site = &phase->sites[i];
		double images[BH_MAX_IMAGES][3];
		size_t many = bh_symmetry_orbit(group, &phase->cell, site->at,
						site->reach_A, images);

		atoms[site->z] += (double)many * site->occupancy;
	}
}

static bool said_units(const bh_crystal *c, double *units)
{
	const bh_cif_value *z =
		bh_crystal_value(c, "_cell_formula_units_z _cell_z_pdb");

	return z && bh_cif_number(units, NULL, z) && *units > 0;
}

/* Formulas in the cell by the element with the most electrons in it. */
static double guess_units(const contents *k)
{
	double most = 0, units = 0;

	for (int z = 1; z <= BH_Z_MAX; z++)
		if (k->formula.atoms[z] > 0 && z * k->cell[z] > most) {
			most = z * k->cell[z];
			units = k->cell[z] / k->formula.atoms[z];
		}
	return units;
}

/* More than rounding and 2 %. */
static bool differ(double a, double b)
{
	return fabs(a - b) > 0.02 * fmax(a, b) + 0.01;
}

/* How many elements the sites do not give as the formula has them; hydrogen, which is often
 * left out, does not count. list: which, with numbers; NULL: not asked. */
static int misses(const contents *k, bh_text *list, int from)
{
	int many = 0;

	for (int z = from; z <= BH_Z_MAX; z++) {
		double want = k->formula.atoms[z] * k->units;

		if (!differ(want, k->cell[z]))
			continue;
		many++;
		if (list && list->length < 120)
			bh_text_format(list, "%s%s %.4g instead of %.4g",
				       list->length ? ", " : "", bh_element_symbol(z),
				       k->cell[z], want);
	}
	return many;
}

static void read_contents(contents *k, const bh_crystal *c, const bh_space_group *group)
{
	const bh_cif_value *formula = bh_crystal_value(c, "_chemical_formula_sum");

	*k = (contents){ .units = 0 };
	if (formula)
		bh_element_formula(&k->formula, formula->text, formula->length);
	count_cell(k->cell, c->phase, group);
	k->units_said = said_units(c, &k->units);
}

bool bh_crystal_origin(bh_crystal *c)
{
	contents first, second;
	bool fits[2];
	char text[48];

	if (!c->open_origin || c->phase->site_count == 0)
		return true;
	read_contents(&first, c, &c->phase->group);
	read_contents(&second, c, &c->second);
	if (!first.units_said) {
		first.units = guess_units(&first);
		second.units = guess_units(&second);
	}
	fits[0] = first.formula.known && misses(&first, NULL, 2) == 0;
	fits[1] = second.formula.known && misses(&second, NULL, 2) == 0;
	bh_cif_text(text, sizeof text, c->open_origin);
	if (fits[0] == fits[1])
		return bh_problem(
			c->problems, bh_cif_place(c->cif, c->open_origin),
			"\"%s\" has two origins, and atoms need to know which\nwrite '%s :1' "
			"or '%s :2' into the file (:2 when the centre of symmetry is at 0 0 0)",
			text, text, text);
	if (fits[1])
		c->phase->group = c->second;
	bh_crystal_remark(c, BH_CAUTION, bh_cif_place(c->cif, c->open_origin),
			  "\"%s\" has two origins: %s is taken, which alone gives the "
			  "formula\nwrite '%s :%d' into the file",
			  text, c->phase->group.symbol, text, fits[1] ? 2 : 1);
	return true;
}

static void compare_formula(bh_crystal *c)
{
	const bh_cif_item *item = bh_cif_find(c->block, "_chemical_formula_sum");
	bh_text list = { 0 };
	double guessed;
	contents k;

	read_contents(&k, c, &c->phase->group);
	if (!k.formula.known)
		return;
	guessed = guess_units(&k);
	if (k.units_said && differ(guessed, k.units) && guessed > 0) {
		double said = k.units;

		k.units = guessed;
		if (misses(&k, NULL, 2) == 0)
			bh_crystal_remark(
				c, BH_CAUTION, bh_crystal_place(c, item),
				"the sites put %.4g formulas into the cell, the file says "
				"%.4g\ncheck symmetry and occupancies",
				guessed, said);
		k.units = said;
		if (misses(&k, NULL, 2) && differ(guessed, said))
			misses(&k, &list, 2);
	} else {
		k.units = guessed;
		misses(&k, &list, 2);
	}
	if (list.length)
		bh_crystal_remark(c, BH_CAUTION, bh_crystal_place(c, item),
				  "the sites do not give the formula; atoms in the cell: %s",
				  list.bytes);
	if (differ(k.cell[1], k.formula.atoms[1] * k.units) && !list.length)
		bh_crystal_remark(c, BH_NOTE, bh_crystal_place(c, item),
				  "hydrogen in the cell: %.4g by the sites, %.4g by the "
				  "formula",
				  k.cell[1], k.formula.atoms[1] * k.units);
	bh_text_free(&list);
}

/* A number of the file against the program's. */
static bool off(const bh_crystal *c, const char *name, double have, double *said,
		const bh_cif_value **value)
{
	*value = bh_crystal_value(c, name);
	return *value && bh_cif_number(said, NULL, *value) && *said > 0 && have > 0 &&
	       fabs(have / *said - 1) > 0.02;
}

static bool compare_volume(bh_crystal *c)
{
	const bh_cif_value *value;
	double said, have = c->phase->volume_A3;

	if (!off(c, "_cell_volume", have, &said, &value))
		return true;
	if (have / said < 0.5 || have / said > 2)
		return bh_problem(c->problems, bh_cif_place(c->cif, value),
				  "the cell has %.5g Å³, the file says %.5g\nedges or "
				  "volume are wrong: compare with the source of the file",
				  have, said);
	bh_crystal_remark(c, BH_CAUTION, bh_cif_place(c->cif, value),
			  "the cell has %.5g Å³, the file says %.5g", have, said);
	return true;
}

static bool compare_density(bh_crystal *c)
{
	const bh_cif_value *value;
	double said, have = c->phase->density_g_cm3;

	/* osmium, the densest element, has 22.6 g/cm³ */
	if (have > 30)
		return bh_problem(c->problems, bh_crystal_place(c, NULL),
				  "the sites give %.3g g/cm³, denser than any solid\ncheck "
				  "cell, symmetry and occupancies",
				  have);
	if (off(c, "_exptl_crystal_density_diffrn", have, &said, &value))
		bh_crystal_remark(c, fabs(have / said - 1) > 0.1 ? BH_CAUTION : BH_NOTE,
				  bh_cif_place(c->cif, value),
				  "X-ray density: %.4g g/cm³ by the sites, %.4g in the file",
				  have, said);
	return true;
}

static void look_for_clash(bh_crystal *c)
{
	const bh_phase *phase = c->phase;
	size_t i, j;
	double distance_A;

	if (!bh_crowding_clash(phase, 0.5, &i, &j, &distance_A))
		return;
	bh_crystal_remark(
		c, BH_CAUTION, phase->sites[i].place,
		i == j ? "images of site \"%s\" and \"%s\" are %.2f Å apart, and more than "
			 "one atom stands there\ncheck coordinates, symmetry and occupancies"
		       : "sites \"%s\" and \"%s\" are %.2f Å apart, and more than one atom "
			 "stands there\ncheck coordinates, symmetry and occupancies",
		phase->sites[i].label, phase->sites[j].label, distance_A);
}

/* Without sites the formula and the density of the file are all there is. */
static bool take_stated(bh_crystal *c)
{
	const bh_cif_value *formula = bh_crystal_value(c, "_chemical_formula_sum");
	const bh_cif_value *density =
		bh_crystal_value(c, "_exptl_crystal_density_diffrn");
	bh_phase *phase = c->phase;
	bh_element_counts counts;
	bh_element_share *shares;
	size_t n = 0;
	double number;

	if (density && bh_cif_number(&number, NULL, density) && number > 0.05 &&
	    number < 30)
		phase->density_g_cm3 = number;
	if (!formula)
		return true;
	bh_element_formula(&counts, formula->text, formula->length);
	if (!counts.known)
		return true;
	shares = bh_new(c->arena, bh_element_share, BH_Z_MAX);
	if (!shares) {
		c->problems->lost = true;
		return false;
	}
	for (int z = 1; z <= BH_Z_MAX; z++)
		if (counts.atoms[z] > 0)
			shares[n++] = (bh_element_share){
				z, counts.atoms[z] * bh_xray_molar_mass_g(z)
			};
	phase->composition = (bh_composition){ shares, n };
	bh_formula_normalise(&phase->composition);
	bh_cif_text(phase->formula, sizeof phase->formula, formula);
	return true;
}

bool bh_crystal_compare(bh_crystal *c)
{
	if (!compare_volume(c))
		return false;
	if (c->phase->site_count == 0)
		return take_stated(c);
	compare_formula(c);
	look_for_clash(c);
	return compare_density(c);
}
