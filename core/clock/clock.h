/* Thole clock: what a tick means, and times as people write them.
 *
 * A time is an int64_t of ticks; a tick is 10^-9 of the clock's unit. On a
 * calendar clock the unit is the second and tick 0 is 1970-01-01T00:00:00Z
 * (leap seconds are not counted, as in POSIX time); years 1678 to 2261 fit. On
 * a plain clock a time is a number in a named unit.
 */
#ifndef THOLE_CLOCK_H
#define THOLE_CLOCK_H

#include "base/base.h"

#define THOLE_TICKS_A_UNIT INT64_C(1000000000)

typedef enum thole_clock_kind { THOLE_PLAIN, THOLE_CALENDAR } thole_clock_kind;

typedef struct thole_zone thole_zone; /* an IANA time zone, shared by reference count */

/* unit: name of a plain clock's unit ("s" unless told); "s" on a calendar clock.
 * zone: NULL is UTC; always NULL on a plain clock. Not owned by this struct:
 *   whoever keeps a clock retains its zone. */
typedef struct thole_clock {
    thole_clock_kind kind;
    char unit[16];
    thole_zone *zone;
} thole_clock;

/* Open an IANA zone by name ("Atlantic/Azores") from the system's zone files
 * (TZif, RFC 8536; TZDIR is honoured). THOLE_ARGUMENT for a name that is unknown, not a
 * relative path of letters, digits and "/_+-", or a file that is not TZif. */
THOLE_API thole_status thole_zone_open(thole_context *context, const char *name, thole_zone **out,
                                       thole_error *error);
THOLE_API thole_zone *thole_zone_retain(thole_zone *zone);
THOLE_API void thole_zone_release(thole_zone *zone);
THOLE_API const char *thole_zone_name(const thole_zone *zone); /* NULL zone: "UTC" */

/* Seconds east of UTC in force at `seconds` since 1970-01-01T00:00:00Z; zone
 * NULL is 0. *abbreviation (may be NULL) gets the zone's letters then. */
THOLE_API int32_t thole_zone_offset(const thole_zone *zone, int64_t seconds, const char **abbreviation);

/* What a local time of day turned out to be. */
typedef enum thole_local { THOLE_LOCAL_ONCE, THOLE_LOCAL_TWICE, THOLE_LOCAL_NEVER } thole_local;

/* The instant of a local time, given as if it were UTC (seconds since
 * 1970-01-01T00:00:00 local). Occurs twice: the first is taken. Occurs never
 * (the clock jumped over it): the offset before the jump is used, so that 02:30
 * becomes 03:30 of the new offset. *seconds gets the instant. */
THOLE_API thole_local thole_zone_instant(const thole_zone *zone, int64_t local_seconds, int64_t *seconds);

/* Days since 1970-01-01 of a date of the proleptic Gregorian calendar, and back. */
THOLE_API int64_t thole_days_from_date(int64_t year, int month, int day);
THOLE_API void thole_date_from_days(int64_t days, int64_t *year, int *month, int *day);

/* Why a text is not a time or a number. */
typedef enum thole_parse {
    THOLE_PARSED,
    THOLE_PARSE_SYNTAX, /* not of that form */
    THOLE_PARSE_RANGE,  /* of that form, outside what ticks can hold, or no such date */
    THOLE_PARSE_DIGITS  /* digits finer than a tick that are not zero */
} thole_parse;

/* A decimal number ("-12.5", "3e2") to ticks, exactly, never through double. */
THOLE_API thole_parse thole_parse_decimal(const char *text, size_t length, int64_t *ticks);

/* ISO 8601 calendar time: YYYY-MM-DD, then optionally "T" or a space and HH:MM[:SS[.fraction]],
 * then, after a time, optionally Z, +HH, +HHMM, +HH:MM or (local mean times of the past) +HH:MM:SS; basic forms
 * (YYYYMMDDTHHMMSS) too.
 * Without an offset the time is local in `zone` (NULL: UTC); *local (may be NULL) tells whether
 * that time occurs once. 24:00:00 is the next day's 00:00; second 60 is taken as
 * the next minute's 00. */
THOLE_API thole_parse thole_parse_iso8601(const char *text, size_t length, const thole_zone *zone,
                                          int64_t *ticks, thole_local *local);

/* A duration in ticks of a unit of seconds: numbers with units, added up: "20 min",
 * "1 h 30 min", "2 d", "1.5 h", "1 week". Units ns, us, ms, s/sec/second(s), min/minute(s),
 * h/hour(s), d/day(s) (86,400 s), w/week(s). A bare number is in the clock's unit.
 * ISO 8601 durations of weeks, days, hours, minutes and seconds ("PT20M", "P1DT2H") too.
 * On a plain clock whose unit is not "s", only bare numbers, or numbers with that unit's
 * name, are durations. Negative ones are refused (THOLE_PARSE_RANGE). */
THOLE_API thole_parse thole_parse_duration(const char *text, size_t length, const thole_clock *clock,
                                           int64_t *ticks);

/* Write a time: plain clocks as the shortest exact decimal; calendar clocks as
 * ISO 8601 local time with offset, with a fraction only where it is not zero
 * ("2031-05-04T06:20:00-01:00", "Z" for zone NULL). `quarters` (0..3) is added in quarters of a tick (means
 * of four times are exact): plain clocks write it, calendar clocks drop it.
 * Returns the length; at most 47 characters and a NUL are written. */
#define THOLE_TIME_SIZE 48
THOLE_API size_t thole_format_time(const thole_clock *clock, int64_t ticks, int quarters,
                                   char out[THOLE_TIME_SIZE]);

/* Write a duration for people: "1 h 30 min" on a clock of seconds, else the
 * number and the unit. */
THOLE_API size_t thole_format_duration(const thole_clock *clock, int64_t ticks, char out[THOLE_TIME_SIZE]);

#endif
