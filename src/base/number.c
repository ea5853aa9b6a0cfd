#include "base/number.h"

#include <math.h>
#include <stdlib.h>
#include <string.h>

static size_t digits(const char *s, size_t n)
{
	size_t i = 0;

	while (i < n && s[i] >= '0' && s[i] <= '9')
		i++;
	return i;
}

/* Length of the number that text starts with; 0: none. */
static size_t shape(const char *s, size_t n)
{
	size_t i = n && (s[0] == '-' || s[0] == '+') ? 1 : 0;
	size_t whole = digits(s + i, n - i), part = 0, e;

	i += whole;
	if (i < n && s[i] == '.') {
		part = digits(s + i + 1, n - i - 1);
		i += 1 + part;
	}
	if (whole + part == 0)
		return 0;
	if (i < n && (s[i] == 'e' || s[i] == 'E')) {
		e = i + 1 < n && (s[i + 1] == '-' || s[i + 1] == '+') ? i + 2 : i + 1;
		if (digits(s + e, n - e))
			i = e + digits(s + e, n - e);
	}
	return i;
}

/* Correctly rounded by strtod in the "C" numeric locale, which this program never leaves;
 * a foreign locale of a host program is met by putting its point in. */
static bool convert(double *value, const char *s, size_t n)
{
	char copy[64], *end, point[] = "0.5";
	double number;

	if (n >= sizeof copy)
		return false;
	memcpy(copy, s, n);
	copy[n] = '\0';
	if (!(strtod(point, &end) > 0.4)) { /* a locale with a comma reads "0" */
		char *dot = strchr(copy, '.');

		if (dot)
			*dot = ',';
	}
	number = strtod(copy, &end);
	if (*end || !isfinite(number))
		return false;
	*value = number;
	return true;
}

bool bh_number_read(double *value, const char *text, size_t length)
{
	return length > 0 && shape(text, length) == length &&
	       convert(value, text, length);
}

static double unit_s(const char *s, size_t n)
{
	static const struct {
		const char *name;
		double s;
	} units[] = { { "h", 3600 }, { "min", 60 }, { "s", 1 } };

	for (size_t i = 0; i < sizeof units / sizeof *units; i++)
		if (strlen(units[i].name) == n && memcmp(units[i].name, s, n) == 0)
			return units[i].s;
	return 0;
}

bool bh_duration_read(double *seconds, const char *text, size_t length)
{
	double sum = 0;
	size_t i = 0;

	while (i < length) {
		double value, unit;
		size_t n, word = 0;

		while (i < length && text[i] == ' ')
			i++;
		n = shape(text + i, length - i);
		if (n == 0 || !convert(&value, text + i, n) || value < 0)
			return false;
		i += n;
		while (i < length && text[i] == ' ')
			i++;
		while (i + word < length && text[i + word] >= 'a' &&
		       text[i + word] <= 'z')
			word++;
		unit = unit_s(text + i, word);
		if (!(unit > 0))
			return false;
		sum += value * unit;
		i += word;
	}
	if (!(sum > 0) || !isfinite(sum))
		return false;
	*seconds = sum;
	return true;
}
