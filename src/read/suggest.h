#ifndef READ_SUGGEST_H
#define READ_SUGGEST_H

#include <stddef.h>

/* The best of many words for what was written. Start with {0}; offer each; best is NULL when
 * none is near (edit distance above a third of the word, at least 2). */
typedef struct {
	const char *word;
	size_t distance;
} bh_suggestion;

void bh_suggest(bh_suggestion *suggestion, const char *written, const char *offered);

#endif
