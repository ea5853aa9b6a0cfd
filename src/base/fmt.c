#include "base/fmt.h"

#include <math.h>
#include <stdio.h>
#include <string.h>

static const char *none(char room[BH_FMT_ROOM])
{
	memcpy(room, "\xE2\x80\x93", 4); /* en dash */
	return room;
}

/* A no-break thin space would be right on paper but has no width on some terminals: a plain
 * space groups thousands of five digits and more. */
static void group_thousands(char room[BH_FMT_ROOM])
{
	char copy[BH_FMT_ROOM];
	size_t sign = room[0] == '-', whole = strcspn(room + sign, "."), n = sign;

	if (whole < 5)
		return;
	snprintf(copy, sizeof copy, "%s", room);
	for (size_t i = 0; i < whole && n + 2 < BH_FMT_ROOM; i++) {
		if (i && (whole - i) % 3 == 0)
			room[n++] = ' ';
		room[n++] = copy[sign + i];
	}
	snprintf(room + n, BH_FMT_ROOM - n, "%s", copy + sign + whole);
}

const char *bh_fmt_digits(char room[BH_FMT_ROOM], double value, int digits)
{
	double size = fabs(value), unit;
	int decimals;

	if (!isfinite(value))
		return none(room);
	if (!(size > 0))
		return memcpy(room, "0", 2);
	if (size < 1e-4 || size >= 1e7) {
		snprintf(room, BH_FMT_ROOM, "%.*e", digits - 1, value);
		return room;
	}
	decimals = digits - 1 - (int)floor(log10(size));
	unit = pow(10, -decimals);
	value = round(value / unit) * unit;
	/* 9.99 with 2 digits rounds to 10, which has one decimal less */
	if (fabs(value) >= pow(10, floor(log10(size)) + 1) * (1 - 1e-12))
		decimals--;
	snprintf(room, BH_FMT_ROOM, "%.*f", decimals > 0 ? decimals : 0, value);
	group_thousands(room);
	return room;
}

const char *bh_fmt_short(char room[BH_FMT_ROOM], double value, int digits)
{
	char *dot;

	bh_fmt_digits(room, value, digits);
	dot = strchr(room, '.');
	if (dot && !strchr(room, 'e')) {
		char *end = room + strlen(room);

		while (end[-1] == '0')
			*--end = '\0';
		if (end[-1] == '.')
			end[-1] = '\0';
	}
	return room;
}

const char *bh_fmt_fixed(char room[BH_FMT_ROOM], double value, int decimals)
{
	if (!isfinite(value))
		return none(room);
	snprintf(room, BH_FMT_ROOM, "%.*f", decimals, value);
	return room;
}

const char *bh_fmt_duration(char room[BH_FMT_ROOM], double seconds)
{
	long long s;

	if (!isfinite(seconds) || seconds > 1e12)
		return none(room);
	if (seconds < 9.95) {
		bh_fmt_digits(room, seconds, 2);
		snprintf(room + strlen(room), 3, " s");
		return room;
	}
	s = llround(seconds);
	if (s < 60)
		snprintf(room, BH_FMT_ROOM, "%lld s", s);
	else if (s < 600)
		snprintf(room, BH_FMT_ROOM, s % 60 ? "%lld min %lld s" : "%lld min",
			 s / 60, s % 60);
	else if (s < 3570)
		snprintf(room, BH_FMT_ROOM, "%lld min", (s + 30) / 60);
	else if (s < 172800)
		snprintf(room, BH_FMT_ROOM, "%lld h %02lld min", (s + 30) / 3600,
			 (s + 30) % 3600 / 60);
	else
		snprintf(room, BH_FMT_ROOM, "%lld d %lld h", (s + 1800) / 86400,
			 (s + 1800) % 86400 / 3600);
	return room;
}
