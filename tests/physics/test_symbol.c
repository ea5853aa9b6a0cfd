#include "support/near.h"

#include <string.h>

#include "physics/symbol.h"

/* Settings as the tables of International Tables A (2016) 1.5.4 list them. */
static const bh_symbol_row quartz = { .row = 443,
				      .number = 154,
				      .choice = "",
				      .hall = "P 32 2\"",
				      .international = "P 3_2 2 1",
				      .full = "P 3_2 2 1" };
static const bh_symbol_row zirconia = { .row = 82,
					.number = 14,
					.choice = "b2",
					.hall = "-P 2yn",
					.international = "P 2_1/c = P 1 2_1/n 1",
					.full = "P 1 2_1/n 1" };
static const bh_symbol_row old_axis = { .row = 86,
					.number = 14,
					.choice = "c3",
					.hall = "-P 2bc",
					.international =
						"P 2_1/c = P 1 1 2_1/b = P 2_1/b",
					.full = "P 1 1 2_1/b" };
static const bh_symbol_row spinel = { .row = 526,
				      .number = 227,
				      .choice = "2",
				      .hall = "-F 4vw 2vw 3",
				      .international = "F d -3 m",
				      .full = "F 4_1/d -3 2/m" };
static const bh_symbol_row corundum = { .row = 460,
					.number = 167,
					.choice = "H",
					.hall = "-R 3 2\"c",
					.international = "R -3 c",
					.full = "R -3 2/c" };
static const bh_symbol_row glide = { .row = 329,
				     .number = 68,
				     .choice = "2-cba",
				     .hall = "-A 2ac 2c",
				     .international = "A e a a",
				     .full = "A 2/e 2/a 2/a" };

/* How well a text fits a setting: 6 number, 5 as listed, 4 Hall, 3 without blanks, 2 and 1 older
 * or looser spellings, 0 not. */
static void fits(void **state)
{
	static const struct {
		const char *text;
		const bh_symbol_row *row;
		int fit;
		bool choice;
	} rows[] = {
		{ "P 32 2 1", &quartz, 5, true },
		{ "p 3_2 2 1", &quartz, 5, true },
		{ "P3221", &quartz, 3, true },
		{ "P 3 2 2 1", &quartz, 3, true },
		{ "p 32 2\"", &quartz, 4, true },
		{ "154", &quartz, 6, true },
		{ "153", &quartz, 0, true },
		{ "P 31 2 1", &quartz, 0, true },
		{ "P 32 2 1:H", &quartz, 5, false },
		{ "P 21/n", &zirconia, 5, true },
		{ "P2(1)/n", &zirconia, 3, true },
		{ "P 1 21/n 1", &zirconia, 5, true },
		{ "P 21/c", &zirconia, 5, true },
		{ "P 21/c:b2", &zirconia, 5, true },
		{ "P 21/c:b1", &zirconia, 5, false },
		{ "-P_2yn", &zirconia, 4, true },
		{ "P 1 1 21/n", &zirconia, 0, true },
		{ "P 21/b", &old_axis, 5, true },
		{ "F d -3 m:2", &spinel, 5, true },
		{ "Fd-3m :1", &spinel, 3, false },
		{ "F d 3 m Z", &spinel, 2, true },
		{ "F d 3 m S", &spinel, 2, false },
		{ "F 41/d -3 2/m", &spinel, 5, true },
		{ "FD-3M", &spinel, 3, true },
		{ "R -3 c H", &corundum, 5, true },
		{ "R-3c:r", &corundum, 3, false },
		{ "A c a a:2", &glide, 5, true },
		{ "A b a a:2", &glide, 1, true },
		{ "A e a a:1", &glide, 5, false },
	};

	(void)state;
	for (size_t i = 0; i < sizeof rows / sizeof *rows; i++) {
		bh_symbol symbol;
		int fit;

		assert_true(bh_symbol_read(&symbol, rows[i].text));
		fit = bh_symbol_fit(&symbol, rows[i].row);
		if (fit != rows[i].fit ||
		    bh_symbol_choice(&symbol, rows[i].row) != rows[i].choice)
			print_error("%s on %s: %d\n", rows[i].text, rows[i].row->hall,
				    fit);
		assert_int_equal(fit, rows[i].fit);
		assert_int_equal(bh_symbol_choice(&symbol, rows[i].row), rows[i].choice);
	}
}

static void written(void **state)
{
	static const struct {
		const bh_symbol_row *row;
		const char *symbol;
	} rows[] = {
		{ &quartz, "P 32 2 1" },     { &zirconia, "P 21/n" },
		{ &old_axis, "P 1 1 21/b" }, { &spinel, "F d -3 m:2" },
		{ &corundum, "R -3 c:H" },   { &glide, "A c a a:2" },
	};

	(void)state;
	for (size_t i = 0; i < sizeof rows / sizeof *rows; i++) {
		char symbol[48], small[6];

		bh_symbol_write(symbol, sizeof symbol, rows[i].row);
		assert_string_equal(symbol, rows[i].symbol);
		bh_symbol_write(small, sizeof small, rows[i].row);
		assert_int_equal(strlen(small), sizeof small - 1);
	}
}

/* Nothing, a colon with nothing behind it or too much, and a text without end. */
static void refused(void **state)
{
	static const char *const rows[] = {
		"",
		"   ",
		":1",
		"P 1:",
		"P 1:123456789",
		"P 1 P 1 P 1 P 1 P 1 P 1 P 1 P 1 P 1 P 1 P 1 P 1 P 1 P 1 P 1 P 1 P 1 P 1 "
		"P 1",
	};
	bh_symbol symbol;

	(void)state;
	for (size_t i = 0; i < sizeof rows / sizeof *rows; i++)
		assert_false(bh_symbol_read(&symbol, rows[i]));
}

int main(void)
{
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(fits),
		cmocka_unit_test(written),
		cmocka_unit_test(refused),
	};

	return cmocka_run_group_tests(tests, NULL, NULL);
}
