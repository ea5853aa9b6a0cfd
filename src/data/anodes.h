#ifndef DATA_ANODES_H
#define DATA_ANODES_H

#include <stddef.h>

/* The lines that a tube anode sends out, and the one contaminant of an aged tube. */
enum { BH_KA1, BH_KA2, BH_KB, BH_W_LA1, BH_LINE_KINDS };

typedef struct {
	const char *symbol;
	int z;
	double ka1_A, ka2_A, kb_A; /* Kβ: the 1,3 blend for Cr to Cu, Kβ1 for Mo, Ag */
	double ka1_fwhm_eV; /* of the summed emission profile, for the emission width */
	const char *source;
} bh_anode;

extern const bh_anode bh_anodes[];
extern const size_t bh_anode_count;

/* NULL when the symbol (case-sensitive) is not an anode of the table. */
const bh_anode *bh_anode_find(const char *symbol);

/* Tungsten Lα1 of an aged tube, Å, with source beside the value. */
extern const double bh_w_la1_A;

#endif
