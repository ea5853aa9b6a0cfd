#include "read/crystal.h"

#include <stdio.h>
#include <string.h>

#include "physics/operations.h"
#include "physics/symmetry.h"

enum { OPS_MOST = 1000 };

static const char operation_names[] =
	"_symmetry_equiv_pos_as_xyz _space_group_symop_operation_xyz";
static const char hall_names[] =
	"_symmetry_space_group_name_hall _space_group_name_hall";
static const char symbol_names[] =
	"_symmetry_space_group_name_h-m _space_group_name_h-m_alt "
	"_space_group_name_h-m_ref _space_group_name_h-m_full";
static const char number_names[] = "_symmetry_int_tables_number _space_group_it_number";
/* What only a description in more dimensions, or of moments, gives. */
static const char magnetic_names[] =
	"_space_group_symop_magn_operation_xyz _space_group_magn_name_bns "
	"_space_group_symop_magn_ssg_operation_algebraic "
	"_space_group_symop_magn_ssg_operation_xyz";
static const char modulated_names[] = "_space_group_symop_ssg_operation_algebraic";

/* The listed operations as a group without name. *there: there is a list. */
static bool read_operations(bh_crystal *c, bh_space_group *group, bool *there)
{
	const bh_cif_item *item = bh_cif_find(c->block, operation_names);
	bh_err err = { BH_OK, 0, 0, "", "", "" };
	bh_symop *ops;
	size_t repeated;

	*there = item && !(item->count == 1 && bh_cif_is_unknown(&item->values[0]));
	if (!*there)
		return true;
	if (item->count > OPS_MOST)
		return bh_problem(c->problems, bh_crystal_place(c, item),
				  "%zu operations are listed\nno group in three dimensions "
				  "has more than 192",
				  item->count);
	ops = bh_new(c->arena, bh_symop, item->count);
	if (!ops) {
		c->problems->lost = true;
		return false;
	}
	for (size_t i = 0; i < item->count; i++) {
		const bh_cif_value *value = &item->values[i];

		if (!bh_operations_read(&ops[i], value->text, value->length, &err))
			return bh_problem(c->problems, bh_cif_place(c->cif, value),
					  "%s\n%s", err.what, err.hint);
	}
	if (!bh_operations_group(group, &repeated, c->arena, ops, item->count, &err)) {
		c->problems->lost = c->problems->lost || err.code == BH_BAD_SYSTEM;
		return bh_problem(c->problems, bh_crystal_place(c, item), "%s\n%s",
				  err.what, err.hint);
	}
	if (repeated)
		bh_crystal_remark(c, BH_NOTE, bh_crystal_place(c, item),
				  "%zu of the %zu listed operations repeat others, whole "
				  "cells apart; what is left: %zu",
				  repeated, item->count, group->op_count);
	return true;
}

/* A symbol without what some files put behind it in braces. */
static void symbol_text(char *to, size_t room, const bh_cif_value *value)
{
	bh_cif_text(to, room, value);
	to[strcspn(to, "{")] = '\0';
}

/* The group that one of the names gives. false: not there, or not known (then *unknown). */
static bool find(bh_crystal *c, bh_space_group *group, const char *names,
		 const bh_cif_value **said, bool *open)
{
	const bh_cif_value *value = bh_crystal_value(c, names);
	bh_err err = { BH_OK, 0, 0, "", "", "" };
	char text[80];

	if (!value)
		return false;
	symbol_text(text, sizeof text, value);
	*said = value;
	return bh_symmetry_find_for_cell(
		group, open, c->arena, &(bh_symmetry_asked){ text, &c->phase->cell }, &err);
}

/* What the file says besides its list: names when they agree, remarks when they do not. */
static bool name_listed(bh_crystal *c, bh_space_group *group)
{
	static const char *const names[] = { hall_names, symbol_names, number_names };
	const bh_cif_item *list = bh_cif_find(c->block, operation_names);
	bool named = false;

	for (int i = 0; i < 3 && !named; i++) {
		const bh_cif_value *value;
		bh_space_group other;
		bool open;

		if (find(c, &other, names[i], &value, &open) &&
		    bh_operations_equal(group, &other)) {
			other.ops = group->ops;
			other.op_count = group->op_count;
			*group = other;
			named = true;
		}
	}
	if (!named && !bh_symmetry_name(group, &c->phase->cell))
		return bh_problem(c->problems, bh_crystal_place(c, list),
				  "the %zu listed operations are no space group of this "
				  "cell\ncheck the list, or take it out and give the symbol",
				  group->op_count);
	return true;
}

static void remark_names(bh_crystal *c, const bh_space_group *group)
{
	static const char *const names[] = { hall_names, symbol_names, number_names };

	for (int i = 0; i < 3; i++) {
		const bh_cif_value *value = NULL;
		bh_space_group other;
		char text[48];
		bool open;

		if (!find(c, &other, names[i], &value, &open) ||
		    other.number == group->number)
			continue;
		symbol_text(text, sizeof text, value);
		bh_crystal_remark(c, BH_CAUTION, bh_cif_place(c->cif, value),
				  "the file says \"%s\", but the list of operations "
				  "(%zu) is %s, number %d: the list is used\ncompare "
				  "with the source of the file; take out what is wrong",
				  text, group->op_count, group->symbol, group->number);
		return;
	}
	if (group->hall_number == 0 && group->number > 2)
		bh_crystal_remark(c, BH_NOTE,
				  bh_crystal_place(c,
						   bh_cif_find(c->block, operation_names)),
				  "the listed operations are %s in a setting or with an "
				  "origin that no table has: they are used as listed",
				  group->symbol);
}

static bool no_symmetry(bh_crystal *c)
{
	bool magnetic = bh_cif_find(c->block, magnetic_names);
	const char *what = magnetic ? "the file gives magnetic symmetry only" :
			   bh_cif_find(c->block, modulated_names)
				    ? "the file gives symmetry in more than three dimensions "
				      "only"
				    : "the file does not say the symmetry";

	return bh_problem(c->problems, bh_crystal_place(c, NULL),
			  "%s\nadd _space_group_name_H-M_alt 'P n m a', or the list "
			  "_space_group_symop_operation_xyz",
			  what);
}

/* A symbol that leaves the origin open: both groups are kept until the sites are known. */
static void keep_second(bh_crystal *c, const bh_cif_value *value)
{
	bh_err err = { BH_OK, 0, 0, "", "", "" };
	char text[48], second[52];
	bool open;

	symbol_text(text, sizeof text, value);
	snprintf(second, sizeof second, "%s:2", text);
	if (bh_symmetry_find(&c->second, &open, c->arena, second, &err))
		c->open_origin = value;
}

/* No list: Hall symbol, then Hermann-Mauguin symbol, then number. */
static bool find_group(bh_crystal *c)
{
	static const char *const names[] = { hall_names, symbol_names, number_names };
	const bh_cif_value *bad = NULL;
	bh_err err = { BH_OK, 0, 0, "", "", "" };
	char text[80];

	for (int i = 0; i < 3; i++) {
		const bh_cif_value *value = NULL;
		bool open;

		if (find(c, &c->phase->group, names[i], &value, &open)) {
			if (bad)
				bh_crystal_remark(c, BH_CAUTION,
						  bh_cif_place(c->cif, bad),
						  "this symbol is not known; what else the "
						  "file says, %s, is used",
						  c->phase->group.symbol);
			if (open)
				keep_second(c, value);
			return true;
		}
		bad = value && !bad ? value : bad;
	}
	if (!bad)
		return no_symmetry(c);
	symbol_text(text, sizeof text, bad);
	if (bh_cif_find(c->block, modulated_names))
		return bh_problem(c->problems, bh_cif_place(c->cif, bad),
				  "\"%s\" is a symmetry in more than three dimensions: the "
				  "structure is modulated\nfor its main reflections give the "
				  "group of the mean structure",
				  text);
	bh_symmetry_find(&c->phase->group, &(bool){ false }, c->arena, text, &err);
	return bh_problem(c->problems, bh_cif_place(c->cif, bad), "%s\n%s", err.what,
			  err.hint);
}

bool bh_crystal_group(bh_crystal *c)
{
	const bh_cif_value *modulated =
		bh_crystal_value(c, "_cell_modulation_dimension");
	bool listed;
	double dimensions;

	if (!read_operations(c, &c->phase->group, &listed))
		return false;
	if (listed ? !name_listed(c, &c->phase->group) : !find_group(c))
		return false;
	if (listed)
		remark_names(c, &c->phase->group);
	if (modulated && bh_cif_number(&dimensions, NULL, modulated) && dimensions > 0)
		bh_crystal_remark(c, BH_CAUTION, bh_cif_place(c->cif, modulated),
				  "the structure is modulated: only its main reflections "
				  "are listed, with the mean structure");
	return true;
}
