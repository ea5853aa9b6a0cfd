#include "read/cif.h"

#include <string.h>

#include "base/number.h"

static bool is_blank(char c)
{
	return c == ' ' || c == '\t' || c == '\n' || c == '\r';
}

const bh_cif_item *bh_cif_find(const bh_cif_block *block, const char *names)
{
	const bh_cif_item *there = NULL;

	for (const char *s = names; *s;) {
		size_t n = strcspn(s, " ");

		for (size_t i = 0; i < block->count; i++) {
			const bh_cif_item *item = &block->items[i];

			if (strlen(item->name) != n || memcmp(item->name, s, n) != 0 ||
			    item->count == 0)
				continue;
			if (item->count > 1 || !bh_cif_is_unknown(&item->values[0]))
				return item;
			there = there ? there : item;
		}
		s += n;
		s += *s == ' ';
	}
	return there;
}

bool bh_cif_is_unknown(const bh_cif_value *value)
{
	return !value || (value->length == 1 && !value->quoted &&
			  (*value->text == '?' || *value->text == '.'));
}

/* Digits behind the point of a number without its standard uncertainty. */
static int decimals_of(const char *text, size_t n)
{
	const char *point = memchr(text, '.', n);
	int digits = 0;

	for (const char *s = point ? point + 1 : text + n; s < text + n; s++) {
		if (*s < '0' || *s > '9')
			break;
		digits++;
	}
	return digits;
}

bool bh_cif_number(double *number, int *decimals, const bh_cif_value *value)
{
	const char *text = value->text, *bracket;
	size_t n = value->length;

	while (n && is_blank(text[0])) {
		text++;
		n--;
	}
	while (n && is_blank(text[n - 1]))
		n--;
	bracket = n ? memchr(text, '(', n) : NULL;
	if (bracket) { /* the uncertainty: digits and a bracket */
		const char *s = bracket + 1, *end = text + n;

		while (s < end && ((*s >= '0' && *s <= '9') || *s == '.'))
			s++;
		if (s == bracket + 1 || s + 1 != end || *s != ')')
			return false;
		n = (size_t)(bracket - text);
	}
	if (!bh_number_read(number, text, n))
		return false;
	if (decimals)
		*decimals = decimals_of(text, n);
	return true;
}

bool bh_cif_coordinate(double *number, int *decimals, bool *fraction,
		       const bh_cif_value *value)
{
	const char *slash = memchr(value->text, '/', value->length);
	double over;

	*fraction = slash != NULL;
	if (!slash)
		return bh_cif_number(number, decimals, value);
	*decimals = 9;
	if (!bh_number_read(number, value->text, (size_t)(slash - value->text)) ||
	    !bh_number_read(&over, slash + 1,
			    (size_t)(value->text + value->length - slash - 1)) ||
	    over == 0)
		return false;
	*number /= over;
	return true;
}

void bh_cif_text(char *to, size_t room, const bh_cif_value *value)
{
	size_t n = 0;

	for (unsigned i = 0; value && i < value->length && n + 1 < room; i++) {
		char c = value->text[i];

		if (is_blank(c) && (n == 0 || to[n - 1] == ' '))
			continue;
		to[n++] = is_blank(c) ? ' ' : c;
	}
	while (n && to[n - 1] == ' ')
		n--;
	to[n] = '\0';
}
