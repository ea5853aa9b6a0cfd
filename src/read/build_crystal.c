#include "read/build.h"

#include <math.h>
#include <stdio.h>
#include <string.h>

#include "physics/cell.h"
#include "physics/crowding.h"
#include "physics/structure.h"
#include "physics/symmetry.h"
#include "physics/xray.h"
#include "read/crystal.h"
#include "read/suggest.h"

/* Note an error of the physics at a place of the file. */
bool bh_build_note(bh_problems *problems, bh_place place, const bh_err *err)
{
	if (err->code == BH_BAD_SYSTEM) {
		problems->lost = true;
		return false;
	}
	return bh_problem(problems, place, "%s\n%s", err->what, err->hint);
}

bool bh_build_goes_with(const bh_conf_section *section, const char *key, const char *other,
		      bh_problems *problems)
{
	const bh_conf_entry *entry = bh_conf_entry_of(section, key);

	return !entry || !bh_conf_entry_of(section, other) ||
	       bh_problem(problems, entry->place,
			  "\"%s\" does not go with \"%s\"\na phase is a cell and space "
			  "group, a structure file, or a list of d",
			  key, other);
}

/* "FE", "fe" or "Fe3+" as a symbol is written: "Fe". A near symbol of another element would be
 * a bad guess. */
static bool bare_symbol(char symbol[3], const char *text)
{
	size_t n = 0;

	for (; (text[n] | 32) >= 'a' && (text[n] | 32) <= 'z'; n++)
		if (n < 2)
			symbol[n] = (char)(n ? text[n] | 32 : text[n] & ~32);
	symbol[n < 2 ? n : 2] = '\0';
	return n == 1 || n == 2;
}

static bool read_element(int *z, const bh_conf_value *value, bh_problems *problems)
{
	const char *symbol = strcmp(value->text, "D") == 0 ? "H" : value->text;
	char meant[3];
	bool known;

	*z = bh_xray_z(symbol);
	if (*z)
		return true;
	known = bare_symbol(meant, value->text) && bh_xray_z(meant);
	return bh_problem(problems, value->place,
			  "\"%s\" is no element from H to U\n%s%s%sallowed: symbols like "
			  "Fe, without charge",
			  value->text, known ? "did you mean \"" : "", known ? meant : "",
			  known ? "\"? " : "");
}

static bool build_site(bh_site *site, const bh_conf_section *s, bh_problems *problems)
{
	const bh_conf_entry *at = bh_conf_entry_of(s, "at");
	const bh_conf_entry *element = bh_conf_entry_of(s, "element");
	double b = bh_conf_number(BH_FILE_REQUEST, s, "site", "b_iso");
	bool good = !s->faulty;

	snprintf(site->label, sizeof site->label, "%.*s",
		 bh_suggest_cut(s->title, sizeof site->label - 1), s->title);
	site->place = s->place;
	site->occupancy = bh_conf_number(BH_FILE_REQUEST, s, "site", "occupancy");
	site->b_known = isfinite(b);
	site->b_iso_A2 = site->b_known ? b : BH_B_ISO_DEFAULT_A2;
	if (element)
		good = read_element(&site->z, &element->values[0], problems) && good;
	if (at && at->count != 3)
		return bh_problem(problems, at->place,
				  "\"at\" has %zu value%s\nit needs 3: {x, y, z}",
				  at->count, at->count == 1 ? "" : "s");
	for (int i = 0; at && i < 3; i++)
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

/* What the symmetry fixes of a cell. */
static const char *cell_rule(const bh_space_group *group)
{
	enum { ALPHA = 1 << 3, BETA = 1 << 4 };
	unsigned open = bh_symmetry_free_cell(group);

	if (group->number <= 15)
		return open & ALPHA  ? "β = γ = 90°"
		       : open & BETA ? "α = γ = 90°"
				     : "α = β = 90°";
	if (group->number <= 74)
		return "α = β = γ = 90°";
	if (group->number <= 142)
		return "a = b and α = β = γ = 90°";
	if (strcmp(group->choice, "R") == 0)
		return "a = b = c and α = β = γ";
	if (group->number <= 194)
		return "a = b, α = β = 90° and γ = 120°";
	return "a = b = c and α = β = γ = 90°";
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

static const char *short_form(const bh_space_group *group)
{
	if (group->number <= 15)
		return "6 values: ";
	if (group->number <= 74)
		return "3 values: a, b, c (Å)";
	if (strcmp(group->choice, "R") == 0)
		return "2 values: a (Å), α (°)";
	return group->number <= 194 ? "2 values: a, c (Å)" : "1 value: a (Å)";
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
				  "%.2g)\na %s cell has %s",
				  phase->group.symbol, misfit,
				  system_name(phase->group.number),
				  cell_rule(&phase->group));
	return true;
}

static bool build_cell(bh_phase *phase, const bh_conf_section *section,
		       bh_problems *problems)
{
	const bh_conf_entry *given = bh_conf_entry_of(section, "cell");
	double cell[6];

	if (!spread_cell(cell, &phase->group, given))
		return bh_problem(problems, given->place,
				  "\"cell\" has %zu value%s\na %s cell needs %s%s",
				  given->count, given->count == 1 ? "" : "s",
				  system_name(phase->group.number),
				  short_form(&phase->group),
				  phase->group.number <= 15 ? "a, b, c (Å), α, β, γ (°)"
							    : ", or all 6");
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
		return bh_build_note(problems, given->place, &err);
	if (open && section->section_count > 0)
		return bh_problem(
			problems, given->place,
			"\"%s\" has two origins, and atoms need to know which\nwrite "
			"\"%s:1\" "
			"or \"%s:2\" (:2 when the centre of symmetry is at 0 0 0)",
			given->text, given->text, given->text);
	return true;
}

/* Atoms that stand in each other. */
static bool check_clash(const bh_phase *phase, bh_problems *problems)
{
	size_t i, j;
	double distance;

	if (!bh_crowding_clash(phase, 0.5, &i, &j, &distance))
		return true;
	return bh_problem(problems, phase->sites[j].place,
			  i == j ? "images of site \"%s\" clash with site \"%s\": %.2f Å "
				   "apart\ncheck its coordinates, the origin choice and "
				   "the occupancies"
				 : "sites \"%s\" and \"%s\" clash: %.2f Å apart\natoms "
				   "stand at least 0.5 Å apart; occupancies at one place "
				   "sum to at most 1",
			  phase->sites[i].label, phase->sites[j].label, distance);
}

static bh_built crystal(bh_phase *phase, bh_arena *arena, const bh_conf_section *section,
			bh_problems *problems)
{
	bh_err err = { BH_OK, 0, 0, "", "", "" };
	bool good = build_sites(phase, arena, section, problems) && !section->faulty;

	if (!bh_conf_entry_of(section, "space_group") ||
	    !build_group(phase, arena, section, problems) ||
	    !bh_conf_entry_of(section, "cell") || !build_cell(phase, section, problems))
		return BH_BUILT_NOT;
	phase->kind = section->section_count ? BH_PHASE_ATOMS : BH_PHASE_POSITIONS;
	if (!good)
		return BH_BUILT_PLANES;
	if (!bh_structure_resolve(phase, arena, &err)) {
		bh_build_note(problems, section->place, &err);
		return BH_BUILT_PLANES;
	}
	return check_clash(phase, problems) ? BH_BUILT : BH_BUILT_PLANES;
}

bh_built bh_build_crystal(bh_phase *phase, bh_arena *arena, const bh_conf_section *section,
			  bh_problems *problems)
{
	bool has_cell = bh_conf_entry_of(section, "cell");
	bool has_group = bh_conf_entry_of(section, "space_group");
	bool good = bh_build_goes_with(section, "intensity", "cell", problems);
	bh_built built;

	good = bh_build_goes_with(section, "corundum_ratio", "cell", problems) && good;
	if ((!has_cell || !has_group) && !section->faulty)
		good = bh_problem(problems, section->place,
				  "phase \"%s\" has no \"%s\"\ngive space_group and "
				  "cell, or a list of d",
				  section->title, has_cell ? "space_group" : "cell");
	built = crystal(phase, arena, section, problems);
	return good || built == BH_BUILT_NOT ? built : BH_BUILT_PLANES;
}

/* The path of a structure file: what is not absolute begins in the request's folder. */
static const char *path_beside(bh_arena *arena, const bh_conf_value *value)
{
	const char *file = value->place.file, *slash = file ? strrchr(file, '/') : NULL;

	if (value->text[0] == '/' || !slash)
		return value->text;
	return bh_arena_format(arena, "%.*s%s", (int)(slash + 1 - file), file, value->text);
}

bh_built bh_build_file(bh_phase *phase, bh_arena *arena, const bh_conf_section *section,
		       bh_problems *problems)
{
	static const char *const others[] = { "cell",	   "space_group",    "d",
					      "intensity", "corundum_ratio", "formula",
					      "density" };
	const bh_conf_value *value = &bh_conf_entry_of(section, "cif")->values[0];
	const char *path = path_beside(arena, value);
	bool good = true;

	for (size_t i = 0; i < sizeof others / sizeof *others; i++)
		good = bh_build_goes_with(section, others[i], "cif", problems) && good;
	if (section->section_count > 0)
		good = bh_problem(problems, section->sections[0]->place,
				  "atoms do not go with \"cif\"\nthe structure file has "
				  "them; take them out");
	if (!path) {
		problems->lost = true;
		return BH_BUILT_NOT;
	}
	if (!bh_crystal_read(phase, arena, path, value->place, problems))
		return BH_BUILT_NOT;
	return good ? BH_BUILT : BH_BUILT_PLANES;
}
