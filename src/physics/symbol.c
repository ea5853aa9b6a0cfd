#include "physics/symbol.h"

#include <ctype.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

enum { LENGTH = BH_SYMBOL_LENGTH, FIRST_MONOCLINIC = 3, LAST_MONOCLINIC = 15 };
enum { FIRST_CUBIC = 195, GROUPS = 230 };

typedef struct {
	int row;
	const char *name;
} alias;

/* clang-format off */
/* Symbols of International Tables A before 1992, where the database writes the glide e. */
static const alias old_names[] = {
	{ 191, "A b m 2" }, { 192, "B m a 2" }, { 193, "B 2 c m" }, { 194, "C 2 m b" },
	{ 195, "C m 2 a" }, { 196, "A c 2 m" }, { 203, "A b a 2" }, { 204, "B b a 2" },
	{ 205, "B 2 c b" }, { 206, "C 2 c b" }, { 207, "C c 2 a" }, { 208, "A c 2 a" },
	{ 304, "C m c a" }, { 305, "C c m b" }, { 306, "A b m a" }, { 307, "A c a m" },
	{ 308, "B b c m" }, { 309, "B m a b" }, { 316, "C m m a" }, { 317, "C m m b" },
	{ 318, "A b m m" }, { 319, "A c m m" }, { 320, "B m c m" }, { 321, "B m a m" },
	{ 322, "C c c a" }, { 323, "C c c a" }, { 324, "C c c b" }, { 325, "C c c b" },
	{ 326, "A b a a" }, { 327, "A b a a" }, { 328, "A c a a" }, { 329, "A c a a" },
	{ 330, "B b c b" }, { 331, "B b c b" }, { 332, "B b a b" }, { 333, "B b a b" },
};

/* Other spellings of Hall symbols, of other generators of the same operations (S. R. Hall,
 * Acta Cryst. A37 (1981) 517), as files have them; the tests compare the operations. */
static const alias other_halls[] = {
	{ 40, "A -2yab" }, { 43, "C -2yac" }, { 46, "B -2ab" }, { 49, "A -2ab" },
	{ 52, "C -2xac" }, { 55, "B -2xab" }, { 91, "-A 2yab" }, { 94, "-C 2yac" },
	{ 97, "-B 2ab" }, { 100, "-A 2ab" }, { 103, "-C 2xac" }, { 106, "-B 2xab" },
	{ 191, "A 2 -2b" }, { 192, "B 2 -2a" }, { 193, "B -2a 2" }, { 194, "C -2a 2" },
	{ 195, "C -2a -2a" }, { 196, "A -2b -2b" }, { 203, "A 2 -2ab" },
	{ 204, "B 2 -2ab" }, { 205, "B -2ab 2" }, { 206, "C -2ac 2" },
	{ 207, "C -2ac -2ac" }, { 208, "A -2ab -2ab" }, { 304, "-C 2ac 2" },
	{ 305, "-C 2ac 2ac" }, { 306, "-A 2ab 2ab" }, { 307, "-A 2 2ab" },
	{ 308, "-B 2 2ab" }, { 309, "-B 2ab 2" }, { 316, "-C 2a 2" },
	{ 317, "-C 2a 2a" }, { 318, "-A 2b 2b" }, { 319, "-A 2 2b" },
	{ 320, "-B 2 2a" }, { 321, "-B 2a 2" }, { 322, "C 2 2 -1ac" },
	{ 323, "-C 2a 2ac" }, { 325, "-C 2a 2c" }, { 326, "A 2 2 -1ab" },
	{ 327, "-A 2a 2b" }, { 329, "-A 2ab 2b" }, { 330, "B 2 2 -1ab" },
	{ 331, "-B 2ab 2b" }, { 333, "-B 2b 2ab" }, { 440, "P 31 2 (0 0 4)" },
	{ 442, "P 32 2 (0 0 2)" }, { 472, "P 61 2 (0 0 5)" },
	{ 474, "P 62 2 (0 0 4)" }, { 475, "P 64 2 (0 0 2)" }, { 515, "F -4a 2 3" },
	{ 524, "-F 4a 2 3" }, { 527, "F 4d 2 3 -1ad" }, { 528, "-F 4ud 2vw 3" },
};
/* clang-format on */

static const char *old_name(int row)
{
	for (size_t i = 0; i < sizeof old_names / sizeof *old_names; i++)
		if (old_names[i].row == row)
			return old_names[i].name;
	return NULL;
}

static bool is_blank(char c)
{
	return c == ' ' || c == '\t' || c == '\n' || c == '\r';
}

/* A copy with single blanks inside and none around; characters of `drop` are left out. */
static void tidy(char to[LENGTH + 1], const char *from, const char *drop)
{
	size_t n = 0;

	for (; *from && n < LENGTH; from++) {
		if (strchr(drop, *from))
			continue;
		if (!is_blank(*from))
			to[n++] = *from;
		else if (n && to[n - 1] != ' ')
			to[n++] = ' ';
	}
	while (n && to[n - 1] == ' ')
		n--;
	to[n] = '\0';
}

static void squeeze(char to[LENGTH + 1], const char *from)
{
	size_t n = 0;

	for (; *from && n < LENGTH; from++)
		if (*from != ' ')
			to[n++] = *from;
	to[n] = '\0';
}

/* "R -3 c H", "F d -3 m Z": no Hermann-Mauguin symbol ends in these letters. */
static void take_last_letter(bh_symbol *symbol)
{
	size_t n = strlen(symbol->spaced);
	char last = n > 2 ? (char)toupper((unsigned char)symbol->spaced[n - 1]) : ' ';

	if (symbol->choice[0] || !strchr("HRSZ", last))
		return;
	symbol->choice[0] = (char)(last == 'S' ? '1' : last == 'Z' ? '2' : last);
	symbol->choice[1] = '\0';
	symbol->spaced[n - 1] = '\0';
	while (n > 1 && symbol->spaced[n - 2] == ' ')
		symbol->spaced[--n - 1] = '\0';
}

static bool take_choice(bh_symbol *symbol)
{
	char *colon = strchr(symbol->spaced, ':'), *end = colon;
	char choice[LENGTH + 1];

	symbol->choice[0] = '\0';
	if (!colon)
		return true;
	squeeze(choice, colon + 1);
	if (choice[0] == '\0' || strlen(choice) >= sizeof symbol->choice)
		return false;
	memcpy(symbol->choice, choice, strlen(choice) + 1);
	if (choice[1] == '\0')
		symbol->choice[0] = (char)(choice[0] == 'h' || choice[0] == 'r'
						   ? toupper((unsigned char)choice[0])
						   : choice[0]);
	while (end > symbol->spaced && end[-1] == ' ')
		end--;
	*end = '\0';
	return true;
}

static int number_of(const char *text)
{
	long value = 0;

	for (const char *s = text; *s; s++) {
		if (*s < '0' || *s > '9' || value > GROUPS)
			return 0;
		value = 10 * value + (*s - '0');
	}
	return value <= GROUPS ? (int)value : 0;
}

bool bh_symbol_read(bh_symbol *symbol, const char *text)
{
	if (strlen(text) > LENGTH)
		return false;
	tidy(symbol->hall, text, "");
	for (char *c = symbol->hall; *c; c++)
		*c = *c == '_' ? ' ' : (char)tolower((unsigned char)*c);
	tidy(symbol->spaced, text, "_()");
	if (!take_choice(symbol))
		return false;
	take_last_letter(symbol);
	/* the letter of the lattice is large, all others are small */
	for (char *c = symbol->spaced; *c; c++)
		*c = (char)(c == symbol->spaced ? toupper((unsigned char)*c)
						: tolower((unsigned char)*c));
	squeeze(symbol->squeezed, symbol->spaced);
	symbol->number = number_of(symbol->squeezed);
	return symbol->squeezed[0] != '\0';
}

/* Side 0, 1, 2 of "P 2_1/c = P 1 1 2_1/b = P 2_1/b"; false: there are fewer. */
static bool side_of(char name[LENGTH + 1], const char *international, int side)
{
	char part[LENGTH + 1];
	size_t n;

	for (; side > 0 && international; side--) {
		international = strchr(international, '=');
		international += international ? 1 : 0;
	}
	if (!international)
		return false;
	n = strcspn(international, "=");
	snprintf(part, sizeof part, "%.*s", (int)n, international);
	tidy(name, part, "_");
	return true;
}

/* "P 1 21/n 1" to "P 21/n": what is left of the axes without the ones. */
static bool monoclinic_short(char name[LENGTH + 1], const bh_symbol_row *row)
{
	size_t n = 0;

	if (row->number < FIRST_MONOCLINIC || row->number > LAST_MONOCLINIC ||
	    !side_of(name, row->international, 1))
		return false;
	for (const char *s = name; *s; s++) {
		bool one = s[0] == '1' && s > name && s[-1] == ' ' &&
			   (s[1] == ' ' || s[1] == '\0');

		if (one && n && name[n - 1] == ' ')
			n--;
		if (!one && !(*s == ' ' && n && name[n - 1] == ' '))
			name[n++] = *s;
	}
	name[n] = '\0';
	return true;
}

static bool full_name(char name[LENGTH + 1], const bh_symbol_row *row)
{
	tidy(name, row->full, "_");
	return true;
}

/* "F d -3 m" to "F d 3 m". */
static bool barless(char name[LENGTH + 1], const bh_symbol_row *row)
{
	char *bar;

	if (row->number < FIRST_CUBIC)
		return false;
	bar = strstr(name, "-3");
	if (!bar)
		return false;
	memmove(bar, bar + 1, strlen(bar));
	return true;
}

enum { NAMES = 8, FIRST_OLD = 6 };

/* Name i of a setting; false: it has none of that kind. */
static bool name_of(char name[LENGTH + 1], const bh_symbol_row *row, int i)
{
	const char *old = old_name(row->row);

	switch (i) {
	case 0:
	case 1:
	case 2:
		return side_of(name, row->international, i);
	case 3:
		return full_name(name, row);
	case 4:
		snprintf(name, LENGTH + 1, "%s", old ? old : "");
		return old != NULL;
	case 5:
		return monoclinic_short(name, row);
	case 6:
		return side_of(name, row->international, 0) && barless(name, row);
	default:
		return full_name(name, row) && barless(name, row);
	}
}

/* Equal where an e of the list stands for any axial glide. */
static bool alike(const char *text, const char *listed)
{
	for (; *text && *listed; text++, listed++)
		if (*text != *listed && !(*listed == 'e' && strchr("abc", *text)))
			return false;
	return *text == *listed;
}

/* Equal apart from the case of letters and, when `loose`, apart from blanks. */
static bool same_hall(const char *text, const char *hall, bool loose)
{
	for (;; text++, hall++) {
		while (loose && *text == ' ')
			text++;
		while (loose && *hall == ' ')
			hall++;
		if (*text != tolower((unsigned char)*hall))
			return false;
		if (!*text)
			return true;
	}
}

static bool any_hall(const bh_symbol *symbol, const bh_symbol_row *row, bool loose)
{
	if (same_hall(symbol->hall, row->hall, loose))
		return true;
	for (size_t i = 0; i < sizeof other_halls / sizeof *other_halls; i++)
		if (other_halls[i].row == row->row &&
		    same_hall(symbol->hall, other_halls[i].name, loose))
			return true;
	return false;
}

bool bh_symbol_is_hall(const bh_symbol *symbol, const bh_symbol_row *row)
{
	return any_hall(symbol, row, true);
}

int bh_symbol_fit(const bh_symbol *symbol, const bh_symbol_row *row)
{
	int best = 0;

	if (symbol->number)
		return symbol->number == row->number ? 6 : 0;
	for (int i = 0; i < NAMES; i++) {
		char name[LENGTH + 1], squeezed[LENGTH + 1];
		int fit = 0;

		if (!name_of(name, row, i))
			continue;
		squeeze(squeezed, name);
		if (strcmp(symbol->spaced, name) == 0)
			fit = i < FIRST_OLD ? 5 : 2;
		else if (strcmp(symbol->squeezed, squeezed) == 0)
			fit = i < FIRST_OLD ? 3 : 2;
		else if (alike(symbol->squeezed, squeezed))
			fit = 1;
		best = fit > best ? fit : best;
	}
	if (best < 4 && any_hall(symbol, row, false))
		best = 4;
	if (best < 1 && any_hall(symbol, row, true))
		best = 1;
	return best;
}

bool bh_symbol_choice(const bh_symbol *symbol, const bh_symbol_row *row)
{
	const char *wanted = symbol->choice, *listed = row->choice;
	bool origin = (wanted[0] == '1' || wanted[0] == '2') && wanted[1] == '\0';

	return wanted[0] == '\0' || strcmp(wanted, listed) == 0 ||
	       (origin && listed[0] == wanted[0]);
}

void bh_symbol_write(char *to, size_t room, const bh_symbol_row *row)
{
	char name[LENGTH + 1];
	const char *old = old_name(row->row);
	bool monoclinic =
		row->number >= FIRST_MONOCLINIC && row->number <= LAST_MONOCLINIC;

	side_of(name, row->international, 0);
	if (monoclinic && strchr(row->choice, 'b'))
		monoclinic_short(name, row);
	else if (monoclinic)
		side_of(name, row->international, 1);
	else if (old && (row->number == 67 ||
			 row->number == 68)) /* one name with e for two rows */
		snprintf(name, sizeof name, "%s", old);
	if (strchr("12HR", row->choice[0]) && row->choice[0])
		snprintf(to, room, "%s:%c", name, row->choice[0]);
	else
		snprintf(to, room, "%s", name);
}
