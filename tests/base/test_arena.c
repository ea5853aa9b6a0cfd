/* Memory with one lifetime. Leaks and overruns are found by the sanitizers and valgrind. */
#include "support/near.h"

#include <string.h>

#include "base/arena.h"

static int set_up(void **state)
{
	*state = bh_arena_new();
	return *state ? 0 : 1;
}

static int tear_down(void **state)
{
	bh_arena_free(*state);
	return 0;
}

static void zeroed(void **state)
{
	for (size_t n = 1; n < 2000; n = n * 3 + 1) {
		unsigned char *block = bh_new(*state, unsigned char, n);

		assert_non_null(block);
		assert_int_equal((uintptr_t)block % _Alignof(max_align_t), 0);
		for (size_t i = 0; i < n; i++)
			assert_int_equal(block[i], 0);
		memset(block, 0xAA, n);
	}
	assert_non_null(bh_arena_take(*state, 0, 8));
	assert_non_null(bh_arena_take(*state, 8, 0));
	bh_arena_free(NULL);
}

static void too_much(void **state)
{
	int *block = bh_new(*state, int, 2);

	block[1] = 5;
	assert_null(bh_arena_take(*state, SIZE_MAX / 2, 16)); /* the product overflows */
	assert_null(bh_arena_take(*state, SIZE_MAX, 1));      /* so does the head      */
	assert_null(bh_grow(*state, block, int, 2, SIZE_MAX / 2));
	assert_int_equal(block[1], 5); /* and the old block is kept */
}

/* Blocks that grow and shrink by turns keep what they hold; what is new is zero. */
static void resized(void **state)
{
	enum { BLOCKS = 7, ROUNDS = 40 };
	int *blocks[BLOCKS] = { NULL };
	size_t counts[BLOCKS] = { 0 };

	for (size_t round = 0; round < ROUNDS; round++)
		for (size_t b = 0; b < BLOCKS; b++) {
			size_t want = (round * 5 + b * 3) % 23 + 1;

			blocks[b] = bh_grow(*state, blocks[b], int, counts[b], want);
			assert_non_null(blocks[b]);
			for (size_t i = 0; i < want; i++)
				assert_int_equal(blocks[b][i],
						 i < counts[b] ? (int)(100 * b + i) : 0);
			for (size_t i = 0; i < want; i++)
				blocks[b][i] = (int)(100 * b + i);
			counts[b] = want;
		}
}

static void texts(void **state)
{
	char from[] = "θ and Å";
	char *copy = bh_arena_text(*state, from), *long_one;

	from[0] = 'x';
	assert_string_equal(copy, "θ and Å");
	assert_string_equal(bh_arena_text(*state, ""), "");
	assert_string_equal(bh_arena_format(*state, "%s-%03d", "scan", 7), "scan-007");
	assert_string_equal(bh_arena_format(*state, "%s", ""), "");
	long_one = bh_arena_format(*state, "%5000d", 3);
	assert_int_equal(strlen(long_one), 5000);
	assert_int_equal(long_one[4999], '3');
}

int main(void)
{
	static const struct CMUnitTest tests[] = {
		cmocka_unit_test_setup_teardown(zeroed, set_up, tear_down),
		cmocka_unit_test_setup_teardown(too_much, set_up, tear_down),
		cmocka_unit_test_setup_teardown(resized, set_up, tear_down),
		cmocka_unit_test_setup_teardown(texts, set_up, tear_down),
	};

	return cmocka_run_group_tests_name("arena", tests, NULL, NULL);
}
