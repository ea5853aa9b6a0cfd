#ifndef BASE_ARENA_H
#define BASE_ARENA_H

#include <stdarg.h>
#include <stddef.h>

/* Memory with the lifetime of one plan. Every block is its own calloc on a list, so the
 * address sanitizer still sees the end of each array. */
typedef struct bh_arena bh_arena;

bh_arena *bh_arena_new(void);	     /* NULL when memory is out */
void bh_arena_free(bh_arena *arena); /* frees every block; NULL is allowed */

/* Zeroed memory for count items of size bytes; NULL when memory is out or the product
 * overflows. count 0 gives a valid pointer that must not be read. */
void *bh_arena_take(bh_arena *arena, size_t count, size_t size);

/* A larger copy of a block from bh_arena_take (NULL: a new one); the new part is zeroed
 * and the old block is gone. NULL when memory is out: then the old block is kept. */
void *bh_arena_resize(bh_arena *arena, void *block, size_t old_count, size_t new_count,
		      size_t size);

char *bh_arena_text(bh_arena *arena, const char *text); /* a copy; NULL: memory is out */
char *bh_arena_format(bh_arena *arena, const char *format, ...)
	__attribute__((format(printf, 2, 3)));
char *bh_arena_vformat(bh_arena *arena, const char *format, va_list args)
	__attribute__((format(printf, 2, 0)));

#define bh_new(arena, type, count) ((type *)bh_arena_take((arena), (count), sizeof(type)))
#define bh_grow(arena, block, type, old_count, new_count)                                \
	((type *)bh_arena_resize((arena), (block), (old_count), (new_count),             \
				 sizeof(type)))

#endif
