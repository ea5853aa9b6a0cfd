/* Tables in README.md stand between markers and come out of the program's own tables. Without
 * arguments a test; --write renews them. Run from the top of the project. */
#include <stdlib.h>
#include <string.h>

#include "base/text.h"
#include "read/keys.h"
#include "support/near.h"

static const char readme[] = "README.md";

typedef struct {
	const char *name; /* <!-- name --> ... <!-- end name --> */
	bh_key_file file;
} block;

static block blocks[] = {
	{ "request keys", BH_FILE_REQUEST },
	{ "instrument keys", BH_FILE_INSTRUMENT },
};
enum { BLOCKS = sizeof blocks / sizeof *blocks };

static bool load(bh_text *text, const char *path)
{
	char part[4096];
	size_t count;
	FILE *file = fopen(path, "rb");

	if (!file)
		return false;
	while ((count = fread(part, 1, sizeof part, file)) > 0)
		bh_text_add_bytes(text, part, count);
	return !fclose(file) && !text->lost;
}

/* Where the block's content begins and ends; false without markers. */
static bool find(const char *whole, const char *name, const char **from, const char **to)
{
	char open[64], shut[64];

	snprintf(open, sizeof open, "<!-- %s -->\n", name);
	snprintf(shut, sizeof shut, "<!-- end %s -->", name);
	*from = strstr(whole, open);
	if (!*from)
		return false;
	*from += strlen(open);
	*to = strstr(*from, shut);
	return *to != NULL;
}

static void in_step(void **state)
{
	const block *at = *state;
	const char *from, *to;
	bh_text whole = { 0 }, table = { 0 };

	assert_true(load(&whole, readme));
	assert_true(find(whole.bytes, at->name, &from, &to));
	bh_keys_markdown(&table, at->file);
	assert_false(table.lost);
	assert_true(table.length > 500);
	if (table.length != (size_t)(to - from) ||
	    memcmp(table.bytes, from, table.length) != 0)
		fail_msg("%s: the block \"%s\" is not what the program prints: make docs",
			 readme, at->name);
	bh_text_free(&table);
	bh_text_free(&whole);
}

static int renew(void)
{
	bh_text whole = { 0 };
	FILE *file;

	if (!load(&whole, readme))
		return 3;
	for (size_t i = 0; i < BLOCKS; i++) {
		const char *from, *to;
		bh_text next = { 0 };

		if (!find(whole.bytes, blocks[i].name, &from, &to))
			return 2;
		bh_text_add_bytes(&next, whole.bytes, (size_t)(from - whole.bytes));
		bh_keys_markdown(&next, blocks[i].file);
		bh_text_add(&next, to);
		bh_text_free(&whole);
		whole = next;
	}
	file = fopen(readme, "wb");
	if (!file || whole.lost ||
	    fwrite(whole.bytes, 1, whole.length, file) != whole.length)
		return 3;
	bh_text_free(&whole);
	return fclose(file) ? 3 : 0;
}

int main(int count, char **words)
{
	struct CMUnitTest tests[BLOCKS];

	if (count == 2 && strcmp(words[1], "--write") == 0)
		return renew();
	for (size_t i = 0; i < BLOCKS; i++)
		tests[i] = (struct CMUnitTest){ blocks[i].name, in_step, NULL, NULL,
						&blocks[i] };
	return cmocka_run_group_tests(tests, NULL, NULL);
}
