/* Numbers and durations as people type them. */
#include "support/near.h"

#include <locale.h>
#include <stdlib.h>
#include <string.h>

#include "base/number.h"

/* Against the C library, which reads more than is allowed here. */
static void reads(void **state)
{
	static const char *const rows[] = {
		"0",	"1",	   "-1.5",    "+2.",	  ".5",	   "-.5",	 "1e3",
		"010",	"1.5E-7",  "4.91344", "1e300",	  "-0.0",  "1e-320",	 "1e+2",
		"007.", "1e-9999", "0e999",   "5.4307e0", "00.25", "179769e303",
	};
	double value;

	(void)state;
	for (size_t i = 0; i < sizeof rows / sizeof *rows; i++) {
		if (!bh_number_read(&value, rows[i], strlen(rows[i])))
			fail_msg("\"%s\" was refused", rows[i]);
		assert_near(value, strtod(rows[i], NULL), 0, rows[i]);
	}
}

/* 20 000 doubles printed with 17 digits come back bit by bit (C11 5.2.4.2.2, DECIMAL_DIG). */
static void comes_back(void **state)
{
	uint64_t bits =
		88172645463325252u; /* xorshift: G. Marsaglia, J. Stat. Softw. 8 (2003) 14 */
	char text[40];
	double value, back;

	(void)state;
	for (int i = 0; i < 20000; i++) {
		bits ^= bits << 13;
		bits ^= bits >> 7;
		bits ^= bits << 17;
		memcpy(&value, &bits, sizeof value);
		if (!isfinite(value))
			continue;
		snprintf(text, sizeof text, i % 2 ? "%.17g" : "%.16E", value);
		if (!bh_number_read(&back, text, strlen(text)))
			fail_msg("\"%s\" was refused", text);
		assert_memory_equal(&back, &value, sizeof value);
	}
}

static void refuses(void **state)
{
	static const char *const rows[] = {
		"",	  "-",	   "+",	  ".",	 "-.",	       "e5",  ".e5",  "1e999",
		"-1e999", "0x10",  "0b1", "nan", "NaN",	       "inf", "-inf", "infinity",
		"1,5",	  "1 2",   " 1",  "1 ",	 "1\t",	       "1\n", "--1",  "+-1",
		"1-",	  "1.2.3", "1e",  "1e+", "1e1.5",      "1f",  "1d",   "1'000",
		"1_0",	  "½",	   "−1",  "１",	 "179770e303",
	};
	double value = 7;

	(void)state;
	for (size_t i = 0; i < sizeof rows / sizeof *rows; i++) {
		if (bh_number_read(&value, rows[i], strlen(rows[i])))
			fail_msg("\"%s\" was read as a number", rows[i]);
		assert_near(value, 7, 0, "untouched");
	}
	assert_false(bh_number_read(&value, "1\0", 2)); /* a NUL inside is no digit */
	assert_true(bh_number_read(&value, "12.5", 2)); /* the length is kept to     */
	assert_near(value, 12, 0, "two bytes");
}

/* In a host program whose numbers have a comma. */
static void point(void **state)
{
	static const char *const names[] = { "de_DE.UTF-8", "de_DE.utf8", "fr_FR.UTF-8",
					     "de_DE" };
	const char *set = NULL;
	double value, span;
	bool comma, good;

	(void)state;
	for (size_t i = 0; i < 4 && !set; i++)
		set = setlocale(LC_NUMERIC, names[i]);
	if (!set)
		skip();
	good = bh_number_read(&value, "4.91344", 7) &&
	       bh_duration_read(&span, "1.5 h", 5);
	comma = bh_number_read(&value, "4,91344", 7);
	setlocale(LC_NUMERIC, "C");
	assert_true(good && !comma);
	assert_near(value, 4.91344, 0, set);
	assert_near(span, 5400, 0, set);
}

static void spans(void **state)
{
	static const struct {
		const char *text;
		double s;
	} rows[] = {
		{ "2 h", 7200 },       { "90 min", 5400 }, { "45 s", 45 },
		{ "1.5 h", 5400 },     { "2h", 7200 },	   { "1 h 30 min", 5400 },
		{ "1h30min", 5400 },   { "0.5 s", 0.5 },   { "1 h 0 min 5 s", 3605 },
		{ "0 h 10 min", 600 }, { "1e2 s", 100 },
	};
	static const char *const bad[] = {
		"",	 "2",	    "h",     "2 hours", "-1 h",	 "0 s",	 "0 h 0 min",
		"1 h x", "1 d",	    "2 H",   "2 Min",	"1:30",	 "1 h,", "1 h 30",
		"nan h", "1e308 h", "inf h", "0x2 h",	"1,5 h", "h 2",	 "-5 s 1 h",
	};
	double s;

	(void)state;
	for (size_t i = 0; i < sizeof rows / sizeof *rows; i++) {
		if (!bh_duration_read(&s, rows[i].text, strlen(rows[i].text)))
			fail_msg("\"%s\" was refused", rows[i].text);
		assert_near(s, rows[i].s, 1e-9, rows[i].text);
	}
	s = 7;
	for (size_t i = 0; i < sizeof bad / sizeof *bad; i++) {
		if (bh_duration_read(&s, bad[i], strlen(bad[i])))
			fail_msg("\"%s\" was read as a duration", bad[i]);
		assert_near(s, 7, 0, "untouched");
	}
}

int main(void)
{
	static const struct CMUnitTest tests[] = {
		cmocka_unit_test(reads),   cmocka_unit_test(comes_back),
		cmocka_unit_test(refuses), cmocka_unit_test(point),
		cmocka_unit_test(spans),
	};

	return cmocka_run_group_tests_name("numbers", tests, NULL, NULL);
}
