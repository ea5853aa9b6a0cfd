#include "read/build.h"

#include <math.h>
#include <stdint.h>
#include <stdio.h>
#include <string.h>

#include "base/number.h"
#include "physics/cell.h"
#include "physics/formula.h"
#include "physics/hkl.h"
#include "physics/structure.h"
#include "physics/symmetry.h"
#include "physics/xray.h"
#include "read/suggest.h"

static double number(const bh_conf_section *s, const char *key)
{
	return bh_conf_number(BH_FILE_REQUEST, s, "phase", key);
}

/* Note an error of the physics at a place of the file. */
static bool note(bh_problems *problems, bh_place place, const bh_err *err)
{
	if (err->code == BH_BAD_SYSTEM) {
		problems->lost = true;
		return false;
	}
	return bh_problem(problems, place, "%s\n%s", err->what, err->hint);
}

static bool read_element(int *z, const bh_conf_value *value, bh_problems *problems)
{
	bh_suggestion near = { 0 };
	const char *symbol = strcmp(value->text, "D") == 0 ? "H" : value->text;

	*z = bh_xray_z(symbol);
	if (*z)
		return true;
	for (int i = 1; i <= BH_Z_MAX; i++)
		if (bh_xray_symbol(i)[0] == value->text[0])
			bh_suggest(&near, value->text, bh_xray_symbol(i));
	return bh_problem(problems, value->place,
			  "\"%s\" is no element\n%s%s%sallowed: symbols H to U, like Fe",
			  value->text, near.word ? "did you mean \"" : "",
			  near.word ? near.word : "", near.word ? "\"? " : "");
}

static bool build_site(bh_site *site, const bh_conf_section *s, bh_problems *problems)
{
	const bh_conf_entry *at = bh_conf_entry_of(s, "at");
	double b = bh_conf_number(BH_FILE_REQUEST, s, "site", "b_iso");
	bool good = read_element(&site->z, &bh_conf_entry_of(s, "element")->values[0],
				 problems);

	snprintf(site->label, sizeof site->label, "%s", s->title);
	site->place = s->place;
	site->occupancy = bh_conf_number(BH_FILE_REQUEST, s, "site", "occupancy");
	site->b_known = isfinite(b);
	site->b_iso_A2 = site->b_known ? b : BH_B_ISO_DEFAULT_A2;
	if (at->count != 3)
		return bh_problem(problems, at->place,
				  "\"at\" has %zu values\nit needs 3: {x, y, z}",
				  at->count);
	for (int i = 0; i < 3; i++)
		site->at[i] = at->values[i].number;
	return good;
}

static bool build_sites(bh_phase *phase, bh_arena *arena, const bh_conf_section *section,
			bh_problems *problems)
{
	bool good = true;

	phase->sites = bh_new(arena, bh_site, section->section_count);
	if (!phase->sites) {
		problems->lost = true;
		return false;
	}
	for (size_t i = 0; i < section->section_count; i++)
		good = build_site(&phase->sites[phase->site_count++],
				  section->sections[i], problems) &&
		       good;
	return good;
}

static int bits(unsigned mask)
{
	int n = 0;

	for (; mask; mask >>= 1)
		n += (mask & 1) ? 1 : 0;
	return n;
}

static const char *system_name(int number)
{
	return number <= 2     ? "triclinic"
	       : number <= 15  ? "monoclinic"
	       : number <= 74  ? "orthorhombic"
	       : number <= 142 ? "tetragonal"
	       : number <= 167 ? "trigonal"
	       : number <= 194 ? "hexagonal"
			       : "cubic";
}

/* The short forms of a cell: 1, 2, 3 or 6 values by crystal system. */
static bool spread_cell(double cell[6], const bh_space_group *group,
			const bh_conf_entry *given)
{
	size_t n = given->count;
	int system = group->number;
	bool rhombohedral = strcmp(group->choice, "R") == 0;
	double v[6];

	for (size_t i = 0; i < n && i < 6; i++)
		v[i] = given->values[i].number;
	if (n == 6) {
		memcpy(cell, v, sizeof v);
		return true;
	}
	if (n == 1 && system >= 195)
		memcpy(cell, (double[6]){ v[0], v[0], v[0], 90, 90, 90 }, sizeof v);
	else if (n == 2 && rhombohedral)
		memcpy(cell, (double[6]){ v[0], v[0], v[0], v[1], v[1], v[1] }, sizeof v);
	else if (n == 2 && system >= 75 && system <= 142)
		memcpy(cell, (double[6]){ v[0], v[0], v[1], 90, 90, 90 }, sizeof v);
	else if (n == 2 && system >= 143 && system <= 194)
		memcpy(cell, (double[6]){ v[0], v[0], v[1], 90, 90, 120 }, sizeof v);
	else if (n == 3 && system >= 16 && system <= 74)
		memcpy(cell, (double[6]){ v[0], v[1], v[2], 90, 90, 90 }, sizeof v);
	else
		return false;
	return true;
}

static bool check_cell(const bh_phase *phase, const bh_conf_entry *given,
		       bh_problems *problems)
{
	const double angles[3] = { phase->cell.alpha_deg, phase->cell.beta_deg,
				   phase->cell.gamma_deg };
	const double edges[3] = { phase->cell.a_A, phase->cell.b_A, phase->cell.c_A };
	double misfit;

	for (int i = 0; i < 3; i++) {
		if (!(angles[i] >= 10 && angles[i] <= 170))
			return bh_problem(
				problems, given->place,
				"an angle of the cell is %g°\nallowed: 10 to 170",
				angles[i]);
		if (!(edges[i] >= 0.5 && edges[i] <= 500))
			return bh_problem(
				problems, given->place,
				"an edge of the cell is %g Å\nallowed: 0.5 to 500",
				edges[i]);
	}
	if (!(bh_cell_volume_A3(&phase->cell) > 0))
		return bh_problem(problems, given->place,
				  "these angles close no cell: %g, %g, %g°\neach must be "
				  "less than the "
				  "sum of the other two, all three less than 360",
				  angles[0], angles[1], angles[2]);
	misfit = bh_symmetry_misfit(&phase->group, &phase->cell);
	if (misfit > 1e-3)
		return bh_problem(problems, given->place,
				  "this cell does not have the symmetry of %s (off by "
				  "%.2g)\na %s cell "
				  "needs equal edges and fixed angles as its group says",
				  phase->group.symbol, misfit,
				  system_name(phase->group.number));
	return true;
}

static bool build_cell(bh_phase *phase, const bh_conf_section *section,
		       bh_problems *problems)
{
	const bh_conf_entry *given = bh_conf_entry_of(section, "cell");
	double cell[6];

	if (!spread_cell(cell, &phase->group, given))
		return bh_problem(problems, given->place,
				  "\"cell\" has %zu value%s\na %s cell needs %d (edges, "
				  "then angles), or "
				  "all 6",
				  given->count, given->count == 1 ? "" : "s",
				  system_name(phase->group.number),
				  phase->group.number <= 15
					  ? 6
					  : bits(bh_symmetry_free_cell(&phase->group)));
	phase->cell = (bh_cell){ cell[0], cell[1], cell[2], cell[3], cell[4], cell[5] };
	return check_cell(phase, given, problems);
}

static bool build_group(bh_phase *phase, bh_arena *arena, const bh_conf_section *section,
			bh_problems *problems)
{
	const bh_conf_value *given = &bh_conf_entry_of(section, "space_group")->values[0];
	bh_err err = { BH_OK, 0, 0, "", "", "" };
	bool open;

	if (!bh_symmetry_find(&phase->group, &open, arena, given->text, &err))
		return note(problems, given->place, &err);
	if (open && section->section_count > 0)
		return bh_problem(
			problems, given->place,
			"\"%s\" has two origins, and atoms need to know which\nwrite "
			"\"%s:1\" "
			"or \"%s:2\" (:2 when the centre of symmetry is at 0 0 0)",
			given->text, given->text, given->text);
	return true;
}

static bool crystal(bh_phase *phase, bh_arena *arena, const bh_conf_section *section,
		    bh_problems *problems)
{
	bh_err err = { BH_OK, 0, 0, "", "", "" };
	size_t i, j;
	double distance;
	bool good = build_sites(phase, arena, section, problems);

	if (!build_group(phase, arena, section, problems))
		return false;
	if (!build_cell(phase, section, problems) || !good)
		return false;
	phase->kind = phase->site_count ? BH_PHASE_ATOMS : BH_PHASE_POSITIONS;
	if (!bh_structure_resolve(phase, arena, &err))
		return note(problems, section->place, &err);
	if (bh_structure_clash(phase, 0.5, &i, &j, &distance))
		return bh_problem(problems, phase->sites[j].place,
				  i == j ? "images of site \"%s\" clash with site "
					   "\"%s\": %.2f Å apart\n"
					   "check its coordinates, the origin choice and "
					   "the occupancies"
					 : "sites \"%s\" and \"%s\" clash: %.2f Å "
					   "apart\natoms stand at "
					   "least 0.5 Å apart; occupancies at one place "
					   "sum to at most 1",
				  phase->sites[i].label, phase->sites[j].label, distance);
	return true;
}

static bool list(bh_phase *phase, bh_arena *arena, const bh_conf_section *section,
		 bh_problems *problems)
{
	const bh_conf_entry *d = bh_conf_entry_of(section, "d");
	const bh_conf_entry *intensity = bh_conf_entry_of(section, "intensity");
	double ratio = number(section, "corundum_ratio"), most = 0;

	phase->kind = BH_PHASE_LIST;
	phase->list_count = d->count;
	phase->list_d_A = bh_new(arena, double, d->count);
	phase->list_intensity = bh_new(arena, double, d->count);
	if (!phase->list_d_A || !phase->list_intensity) {
		problems->lost = true;
		return false;
	}
	if (intensity && intensity->count != d->count)
		return bh_problem(problems, intensity->place,
				  "\"intensity\" has %zu values, \"d\" has %zu\ngive one "
				  "for each d",
				  intensity->count, d->count);
	for (size_t i = 0; i < d->count; i++) {
		phase->list_d_A[i] = d->values[i].number;
		phase->list_intensity[i] = intensity ? intensity->values[i].number : 0;
		most = fmax(most, phase->list_intensity[i]);
		for (size_t k = 0; k < i; k++)
			if (fabs(phase->list_d_A[k] / phase->list_d_A[i] - 1) < 1e-9)
				return bh_problem(
					problems, d->values[i].place,
					"d = %s Å stands twice in the list\ngive it once",
					d->values[i].text);
	}
	phase->corundum_ratio = isfinite(ratio) ? ratio : 0;
	if (phase->corundum_ratio > 0 && !(most > 0))
		return bh_problem(problems,
				  bh_conf_entry_of(section, "corundum_ratio")->place,
				  "\"corundum_ratio\" needs intensities above 0\ngive "
				  "\"intensity\", one "
				  "for each d");
	return true;
}

/* Composition and density of a phase without atoms, as far as they are given. */
static bool substance(bh_phase *phase, bh_arena *arena, const bh_conf_section *section,
		      bh_problems *problems)
{
	const bh_conf_entry *formula = bh_conf_entry_of(section, "formula");
	const bh_conf_entry *density = bh_conf_entry_of(section, "density");
	bh_err err = { BH_OK, 0, 0, "", "", "" };

	if (phase->kind == BH_PHASE_ATOMS && (formula || density))
		return bh_problem(
			problems, (formula ? formula : density)->place,
			"\"%s\" follows from the atoms of this phase\ntake it out",
			formula ? "formula" : "density");
	if (formula) {
		if (!bh_formula_read(&phase->composition, arena, formula->values[0].text,
				     &err))
			return note(problems, formula->values[0].place, &err);
		snprintf(phase->formula, sizeof phase->formula, "%s",
			 formula->values[0].text);
	}
	if (density)
		phase->density_g_cm3 = density->values[0].number;
	return true;
}

static bool texture(bh_phase *phase, const bh_conf_section *section,
		    bh_problems *problems)
{
	const bh_conf_entry *axis = bh_conf_entry_of(section, "march_axis");
	const bh_conf_entry *march = bh_conf_entry_of(section, "march");

	phase->march = number(section, "march");
	if (axis && axis->count != 3)
		return bh_problem(problems, axis->place,
				  "\"march_axis\" has %zu values\nit needs 3: "
				  "{h, k, l}",
				  axis->count);
	if ((march != NULL) != (axis != NULL))
		return bh_problem(problems, (march ? march : axis)->place,
				  "\"%s\" stands alone\nmarch and march_axis go together",
				  march ? "march" : "march_axis");
	if (march && phase->kind == BH_PHASE_LIST)
		return bh_problem(problems, march->place,
				  "a d list has no texture\ntake march out");
	for (int i = 0; axis && i < 3; i++)
		phase->march_axis[i] = (int)lround(axis->values[i].number);
	if (axis && !phase->march_axis[0] && !phase->march_axis[1] &&
	    !phase->march_axis[2])
		return bh_problem(problems, axis->place,
				  "\"march_axis\" is 0 0 0\ngive a plane");
	return true;
}

static bool list_target(bh_target *target, const bh_phase *phase,
			const bh_conf_value *value, bh_problems *problems)
{
	double d_A, best = HUGE_VAL;

	if (!bh_number_read(&d_A, value->text, strlen(value->text)))
		return bh_problem(
			problems, value->place,
			"\"%s\" is no distance\na phase given as a list has targets like "
			"\"3.29\" (Å)",
			value->text);
	for (size_t i = 0; i < phase->list_count; i++)
		if (fabs(phase->list_d_A[i] / d_A - 1) < best) {
			best = fabs(phase->list_d_A[i] / d_A - 1);
			target->d_A = phase->list_d_A[i];
		}
	if (best > 0.005)
		return bh_problem(
			problems, value->place,
			"d = %s Å is not in the list of \"%s\"\nnearest: %.5g Å",
			value->text, phase->name, target->d_A);
	snprintf(target->text, sizeof target->text, "%.5g Å", target->d_A);
	return true;
}

static bool plane_target(bh_target *target, const bh_phase *phase,
			 const bh_conf_value *value, bh_problems *problems)
{
	bh_mat3 reciprocal;
	int h[3];

	if (!bh_hkl_parse(h, value->text))
		return bh_problem(problems, value->place,
				  "\"%s\" is no plane\nlike \"1 0 4\", \"1,0,-4\", "
				  "\"10-4\" or \"1 0 -1 "
				  "4\"",
				  value->text);
	if (bh_hkl_absent(&phase->group, h))
		return bh_problem(problems, value->place,
				  "%d %d %d is extinguished by %s: it never "
				  "reflects\nask for another "
				  "plane",
				  h[0], h[1], h[2], phase->group.symbol);
	bh_hkl_standard(target->h, &phase->group, h);
	bh_cell_reciprocal(&reciprocal, &phase->cell);
	target->d_A = bh_cell_d_A(&reciprocal, target->h);
	snprintf(target->text, sizeof target->text, "%d %d %d", target->h[0],
		 target->h[1], target->h[2]);
	return true;
}

size_t bh_build_target(bh_phase *phase, bh_arena *arena, const bh_conf_value *value,
		       bh_problems *problems)
{
	bh_target target = { .place = value->place }, *grown;
	bool good = phase->kind == BH_PHASE_LIST
			    ? list_target(&target, phase, value, problems)
			    : plane_target(&target, phase, value, problems);

	if (!good)
		return SIZE_MAX;
	for (size_t i = 0; i < phase->target_count; i++)
		if (strcmp(phase->targets[i].text, target.text) == 0)
			return i;
	grown = bh_grow(arena, phase->targets, bh_target, phase->target_count,
			phase->target_count + 1);
	if (!grown) {
		problems->lost = true;
		return SIZE_MAX;
	}
	phase->targets = grown;
	phase->targets[phase->target_count] = target;
	return phase->target_count++;
}

static bool goes_with(const bh_conf_section *section, const char *key, const char *other,
		      bh_problems *problems)
{
	const bh_conf_entry *entry = bh_conf_entry_of(section, key);

	return !entry || bh_problem(problems, entry->place,
				    "\"%s\" does not go with \"%s\"\na phase is a cell "
				    "and space group, "
				    "or a list of d",
				    key, other);
}

/* Which description it is: a crystal, or a list. */
static bool describe(bh_phase *phase, bh_arena *arena, const bh_conf_section *section,
		     bh_problems *problems)
{
	bool has_cell = bh_conf_entry_of(section, "cell"), good;
	bool has_group = bh_conf_entry_of(section, "space_group");

	if (bh_conf_entry_of(section, "d")) {
		good = goes_with(section, "cell", "d", problems);
		good = goes_with(section, "space_group", "d", problems) && good;
		if (section->section_count > 0)
			good = bh_problem(
				problems, section->sections[0]->place,
				"atoms do not go with \"d\"\na phase is a cell and space "
				"group, or a list of d");
		return list(phase, arena, section, problems) && good;
	}
	good = goes_with(section, "intensity", "cell", problems);
	good = goes_with(section, "corundum_ratio", "cell", problems) && good;
	if (!has_cell || !has_group)
		return bh_problem(problems, section->place,
				  "phase \"%s\" has no \"%s\"\ngive space_group and "
				  "cell, or a list of d",
				  section->title, has_cell ? "space_group" : "cell");
	return crystal(phase, arena, section, problems) && good;
}

bool bh_build_phase(bh_phase *phase, bh_arena *arena, const bh_conf_section *section,
		    bh_problems *problems)
{
	const bh_conf_entry *targets = bh_conf_entry_of(section, "targets");
	double share = number(section, "share"), size = number(section, "size_nm");
	bool good;

	snprintf(phase->name, sizeof phase->name, "%s", section->title);
	phase->place = section->place;
	phase->share_frac = isfinite(share) ? share / 100 : -1;
	phase->size_nm = isfinite(size) ? size : 0;
	phase->strain = number(section, "strain");
	phase->march = 1;
	if (strlen(section->title) >= sizeof phase->name)
		return bh_problem(
			problems, section->title_place,
			"the name of a phase is longer than %zu bytes\nshorten it",
			sizeof phase->name - 1);
	if (!describe(phase, arena, section, problems))
		return false;
	good = substance(phase, arena, section, problems);
	good = texture(phase, section, problems) && good;
	for (size_t i = 0; targets && i < targets->count; i++)
		good = bh_build_target(phase, arena, &targets->values[i], problems) !=
			       SIZE_MAX &&
		       good;
	return good;
}
