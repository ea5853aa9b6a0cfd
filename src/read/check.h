#ifndef READ_CHECK_H
#define READ_CHECK_H

#include "read/conf.h"
#include "read/scan.h"

/* One kind of section. */
typedef struct {
	bh_key_file file;
	const char *name, *parent; /* parent "" : top level */
	bool titled, many, needed;
} bh_section_kind;

extern const bh_section_kind bh_section_kinds[];
extern const size_t bh_section_kind_count;

/* Section of the key table that a written section uses ("aim line"); NULL: noted. */
const char *bh_check_key_section(const bh_scan_section *section, bh_key_file file,
				 bh_problems *problems);

/* Check a scanned file against the tables, and mark what is bad. whole: nothing was passed
 * over in scanning, so what is missing is missing.
 *   false  problems noted */
bool bh_check(bh_scan_section *root, bh_key_file file, bool whole, bh_problems *problems);

/* The number that a value stands for, by the key's type; false: it is none. */
bool bh_check_number(double *number, const bh_key *key, const char *text);

#endif
