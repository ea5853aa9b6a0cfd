#include "read/element.h"

#include <string.h>

#include "base/number.h"

static bool is_letter(char c)
{
	return (c >= 'A' && c <= 'Z') || (c >= 'a' && c <= 'z');
}

static bool is_capital(char c)
{
	return c >= 'A' && c <= 'Z';
}

static char capital(char c)
{
	return is_letter(c) ? (char)(c & ~32) : c;
}

static char small(char c)
{
	return is_letter(c) ? (char)(c | 32) : c;
}

/* Of one or two letters, whatever their case; 0: none. */
static int element_of(const char *letters, size_t n)
{
	char symbol[3] = { capital(letters[0]), n > 1 ? small(letters[1]) : '\0', '\0' };

	if (n == 1 && (symbol[0] == 'D' || symbol[0] == 'T'))
		return 1;
	return bh_element_z(symbol);
}

/* "3+", "+3", "-", "2-" behind a symbol; digits without a sign are a number of the site. */
static int charge_of(const char *s, size_t n)
{
	int sign = 0, digits = 0;

	for (size_t i = 0; i < n; i++) {
		if (s[i] == '+' || s[i] == '-')
			sign = s[i] == '+' ? 1 : -1;
		else if (s[i] >= '0' && s[i] <= '9' && digits == 0)
			digits = s[i] - '0';
		else
			break;
	}
	return sign * (digits ? digits : 1);
}

bool bh_element_type(int *z, int *charge, const char *text, size_t length)
{
	size_t letters = 0;

	while (letters < length && is_letter(text[letters]))
		letters++;
	*z = 0;
	*charge = 0;
	if (letters == 0)
		return false;
	/* "Cval", "Siva", "Hiso": an atom in a bond */
	if (letters >= 2 && (letters == 2 || !is_capital(text[1])))
		*z = element_of(text, 2);
	if (!*z)
		*z = element_of(text, 1);
	*charge = charge_of(text + letters, length - letters);
	return *z != 0;
}

void bh_element_formula(bh_element_counts *counts, const char *text, size_t length)
{
	*counts = (bh_element_counts){ .known = false };
	for (size_t i = 0; i < length;) {
		size_t letters = 0, digits = 0;
		double many = 1;
		int z;

		if (text[i] == ' ' || text[i] == '\n' || text[i] == '\r' ||
		    text[i] == '\t' || text[i] == ',') {
			i++;
			continue;
		}
		while (i + letters < length && is_letter(text[i + letters]))
			letters++;
		while (i + letters + digits < length &&
		       ((text[i + letters + digits] >= '0' &&
			 text[i + letters + digits] <= '9') ||
			text[i + letters + digits] == '.'))
			digits++;
		z = letters == 1 || letters == 2 ? element_of(text + i, letters) : 0;
		if (!z ||
		    (digits && !bh_number_read(&many, text + i + letters, digits))) {
			*counts = (bh_element_counts){ .known = false };
			return;
		}
		counts->atoms[z] += many;
		counts->known = true;
		i += letters + digits;
	}
}

static bool is_water(const char *text, size_t letters)
{
	return letters >= 3 && small(text[0]) == 'w' && small(text[1]) == 'a' &&
	       small(text[2]) == 't';
}

int bh_element_label(int z[2], const char *text, size_t length)
{
	size_t letters = 0;
	int one, two;
	bool proper;

	while (letters < length && is_letter(text[letters]))
		letters++;
	if (letters == 0)
		return 0;
	if (is_water(text, letters)) {
		z[0] = 8;
		return 1;
	}
	one = element_of(text, 1);
	two = letters >= 2 ? element_of(text, 2) : 0;
	proper = letters >= 2 && !is_capital(text[1]);
	if (!one || !two) {
		z[0] = one ? one : two;
		return z[0] != 0;
	}
	z[0] = proper ? two : one;
	z[1] = proper ? one : two;
	return 2;
}
