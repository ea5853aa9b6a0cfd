#include "read/crystal.h"

#include <errno.h>
#include <math.h>
#include <stdarg.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <sys/stat.h>

#include "base/number.h"
#include "physics/cell.h"
#include "physics/structure.h"
#include "physics/symmetry.h"
#include "read/unpack.h"

/* Every name that is read, in the spelling of bh_cif_item. */
static const char *const wanted[] = {
	"_cell_length_a",
	"_cell_length_b",
	"_cell_length_c",
	"_cell_angle_alpha",
	"_cell_angle_beta",
	"_cell_angle_gamma",
	"_cell_volume",
	"_cell_formula_units_z",
	"_cell_z_pdb",
	"_cell_modulation_dimension",
	"_symmetry_equiv_pos_as_xyz",
	"_space_group_symop_operation_xyz",
	"_symmetry_space_group_name_hall",
	"_space_group_name_hall",
	"_symmetry_space_group_name_h-m",
	"_space_group_name_h-m_alt",
	"_space_group_name_h-m_ref",
	"_space_group_name_h-m_full",
	"_symmetry_int_tables_number",
	"_space_group_it_number",
	"_space_group_symop_magn_operation_xyz",
	"_space_group_magn_name_bns",
	"_space_group_symop_ssg_operation_algebraic",
	"_space_group_symop_magn_ssg_operation_algebraic",
	"_space_group_symop_magn_ssg_operation_xyz",
	"_atom_site_label",
	"_atom_site_id",
	"_atom_site_label_atom_id",
	"_atom_site_type_symbol",
	"_atom_site_fract_x",
	"_atom_site_fract_y",
	"_atom_site_fract_z",
	"_atom_site_cartn_x",
	"_atom_site_cartn_y",
	"_atom_site_cartn_z",
	"_atom_site_occupancy",
	"_atom_site_u_iso_or_equiv",
	"_atom_site_b_iso_or_equiv",
	"_atom_site_calc_flag",
	"_atom_site_disorder_assembly",
	"_atom_site_disorder_group",
	"_atom_site_label_alt_id",
	"_atom_site_aniso_label",
	"_atom_site_anisotrop_id",
	"_atom_site_aniso_u_11",
	"_atom_site_aniso_u_22",
	"_atom_site_aniso_u_33",
	"_atom_site_aniso_u_12",
	"_atom_site_aniso_u_13",
	"_atom_site_aniso_u_23",
	"_atom_site_aniso_b_11",
	"_atom_site_aniso_b_22",
	"_atom_site_aniso_b_33",
	"_atom_site_aniso_b_12",
	"_atom_site_aniso_b_13",
	"_atom_site_aniso_b_23",
	"_atom_site_aniso_beta_11",
	"_atom_site_aniso_beta_22",
	"_atom_site_aniso_beta_33",
	"_atom_site_aniso_beta_12",
	"_atom_site_aniso_beta_13",
	"_atom_site_aniso_beta_23",
	"_atom_site_anisotrop_u[1][1]",
	"_atom_site_anisotrop_u[2][2]",
	"_atom_site_anisotrop_u[3][3]",
	"_atom_site_anisotrop_u[1][2]",
	"_atom_site_anisotrop_u[1][3]",
	"_atom_site_anisotrop_u[2][3]",
	"_chemical_formula_sum",
	"_exptl_crystal_density_diffrn",
};

void bh_crystal_remark(bh_crystal *crystal, bh_severity severity, bh_place place,
		       const char *format, ...)
{
	bh_phase *phase = crystal->phase;
	bh_remark *grown = bh_grow(crystal->arena, phase->remarks, bh_remark,
				   phase->remark_count, phase->remark_count + 1);
	char *text, *cut;
	va_list args;

	va_start(args, format);
	text = bh_arena_vformat(crystal->arena, format, args);
	va_end(args);
	if (!grown || !text) {
		crystal->problems->lost = true;
		return;
	}
	cut = strchr(text, '\n');
	if (cut)
		*cut++ = '\0';
	phase->remarks = grown;
	phase->remarks[phase->remark_count++] =
		(bh_remark){ severity, text, cut ? cut : "", place };
}

void bh_crystal_list(bh_text *list, const char *label)
{
	enum { LISTED = 100 };

	size_t n = strlen(label);

	if (list->length >= n && memcmp(list->bytes + list->length - n, label, n) == 0)
		return;
	if (list->length <= LISTED)
		bh_text_format(list, "%s%s", list->length ? ", " : "", label);
	else if (list->bytes[list->length - 1] != '.')
		bh_text_add(list, " ...");
}

bh_place bh_crystal_place(const bh_crystal *crystal, const bh_cif_item *item)
{
	return (bh_place){ crystal->cif->file,
			   (int)(item ? item->line : crystal->block->line), 1 };
}

const bh_cif_value *bh_crystal_value(const bh_crystal *crystal, const char *names)
{
	const bh_cif_item *item = bh_cif_find(crystal->block, names);

	return item && item->count == 1 && !bh_cif_is_unknown(&item->values[0])
		       ? &item->values[0]
		       : NULL;
}

static const char *const cell_names[6] = { "_cell_length_a",   "_cell_length_b",
					   "_cell_length_c",   "_cell_angle_alpha",
					   "_cell_angle_beta", "_cell_angle_gamma" };

static bool has_cell(const bh_cif_block *block)
{
	return bh_cif_find(block, cell_names[0]) != NULL;
}

/* One value of the cell. An angle that is not mentioned is 90°, as the dictionary says. */
static bool cell_value(bh_crystal *c, double *value, int i)
{
	const bh_cif_item *item = bh_cif_find(c->block, cell_names[i]);
	double low = i < 3 ? 0.5 : 10, high = i < 3 ? 2000 : 170;
	char text[32];

	if (!item && i >= 3) {
		*value = 90;
		bh_crystal_remark(c, BH_NOTE, bh_crystal_place(c, NULL),
				  "%s is not given: 90° is taken", cell_names[i]);
		return true;
	}
	if (!item || bh_cif_is_unknown(&item->values[0]))
		return bh_problem(c->problems, bh_crystal_place(c, item),
				  "%s is not known\nwrite its value into the file",
				  cell_names[i]);
	bh_cif_text(text, sizeof text, &item->values[0]);
	if (!bh_cif_number(value, NULL, &item->values[0]) ||
	    !(*value >= low && *value <= high))
		return bh_problem(c->problems, bh_cif_place(c->cif, &item->values[0]),
				  "%s is \"%s\"\nallowed: a number from %g to %g, like %s",
				  cell_names[i], text, low, high,
				  i < 3 ? "4.7602(4)" : "101.3(1)");
	return true;
}

static bool read_cell(bh_crystal *c)
{
	double v[6];
	bool good = true;
	bh_cell *cell = &c->phase->cell;

	if (!has_cell(c->block))
		return bh_problem(c->problems, bh_crystal_place(c, NULL),
				  "data block \"%s\" has no cell\nit takes _cell_length_a "
				  "and the others",
				  c->block->name);
	for (int i = 0; i < 6; i++)
		good = cell_value(c, &v[i], i) && good;
	if (!good)
		return false;
	*cell = (bh_cell){ v[0], v[1], v[2], v[3], v[4], v[5] };
	/* real cells are reduced to 0.1 and more of the product of their edges */
	if (!(bh_cell_volume_A3(cell) > 0.01 * v[0] * v[1] * v[2]))
		return bh_problem(
			c->problems,
			bh_crystal_place(c, bh_cif_find(c->block, cell_names[3])),
			"this cell is flat: %g, %g, %g° leave a volume of %.3g Å³\neach "
			"angle must be less than the sum of the other two, all three less "
			"than 360",
			v[3], v[4], v[5], bh_cell_volume_A3(cell));
	return true;
}

/* A cell that does not quite obey its group is made to; one that is far off is refused. */
static bool fit_cell(bh_crystal *c)
{
	bh_phase *phase = c->phase;
	double misfit = bh_symmetry_misfit(&phase->group, &phase->cell);
	bh_place place = bh_crystal_place(c, bh_cif_find(c->block, cell_names[0]));

	if (!(misfit <= BH_MISFIT_MOST))
		return bh_problem(c->problems, place,
				  "this cell does not have the symmetry of %s (off by %.2g)\n"
				  "the file contradicts itself: check cell, symbol and "
				  "operations",
				  phase->group.symbol, misfit);
	if (misfit > 2e-5)
		bh_crystal_remark(c, misfit > 1e-3 ? BH_CAUTION : BH_NOTE, place,
				  "the cell does not quite have the symmetry of %s (off by "
				  "%.1g): the mean under its operations is used",
				  phase->group.symbol, misfit);
	if (misfit > 1e-12)
		bh_symmetry_fit_cell(&phase->cell, &phase->group);
	return true;
}

static bool same_word(const char *a, const char *b)
{
	while (*a && (*a | 32) == (*b | 32)) {
		a++;
		b++;
	}
	return *a == *b;
}

/* A list of the data blocks with a cell, for messages. */
static void list_blocks(char *to, size_t room, const bh_cif *cif)
{
	size_t n = 0;

	to[0] = '\0';
	for (size_t i = 0; i < cif->count && n + 40 < room; i++)
		if (has_cell(&cif->blocks[i]))
			n += (size_t)snprintf(to + n, room - n, "%s#%zu %.24s", n ? ", " : "",
					      i + 1, cif->blocks[i].name);
}

/* The block that was asked for by name, else by number. */
static bool named_block(bh_crystal *c, const char *name, bh_place asked)
{
	const bh_cif *cif = c->cif;
	size_t many = 0;
	double number;
	char blocks[200];

	for (size_t i = 0; i < cif->count; i++)
		if (same_word(cif->blocks[i].name, name)) {
			c->block = &cif->blocks[i];
			many++;
		}
	list_blocks(blocks, sizeof blocks, cif);
	if (many > 1)
		return bh_problem(c->problems, asked,
				  "%zu data blocks of %s are named \"%s\"\nask for one by "
				  "its number: %s",
				  many, cif->file, c->block->name, blocks);
	if (many == 0 && bh_number_read(&number, name, strlen(name)) && number >= 1 &&
	    number <= (double)cif->count && number == floor(number))
		c->block = &cif->blocks[(size_t)number - 1];
	if (!c->block)
		return bh_problem(c->problems, asked,
				  "%s has no data block \"%s\"\nit has, with a cell: %s",
				  cif->file, name, *blocks ? blocks : "none");
	return true;
}

static bool first_block(bh_crystal *c, bh_place asked)
{
	const bh_cif *cif = c->cif;
	size_t with = 0;
	char blocks[200];

	for (size_t i = 0; i < cif->count; i++)
		if (has_cell(&cif->blocks[i])) {
			with++;
			c->block = c->block ? c->block : &cif->blocks[i];
		}
	if (!c->block && cif->count == 1) {
		c->block = &cif->blocks[0]; /* what it lacks is said there */
		return true;
	}
	if (!c->block)
		return bh_problem(c->problems, asked,
				  "none of the %zu data blocks of %s has a cell\nit takes "
				  "_cell_length_a and the others",
				  cif->count, cif->file);
	list_blocks(blocks, sizeof blocks, cif);
	if (with > 1)
		bh_crystal_remark(c, BH_NOTE, bh_crystal_place(c, NULL),
				  "%zu data blocks have a cell; the first, \"%s\", is "
				  "taken\nfor another put its number or name behind the "
				  "file: %s",
				  with, c->block->name, blocks);
	return true;
}

static bool build(bh_crystal *c)
{
	bh_err err = { BH_OK, 0, 0, "", "", "" };
	bh_phase *phase = c->phase;

	if (!read_cell(c) || !bh_crystal_group(c) || !fit_cell(c) || !bh_crystal_sites(c) ||
	    !bh_crystal_origin(c) || !bh_crystal_settle(c) || !bh_crystal_tensors(c))
		return false;
	phase->kind = phase->site_count ? BH_PHASE_ATOMS : BH_PHASE_POSITIONS;
	if (!bh_structure_resolve(phase, c->arena, &err)) {
		c->problems->lost = true;
		return false;
	}
	return bh_crystal_compare(c) && !c->problems->lost;
}

static bool unreadable(bh_problems *problems, bh_place asked, const char *path,
		       const char *why)
{
	bh_err err = { .code = BH_OK };

	bh_fail(&err, BH_BAD_SYSTEM, "cannot read %s: %s", path, why);
	err.line = asked.line;
	err.col = asked.col;
	snprintf(err.file, sizeof err.file, "%s", asked.file ? asked.file : path);
	return bh_problem_add(problems, &err);
}

/* The file of a path, and behind a "#" its block; a file whose name holds a "#" is that. */
static bool open_file(FILE **stream, char **path, const char **block, bh_place asked,
		      bh_problems *problems)
{
	struct stat info;
	char *cut;

	*block = NULL;
	if (stat(*path, &info) != 0 && (cut = strrchr(*path, '#')) != NULL) {
		*cut = '\0';
		*block = cut + 1;
	}
	if (stat(*path, &info) == 0 && S_ISDIR(info.st_mode))
		return unreadable(problems, asked, *path, "it is a folder");
	*stream = fopen(*path, "rb");
	return *stream || unreadable(problems, asked, *path, strerror(errno));
}

bool bh_crystal_read(bh_phase *phase, bh_arena *arena, const char *path, bh_place asked,
		     bh_problems *problems)
{
	char *file = bh_arena_text(arena, path), *bytes = NULL;
	bh_cif cif = { .count = 0 };
	bh_crystal c = { .cif = &cif,
			 .phase = phase,
			 .arena = arena,
			 .problems = problems };
	FILE *stream = NULL;
	const char *block;
	bool good;

	if (!file) {
		problems->lost = true;
		return false;
	}
	if (!open_file(&stream, &file, &block, asked, problems))
		return false;
	cif.file = file;
	good = bh_unpack(&bytes, &cif.length, arena, file, stream, problems);
	fclose(stream);
	if (!good)
		return false;
	cif.bytes = bytes;
	if (!bh_cif_parse(&cif, arena, wanted, sizeof wanted / sizeof *wanted, problems))
		return false;
	if (!asked.file)
		asked.file = file;
	if (!(block ? named_block(&c, block, asked) : first_block(&c, asked)))
		return false;
	snprintf(phase->source, sizeof phase->source, "%s, data block %s", file,
		 c.block->name);
	return build(&c);
}
