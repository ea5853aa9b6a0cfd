#include "read/crystal.h"

#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

#include "base/text.h"
#include "base/units.h"
#include "physics/cell.h"

typedef enum { AS_U, AS_B, AS_BETA, KINDS } tensor_kind;

/* Columns of the loop of tensors, in the order of bh_site.beta. */
static const char *const column_names[KINDS][6] = {
	{ "_atom_site_aniso_u_11 _atom_site_anisotrop_u[1][1]",
	  "_atom_site_aniso_u_22 _atom_site_anisotrop_u[2][2]",
	  "_atom_site_aniso_u_33 _atom_site_anisotrop_u[3][3]",
	  "_atom_site_aniso_u_12 _atom_site_anisotrop_u[1][2]",
	  "_atom_site_aniso_u_13 _atom_site_anisotrop_u[1][3]",
	  "_atom_site_aniso_u_23 _atom_site_anisotrop_u[2][3]" },
	{ "_atom_site_aniso_b_11", "_atom_site_aniso_b_22", "_atom_site_aniso_b_33",
	  "_atom_site_aniso_b_12", "_atom_site_aniso_b_13", "_atom_site_aniso_b_23" },
	{ "_atom_site_aniso_beta_11", "_atom_site_aniso_beta_22",
	  "_atom_site_aniso_beta_33", "_atom_site_aniso_beta_12",
	  "_atom_site_aniso_beta_13", "_atom_site_aniso_beta_23" },
};

static const int axes_of[6][2] = { { 0, 0 }, { 1, 1 }, { 2, 2 },
				   { 0, 1 }, { 0, 2 }, { 1, 2 } };

/* The row of each label, sorted. */
typedef struct {
	const bh_cif_value *label;
	size_t row;
} labelled;

static int by_label(const void *a, const void *b)
{
	const bh_cif_value *p = ((const labelled *)a)->label,
			   *q = ((const labelled *)b)->label;
	unsigned n = p->length < q->length ? p->length : q->length;
	int order = memcmp(p->text, q->text, n);

	return order ? order : (p->length > q->length) - (p->length < q->length);
}

typedef struct {
	bh_crystal *c;
	const bh_cif_item *columns[6];
	tensor_kind kind;
	double edge_A[3]; /* of the reciprocal cell, 1/Å */
	labelled *rows;
	size_t count;
} tensors;

/* The tensors' loop; false: none. */
static bool find_columns(tensors *t, const bh_cif_item *labels)
{
	for (t->kind = 0; t->kind < KINDS; t->kind++) {
		bool all = true;

		for (int i = 0; i < 6; i++) {
			t->columns[i] =
				bh_cif_find(t->c->block, column_names[t->kind][i]);
			all = all && t->columns[i] &&
			      t->columns[i]->count == labels->count;
		}
		if (all)
			return true;
	}
	return false;
}

/* β from U: 2π² U a* b*; from B: ¼ B a* b*.
 *   from  K. N. Trueblood et al., Acta Cryst. A52 (1996) 770 */
static double scale(const tensors *t, int i)
{
	double product = t->edge_A[axes_of[i][0]] * t->edge_A[axes_of[i][1]];

	return t->kind == AS_U	 ? 2 * BH_PI * BH_PI * product
	       : t->kind == AS_B ? product / 4
				 : 1;
}

static bool is_positive(const double b[6])
{
	return b[0] > 0 && b[1] > 0 && b[2] > 0 && b[0] * b[1] > b[3] * b[3] &&
	       b[0] * (b[1] * b[2] - b[5] * b[5]) - b[3] * (b[3] * b[2] - b[5] * b[4]) +
			       b[4] * (b[3] * b[5] - b[1] * b[4]) >
		       0;
}

/* The isotropic B of a tensor: 8π² a third of its trace in Å. */
static double mean_B_A2(const double beta[6], const bh_cell *cell)
{
	bh_mat3 metric = bh_cell_metric(cell);
	double sum = 0;

	for (int i = 0; i < 6; i++)
		sum += (i < 3 ? 1 : 2) * beta[i] *
		       metric.at[axes_of[i][0]][axes_of[i][1]];
	return 4.0 / 3 * sum;
}

/* Give a site its tensor. *odd: it is no ellipsoid, the isotropic value stays. */
static bool take(const tensors *t, bh_site *site, size_t row, bool *odd)
{
	double beta[6];

	*odd = false;
	for (int i = 0; i < 6; i++) {
		const bh_cif_value *value = &t->columns[i]->values[row];
		char text[40];

		if (bh_cif_is_unknown(value))
			return true;
		bh_cif_text(text, sizeof text, value);
		if (!bh_cif_number(&beta[i], NULL, value) || !(fabs(beta[i]) < 1000))
			return bh_problem(t->c->problems, bh_cif_place(t->c->cif, value),
					  "site \"%s\": displacement \"%s\"\nallowed: a "
					  "number like 0.0123(4), or ?",
					  site->label, text);
		beta[i] *= scale(t, i);
	}
	*odd = !is_positive(beta);
	if (*odd)
		return true;
	memcpy(site->beta, beta, sizeof beta);
	site->tensor_known = true;
	if (!site->b_known)
		site->b_iso_A2 = mean_B_A2(beta, &t->c->phase->cell);
	return true;
}

static bool sort_rows(tensors *t, const bh_cif_item *labels)
{
	t->rows = bh_new(t->c->arena, labelled, labels->count);
	if (!t->rows) {
		t->c->problems->lost = true;
		return false;
	}
	for (size_t i = 0; i < labels->count; i++)
		t->rows[i] = (labelled){ &labels->values[i], i };
	t->count = labels->count;
	qsort(t->rows, t->count, sizeof *t->rows, by_label);
	return true;
}

static bool take_all(const tensors *t, bh_text *odd)
{
	bh_phase *phase = t->c->phase;

	for (size_t i = 0; i < phase->site_count; i++) {
		bh_site *site = &phase->sites[i];
		bh_cif_value label = { .text = site->label,
				       .length = (unsigned)strlen(site->label) };
		const labelled *found = bsearch(&(labelled){ &label, 0 }, t->rows,
						t->count, sizeof *t->rows, by_label);
		bool not_positive;

		if (!found)
			continue;
		if (!take(t, site, found->row, &not_positive))
			return false;
		if (not_positive)
			bh_crystal_list(odd, site->label);
	}
	return true;
}

bool bh_crystal_tensors(bh_crystal *c)
{
	const bh_cif_item *labels = bh_cif_find(
		c->block, "_atom_site_aniso_label _atom_site_anisotrop_id");
	tensors t = { .c = c };
	bh_text odd = { 0 };
	bh_mat3 reciprocal;
	bool good;

	if (!labels || !find_columns(&t, labels))
		return true;
	if (!bh_cell_reciprocal(&reciprocal, &c->phase->cell))
		return true; /* a cell that closes nothing was refused */
	for (int i = 0; i < 3; i++)
		t.edge_A[i] = sqrt(reciprocal.at[i][i]);
	good = sort_rows(&t, labels) && take_all(&t, &odd);
	if (odd.length)
		bh_crystal_remark(c, BH_CAUTION, bh_crystal_place(c, labels),
				  "these displacement tensors are no ellipsoids and are not "
				  "used: %s",
				  odd.bytes);
	bh_text_free(&odd);
	return good;
}
