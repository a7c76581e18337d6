/* Decimal text to whole ticks, exactly. */
#include "clock/decimal.h"

static const int64_t MOST_EXPONENT = INT64_C(1) << 60;

static size_t scan_exponent(const char *text, size_t length, int64_t *exponent) {
    size_t i = 1;
    bool negative = false;
    if (length < 2 || (text[0] != 'e' && text[0] != 'E'))
        return 0;
    if (text[1] == '+' || text[1] == '-') {
        negative = text[1] == '-';
        i = 2;
    }
    size_t first = i;
    int64_t value = 0;
    for (; i < length && tk_is_digit(text[i]); i++)
        value = value >= MOST_EXPONENT / 10 ? MOST_EXPONENT : value * 10 + (text[i] - '0');
    if (i == first)
        return 0;
    *exponent = negative ? -value : value;
    return i;
}

size_t tk_number_scan(const char *text, size_t length, tk_number *out) {
    tk_number n = {0};
    size_t i = 0;
    if (length > 0 && (text[0] == '+' || text[0] == '-')) {
        n.negative = text[0] == '-';
        i = 1;
    }
    n.digits = text + i;
    while (i < length && tk_is_digit(text[i]))
        i++, n.whole++;
    if (i < length && text[i] == '.') {
        n.point = true;
        i++;
        while (i < length && tk_is_digit(text[i]))
            i++, n.fraction++;
    }
    if (n.whole + n.fraction == 0)
        return 0;
    i += scan_exponent(text + i, length - i, &n.exponent);
    *out = n;
    return i;
}

/* The part of `number` below its point, times `scale`: a schoolbook product from the last digit up, whose
 * carry out at the point is the whole part and whose digits below the point must all be zero. */
static thole_parse scale_fraction(const tk_number *number, int64_t point, uint64_t scale, uint64_t *whole) {
    int64_t digits = (int64_t)(number->whole + number->fraction);
    uint64_t carry = 0;
    for (int64_t i = digits - 1; i >= 0 && i >= point; i--) {
        uint64_t v = tk_digit(number, (size_t)i) * scale + carry; /* < 10 * 10^15 + 1.2 * 10^15 */
        if (v % 10 != 0)
            return THOLE_PARSE_DIGITS;
        carry = v / 10;
    }
    for (; point < 0 && carry != 0; point++) { /* zeros between the point and the first digit */
        if (carry % 10 != 0)
            return THOLE_PARSE_DIGITS;
        carry /= 10;
    }
    *whole = carry;
    return THOLE_PARSED;
}

thole_parse tk_number_scale(const tk_number *number, uint64_t scale, int64_t *out) {
    const uint64_t most = (uint64_t)INT64_MAX + (number->negative ? 1 : 0);
    int64_t digits = (int64_t)(number->whole + number->fraction);
    int64_t point = (int64_t)number->whole + number->exponent; /* digits before the true point */
    uint64_t value = 0, below = 0;
    for (int64_t i = 0; i < point; i++) {
        unsigned d = i < digits ? tk_digit(number, (size_t)i) : 0;
        if (i >= digits && value == 0)
            break;
        if (value > (most / scale - d) / 10)
            return THOLE_PARSE_RANGE;
        value = value * 10 + d;
    }
    thole_parse parse = scale_fraction(number, point, scale, &below);
    if (parse != THOLE_PARSED)
        return parse;
    value *= scale; /* at most `most`, by the check above */
    if (below > most - value)
        return THOLE_PARSE_RANGE;
    value += below;
    *out = number->negative ? (int64_t)(0 - value) : (int64_t)value;
    return THOLE_PARSED;
}

thole_parse thole_parse_decimal(const char *text, size_t length, int64_t *ticks) {
    /* Short whole numbers are what most files hold. */
    if (length > 0 && length <= 9) {
        int64_t value = 0;
        size_t i = 0;
        while (i < length && tk_is_digit(text[i]))
            value = value * 10 + (text[i++] - '0');
        if (i == length) {
            *ticks = value * THOLE_TICKS_A_UNIT;
            return THOLE_PARSED;
        }
    }
    tk_number number;
    if (length == 0 || tk_number_scan(text, length, &number) != length)
        return THOLE_PARSE_SYNTAX;
    return tk_number_scale(&number, (uint64_t)THOLE_TICKS_A_UNIT, ticks);
}
