#ifndef BASE_ERR_H
#define BASE_ERR_H

#include <stdbool.h>
#include <stddef.h>

#include "base/arena.h"

/* What went wrong, as the exit status says it. */
typedef enum {
	BH_OK = 0,
	BH_BAD_INPUT = 2, /* a file or the command line is wrong */
	BH_BAD_SYSTEM = 3 /* file access or memory failed        */
} bh_code;

/* One error, owned by the caller: no heap, no globals. line and col are 1-based, 0 when
 * there is no place in a file to point at. */
typedef struct {
	bh_code code;
	int line, col;
	char file[256];
	char what[320]; /* what is wrong, with what was read */
	char hint[320]; /* what is allowed                   */
} bh_err;

/* All problems of one run, in order of discovery; lives in an arena. */
typedef struct {
	bh_arena *arena;
	bh_err *items;
	size_t count, capacity;
	bool lost; /* memory ran out while noting a problem */
} bh_problems;

/* A place in a user's file. file is borrowed. */
typedef struct {
	const char *file;
	int line, col;
} bh_place;

/* Set *err once (the first error wins) and return false, so a failure is one line.
 * The format gives `what`; a '\n' in the result splits off the hint. */
bool bh_fail(bh_err *err, bh_code code, const char *format, ...)
	__attribute__((format(printf, 3, 4)));

/* As bh_fail for an exhausted heap. */
bool bh_fail_memory(bh_err *err);

/* Note a problem at a place; a '\n' in the text splits off the hint. Returns false. */
bool bh_problem(bh_problems *problems, bh_place place, const char *format, ...)
	__attribute__((format(printf, 3, 4)));

/* Append an already filled error to the list. Returns false. */
bool bh_problem_add(bh_problems *problems, const bh_err *err);

#endif
