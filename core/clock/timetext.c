/* Times and durations written out. */
#include <string.h>

#include "base/memory.h"
#include "clock/decimal.h"

enum { DAY = 86400, MOST_DIGITS = 11 };

/* A text being written; every caller's longest text fits. */
typedef struct writer {
    char *at;
} writer;

static void put(writer *w, const char *text, size_t n) {
    memcpy(w->at, text, n);
    w->at += n;
}

static void put_char(writer *w, char c) { *w->at++ = c; }

static void put_number(writer *w, uint64_t value, int least_digits) {
    char digits[20];
    int n = 0;
    do
        digits[n++] = (char)('0' + value % 10);
    while ((value /= 10) != 0);
    for (int i = n; i < least_digits; i++)
        put_char(w, '0');
    while (n > 0)
        put_char(w, digits[--n]);
}

/* "." and the `digits` digits of `value`, without zeros at the end; nothing when it is 0. */
static void put_fraction(writer *w, uint64_t value, int digits) {
    if (value == 0)
        return;
    for (; value % 10 == 0; value /= 10)
        digits--;
    put_char(w, '.');
    put_number(w, value, digits);
}

/* Ticks and quarters of a tick as a decimal number of units. */
static void put_decimal(writer *w, int64_t ticks, int quarters) {
    uint64_t size = ticks < 0 ? 0 - (uint64_t)ticks : (uint64_t)ticks;
    if (ticks < 0) {
        put_char(w, '-');
        if (quarters != 0) { /* -1 + 1/4 is -(0 + 3/4) */
            size--;
            quarters = 4 - quarters;
        }
    }
    put_number(w, size / (uint64_t)THOLE_TICKS_A_UNIT, 1);
    put_fraction(w, size % (uint64_t)THOLE_TICKS_A_UNIT * 100 + (unsigned)quarters * 25, MOST_DIGITS);
}

static void put_offset(writer *w, int32_t offset) {
    uint32_t size = (uint32_t)(offset < 0 ? -offset : offset);
    put_char(w, offset < 0 ? '-' : '+');
    put_number(w, size / 3600, 2);
    put_char(w, ':');
    put_number(w, size / 60 % 60, 2);
    if (size % 60 != 0) { /* local mean time of long ago; left out, the text would name another instant */
        put_char(w, ':');
        put_number(w, size % 60, 2);
    }
}

static void put_calendar(writer *w, const thole_zone *zone, int64_t ticks) {
    int64_t seconds = ticks / THOLE_TICKS_A_UNIT, nanos = ticks % THOLE_TICKS_A_UNIT;
    if (nanos < 0) {
        seconds--;
        nanos += THOLE_TICKS_A_UNIT;
    }
    int32_t offset = thole_zone_offset(zone, seconds, NULL);
    int64_t local = seconds + offset, days = local / DAY, of_day = local % DAY, year;
    if (of_day < 0) {
        days--;
        of_day += DAY;
    }
    int month, day;
    thole_date_from_days(days, &year, &month, &day);
    put_number(w, (uint64_t)year, 4); /* 1677 .. 2262 */
    put_char(w, '-');
    put_number(w, (uint64_t)month, 2);
    put_char(w, '-');
    put_number(w, (uint64_t)day, 2);
    put_char(w, 'T');
    put_number(w, (uint64_t)of_day / 3600, 2);
    put_char(w, ':');
    put_number(w, (uint64_t)of_day / 60 % 60, 2);
    put_char(w, ':');
    put_number(w, (uint64_t)of_day % 60, 2);
    put_fraction(w, (uint64_t)nanos, 9);
    if (zone == NULL)
        put_char(w, 'Z');
    else
        put_offset(w, offset);
}

size_t thole_format_time(const thole_clock *clock, int64_t ticks, int quarters, char out[THOLE_TIME_SIZE]) {
    writer w = {.at = out};
    if (clock->kind == THOLE_CALENDAR)
        put_calendar(&w, clock->zone, ticks);
    else
        put_decimal(&w, ticks, quarters);
    *w.at = '\0';
    return (size_t)(w.at - out);
}

size_t thole_format_duration(const thole_clock *clock, int64_t ticks, char out[THOLE_TIME_SIZE]) {
    static const struct {
        uint64_t seconds;
        const char *name;
    } PARTS[] = {{DAY, "d"}, {3600, "h"}, {60, "min"}, {1, "s"}};
    writer w = {.at = out};
    if (clock->kind == THOLE_PLAIN && strcmp(clock->unit, "s") != 0) {
        put_decimal(&w, ticks, 0);
        put_char(&w, ' ');
        put(&w, clock->unit, strlen(clock->unit));
        *w.at = '\0';
        return (size_t)(w.at - out);
    }
    uint64_t size = ticks < 0 ? 0 - (uint64_t)ticks : (uint64_t)ticks;
    uint64_t seconds = size / (uint64_t)THOLE_TICKS_A_UNIT, nanos = size % (uint64_t)THOLE_TICKS_A_UNIT;
    if (ticks < 0)
        put_char(&w, '-');
    const char *first = w.at;
    for (size_t i = 0; i < 4; i++) {
        uint64_t n = seconds / PARTS[i].seconds;
        seconds %= PARTS[i].seconds;
        bool last = i == 3, here = n != 0 || (last && (nanos != 0 || w.at == first));
        if (!here)
            continue;
        if (w.at != first)
            put_char(&w, ' ');
        put_number(&w, n, 1);
        if (last)
            put_fraction(&w, nanos, 9);
        put_char(&w, ' ');
        put(&w, PARTS[i].name, strlen(PARTS[i].name));
    }
    *w.at = '\0';
    return (size_t)(w.at - out);
}
