/* Every file of tests/bad is refused as its own first lines expect: `# expect LINE:COL words`. */
#include "support/near.h"

#include <dirent.h>
#include <stdlib.h>
#include <string.h>

#include "read/preset.h"
#include "read/request.h"

enum { LEAST_FILES = 190, MOST_EXPECTED = 10 };

typedef struct {
	int line, col;
	char words[160];
	bool met;
} expected;

static size_t expectations(expected list[MOST_EXPECTED], const char *path)
{
	char line[400];
	FILE *file = fopen(path, "rb");
	size_t n = 0;

	assert_non_null(file);
	while (fgets(line, sizeof line, file) && n < MOST_EXPECTED) {
		expected *e = &list[n];

		if (sscanf(line, "# expect %d:%d %159[^\n]", &e->line, &e->col,
			   e->words) != 3)
			break;
		e->met = false;
		n++;
	}
	fclose(file);
	return n;
}

static bool refused(bh_problems *problems, const char *path)
{
	static const char *const dirs[] = { "presets/instruments" };
	bh_read_options options = { .preset_dirs = dirs, .preset_dir_count = 1 };
	bh_instrument *instrument;
	bh_request *request;

	if (strstr(path, "/instrument-"))
		return !bh_instrument_read(&instrument, problems->arena, "test", path,
					   problems);
	return !bh_request_read(&request, problems->arena, path, &options, problems);
}

/* Returns how many complaints there are about a file. */
static int look_at(const char *path)
{
	bh_problems problems = { .arena = bh_arena_new() };
	expected list[MOST_EXPECTED];
	size_t count = expectations(list, path);
	int wrong = 0;

	if (count == 0 || !refused(&problems, path) || problems.count != count) {
		print_message("%s: %zu problems, %zu expected\n", path, problems.count,
			      count);
		wrong++;
	}
	for (size_t i = 0; i < problems.count; i++) {
		const bh_err *p = &problems.items[i];
		bool found = false;

		for (size_t k = 0; k < count && !found; k++) {
			found = !list[k].met && p->line == list[k].line &&
				p->col == list[k].col &&
				(strstr(p->what, list[k].words) ||
				 strstr(p->hint, list[k].words));
			list[k].met = list[k].met || found;
		}
		if (!found || p->code != BH_BAD_INPUT || strcmp(p->file, path) != 0 ||
		    !*p->hint) {
			print_message("%s:%d:%d: %s | %s\n", p->file, p->line, p->col,
				      p->what, p->hint);
			wrong++;
		}
	}
	for (size_t k = 0; k < count; k++)
		if (!list[k].met) {
			print_message("%s: expected %d:%d %s\n", path, list[k].line,
				      list[k].col, list[k].words);
			wrong++;
		}
	bh_arena_free(problems.arena);
	return wrong;
}

static void all_files(void **state)
{
	DIR *dir = opendir("tests/bad");
	struct dirent *entry;
	size_t files = 0;
	int wrong = 0;

	(void)state;
	assert_non_null(dir);
	while ((entry = readdir(dir))) {
		char path[300];

		if (entry->d_name[0] == '.')
			continue;
		snprintf(path, sizeof path, "tests/bad/%s", entry->d_name);
		wrong += look_at(path);
		files++;
	}
	closedir(dir);
	assert_true(files >= LEAST_FILES); /* none was lost */
	assert_int_equal(wrong, 0);
}

int main(void)
{
	static const struct CMUnitTest tests[] = { cmocka_unit_test(all_files) };

	return cmocka_run_group_tests_name("bad inputs", tests, NULL, NULL);
}
