#include <errno.h>
#include <fcntl.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <sys/ioctl.h>
#include <sys/stat.h>
#include <unistd.h>

#include "cli/commands.h"

int bh_report(const bh_err *err)
{
	if (err->line > 0)
		fprintf(stderr, "%s:%d:%d: %s\n", err->file, err->line, err->col,
			err->what);
	else if (*err->file)
		fprintf(stderr, "%s: %s\n", err->file, err->what);
	else
		fprintf(stderr, "beamhour: %s\n", err->what);
	if (*err->hint)
		fprintf(stderr, "    %s\n", err->hint);
	return err->code == BH_BAD_SYSTEM ? BH_EXIT_SYSTEM : BH_EXIT_INPUT;
}

int bh_report_all(const bh_problems *problems)
{
	int worst = BH_EXIT_DONE;

	for (size_t i = 0; i < problems->count; i++) {
		int status = bh_report(&problems->items[i]);

		if (status > worst)
			worst = status;
	}
	if (problems->count > 1)
		fprintf(stderr, "%zu problems\n", problems->count);
	if (problems->lost || worst == BH_EXIT_DONE) {
		fprintf(stderr, "beamhour: out of memory\n");
		return BH_EXIT_SYSTEM;
	}
	return worst;
}

void bh_report_remarks(const bh_phase *phase)
{
	static const char *const words[] = { "note", "caution", "severe" };

	for (size_t i = 0; i < phase->remark_count; i++) {
		const bh_remark *r = &phase->remarks[i];

		fprintf(stderr, "%s:%d:%d: %s: %s\n", r->place.file ? r->place.file : "",
			r->place.line, r->place.col, words[r->severity], r->text);
		if (*r->remedy)
			fprintf(stderr, "    %s\n", r->remedy);
	}
}

int bh_with_arena(const bh_options *options,
		  int (*work)(bh_arena *arena, const bh_options *options))
{
	bh_arena *arena = bh_arena_new();
	int status;

	if (!arena) {
		bh_err err = { BH_OK, 0, 0, "", "", "" };

		bh_fail_memory(&err);
		return bh_report(&err);
	}
	status = work(arena, options);
	bh_arena_free(arena);
	return status;
}

int bh_open_request(bh_request **request, bh_arena *arena, const bh_options *options)
{
	bh_problems problems = { .arena = arena };
	bh_read_options how = {
		.instrument = options->instrument,
		.anode = options->anode,
		.preset_dirs = options->preset_dirs,
		.preset_dir_count = options->preset_dir_count,
		.stdin_stream = stdin,
	};

	if (!bh_request_read(request, arena, options->arguments[0], &how, &problems))
		return bh_report_all(&problems);
	if (options->within_s > 0)
		(*request)->booking.longest_s = options->within_s;
	return BH_EXIT_DONE;
}

static int failed(const char *path, const char *what)
{
	bh_err err = { BH_OK, 0, 0, "", "", "" };

	bh_fail(&err, BH_BAD_SYSTEM, "cannot write %s: %s (%s)", path, strerror(errno),
		what);
	return bh_report(&err);
}

static bool write_all(int fd, const char *bytes, size_t count)
{
	while (count > 0) {
		ssize_t n = write(fd, bytes, count);

		if (n < 0 && errno == EINTR)
			continue;
		if (n <= 0)
			return false;
		bytes += n;
		count -= (size_t)n;
	}
	return true;
}

static int write_stdout(const bh_text *bytes)
{
	if (fwrite(bytes->bytes, 1, bytes->length, stdout) != bytes->length ||
	    fflush(stdout) != 0)
		return failed("standard output", "write");
	return BH_EXIT_DONE;
}

/* Into a neighbour first, so that the name holds the old file or the whole new one. A device
 * or a pipe is written through. */
static int write_neighbour(const char *path, const bh_text *bytes)
{
	size_t room = strlen(path) + 16;
	char *name = malloc(room);
	mode_t mask = umask(0);
	int fd, status = BH_EXIT_DONE;

	umask(mask);
	if (!name)
		return failed(path, "memory");
	snprintf(name, room, "%s.%s", path,
		 "XX"
		 "XX"
		 "XX"); /* mkstemp fills six letters in */
	fd = mkstemp(name);
	if (fd < 0) {
		status = failed(path, "create");
	} else {
		bool good = write_all(fd, bytes->bytes, bytes->length) &&
			    fchmod(fd, 0666 & ~mask) == 0 && fsync(fd) == 0;

		if (close(fd) != 0 || !good || rename(name, path) != 0) {
			status = failed(path, "write");
			unlink(name);
		}
	}
	free(name);
	return status;
}

int bh_write_file(const char *path, const bh_text *bytes)
{
	struct stat info;

	if (strcmp(path, "-") == 0)
		return write_stdout(bytes);
	if (stat(path, &info) == 0 && !S_ISREG(info.st_mode)) {
		int fd = open(path, O_WRONLY);

		if (fd < 0)
			return failed(path, "open");
		if (!write_all(fd, bytes->bytes, bytes->length) || close(fd) != 0)
			return failed(path, "write");
		return BH_EXIT_DONE;
	}
	return write_neighbour(path, bytes);
}

int bh_terminal_columns(void)
{
	struct winsize size;

	if (ioctl(STDOUT_FILENO, TIOCGWINSZ, &size) != 0 || size.ws_col == 0)
		return 80;
	return size.ws_col < 60 ? 60 : size.ws_col > 120 ? 120 : size.ws_col;
}

bool bh_terminal_color(const bh_options *options)
{
	const char *no = getenv("NO_COLOR");

	if (options->color != BH_COLOR_AUTO)
		return options->color == BH_COLOR_ALWAYS;
	return isatty(STDOUT_FILENO) && !(no && *no);
}
