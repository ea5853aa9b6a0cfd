#include "read/suggest.h"

#include <string.h>

#include "base/nearest.h"

void bh_suggest(bh_suggestion *suggestion, const char *written, const char *offered)
{
	size_t near = strlen(written) / 3,
	       distance = bh_nearest_distance(written, offered);

	if (near < 2)
		near = 2;
	if (distance <= near && (!suggestion->word || distance < suggestion->distance)) {
		suggestion->word = offered;
		suggestion->distance = distance;
	}
}
