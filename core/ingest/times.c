/* Times of rows. */
#include "ingest/times.h"

#include <string.h>

#include "clock/iso8601.h"
#include "clock/zone.h"
#include "ingest/words.h"

enum { DATE = 10, DAY = 86400 };

/* The whole way; what it learns about the date and the offset serves the next field. */
static thole_parse read_whole(ti_times *times, const char *text, size_t length, ti_time *out) {
    tk_written w;
    thole_parse parse = tk_iso8601_scan(text, length, &w);
    if (parse != THOLE_PARSED)
        return parse;
    ti_time time = {.local = THOLE_LOCAL_ONCE};
    int64_t first = w.seconds - w.offset, second = first;
    if (!w.has_offset && times->zone != NULL) {
        time.local = tk_zone_instants(times->zone, w.seconds, &first, &second);
        tk_zone_steady(times->zone, first, &times->low, &times->high, &times->local_offset);
    } else if (w.has_offset && length - w.offset_from <= sizeof times->suffix) {
        times->suffix_n = (uint32_t)(length - w.offset_from);
        memcpy(times->suffix, text + w.offset_from, times->suffix_n);
        times->suffix_offset = w.offset;
        times->has_suffix = true;
    }
    if (length > DATE && text[4] == '-') {
        memcpy(times->date, text, DATE);
        times->date_seconds = w.midnight;
        times->has_date = true;
    }
    if (!tk_ticks(first, w.nanos, &time.ticks) || !tk_ticks(second, w.nanos, &time.second))
        return THOLE_PARSE_RANGE;
    *out = time;
    return THOLE_PARSED;
}

/* "hh:mm:ss" as seconds of a day, by its eight bytes at once; negative when it is not that or not below
 * 24:00:00. */
static inline int32_t of_day(const char *text) {
    unsigned char t[8];
    memcpy(t, text, sizeof t);
    unsigned digit[6] = {t[0] - 48u, t[1] - 48u, t[3] - 48u, t[4] - 48u, t[6] - 48u, t[7] - 48u};
    unsigned hour = digit[0] * 10 + digit[1], minute = digit[2] * 10 + digit[3],
             second = digit[4] * 10 + digit[5];
    bool fine = digit[0] <= 2 && digit[1] <= 9 && digit[2] <= 5 && digit[3] <= 9 && digit[4] <= 5 &&
                digit[5] <= 9 && hour <= 23 && t[2] == ':' && t[5] == ':';
    return fine ? (int32_t)(hour * 3600 + minute * 60 + second) : -1;
}

/* A time on the date of the field before, with that one's offset or in its stretch of local time. */
static bool read_alike(const ti_times *times, const char *text, size_t length, int64_t *seconds) {
    enum { CLOCK = 8, WHOLE = DATE + 1 + CLOCK };
    if (length < WHOLE || !times->has_date || memcmp(text, times->date, DATE) != 0 ||
        (text[DATE] != 'T' && text[DATE] != ' '))
        return false;
    int32_t clock = of_day(text + DATE + 1);
    if (clock < 0)
        return false;
    int64_t local = times->date_seconds + clock;
    if (length == WHOLE) {
        if (times->zone != NULL && (local < times->low || local >= times->high))
            return false;
        *seconds = local - times->local_offset; /* 0 without a zone */
        return true;
    }
    if (!times->has_suffix || length - WHOLE != times->suffix_n ||
        memcmp(text + WHOLE, times->suffix, times->suffix_n) != 0)
        return false;
    *seconds = local - times->suffix_offset;
    return true;
}

thole_parse ti_times_read(ti_times *times, const char *text, size_t length, ti_time *out) {
    if (times->form != THOLE_TIME_ISO) {
        int64_t number = length - 1 < 8 ? ti_short_number(text, length) : -1;
        thole_parse parse = THOLE_PARSED;
        if (number >= 0)
            out->ticks = number * THOLE_TICKS_A_UNIT;
        else
            parse = thole_parse_decimal(text, length, &out->ticks);
        out->second = out->ticks;
        out->local = THOLE_LOCAL_ONCE;
        return parse;
    }
    int64_t seconds;
    if (!read_alike(times, text, length, &seconds) || !tk_ticks(seconds, 0, &out->ticks))
        return read_whole(times, text, length, out);
    out->second = out->ticks;
    out->local = THOLE_LOCAL_ONCE;
    return THOLE_PARSED;
}

thole_time_form ti_time_form_of(const char *text, size_t length) {
    int64_t ticks;
    tk_written written;
    /* 20310504 is a number unless one says otherwise */
    if (thole_parse_decimal(text, length, &ticks) != THOLE_PARSE_SYNTAX)
        return THOLE_TIME_PLAIN;
    return tk_iso8601_scan(text, length, &written) != THOLE_PARSE_SYNTAX ? THOLE_TIME_ISO : THOLE_TIME_FOUND;
}
