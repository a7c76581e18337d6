/* Inside the core: fields to times, fast where fields are alike. */
#ifndef TI_TIMES_H
#define TI_TIMES_H

#include "clock/clock.h"
#include "ingest/contacts.h"

typedef struct ti_time {
    int64_t ticks;
    int64_t second; /* the later instant of a local time that occurs twice, else ticks */
    thole_local local;
} ti_time;

/* Zero-initialise, then set form (not THOLE_TIME_FOUND) and zone. Rows near each other share their date and
 * their offset, so that mostly only the time of day is new. */
typedef struct ti_times {
    thole_time_form form;
    const thole_zone *zone;
    char date[10];  /* YYYY-MM-DD of the field before */
    char suffix[8]; /* its offset */
    uint32_t suffix_n;
    bool has_date, has_suffix;
    int64_t date_seconds;
    int32_t suffix_offset;
    int64_t low, high; /* local times low <= t < high occur once, at local_offset */
    int32_t local_offset;
} ti_times;

/* Eight bytes from `text` on may be read, whatever its length. */
thole_parse ti_times_read(ti_times *times, const char *text, size_t length, ti_time *out);

/* The form of a text: THOLE_TIME_PLAIN for a number, THOLE_TIME_ISO, or THOLE_TIME_FOUND when it is neither.
 */
thole_time_form ti_time_form_of(const char *text, size_t length);

#endif
