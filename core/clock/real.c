/* Decimal text to the nearest double, correctly rounded and without a locale.
 *
 * Up to 19 digits with a small power of ten are exact in one operation (Clinger, "How to read floating point
 * numbers accurately", PLDI 1990). Everything else goes the slow and sure way: the decimal is shifted by
 * powers of two, digit by digit, until its whole part is the mantissa. 768 digits decide any double; those
 * beyond KEPT only tell a tie from more than a tie. */
#include <math.h>
#include <string.h>

#include "clock/decimal.h"

enum { KEPT = 800, MOST_SHIFT = 60, MANTISSA = 53, LEAST_EXPONENT = -1022 };

typedef struct digits {
    uint8_t at[KEPT];
    int n;
    int64_t point; /* the value is 0.d0 d1 d2 ... times 10^point */
    bool more;     /* something that is not zero was cut off */
} digits;

static void trim(digits *d) {
    while (d->n > 0 && d->at[d->n - 1] == 0)
        d->n--;
}

static void load(digits *d, const tk_number *number) {
    size_t total = number->whole + number->fraction, first = 0;
    while (first < total && tk_digit(number, first) == 0)
        first++;
    d->point = (int64_t)number->whole - (int64_t)first + number->exponent;
    for (size_t i = first; i < total; i++) {
        unsigned v = tk_digit(number, i);
        if (d->n < KEPT)
            d->at[d->n++] = (uint8_t)v;
        else if (v != 0)
            d->more = true;
    }
    trim(d);
}

/* Divide by 2^k, k <= 60. */
static void shift_down(digits *d, int k) {
    uint64_t n = 0, mask = (UINT64_C(1) << k) - 1;
    int from = 0, to = 0;
    while (n >> k == 0 && (from < d->n || n != 0)) { /* the first digits of the quotient are zero */
        n = n * 10 + (from < d->n ? d->at[from] : 0);
        from++;
    }
    d->point -= from - 1;
    for (; from < d->n; from++) {
        d->at[to++] = (uint8_t)(n >> k);
        n = (n & mask) * 10 + d->at[from];
    }
    for (; n != 0; n = (n & mask) * 10) {
        if (to < KEPT)
            d->at[to++] = (uint8_t)(n >> k);
        else if (n >> k != 0)
            d->more = true;
    }
    d->n = to;
    trim(d);
}

/* Multiply by 2^k, k <= 60. */
static void shift_up(digits *d, int k) {
    enum { FRONT = 20 };
    uint8_t wide[KEPT + FRONT];
    uint64_t n = 0;
    int at = FRONT + d->n;
    for (int i = d->n - 1; i >= 0; i--) {
        n += (uint64_t)d->at[i] << k;
        wide[--at] = (uint8_t)(n % 10);
        n /= 10;
    }
    for (; n != 0; n /= 10)
        wide[--at] = (uint8_t)(n % 10);
    d->point += FRONT - at;
    int total = FRONT + d->n - at;
    for (int i = KEPT; i < total; i++)
        d->more = d->more || wide[at + i] != 0;
    d->n = total < KEPT ? total : KEPT;
    memcpy(d->at, wide + at, (size_t)d->n);
    trim(d);
}

/* The whole number nearest to the digits, ties to even; they are below 2^54. */
static uint64_t round_whole(const digits *d) {
    uint64_t value = 0;
    int whole = d->point > 0 ? (int)d->point : 0;
    for (int i = 0; i < whole; i++)
        value = value * 10 + (i < d->n ? d->at[i] : 0);
    if (d->point < 0 || whole >= d->n)
        return value;
    bool tie = d->at[whole] == 5 && whole + 1 == d->n && !d->more;
    return value + (tie ? value & 1 : d->at[whole] >= 5);
}

static double slowly(const tk_number *number) {
    digits d;
    memset(&d, 0, sizeof d);
    load(&d, number);
    if (d.n == 0 || d.point < -330)
        return 0.0;
    if (d.point > 310)
        return HUGE_VAL;
    int exponent = 0;
    /* 8^p < 10^p and 2^60 < 10^19: going up never passes 1, going down may pass 1/2. */
    while (d.point > 0) {
        int k = d.point >= 19 ? MOST_SHIFT : (int)d.point * 3 + 1;
        shift_down(&d, k);
        exponent += k;
    }
    while (d.point < 0 || d.at[0] < 5) {
        int k = d.point <= -19 ? MOST_SHIFT : d.point < 0 ? (int)-d.point * 3 : 1;
        shift_up(&d, k);
        exponent -= k;
    }
    /* now in [1/2, 1) times 2^exponent */
    int lost = exponent - 1 < LEAST_EXPONENT ? LEAST_EXPONENT - (exponent - 1) : 0;
    if (lost > MANTISSA)
        return 0.0;
    shift_up(&d, MANTISSA - lost);
    return ldexp((double)round_whole(&d), exponent - MANTISSA + lost);
}

double tk_number_real(const tk_number *number) {
    static const double TEN[] = {1e0,  1e1,  1e2,  1e3,  1e4,  1e5,  1e6,  1e7,  1e8,  1e9,  1e10, 1e11,
                                 1e12, 1e13, 1e14, 1e15, 1e16, 1e17, 1e18, 1e19, 1e20, 1e21, 1e22};
    size_t total = number->whole + number->fraction;
    double value = -1.0;
    if (total <= 19 && number->exponent > -100 && number->exponent < 100) {
        uint64_t mantissa = 0;
        for (size_t i = 0; i < total; i++)
            mantissa = mantissa * 10 + tk_digit(number, i);
        int64_t power = number->exponent - (int64_t)number->fraction;
        if (mantissa <= UINT64_C(1) << 53 && power >= -22 && power <= 22)
            value = power < 0 ? (double)mantissa / TEN[-power] : (double)mantissa * TEN[power];
    }
    if (value < 0.0)
        value = slowly(number);
    return number->negative ? -value : value;
}
