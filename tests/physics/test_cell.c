#include "support/near.h"

#include <math.h>

#include "physics/cell.h"

/* Volumes and distances from a general-purpose library (cctbx uctbx; gemmi gives the same);
 * cells: low albite, kyanite, gypsum, corundum (two kinds of axes), anatase, goethite. */
static void distances(void **state)
{
	static const struct {
		bh_cell cell;
		double volume_A3, d_A[4];
	} rows[] = {
		{ { 8.1372, 12.787, 7.1574, 94.245, 116.605, 87.809 },
		  664.037019,
		  { 7.2754757, 1.7883689, 2.4813436, 2.9278054 } },
		{ { 7.1262, 7.852, 5.5724, 89.99, 101.11, 106.03 },
		  293.597818,
		  { 6.7101195, 1.6037495, 1.9682645, 1.8123726 } },
		{ { 5.679, 15.202, 6.522, 90, 118.43, 90 },
		  495.153171,
		  { 4.9941093, 1.5237024, 1.8655878, 3.1680912 } },
		{ { 4.7605, 4.7605, 12.9956, 90, 90, 120 },
		  255.053981,
		  { 4.1227139, 2.0860757, 1.5152774, 1.0274522 } },
		{ { 5.1282, 5.1282, 5.1282, 55.28, 55.28, 55.28 },
		  84.902376,
		  { 3.9277789, 0.9354821, 0.8991952, 0.8804145 } },
		{ { 3.7845, 3.7845, 9.5143, 90, 90, 90 },
		  136.267993,
		  { 3.7845000, 1.4931595, 1.1606011, 0.9414814 } },
		{ { 9.9613, 3.0226, 4.6017, 90, 90, 90 },
		  138.552702,
		  { 9.9613000, 1.0703194, 1.6032298, 0.7456634 } },
	};
	static const int planes[4][3] = {
		{ 1, 0, 0 }, { 1, -2, 3 }, { -3, 1, 2 }, { 0, 4, -1 }
	};

	(void)state;
	for (size_t i = 0; i < sizeof rows / sizeof *rows; i++) {
		bh_mat3 reciprocal, metric = bh_cell_metric(&rows[i].cell);

		assert_near(bh_cell_volume_A3(&rows[i].cell), rows[i].volume_A3, 6e-7,
			    "volume");
		assert_ratio(bh_mat3_det(&metric), pow(rows[i].volume_A3, 2), 1e-8,
			     "det G = V²");
		assert_true(bh_cell_reciprocal(&reciprocal, &rows[i].cell));
		for (int k = 0; k < 4; k++)
			assert_near(bh_cell_d_A(&reciprocal, planes[k]), rows[i].d_A[k],
				    6e-8, "d");
	}
}

/* Angles between planes: cubic as in the tables of handbooks, 45°, 54.74°, 35.26°, 70.53°, 24.09°
 * (B. D. Cullity, Elements of X-ray Diffraction, from memory), others from cctbx. */
static void angles(void **state)
{
	static const bh_cell cubic = { 5.6402, 5.6402, 5.6402, 90, 90, 90 };
	static const bh_cell albite = { 8.1372, 12.787, 7.1574, 94.245, 116.605, 87.809 };
	static const bh_cell gypsum = { 5.679, 15.202, 6.522, 90, 118.43, 90 };
	static const bh_cell corundum = { 4.7605, 4.7605, 12.9956, 90, 90, 120 };
	static const struct {
		const bh_cell *cell;
		int h[3], k[3];
		double cosine, within;
	} rows[] = {
		{ &cubic, { 1, 0, 0 }, { 1, 1, 0 }, 0.70710678, 1e-8 },
		{ &cubic, { 1, 0, 0 }, { 1, 1, 1 }, 0.57735, 1e-5 },
		{ &cubic, { 1, 1, 0 }, { 1, 1, 1 }, 0.81650, 1e-5 },
		{ &cubic, { 1, 1, 1 }, { -1, 1, 1 }, 0.33333, 1e-5 },
		{ &cubic, { 2, 1, 0 }, { 2, 1, 1 }, 0.91287, 1e-5 },
		{ &albite, { 1, -2, 3 }, { 0, 4, -1 }, -0.63700089, 6e-9 },
		{ &gypsum, { 1, 2, -1 }, { 0, 2, 0 }, 0.56323717, 6e-9 },
		{ &corundum, { 1, 0, 4 }, { 0, 0, 6 }, 0.78542673, 6e-9 },
	};

	(void)state;
	for (size_t i = 0; i < sizeof rows / sizeof *rows; i++) {
		bh_mat3 reciprocal;

		assert_true(bh_cell_reciprocal(&reciprocal, rows[i].cell));
		assert_near(bh_cell_cosine(&reciprocal, rows[i].h, rows[i].k),
			    rows[i].cosine, rows[i].within, "cosine");
	}
}

/* Right angles and 120° leave no rounding behind. */
static void exact(void **state)
{
	static const bh_cell hexagonal = { 4.7605, 4.7605, 12.9956, 90, 90, 120 };
	bh_mat3 metric = bh_cell_metric(&hexagonal);

	(void)state;
	assert_near(metric.at[0][2], 0, 0, "a·c");
	assert_near(metric.at[1][2], 0, 0, "b·c");
	assert_near(metric.at[0][1], -0.5 * 4.7605 * 4.7605, 1e-15, "a·b");
}

/* Angles that close no cell: one larger than the two others, sum of 360° and more, flat. */
static void impossible(void **state)
{
	static const bh_cell rows[] = {
		{ 5.1, 6.2, 7.3, 121, 60, 60.5 },
		{ 5.1, 6.2, 7.3, 120, 120, 120 },
		{ 5.1, 6.2, 7.3, 125, 121, 119 },
		{ 5.1, 6.2, 7.3, 30, 80, 110 },
	};

	(void)state;
	for (size_t i = 0; i < sizeof rows / sizeof *rows; i++) {
		bh_mat3 reciprocal;

		assert_near(bh_cell_volume_A3(&rows[i]), 0, 0, "no volume");
		assert_false(bh_cell_reciprocal(&reciprocal, &rows[i]));
	}
}

int main(void)
{
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(distances),
		cmocka_unit_test(angles),
		cmocka_unit_test(exact),
		cmocka_unit_test(impossible),
	};

	return cmocka_run_group_tests(tests, NULL, NULL);
}
