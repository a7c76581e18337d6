/* Inside the core: decimal numbers as written, exactly, without the C library's locale. */
#ifndef TK_DECIMAL_H
#define TK_DECIMAL_H

#include "clock/clock.h"

/* A number's text taken apart: [sign] digits [. digits] [e [sign] digits], at least one digit
 * before the exponent. */
typedef struct tk_number {
    const char *digits; /* the first digit or point */
    size_t whole;       /* digits before the point */
    size_t fraction;    /* digits after it */
    bool point;         /* whether there is a point between them */
    bool negative;
    int64_t exponent; /* held within +-2^60, which no text can undo by its length */
} tk_number;

/* Take the number that `text` begins with; returns the bytes it takes, 0 when there is none. */
size_t tk_number_scan(const char *text, size_t length, tk_number *out);

/* The number times `scale` (1 .. 10^15), exactly, as an integer. THOLE_PARSE_RANGE when it does not fit,
 * THOLE_PARSE_DIGITS when it is not whole. */
thole_parse tk_number_scale(const tk_number *number, uint64_t scale, int64_t *out);

/* The double nearest to the number (ties to even); infinite when it is too large. */
double tk_number_real(const tk_number *number);

/* Digit i (from 0) of the number, the point passed over. */
static inline unsigned tk_digit(const tk_number *number, size_t i) {
    return (unsigned)(unsigned char)number->digits[i + (number->point && i >= number->whole)] - '0';
}

static inline bool tk_is_digit(char c) { return (unsigned)((unsigned char)c - '0') < 10; }

#endif
