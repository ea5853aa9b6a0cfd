#include "physics/symmetry.h"

#include <math.h>
#include <stdio.h>
#include <string.h>

#include <spglib.h>

#include "base/nearest.h"
#include "physics/cell.h"
#include "physics/operations.h"
#include "physics/symbol.h"

enum { ROWS = 530, SHOWN = 60 };

/* Groups in centred cells beyond the table: a row with a primitive cell, and the letter of
 * the lattice that is added to it. */
static const struct {
	const char *name;
	int number, row;
} centred[] = {
	{ "A 1", 1, 1 },	   { "B 1", 1, 1 },	   { "C 1", 1, 1 },
	{ "F 1", 1, 1 },	   { "I 1", 1, 1 },	   { "A -1", 2, 2 },
	{ "B -1", 2, 2 },	   { "C -1", 2, 2 },	   { "F -1", 2, 2 },
	{ "I -1", 2, 2 },	   { "C 1 1 2", 3, 4 },	   { "C 1 1 21", 4, 7 },
	{ "C 1 21 1", 5, 6 },	   { "I 1 21 1", 5, 6 },   { "F 1 2/m 1", 12, 57 },
	{ "C 4 2 2", 89, 366 },	   { "F 4 2 2", 97, 366 }, { "C -4 2 m", 115, 388 },
	{ "F 4/m m m", 139, 400 },
};

enum { CENTRED = sizeof centred / sizeof *centred };

static bh_symbol_row row_of(int row, SpglibSpacegroupType *type)
{
	*type = spg_get_spacegroup_type(row);
	return (bh_symbol_row){ .row = row,
				.number = type->number,
				.choice = type->choice,
				.hall = type->hall_symbol,
				.international = type->international,
				.full = type->international_full };
}

/* The first of the rows that fit best, 0: none. Rows of a number stand together: unique axis
 * b, cell choice 1, origin 1, hexagonal axes first. *but_for_choice: the symbol alone fits
 * some row. */
static int find_row(const bh_symbol *symbol, bool *but_for_choice)
{
	int found = 0, best = 0;

	*but_for_choice = false;
	for (int i = 1; i <= ROWS; i++) {
		SpglibSpacegroupType type;
		bh_symbol_row row = row_of(i, &type);
		int fit = bh_symbol_fit(symbol, &row);

		*but_for_choice = *but_for_choice || fit > 0;
		if (fit > best && bh_symbol_choice(symbol, &row)) {
			found = i;
			best = fit;
		}
	}
	return found;
}

/* The Hall symbol of a centred cell: "-P 1" with C is "-C 1". */
static void centred_hall(char *hall, size_t room, int i)
{
	char *lattice;

	snprintf(hall, room, "%s", spg_get_spacegroup_type(centred[i].row).hall_symbol);
	lattice = strchr(hall, 'P');
	if (lattice)
		*lattice = centred[i].name[0];
}

static int find_centred(const bh_symbol *symbol)
{
	for (int i = 0; i < CENTRED && symbol->choice[0] == '\0'; i++) {
		char hall[BH_SYMBOL_ROOM];
		bh_symbol_row row = { .international = centred[i].name,
				      .full = centred[i].name,
				      .choice = "",
				      .hall = hall };

		centred_hall(hall, sizeof hall, i);
		if (bh_symbol_fit(symbol, &row) > 0)
			return i;
	}
	return CENTRED;
}

typedef struct {
	size_t distance;
	char name[BH_SYMBOL_ROOM];
} candidate;

/* Keep the nearest three names, each once. */
static void offer(candidate best[3], const char *name, size_t distance)
{
	candidate c = { distance, "" };

	snprintf(c.name, sizeof c.name, "%s", name);
	for (int i = 0; i < 3; i++)
		if (strcmp(best[i].name, name) == 0)
			return;
	for (int i = 0; i < 3; i++)
		if (c.distance < best[i].distance) {
			candidate swap = best[i];

			best[i] = c;
			c = swap;
		}
}

/* Choices that a symbol has, as ":1, :2". */
static void write_choices(char *to, size_t room, const bh_symbol *symbol)
{
	size_t n = 0;

	to[0] = '\0';
	for (int i = 1; i <= ROWS; i++) {
		SpglibSpacegroupType type;
		bh_symbol_row row = row_of(i, &type);

		if (type.choice[0] && n + 12 < room && bh_symbol_fit(symbol, &row) > 0)
			n += (size_t)snprintf(to + n, room - n, "%s:%.6s", n ? ", " : "",
					      type.choice);
	}
}

static bool wrong_choice(const char *text, const bh_symbol *symbol, bh_err *err)
{
	char choices[200];

	write_choices(choices, sizeof choices, symbol);
	return bh_fail(
		err, BH_BAD_INPUT, "space group \"%.*s\" has no choice \":%s\"\n%s%s",
		SHOWN, text, symbol->choice,
		choices[0] ? "it has " : "it has one setting: leave the choice out",
		choices);
}

static bool unknown(const char *text, const char *squeezed, bh_err *err)
{
	/* a name that shares nothing with the text is no help */
	size_t most = strlen(squeezed);
	candidate best[3] = { { most, "" }, { most, "" }, { most, "" } };
	char nearest[3 * BH_SYMBOL_ROOM] = "";

	for (int i = 1; i <= ROWS; i++) {
		SpglibSpacegroupType type;
		bh_symbol_row row = row_of(i, &type);
		char name[BH_SYMBOL_ROOM];
		bh_symbol other;

		bh_symbol_write(name, sizeof name, &row);
		name[strcspn(name, ":")] = '\0';
		if (bh_symbol_read(&other, name))
			offer(best, name, bh_nearest_distance(squeezed, other.squeezed));
	}
	for (size_t i = 0, n = 0; i < 3 && best[i].name[0]; i++)
		n += (size_t)snprintf(nearest + n, sizeof nearest - n, "%s\"%.20s\"%s",
				      i ? ", " : "nearest: ", best[i].name,
				      i == 2 || !best[i + 1].name[0] ? "; " : "");
	return bh_fail(
		err, BH_BAD_INPUT,
		"unknown space group \"%.*s\"\n%sallowed: a Hermann-Mauguin or Hall "
		"symbol, or a number 1 to 230, with :1 :2 :H :R where there is a choice",
		SHOWN, text, nearest);
}

bool bh_symmetry_row(bh_space_group *group, bh_arena *arena, int hall_number, bh_err *err)
{
	int rotations[BH_MAX_IMAGES][3][3], count;
	double shifts[BH_MAX_IMAGES][3];
	SpglibSpacegroupType type;
	bh_symbol_row row;

	/* the database reads out of range without complaint */
	if (hall_number < 1 || hall_number > ROWS)
		return bh_fail(err, BH_BAD_INPUT,
			       "no row %d of the space-group table\n1 to %d", hall_number,
			       ROWS);
	row = row_of(hall_number, &type);
	count = spg_get_symmetry_from_database(rotations, shifts, hall_number);
	*group = (bh_space_group){ .number = type.number,
				   .hall_number = hall_number,
				   .op_count = (size_t)count };
	bh_symbol_write(group->symbol, sizeof group->symbol, &row);
	snprintf(group->hall, sizeof group->hall, "%s", type.hall_symbol);
	snprintf(group->choice, sizeof group->choice, "%.7s", type.choice);
	group->ops = bh_new(arena, bh_symop, group->op_count);
	if (!group->ops)
		return bh_fail_memory(err);
	for (size_t i = 0; i < group->op_count; i++) {
		memcpy(group->ops[i].rotation, rotations[i], sizeof rotations[i]);
		for (int j = 0; j < 3; j++) /* all are multiples of 1/24 */
			group->ops[i].shift[j] = round(shifts[i][j] * 24) / 24;
	}
	group->centrosymmetric = bh_operations_centric(group);
	return true;
}

/* The points of a lattice besides the corner: A B C one, I one, F three. */
static size_t lattice_points(double points[3][3], char letter)
{
	static const double faces[3][3] = { { 0, .5, .5 }, { .5, 0, .5 }, { .5, .5, 0 } };

	if (letter == 'F') {
		memcpy(points, faces, sizeof faces);
		return 3;
	}
	if (letter == 'I')
		memcpy(points[0], (const double[3]){ .5, .5, .5 }, sizeof points[0]);
	else
		memcpy(points[0], faces[letter - 'A'], sizeof points[0]);
	return 1;
}

static bool make_centred(bh_space_group *group, bh_arena *arena, int i, bh_err *err)
{
	double points[3][3];
	size_t more = lattice_points(points, centred[i].name[0]), n;

	if (!bh_symmetry_row(group, arena, centred[i].row, err))
		return false;
	n = group->op_count;
	group->ops = bh_grow(arena, group->ops, bh_symop, n, n * (more + 1));
	if (!group->ops)
		return bh_fail_memory(err);
	for (size_t p = 0; p < more; p++)
		for (size_t k = 0; k < n; k++) {
			bh_symop *op = &group->ops[(p + 1) * n + k];

			*op = group->ops[k];
			for (int j = 0; j < 3; j++)
				op->shift[j] = fmod(op->shift[j] + points[p][j], 1);
		}
	group->op_count = n * (more + 1);
	group->number = centred[i].number;
	group->hall_number = 0;
	group->choice[0] = '\0';
	snprintf(group->symbol, sizeof group->symbol, "%s", centred[i].name);
	centred_hall(group->hall, sizeof group->hall, i);
	return true;
}

bool bh_symmetry_find(bh_space_group *group, bool *origin_open, bh_arena *arena,
		      const char *text, bh_err *err)
{
	bh_symbol symbol;
	bh_symbol_row found;
	SpglibSpacegroupType type;
	bool but_for_choice;
	int row, extra;

	*origin_open = false;
	if (!bh_symbol_read(&symbol, text))
		return unknown(text, text, err);
	row = find_row(&symbol, &but_for_choice);
	extra = row ? CENTRED : find_centred(&symbol);
	if (extra < CENTRED)
		return make_centred(group, arena, extra, err);
	if (!row && but_for_choice)
		return wrong_choice(text, &symbol, err);
	if (!row)
		return unknown(text, symbol.squeezed, err);
	if (!bh_symmetry_row(group, arena, row, err))
		return false;
	found = row_of(row, &type);
	/* choice 1 stands in the table only beside a choice 2 */
	*origin_open = type.choice[0] == '1' && symbol.choice[0] == '\0' &&
		       !bh_symbol_is_hall(&symbol, &found);
	return true;
}

/* The row that fits a symbol best among those that leave the cell as it is; 0: none. */
static int row_for_cell(const bh_symbol *symbol, const bh_cell *cell)
{
	int found = 0, best = 0;

	for (int i = 1; i <= ROWS; i++) {
		SpglibSpacegroupType type;
		bh_symbol_row row = row_of(i, &type);
		int fit = bh_symbol_fit(symbol, &row), rotations[BH_MAX_IMAGES][3][3];
		double shifts[BH_MAX_IMAGES][3];
		bh_symop ops[BH_MAX_IMAGES];
		bh_space_group group = { .ops = ops };

		if (fit <= best || !bh_symbol_choice(symbol, &row))
			continue;
		group.op_count =
			(size_t)spg_get_symmetry_from_database(rotations, shifts, i);
		for (size_t n = 0; n < group.op_count; n++)
			memcpy(ops[n].rotation, rotations[n], sizeof rotations[n]);
		if (bh_symmetry_misfit(&group, cell) > BH_MISFIT_MOST)
			continue;
		found = i;
		best = fit;
	}
	return found;
}

bool bh_symmetry_find_for_cell(bh_space_group *group, bool *origin_open, bh_arena *arena,
			       const bh_symmetry_asked *asked, bh_err *err)
{
	SpglibSpacegroupType type;
	bh_symbol_row found;
	bh_symbol symbol;
	int row = bh_symbol_read(&symbol, asked->text) ? row_for_cell(&symbol, asked->cell)
						       : 0;

	if (!row)
		return bh_symmetry_find(group, origin_open, arena, asked->text, err);
	found = row_of(row, &type);
	*origin_open = type.choice[0] == '1' && symbol.choice[0] == '\0' &&
		       !bh_symbol_is_hall(&symbol, &found);
	return bh_symmetry_row(group, arena, row, err);
}

/* Whether the operations are those of a row of the table. */
static bool is_row(const bh_space_group *group, int row)
{
	int rotations[BH_MAX_IMAGES][3][3];
	double shifts[BH_MAX_IMAGES][3];
	bh_symop ops[BH_MAX_IMAGES];
	bh_space_group other = { .ops = ops };

	other.op_count =
		(size_t)spg_get_symmetry_from_database(rotations, shifts, row);
	if (other.op_count != group->op_count)
		return false;
	for (size_t i = 0; i < other.op_count; i++) {
		memcpy(ops[i].rotation, rotations[i], sizeof rotations[i]);
		memcpy(ops[i].shift, shifts[i], sizeof shifts[i]);
	}
	return bh_operations_equal(group, &other);
}

static void take_names(bh_space_group *group, int number)
{
	SpglibSpacegroupType type;
	bh_symbol_row row = row_of(number, &type);

	group->number = type.number;
	group->hall_number = number;
	bh_symbol_write(group->symbol, sizeof group->symbol, &row);
	snprintf(group->hall, sizeof group->hall, "%s", type.hall_symbol);
	snprintf(group->choice, sizeof group->choice, "%.7s", type.choice);
}

/* The type of a group in a setting or with an origin that is not in the table; 0: none. */
static int type_of(const bh_space_group *group, const bh_cell *cell)
{
	int rotations[BH_MAX_IMAGES][3][3];
	double shifts[BH_MAX_IMAGES][3], lattice[3][3];

	bh_cell_axes(lattice, cell);
	for (size_t i = 0; i < group->op_count; i++) {
		memcpy(rotations[i], group->ops[i].rotation, sizeof rotations[i]);
		memcpy(shifts[i], group->ops[i].shift, sizeof shifts[i]);
	}
	return spg_get_spacegroup_type_from_symmetry(rotations, shifts,
						     (int)group->op_count, lattice, 1e-4)
		.number;
}

bool bh_symmetry_name(bh_space_group *group, const bh_cell *cell)
{
	int number;

	for (int row = 1; row <= ROWS; row++)
		if (is_row(group, row)) {
			take_names(group, row);
			return true;
		}
	number = type_of(group, cell);
	if (number < 1 || number > 230)
		return false;
	for (int row = 1; row <= ROWS; row++)
		if (spg_get_spacegroup_type(row).number == number) {
			take_names(group, row);
			break;
		}
	/* the kind is known, the setting has no name */
	group->hall_number = 0;
	group->hall[0] = '\0';
	group->choice[0] = '\0';
	return true;
}

/* Rᵀ G R of one operation. */
static bh_mat3 turned(const bh_mat3 *metric, const bh_symop *op)
{
	bh_mat3 out = { { { 0 } } };

	for (int i = 0; i < 3; i++)
		for (int j = 0; j < 3; j++)
			for (int k = 0; k < 3; k++)
				for (int l = 0; l < 3; l++)
					out.at[i][j] += op->rotation[k][i] *
							metric->at[k][l] *
							op->rotation[l][j];
	return out;
}

double bh_symmetry_misfit(const bh_space_group *group, const bh_cell *cell)
{
	bh_mat3 metric = bh_cell_metric(cell);
	double worst = 0;

	for (size_t n = 0; n < group->op_count; n++) {
		bh_mat3 other = turned(&metric, &group->ops[n]);

		for (int i = 0; i < 3; i++)
			for (int j = 0; j < 3; j++) {
				double scale = sqrt(metric.at[i][i] * metric.at[j][j]);

				/* half: an edge that is off by 1 % makes its square off by 2 % */
				worst = fmax(worst,
					     fabs(other.at[i][j] - metric.at[i][j]) /
						     scale / 2);
			}
	}
	return worst;
}

/* The metric that the operations leave of a given one: the mean of Rᵀ G R. */
static bh_mat3 mean_metric(const bh_space_group *group, const bh_mat3 *metric)
{
	bh_mat3 mean = { { { 0 } } };

	for (size_t n = 0; n < group->op_count; n++) {
		bh_mat3 other = turned(metric, &group->ops[n]);

		for (int i = 0; i < 3; i++)
			for (int j = 0; j < 3; j++)
				mean.at[i][j] += other.at[i][j] / (double)group->op_count;
	}
	return mean;
}

/* a b c and the cosines of α β γ of a metric. */
static void cell_values(double values[6], const bh_mat3 *metric)
{
	for (int i = 0; i < 3; i++) {
		int j = (i + 1) % 3, k = (i + 2) % 3;

		values[i] = sqrt(metric->at[i][i]);
		values[3 + i] =
			metric->at[j][k] / sqrt(metric->at[j][j] * metric->at[k][k]);
	}
}

void bh_symmetry_fit_cell(bh_cell *cell, const bh_space_group *group)
{
	bh_mat3 metric = bh_cell_metric(cell), mean = mean_metric(group, &metric);

	bh_cell_of_metric(cell, &mean);
}

unsigned bh_symmetry_free_cell(const bh_space_group *group)
{
	/* two cells without any regularity, made to obey the group: a value that is the same
	 * in both is fixed, one that equals an earlier one in both follows from it */
	static const bh_mat3 wild[2] = {
		{ { { 31.7, 3.1, -4.3 }, { 3.1, 47.9, 5.9 }, { -4.3, 5.9, 71.3 } } },
		{ { { 83.9, -7.7, 2.3 }, { -7.7, 29.3, -6.1 }, { 2.3, -6.1, 53.1 } } },
	};
	double a[6], b[6];
	unsigned free_bits = 0;

	for (int n = 0; n < 2; n++) {
		bh_mat3 mean = mean_metric(group, &wild[n]);

		cell_values(n ? b : a, &mean);
	}
	for (int i = 0; i < 6; i++) {
		bool is_free = fabs(a[i] - b[i]) > 1e-9;

		for (int j = i < 3 ? 0 : 3; j < i; j++)
			is_free = is_free &&
				  (fabs(a[i] - a[j]) > 1e-9 || fabs(b[i] - b[j]) > 1e-9);
		free_bits |= is_free ? 1u << i : 0;
	}
	return free_bits;
}

/* Operation on a point, into [0, 1). */
static void move(double to[3], const bh_symop *op, const double at[3])
{
	for (int j = 0; j < 3; j++) {
		to[j] = op->rotation[j][0] * at[0] + op->rotation[j][1] * at[1] +
			op->rotation[j][2] * at[2] + op->shift[j];
		to[j] -= floor(to[j]);
		if (to[j] >= 1) /* a tiny negative rounds up to 1 */
			to[j] = 0;
	}
}

/* The shortest way from a to b, modulo whole cells. */
static void way(double away[3], const double a[3], const double b[3])
{
	for (int j = 0; j < 3; j++) {
		away[j] = b[j] - a[j];
		away[j] -= round(away[j]);
	}
}

void bh_symmetry_settle(double exact[3], const bh_space_group *group, const bh_cell *cell,
			const double at[3], double within_A)
{
	bh_mat3 metric = bh_cell_metric(cell);
	double sum[3] = { 0 }, n = 0;
	double reach_A = within_A > 0 ? within_A : BH_REACH_DEFAULT_A;

	for (size_t i = 0; i < group->op_count; i++) {
		double image[3], away[3];

		move(image, &group->ops[i], at);
		way(away, at, image);
		if (bh_mat3_form(&metric, away, away) >= reach_A * reach_A)
			continue;
		n++;
		for (int j = 0; j < 3; j++)
			sum[j] += away[j];
	}
	for (int j = 0; j < 3; j++)
		exact[j] = at[j] + (n > 0 ? sum[j] / n : 0);
}

double bh_symmetry_image_A(const bh_space_group *group, const bh_cell *cell,
			   const double at[3], double beyond_A)
{
	bh_mat3 metric = bh_cell_metric(cell);
	double nearest = HUGE_VAL;

	for (size_t i = 0; i < group->op_count; i++) {
		double image[3], away[3], d_A;

		move(image, &group->ops[i], at);
		way(away, at, image);
		d_A = sqrt(bh_mat3_form(&metric, away, away));
		if (d_A >= beyond_A && d_A < nearest)
			nearest = d_A;
	}
	return nearest;
}

size_t bh_symmetry_orbit(const bh_space_group *group, const bh_cell *cell,
			 const double at[3], double within_A,
			 double images[BH_MAX_IMAGES][3])
{
	bh_mat3 metric = bh_cell_metric(cell);
	double reach_A = within_A > 0 ? within_A : BH_REACH_DEFAULT_A;
	double exact[3];
	size_t count = 0;

	bh_symmetry_settle(exact, group, cell, at, within_A);
	for (size_t n = 0; n < group->op_count; n++) {
		double image[3];
		bool seen = false;

		move(image, &group->ops[n], exact);
		for (size_t i = 0; i < count && !seen; i++) {
			double away[3];

			way(away, images[i], image);
			seen = bh_mat3_form(&metric, away, away) < reach_A * reach_A;
		}
		if (!seen)
			memcpy(images[count++], image, sizeof image);
	}
	return count;
}
