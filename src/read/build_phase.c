#include "read/build.h"

#include <math.h>
#include <stdint.h>
#include <stdio.h>
#include <string.h>

#include "base/number.h"
#include "physics/cell.h"
#include "physics/formula.h"
#include "physics/hkl.h"
#include "read/suggest.h"

enum { SHOWN = 60 };

static double number(const bh_conf_section *s, const char *key)
{
	return bh_conf_number(BH_FILE_REQUEST, s, "phase", key);
}

/* Whether a d stands in the list before. */
static bool twice(const bh_phase *phase, size_t i)
{
	for (size_t k = 0; k < i; k++)
		if (fabs(phase->list_d_A[k] / phase->list_d_A[i] - 1) < 1e-9)
			return true;
	return false;
}

/* False: memory is out. */
static bool take_list(bh_phase *phase, bh_arena *arena, const bh_conf_entry *d,
		      const bh_conf_entry *intensity)
{
	phase->list_d_A = bh_new(arena, double, d->count);
	phase->list_intensity = bh_new(arena, double, d->count);
	if (!phase->list_d_A || !phase->list_intensity)
		return false;
	phase->list_count = d->count;
	for (size_t i = 0; i < d->count; i++) {
		phase->list_d_A[i] = d->values[i].number;
		if (intensity && i < intensity->count)
			phase->list_intensity[i] = intensity->values[i].number;
	}
	return true;
}

static bool list(bh_phase *phase, bh_arena *arena, const bh_conf_section *section,
		 bh_problems *problems)
{
	const bh_conf_entry *d = bh_conf_entry_of(section, "d");
	const bh_conf_entry *intensity = bh_conf_entry_of(section, "intensity");
	const bh_conf_entry *ratio = bh_conf_entry_of(section, "corundum_ratio");
	double most = 0;
	bool good = true;

	phase->kind = BH_PHASE_LIST;
	phase->corundum_ratio = ratio ? ratio->values[0].number : 0;
	if (!take_list(phase, arena, d, intensity)) {
		problems->lost = true;
		return false;
	}
	for (size_t i = 0; i < d->count; i++) {
		most = fmax(most, phase->list_intensity[i]);
		if (twice(phase, i))
			good = bh_problem(
				problems, d->values[i].place,
				"d = %s Å stands twice in the list\ngive it once",
				d->values[i].text);
	}
	if (intensity && intensity->count != d->count)
		return bh_problem(problems, intensity->place,
				  "\"intensity\" has %zu values, \"d\" has %zu\ngive one "
				  "for each d",
				  intensity->count, d->count);
	if (ratio && !(most > 0) && (intensity || !section->faulty))
		return bh_problem(problems, ratio->place,
				  "\"corundum_ratio\" needs intensities above 0\ngive "
				  "\"intensity\", one for each d");
	return good;
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
			return bh_build_note(problems, formula->values[0].place, &err);
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
	if ((march != NULL) != (axis != NULL) && !section->faulty)
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
	int width = bh_suggest_cut(value->text, SHOWN);
	double d_A, best = HUGE_VAL;

	if (!bh_number_read(&d_A, value->text, strlen(value->text)))
		return bh_problem(
			problems, value->place,
			"\"%.*s\" is no distance\na phase given as a list has targets "
			"like \"3.29\" (Å)",
			width, value->text);
	for (size_t i = 0; i < phase->list_count; i++)
		if (fabs(phase->list_d_A[i] - d_A) < best) {
			best = fabs(phase->list_d_A[i] - d_A);
			target->d_A = phase->list_d_A[i];
		}
	if (!(best <= 0.005 * target->d_A))
		return bh_problem(
			problems, value->place,
			"d = %.*s Å is not in the list of \"%s\"\nnearest: %.5g Å", width,
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
				  "\"%.*s\" is no plane\nlike \"1 0 4\", \"1,0,-4\", "
				  "\"10-4\" or \"1 0 -1 4\"",
				  bh_suggest_cut(value->text, SHOWN), value->text);
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

static bh_built describe_list(bh_phase *phase, bh_arena *arena,
			      const bh_conf_section *section, bh_problems *problems)
{
	bool good = bh_build_goes_with(section, "cell", "d", problems);

	good = bh_build_goes_with(section, "space_group", "d", problems) && good;
	if (section->section_count > 0)
		good = bh_problem(
			problems, section->sections[0]->place,
			"atoms do not go with \"d\"\na phase is a cell and space "
			"group, or a list of d");
	return list(phase, arena, section, problems) && good && !section->faulty
		       ? BH_BUILT
		       : BH_BUILT_PLANES;
}

bh_built bh_build_phase(bh_phase *phase, bh_arena *arena, const bh_conf_section *section,
			bh_problems *problems)
{
	const bh_conf_entry *targets = bh_conf_entry_of(section, "targets");
	double share = number(section, "share"), size = number(section, "size_nm");
	bh_built built;
	bool good = true;

	snprintf(phase->name, sizeof phase->name, "%.*s",
		 bh_suggest_cut(section->title, sizeof phase->name - 1), section->title);
	phase->place = section->place;
	phase->share_frac = isfinite(share) ? share / 100 : -1;
	phase->size_nm = isfinite(size) ? size : 0;
	phase->strain = number(section, "strain");
	phase->march = 1;
	if (strlen(section->title) >= sizeof phase->name)
		good = bh_problem(
			problems, section->title_place,
			"the name of a phase is longer than %zu bytes\nshorten it",
			sizeof phase->name - 1);
	built = bh_conf_entry_of(section, "cif")
			? bh_build_file(phase, arena, section, problems)
		: bh_conf_entry_of(section, "d")
			? describe_list(phase, arena, section, problems)
			: bh_build_crystal(phase, arena, section, problems);
	if (built != BH_BUILT_NOT) {
		good = substance(phase, arena, section, problems) && good;
		good = texture(phase, section, problems) && good;
	}
	for (size_t i = 0; built != BH_BUILT_NOT && targets && i < targets->count; i++)
		good = bh_build_target(phase, arena, &targets->values[i], problems) !=
			       SIZE_MAX &&
		       good;
	return good || built == BH_BUILT_NOT ? built : BH_BUILT_PLANES;
}
