#include "read/unpack.h"

#include <errno.h>
#include <string.h>

#include <zlib.h>

enum { FIRST_ROOM = 1 << 16, GZIP_WINDOW = 15 + 16 };

static bool too_large(bh_problems *problems, const char *file)
{
	return bh_problem(problems, (bh_place){ file, 0, 0 },
			  "the file is larger than %d MB\nallowed: up to %d MB, unpacked",
			  BH_UNPACKED_MOST >> 20, BH_UNPACKED_MOST >> 20);
}

static bool lost(bh_problems *problems)
{
	problems->lost = true;
	return false;
}

/* Twice the room, the old bytes kept. */
static bool widen(char **bytes, size_t *room, bh_arena *arena)
{
	size_t more = *room ? 2 * *room : FIRST_ROOM;
	char *grown = bh_grow(arena, *bytes, char, *room, more);

	if (!grown)
		return false;
	*bytes = grown;
	*room = more;
	return true;
}

static bool load(char **bytes, size_t *length, bh_arena *arena, const char *file,
		 FILE *stream, bh_problems *problems)
{
	bh_err err = { .code = BH_OK };
	size_t room = 0;

	*bytes = NULL;
	*length = 0;
	for (;;) {
		if (*length == room && !widen(bytes, &room, arena))
			return lost(problems);
		size_t n = fread(*bytes + *length, 1, room - *length, stream);

		*length += n;
		if (*length > BH_UNPACKED_MOST)
			return too_large(problems, file);
		if (n == 0)
			break;
	}
	if (!ferror(stream))
		return true;
	bh_fail(&err, BH_BAD_SYSTEM, "cannot read: %s", strerror(errno));
	snprintf(err.file, sizeof err.file, "%s", file);
	return bh_problem_add(problems, &err);
}

/* One or more gzip members, one behind the other. */
static int inflate_all(z_stream *z, char **bytes, size_t *length, bh_arena *arena)
{
	size_t room = 0;
	int status = Z_OK;

	*bytes = NULL;
	*length = 0;
	while (status == Z_OK || (status == Z_STREAM_END && z->avail_in > 0)) {
		if (status == Z_STREAM_END && inflateReset(z) != Z_OK)
			return Z_DATA_ERROR;
		if (*length == room && !widen(bytes, &room, arena))
			return Z_MEM_ERROR;
		z->next_out = (Bytef *)*bytes + *length;
		z->avail_out = (uInt)(room - *length);
		status = inflate(z, Z_NO_FLUSH);
		*length = room - z->avail_out;
		if (*length > BH_UNPACKED_MOST)
			return Z_BUF_ERROR;
		if (status == Z_BUF_ERROR)
			return Z_DATA_ERROR; /* it ends too early */
	}
	return status;
}

bool bh_unpack(char **bytes, size_t *length, bh_arena *arena, const char *file, FILE *stream,
	       bh_problems *problems)
{
	z_stream z = { .zalloc = Z_NULL };
	char *packed;
	size_t packed_length;
	int status;

	if (!load(&packed, &packed_length, arena, file, stream, problems))
		return false;
	if (packed_length < 2 || memcmp(packed, "\x1F\x8B", 2) != 0) {
		*bytes = packed;
		*length = packed_length;
		return true;
	}
	if (inflateInit2(&z, GZIP_WINDOW) != Z_OK)
		return lost(problems);
	z.next_in = (Bytef *)packed;
	z.avail_in = (uInt)packed_length;
	status = inflate_all(&z, bytes, length, arena);
	inflateEnd(&z);
	if (status == Z_MEM_ERROR)
		return lost(problems);
	if (status == Z_BUF_ERROR)
		return too_large(problems, file);
	return status == Z_STREAM_END ||
	       bh_problem(problems, (bh_place){ file, 0, 0 },
			  "the gzip file is damaged or ends too early\nget it again, or "
			  "unpack it by hand");
}
