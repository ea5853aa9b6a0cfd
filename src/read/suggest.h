#ifndef READ_SUGGEST_H
#define READ_SUGGEST_H

#include <stddef.h>

/* The best of many words for what was written. Start with {0}; offer each; word is NULL when
 * none is near: an edit distance above 2 and a third of the word, or as long as a word. */
typedef struct {
	const char *word;
	size_t distance;
	char hint[96];
} bh_suggestion;

void bh_suggest(bh_suggestion *suggestion, const char *written, const char *offered);

/* The start of a hint: `did you mean "share"? `, or nothing. */
const char *bh_suggest_hint(bh_suggestion *suggestion);

/* How many bytes of a user's text to show in a message (for %.*s): up to most, and no part of
 * a character. */
int bh_suggest_cut(const char *text, size_t most);

#endif
