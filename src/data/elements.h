#ifndef DATA_ELEMENTS_H
#define DATA_ELEMENTS_H

enum { BH_Z_MAX = 92 };

/* "Fe" of 26; "?" outside 1 to BH_Z_MAX. */
const char *bh_element_symbol(int z);

/* 26 of "Fe"; 0 when there is no such symbol up to BH_Z_MAX. */
int bh_element_z(const char *symbol);

#endif
