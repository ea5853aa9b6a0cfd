#include "base/arena.h"

#include <stdarg.h>
#include <stdint.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

typedef struct link {
	struct link *before, *after;
} link;

typedef struct {
	link link; /* first: a link is its block */
	max_align_t data[];
} block;

struct bh_arena {
	link ring; /* empty when it points at itself */
};

bh_arena *bh_arena_new(void)
{
	bh_arena *arena = calloc(1, sizeof *arena);

	if (arena)
		arena->ring.before = arena->ring.after = &arena->ring;
	return arena;
}

void bh_arena_free(bh_arena *arena)
{
	if (!arena)
		return;
	for (link *l = arena->ring.after; l != &arena->ring;) {
		link *next = l->after;

		free(l);
		l = next;
	}
	free(arena);
}

void *bh_arena_take(bh_arena *arena, size_t count, size_t size)
{
	block *b;

	if (size && count > (SIZE_MAX - sizeof *b) / size)
		return NULL;
	b = calloc(1, sizeof *b + count * size);
	if (!b)
		return NULL;
	b->link.before = &arena->ring;
	b->link.after = arena->ring.after;
	b->link.after->before = &b->link;
	arena->ring.after = &b->link;
	return b->data;
}

void *bh_arena_resize(bh_arena *arena, void *data, size_t old_count, size_t new_count,
		      size_t size)
{
	block *old;
	void *bigger = bh_arena_take(arena, new_count, size);

	if (!bigger || !data)
		return bigger;
	memcpy(bigger, data, (old_count < new_count ? old_count : new_count) * size);
	old = (block *)((char *)data - offsetof(block, data));
	old->link.before->after = old->link.after;
	old->link.after->before = old->link.before;
	free(old);
	return bigger;
}

char *bh_arena_text(bh_arena *arena, const char *text)
{
	size_t n = strlen(text) + 1;
	char *copy = bh_new(arena, char, n);

	return copy ? memcpy(copy, text, n) : NULL;
}

char *bh_arena_vformat(bh_arena *arena, const char *format, va_list args)
{
	va_list again;
	char *text = NULL;
	int n;

	va_copy(again, args);
	n = vsnprintf(NULL, 0, format, args);
	if (n >= 0 && (text = bh_new(arena, char, (size_t)n + 1)))
		vsnprintf(text, (size_t)n + 1, format, again);
	va_end(again);
	return text;
}

char *bh_arena_format(bh_arena *arena, const char *format, ...)
{
	va_list args;
	char *text;

	va_start(args, format);
	text = bh_arena_vformat(arena, format, args);
	va_end(args);
	return text;
}
