/* Edit distances. */
#include "support/near.h"

#include <string.h>

#include "base/nearest.h"

/* The recursion that defines the distance, without the table (V. I. Levenshtein, Sov. Phys.
 * Dokl. 10 (1966) 707): slow, and nothing to get wrong. */
static size_t defined(const char *a, const char *b)
{
	size_t insert, take, replace, least;

	if (!*a || !*b)
		return strlen(a) + strlen(b);
	if (*a == *b)
		return defined(a + 1, b + 1);
	insert = defined(a, b + 1);
	take = defined(a + 1, b);
	replace = defined(a + 1, b + 1);
	least = insert < take ? insert : take;
	return 1 + (least < replace ? least : replace);
}

static void textbook(void **state)
{
	/* the usual examples of textbooks, from memory */
	static const struct {
		const char *a, *b;
		size_t distance;
	} rows[] = {
		{ "kitten", "sitting", 3 },
		{ "flaw", "lawn", 2 },
		{ "saturday", "sunday", 3 },
		{ "", "abc", 3 },
		{ "abc", "", 3 },
		{ "", "", 0 },
		{ "plan", "plan", 0 },
		{ "share", "sahre", 2 },
		{ "abc", "xyz", 3 },
	};

	(void)state;
	for (size_t i = 0; i < sizeof rows / sizeof *rows; i++)
		assert_int_equal(bh_nearest_distance(rows[i].a, rows[i].b),
				 rows[i].distance);
}

/* Every pair of words of up to four letters from {a, b, c}. */
static void all_pairs(void **state)
{
	static char words[121][5]; /* 1 + 3 + 9 + 27 + 81 */
	size_t count = 1;

	(void)state;
	for (size_t from = 0; from < count && count < 121; from++)
		for (char ch = 'a'; ch <= 'c'; ch++)
			snprintf(words[count++], 5, "%.3s%c", words[from], ch);
	assert_int_equal(count, 121);
	for (size_t i = 0; i < count; i++)
		for (size_t k = 0; k < count; k++)
			assert_int_equal(bh_nearest_distance(words[i], words[k]),
					 defined(words[i], words[k]));
}

/* Only the first 63 bytes count. */
static void long_words(void **state)
{
	char a[201], b[201];

	(void)state;
	memset(a, 'a', 200);
	memset(b, 'a', 200);
	a[200] = b[200] = '\0';
	b[150] = 'b';
	assert_int_equal(bh_nearest_distance(a, b), 0);
	b[62] = 'b';
	assert_int_equal(bh_nearest_distance(a, b), 1);
	assert_int_equal(bh_nearest_distance(a, ""), 63);
	assert_int_equal(bh_nearest_distance("", b), 63);
}

int main(void)
{
	static const struct CMUnitTest tests[] = {
		cmocka_unit_test(textbook),
		cmocka_unit_test(all_pairs),
		cmocka_unit_test(long_words),
	};

	return cmocka_run_group_tests_name("nearest", tests, NULL, NULL);
}
