/* A growing buffer, and the columns of UTF-8. */
#include "support/near.h"

#include <string.h>

#include "base/text.h"

static void grows(void **state)
{
	bh_text text = { 0 };

	(void)state;
	for (int i = 0; i < 1000; i++)
		bh_text_format(&text, "%d,", i);
	assert_int_equal(text.length, 10 * 2 + 90 * 3 + 900 * 4);
	assert_int_equal(text.length, strlen(text.bytes));
	assert_memory_equal(text.bytes, "0,1,2,", 6);
	assert_string_equal(text.bytes + text.length - 8, "998,999,");
	assert_false(text.lost);
	bh_text_free(&text);
	assert_null(text.bytes);
	assert_int_equal(text.length + text.capacity, 0);
}

static void adds(void **state)
{
	bh_text text = { 0 };

	(void)state;
	bh_text_add(&text, "");
	assert_string_equal(text.bytes, "");
	bh_text_repeat(&text, "–", 3);
	bh_text_repeat(&text, "x", 0);
	bh_text_add_bytes(&text, "ab\0cd", 5); /* a NUL is a byte like others */
	assert_int_equal(text.length, 3 * 3 + 5);
	assert_memory_equal(text.bytes, "–––ab\0cd", 15);
	bh_text_format(&text, "%2000s", "y");
	assert_int_equal(text.length, 14 + 2000);
	assert_int_equal(text.bytes[14 + 1999], 'y');
	bh_text_free(&text);
}

/* What cannot be held is told once, and nothing is half written. */
static void lost(void **state)
{
	bh_text text = { 0 };

	(void)state;
	bh_text_add(&text, "kept");
	bh_text_add_bytes(&text, "", SIZE_MAX - 2);
	assert_true(text.lost);
	bh_text_add(&text, "dropped");
	bh_text_format(&text, "%d", 1);
	assert_string_equal(text.bytes, "kept");
	assert_int_equal(text.length, 4);
	bh_text_free(&text);
	assert_false(text.lost);
}

static void columns(void **state)
{
	static const struct {
		const char *text;
		size_t columns;
	} rows[] = {
		{ "", 0 },
		{ "plan", 4 },
		{ "2θ", 2 },
		{ "Å °µ–", 5 },
		{ "1\xCC\x85", 1 }, /* U+0305, the bar over an index        */
		{ "a\xCD\xAF"
		  "b",
		  2 },			   /* U+036F, the last combining mark      */
		{ "\xCD\xB0", 1 },	   /* U+0370, the letter behind it         */
		{ "\xCB\xBF", 1 },	   /* U+02FF, the last before them         */
		{ "\xF0\x9D\x9C\x83", 1 }, /* U+1D703, four bytes                 */
	};

	(void)state;
	for (size_t i = 0; i < sizeof rows / sizeof *rows; i++)
		assert_int_equal(bh_text_columns(rows[i].text), rows[i].columns);
}

int main(void)
{
	static const struct CMUnitTest tests[] = {
		cmocka_unit_test(grows),
		cmocka_unit_test(adds),
		cmocka_unit_test(lost),
		cmocka_unit_test(columns),
	};

	return cmocka_run_group_tests_name("text", tests, NULL, NULL);
}
