#include "read/suggest.h"

#include <stdio.h>
#include <string.h>

#include "base/nearest.h"

void bh_suggest(bh_suggestion *suggestion, const char *written, const char *offered)
{
	size_t n = strlen(written), near = n / 3 > 2 ? n / 3 : 2;
	size_t distance = bh_nearest_distance(written, offered);

	if (distance > near || distance >= n || distance >= strlen(offered))
		return;
	if (suggestion->word && distance >= suggestion->distance)
		return;
	suggestion->word = offered;
	suggestion->distance = distance;
	snprintf(suggestion->hint, sizeof suggestion->hint, "did you mean \"%.*s\"? ",
		 bh_suggest_cut(offered, 70), offered);
}

const char *bh_suggest_hint(bh_suggestion *suggestion)
{
	return suggestion->word ? suggestion->hint : "";
}

int bh_suggest_cut(const char *text, size_t most)
{
	size_t n = strlen(text);

	if (n > most)
		for (n = most; n > 0 && ((unsigned char)text[n] & 0xC0) == 0x80;)
			n--;
	return (int)n;
}
