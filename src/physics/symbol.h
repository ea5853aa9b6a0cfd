#ifndef PHYSICS_SYMBOL_H
#define PHYSICS_SYMBOL_H

#include <stdbool.h>
#include <stddef.h>

/* Space-group symbols as text, apart from the database that holds the operations. */

enum { BH_SYMBOL_LENGTH = 63 };

/* What the database says of one setting; borrowed. */
typedef struct {
	int row;	    /* 1 to 530                                        */
	int number;	    /* 1 to 230                                        */
	const char *choice; /* "", "b1", "1", "2cab", "H", ...                 */
	const char *hall;
	const char *international; /* names of the setting, " = " between several     */
	const char *full;	   /* the full Hermann-Mauguin symbol                 */
} bh_symbol_row;

/* What a user wrote, taken apart: with single blanks and without any, underscores and
 * brackets left out; the whole text in small letters, as a Hall symbol; what stands behind
 * ":", "" for nothing; the number that it is, 0 for none. */
typedef struct {
	char spaced[BH_SYMBOL_LENGTH + 1];
	char squeezed[BH_SYMBOL_LENGTH + 1];
	char hall[BH_SYMBOL_LENGTH + 1];
	char choice[8];
	int number;
} bh_symbol;

/* Take a text apart. "P 2(1)/c" is "P 21/c"; a last letter H or R is a choice of axes, S or
 * Z of origin 1 or 2; the lattice letter may be small, the others large.
 *   false  empty or longer than BH_SYMBOL_LENGTH */
bool bh_symbol_read(bh_symbol *symbol, const char *text);

/* How well a setting fits a symbol; 0: not at all. In falling order: number; Hermann-Mauguin
 * with its blanks; Hall; Hermann-Mauguin without blanks; what is left: an older spelling (cubic
 * groups without the bar, "F d 3 m"; other letters for the glide e), Hall without blanks. The
 * choice is not looked at.
 *   from  International Tables A (2016), 1.4; for e P. M. de Wolff et al., Acta Cryst. A48
 *         (1992) 727 */
int bh_symbol_fit(const bh_symbol *symbol, const bh_symbol_row *row);

/* Whether a symbol is a Hall symbol of the row; case and blanks do not matter. */
bool bh_symbol_is_hall(const bh_symbol *symbol, const bh_symbol_row *row);

/* Whether the choice behind ":" is the row's: as listed, or "1" for all of "1", "1cab"... */
bool bh_symbol_choice(const bh_symbol *symbol, const bh_symbol_row *row);

/* The shortest symbol that bh_symbol_fit gives back to this very row: "P 21/n", "R -3 c:H",
 * "P 1 1 21/b", "C m m b". */
void bh_symbol_write(char *to, size_t room, const bh_symbol_row *row);

#endif
