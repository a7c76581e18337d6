/* Calendar dates and ISO 8601 times. */
#include <string.h>

#include "clock/decimal.h"
#include "clock/iso8601.h"

enum { DAY = 86400, FRACTION_DIGITS = 9 };

/* Days from a date: years begin in March, so that the leap day is the last, and 400 years are one
 * round of 146,097 days (H. Hinnant, "chrono-compatible low-level date algorithms"). */
int64_t thole_days_from_date(int64_t year, int month, int day) {
    if (month <= 2)
        year--;
    int64_t era = (year >= 0 ? year : year - 399) / 400;
    int64_t of_era = year - era * 400;
    int64_t of_year = (153 * ((month + 9) % 12) + 2) / 5 + day - 1;
    return era * 146097 + of_era * 365 + of_era / 4 - of_era / 100 + of_year - 719468;
}

void thole_date_from_days(int64_t days, int64_t *year, int *month, int *day) {
    days += 719468; /* since 0000-03-01 */
    int64_t era = (days >= 0 ? days : days - 146096) / 146097;
    int64_t of_era = days - era * 146097;
    int64_t y = (of_era - of_era / 1460 + of_era / 36524 - of_era / 146096) / 365;
    int64_t of_year = of_era - (365 * y + y / 4 - y / 100);
    int64_t m = (5 * of_year + 2) / 153; /* from March */
    *day = (int)(of_year - (153 * m + 2) / 5 + 1);
    *month = (int)(m < 10 ? m + 3 : m - 9);
    *year = y + era * 400 + (*month <= 2);
}

bool tk_ticks(int64_t seconds, int32_t nanos, int64_t *ticks) {
    /* For negative times the whole seconds alone may be one step outside. */
    if (seconds < 0 && nanos > 0) {
        seconds++;
        nanos -= (int32_t)THOLE_TICKS_A_UNIT;
    }
    if (seconds > INT64_MAX / THOLE_TICKS_A_UNIT || seconds < INT64_MIN / THOLE_TICKS_A_UNIT)
        return false;
    int64_t whole = seconds * THOLE_TICKS_A_UNIT;
    if (nanos > 0 ? whole > INT64_MAX - nanos : whole < INT64_MIN - nanos)
        return false;
    *ticks = whole + nanos;
    return true;
}

/* ---- reading ------------------------------------------------------------ */

typedef struct cursor {
    const char *at, *end;
} cursor;

/* `n` digits, no more and no fewer need follow. */
static bool take_digits(cursor *c, int n, int *out) {
    int value = 0;
    if (c->end - c->at < n)
        return false;
    for (int i = 0; i < n; i++) {
        if (!tk_is_digit(c->at[i]))
            return false;
        value = value * 10 + (c->at[i] - '0');
    }
    c->at += n;
    *out = value;
    return true;
}

static bool take(cursor *c, char wanted) {
    if (c->at == c->end || *c->at != wanted)
        return false;
    c->at++;
    return true;
}

/* Digits after the point of seconds. */
static thole_parse take_fraction(cursor *c, int32_t *nanos) {
    int32_t value = 0;
    int n = 0;
    thole_parse parse = THOLE_PARSED;
    for (; c->at < c->end && tk_is_digit(*c->at); c->at++, n++) {
        if (n < FRACTION_DIGITS)
            value = value * 10 + (*c->at - '0');
        else if (*c->at != '0')
            parse = THOLE_PARSE_DIGITS;
    }
    if (n == 0)
        return THOLE_PARSE_SYNTAX;
    for (; n < FRACTION_DIGITS; n++)
        value *= 10;
    *nanos = value;
    return parse;
}

static int days_in_month(int year, int month) {
    static const int DAYS[] = {31, 28, 31, 30, 31, 30, 31, 31, 30, 31, 30, 31};
    bool leap = year % 4 == 0 && (year % 100 != 0 || year % 400 == 0);
    return DAYS[month - 1] + (month == 2 && leap);
}

/* Z, +HH, +HHMM, +HH:MM, and +HH:MM:SS, which local mean times of the past need. */
static thole_parse take_offset(cursor *c, int32_t *offset) {
    if (take(c, 'Z')) {
        *offset = 0;
        return THOLE_PARSED;
    }
    int hours, minutes = 0, seconds = 0;
    bool west = take(c, '-');
    if ((!west && !take(c, '+')) || !take_digits(c, 2, &hours))
        return THOLE_PARSE_SYNTAX;
    if (take(c, ':')) {
        if (!take_digits(c, 2, &minutes) || (take(c, ':') && !take_digits(c, 2, &seconds)))
            return THOLE_PARSE_SYNTAX;
    } else if (c->at != c->end && !take_digits(c, 2, &minutes)) {
        return THOLE_PARSE_SYNTAX;
    }
    if (hours > 23 || minutes > 59 || seconds > 59)
        return THOLE_PARSE_RANGE;
    *offset = hours * 3600 + minutes * 60 + seconds;
    if (west)
        *offset = -*offset;
    return THOLE_PARSED;
}

/* HH:MM[:SS[.fraction]], or the same without colons, as seconds of the day. */
static thole_parse take_clock(cursor *c, bool basic, int64_t *seconds, int32_t *nanos) {
    int hour, minute, second = 0;
    thole_parse fraction = THOLE_PARSED;
    if (!take_digits(c, 2, &hour) || (!basic && !take(c, ':')) || !take_digits(c, 2, &minute))
        return THOLE_PARSE_SYNTAX;
    if (basic ? c->at != c->end && tk_is_digit(*c->at) : take(c, ':')) {
        if (!take_digits(c, 2, &second))
            return THOLE_PARSE_SYNTAX;
        if (take(c, '.') && (fraction = take_fraction(c, nanos)) == THOLE_PARSE_SYNTAX)
            return THOLE_PARSE_SYNTAX;
    }
    bool midnight = hour == 24 && minute == 0 && second == 0 && *nanos == 0;
    if ((hour > 23 && !midnight) || minute > 59 || second > 60)
        return THOLE_PARSE_RANGE;
    *seconds = hour * 3600 + minute * 60 + second;
    return fraction;
}

thole_parse tk_iso8601_scan(const char *text, size_t length, tk_written *out) {
    cursor c = {.at = text, .end = text + length};
    tk_written w = {.offset_from = length};
    int year, month, day;
    if (!take_digits(&c, 4, &year))
        return THOLE_PARSE_SYNTAX;
    bool basic = !take(&c, '-');
    if (!take_digits(&c, 2, &month) || (!basic && !take(&c, '-')) || !take_digits(&c, 2, &day))
        return THOLE_PARSE_SYNTAX;
    /* The rest is read before the date is judged: a text of another form is no date out of range. */
    int64_t of_day = 0;
    thole_parse clock = THOLE_PARSED, offset = THOLE_PARSED;
    if (c.at != c.end) {
        if (!take(&c, 'T') && !take(&c, ' '))
            return THOLE_PARSE_SYNTAX;
        clock = take_clock(&c, basic, &of_day, &w.nanos);
        if (clock != THOLE_PARSE_SYNTAX && c.at != c.end) {
            w.has_offset = true;
            w.offset_from = (size_t)(c.at - text);
            offset = take_offset(&c, &w.offset);
        }
    }
    if (clock == THOLE_PARSE_SYNTAX || offset == THOLE_PARSE_SYNTAX || c.at != c.end)
        return THOLE_PARSE_SYNTAX;
    if (clock == THOLE_PARSE_RANGE || offset == THOLE_PARSE_RANGE || month < 1 || month > 12 || day < 1 ||
        day > days_in_month(year, month))
        return THOLE_PARSE_RANGE;
    w.midnight = thole_days_from_date(year, month, day) * DAY;
    w.seconds = w.midnight + of_day;
    *out = w;
    return clock; /* perhaps THOLE_PARSE_DIGITS */
}

thole_parse thole_parse_iso8601(const char *text, size_t length, const thole_zone *zone, int64_t *ticks,
                                thole_local *local) {
    tk_written w;
    thole_parse parse = tk_iso8601_scan(text, length, &w);
    if (parse != THOLE_PARSED)
        return parse;
    thole_local occurs = THOLE_LOCAL_ONCE;
    int64_t seconds = w.seconds - w.offset;
    if (!w.has_offset && zone != NULL)
        occurs = thole_zone_instant(zone, w.seconds, &seconds);
    if (!tk_ticks(seconds, w.nanos, ticks))
        return THOLE_PARSE_RANGE;
    if (local != NULL)
        *local = occurs;
    return THOLE_PARSED;
}
