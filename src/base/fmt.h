#ifndef BASE_FMT_H
#define BASE_FMT_H

#include <stddef.h>

/* Numbers as people read them: one rounding rule for paper, screen and findings. Every
 * function writes into room[BH_FMT_ROOM] and returns it. Not finite: "–". */
enum { BH_FMT_ROOM = 40 };

/* Significant digits, no exponent between 1e-4 and 1e7, a space in thousands:
 * 12345.6 with 3 -> "12 300", 0.0123456 with 2 -> "0.012". */
const char *bh_fmt_digits(char room[BH_FMT_ROOM], double value, int digits);

/* As many significant digits at most, no trailing zeros: 40.0 -> "40", 0.25 -> "0.25". For
 * what is set by hand. */
const char *bh_fmt_short(char room[BH_FMT_ROOM], double value, int digits);

/* Fixed decimals: 26.6312 with 3 -> "26.631". */
const char *bh_fmt_fixed(char room[BH_FMT_ROOM], double value, int decimals);

/* "38 s", "4 min 10 s", "1 h 24 min", "2 d 3 h". */
const char *bh_fmt_duration(char room[BH_FMT_ROOM], double seconds);

#endif
