#ifndef BEAMHOUR_H
#define BEAMHOUR_H

/* The public face: read a request, make a plan, render it, free it. No global state, no
 * output, no reading of clock or environment. */

#include <stddef.h>

#ifdef __cplusplus
extern "C" {
#endif

typedef struct beamhour_plan beamhour_plan;

/* Owned by the caller. status: 0 none, 2 the input is wrong, 3 the system failed. line and
 * col are 1-based, 0 when there is no place to point at. */
typedef struct {
	int status;
	int line, col;
	char file[256];
	char what[320];
	char hint[320];
} beamhour_error;

const char *beamhour_version(void);

/* A request and where its instrument may be found. */
typedef struct {
	const char *name; /* stands for the file in messages           */
	const char *text; /* UTF-8, syntax of a request file           */
	size_t length;
	const char *const *preset_dirs; /* folders with instrument files */
	size_t preset_dir_count;
} beamhour_input;

/* Plan a request.
 *   returns  a plan to free with beamhour_plan_free; NULL: errors[0 .. *error_count − 1]
 *            hold the first problems, as many as there is room for */
beamhour_plan *beamhour_plan_text(const beamhour_input *input, beamhour_error *errors,
				  size_t error_room, size_t *error_count);

/* 1 when an aim is not met or a severe finding stands, else 0. */
int beamhour_plan_wants_attention(const beamhour_plan *plan);

/* Render as "text", "json", "pdf", "svg" or "png".
 *   returns  bytes to free with beamhour_bytes_free (with a 0 behind); NULL: *error */
char *beamhour_render(const beamhour_plan *plan, const char *kind, size_t *length,
		      beamhour_error *error);

void beamhour_bytes_free(char *bytes);
void beamhour_plan_free(beamhour_plan *plan);

/* Give back what the drawing libraries keep until the end of the process. Only when nothing
 * else in the process uses pango or cairo. */
void beamhour_release(void);

#ifdef __cplusplus
}
#endif

#endif
