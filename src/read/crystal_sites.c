#include "read/crystal.h"

#include <math.h>
#include <stdio.h>
#include <string.h>

#include "base/text.h"
#include "base/units.h"
#include "physics/amplitude.h"
#include "physics/cell.h"
#include "physics/structure.h"
#include "read/element.h"

/* The columns of the loop of sites; NULL: not there. */
typedef enum {
	LABEL,
	TYPE,
	X,
	Y,
	Z,
	OCCUPANCY,
	U_ISO,
	B_ISO,
	FLAG,
	ASSEMBLY,
	GROUP,
	COLUMNS
} column;

static const char *const column_names[COLUMNS] = {
	[LABEL] = "_atom_site_label _atom_site_label_atom_id _atom_site_id",
	[TYPE] = "_atom_site_type_symbol",
	[X] = "_atom_site_fract_x _atom_site_cartn_x",
	[Y] = "_atom_site_fract_y _atom_site_cartn_y",
	[Z] = "_atom_site_fract_z _atom_site_cartn_z",
	[OCCUPANCY] = "_atom_site_occupancy",
	[U_ISO] = "_atom_site_u_iso_or_equiv",
	[B_ISO] = "_atom_site_b_iso_or_equiv",
	[FLAG] = "_atom_site_calc_flag",
	[ASSEMBLY] = "_atom_site_disorder_assembly",
	[GROUP] = "_atom_site_disorder_group _atom_site_label_alt_id",
};

/* The loop of sites, what all of them share, and lists of labels for remarks. */
typedef struct {
	bh_crystal *c;
	const bh_cif_item *columns[COLUMNS];
	bool cartesian;
	double to_fractional[3][3];
	bh_element_counts formula;
	double surely[BH_Z_MAX + 1]; /* sites whose element is beyond doubt */
	bh_text dummies, no_occupancy, fractions, ambiguous, no_ion, negative, loose;
} site_loop;

static const bh_cif_value *cell_of(const site_loop *l, column which, size_t row)
{
	const bh_cif_item *item = l->columns[which];

	return item && !bh_cif_is_unknown(&item->values[row]) ? &item->values[row] : NULL;
}

static bool find_columns(site_loop *l)
{
	bh_crystal *c = l->c;

	for (int i = 0; i < COLUMNS; i++)
		l->columns[i] = bh_cif_find(c->block, column_names[i]);
	if (!l->columns[X] || !l->columns[Y] || !l->columns[Z])
		return false;
	l->cartesian = strstr(l->columns[X]->name, "cartn") != NULL;
	for (int i = 0; i < COLUMNS; i++)
		if (l->columns[i] && l->columns[i]->count != l->columns[X]->count)
			l->columns[i] = NULL; /* of another loop */
	return l->columns[Y] && l->columns[Z];
}

/* What a label or type says, in doubt with the help of the formula. */
static bool choose_element(site_loop *l, int *z, const int may[2], int many)
{
	const double *atoms = l->formula.atoms;
	bool first = many > 0 && atoms[may[0]] > 0, second = many > 1 && atoms[may[1]] > 0;

	if (many == 0)
		return false;
	*z = may[0];
	if (many == 1 || !l->formula.known)
		return true;
	if (!first && second)
		*z = may[1];
	/* "CO1" beside "C1" when nothing else can be the cobalt of the formula */
	if (first && second && !(l->surely[may[1]] > 0) &&
	    bh_element_symbol(may[0])[1] == '\0')
		*z = may[1];
	return true;
}

static bool read_element(site_loop *l, bh_site *site, size_t row)
{
	const bh_cif_value *type = cell_of(l, TYPE, row), *label = cell_of(l, LABEL, row);
	const bh_cif_value *said = type ? type : label;
	const bh_cif_item *at = l->columns[X];
	int may[2], many;
	char text[40];

	if (type && bh_element_type(&site->z, &site->charge, type->text, type->length))
		return true;
	many = label && (!type || !l->columns[TYPE])
		       ? bh_element_label(may, label->text, label->length)
		       : 0;
	if (many == 2 && !l->formula.known && !l->columns[TYPE] && label->text[1] <= 'Z')
		bh_crystal_list(&l->ambiguous, site->label);
	if (choose_element(l, &site->z, may, many))
		return true;
	bh_cif_text(text, sizeof text, said);
	return bh_problem(l->c->problems,
			  bh_cif_place(l->c->cif, said ? said : &at->values[row]),
			  "site \"%s\": \"%s\" is no element from H to U\ngive its element "
			  "in _atom_site_type_symbol, or take the site out",
			  site->label, text);
}

/* Elements that labels or types name beyond doubt. */
static void count_sure(site_loop *l)
{
	for (size_t row = 0; row < l->columns[X]->count; row++) {
		const bh_cif_value *type = cell_of(l, TYPE, row),
				   *label = cell_of(l, LABEL, row);
		int may[2], charge;

		if (type && bh_element_type(&may[0], &charge, type->text, type->length))
			l->surely[may[0]]++;
		else if (label &&
			 (bh_element_label(may, label->text, label->length) == 1 ||
			  (label->length > 1 && label->text[1] >= 'a' &&
			   label->text[1] <= 'z')))
			l->surely[may[0]]++;
	}
}

/* A coordinate that is not known makes the site a dummy; *skip says so. */
static bool read_place(site_loop *l, bh_site *site, size_t row, bool *skip)
{
	const bh_cell *cell = &l->c->phase->cell;
	const double edges[3] = { cell->a_A, cell->b_A, cell->c_A };
	double at[3], unit_A = 0;

	*skip = false;
	for (int j = 0; j < 3; j++) {
		const bh_cif_value *value = cell_of(l, (column)(X + j), row);
		bool fraction;
		int decimals;
		char text[40];

		if (!value) {
			*skip = true;
			bh_crystal_list(&l->dummies, site->label);
			return true;
		}
		bh_cif_text(text, sizeof text, value);
		if (!bh_cif_coordinate(&at[j], &decimals, &fraction, value) ||
		    !(fabs(at[j]) <= (l->cartesian ? 1e5 : 1000)))
			return bh_problem(
				l->c->problems, bh_cif_place(l->c->cif, value),
				"site \"%s\": \"%s\" is no coordinate\nallowed: a number "
				"like 0.2346(2); look for values that are shifted",
				site->label, text);
		if (fraction)
			bh_crystal_list(&l->fractions, site->label);
		if (decimals > 0)
			unit_A = fmax(unit_A, pow(10, -decimals) *
						      (l->cartesian ? 1 : edges[j]));
	}
	for (int j = 0; j < 3; j++)
		site->at[j] = !l->cartesian ? at[j]
					    : l->to_fractional[j][0] * at[0] +
						      l->to_fractional[j][1] * at[1] +
						      l->to_fractional[j][2] * at[2];
	/* two images of a place that is off by 0.67 of its last digit are this far apart */
	site->reach_A = fmin(0.25, fmax(0.005, 2.5 * unit_A));
	return true;
}

static bool read_occupancy(site_loop *l, bh_site *site, size_t row)
{
	const bh_cif_value *value = cell_of(l, OCCUPANCY, row);
	const bh_cif_item *given = l->columns[OCCUPANCY];
	char text[40];

	site->occupancy = 1;
	if (!value) {
		if (given && *given->values[row].text == '?')
			bh_crystal_list(&l->no_occupancy, site->label);
		return true;
	}
	bh_cif_text(text, sizeof text, value);
	if (!bh_cif_number(&site->occupancy, NULL, value) ||
	    !(site->occupancy >= 0 && site->occupancy <= 1.05))
		return bh_problem(l->c->problems, bh_cif_place(l->c->cif, value),
				  "site \"%s\": occupancy \"%s\"\nallowed: 0 to 1",
				  site->label, text);
	site->occupancy = fmin(1, site->occupancy);
	return true;
}

/* U or B; a negative one is no displacement. */
static bool read_displacement(site_loop *l, bh_site *site, size_t row)
{
	const bh_cif_value *u = cell_of(l, U_ISO, row), *b = cell_of(l, B_ISO, row);
	const bh_cif_value *value = b ? b : u;
	double number;
	char text[40];

	site->b_iso_A2 = BH_B_ISO_DEFAULT_A2;
	site->b_known = false;
	if (!value)
		return true;
	bh_cif_text(text, sizeof text, value);
	if (!bh_cif_number(&number, NULL, value) || !(fabs(number) <= 1000))
		return bh_problem(l->c->problems, bh_cif_place(l->c->cif, value),
				  "site \"%s\": displacement \"%s\"\nallowed: a number of "
				  "Å², like 0.0123(4), or ?",
				  site->label, text);
	if (number < 0)
		bh_crystal_list(&l->negative, site->label);
	site->b_iso_A2 = fmax(0, b ? number : 8 * BH_PI * BH_PI * number);
	site->b_known = true;
	if (site->b_iso_A2 > 30)
		bh_crystal_list(&l->loose, site->label);
	return true;
}

static bool read_site(site_loop *l, bh_site *site, size_t row, bool *skip)
{
	const bh_cif_value *flag = cell_of(l, FLAG, row);
	const bh_cif_value *label = cell_of(l, LABEL, row);

	*site = (bh_site){ .place = bh_cif_place(l->c->cif, &l->columns[X]->values[row]) };
	bh_cif_text(site->label, sizeof site->label,
		    label ? label : cell_of(l, TYPE, row));
	if (!*site->label)
		snprintf(site->label, sizeof site->label, "site %zu", row + 1);
	*skip = flag && flag->length == 3 && memcmp(flag->text, "dum", 3) == 0;
	if (*skip) {
		bh_crystal_list(&l->dummies, site->label);
		return true;
	}
	if (!read_place(l, site, row, skip))
		return false;
	if (*skip)
		return true;
	if (!read_element(l, site, row) || !read_occupancy(l, site, row) ||
	    !read_displacement(l, site, row))
		return false;
	*skip = !(site->occupancy > 0);
	bh_cif_text(site->assembly, sizeof site->assembly, cell_of(l, ASSEMBLY, row));
	bh_cif_text(site->alternative, sizeof site->alternative, cell_of(l, GROUP, row));
	if (site->charge && !bh_form_factor_find(site->z, site->charge))
		bh_crystal_list(&l->no_ion, site->label);
	return true;
}

static void remark(site_loop *l, bh_severity severity, const bh_text *labels,
		   const char *text)
{
	if (labels->length)
		bh_crystal_remark(l->c, severity,
				  bh_crystal_place(l->c, l->columns[X]), "%s: %s", text,
				  labels->bytes);
}

static void remark_all(site_loop *l)
{
	remark(l, BH_NOTE, &l->dummies,
	       "sites without a place, or marked as dummies, are left out");
	remark(l, BH_CAUTION, &l->no_occupancy,
	       "the occupancy of these sites is not known, 1 is taken");
	remark(l, BH_NOTE, &l->fractions, "coordinates written as fractions");
	remark(l, BH_CAUTION, &l->ambiguous,
	       "these labels may mean two elements, _atom_site_type_symbol would tell");
	remark(l, BH_NOTE, &l->no_ion,
	       "no form factor for the charge of these ions, the neutral atom's is used");
	remark(l, BH_CAUTION, &l->negative, "negative displacement, 0 is taken");
	remark(l, BH_CAUTION, &l->loose,
	       "displacements beyond B = 30 Å², perhaps B where U is said");
	bh_text_free(&l->loose);
	bh_text_free(&l->dummies);
	bh_text_free(&l->no_occupancy);
	bh_text_free(&l->fractions);
	bh_text_free(&l->ambiguous);
	bh_text_free(&l->no_ion);
	bh_text_free(&l->negative);
}

/* Cartesian coordinates have x along a and z along c*, as DDL2 files do.
 *   from  International Tables G (2005), 3.6.6 */
static void prepare_axes(site_loop *l)
{
	bh_mat3 axes, inverse;

	bh_cell_axes(axes.at, &l->c->phase->cell);
	if (bh_mat3_invert(&inverse, &axes))
		memcpy(l->to_fractional, inverse.at, sizeof inverse.at);
}

static bool read_all(site_loop *l)
{
	bh_crystal *c = l->c;
	bh_phase *phase = c->phase;
	size_t count = l->columns[X]->count;

	if (count > BH_SITES_MOST)
		return bh_problem(c->problems, bh_crystal_place(c, l->columns[X]),
				  "%zu sites\nallowed: up to %d; the lines of a larger "
				  "structure overlap everywhere",
				  count, BH_SITES_MOST);
	phase->sites = bh_new(c->arena, bh_site, count);
	if (!phase->sites) {
		c->problems->lost = true;
		return false;
	}
	for (size_t row = 0; row < count; row++) {
		bool skip;

		if (!read_site(l, &phase->sites[phase->site_count], row, &skip))
			return false;
		phase->site_count += !skip;
	}
	return true;
}

bool bh_crystal_sites(bh_crystal *c)
{
	site_loop l = { .c = c };
	const bh_cif_value *formula = bh_crystal_value(c, "_chemical_formula_sum");
	bool good;

	if (formula)
		bh_element_formula(&l.formula, formula->text, formula->length);
	if (!find_columns(&l)) {
		bh_crystal_remark(c, BH_CAUTION, bh_crystal_place(c, NULL),
				  "the file gives no coordinates: positions of lines only, no "
				  "intensities");
		return true;
	}
	if (l.cartesian)
		prepare_axes(&l);
	count_sure(&l);
	good = read_all(&l);
	if (good && c->phase->site_count == 0)
		bh_crystal_remark(c, BH_CAUTION, bh_crystal_place(c, l.columns[X]),
				  "no site has coordinates: positions of lines only, no "
				  "intensities");
	remark_all(&l);
	return good && !c->problems->lost;
}
