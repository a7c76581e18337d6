/* Inside the core: ISO 8601 times taken apart, for readers that keep parts of them. */
#ifndef TK_ISO8601_H
#define TK_ISO8601_H

#include "clock/clock.h"

typedef struct tk_written {
    int64_t seconds;    /* since 1970-01-01T00:00, as the clock on the wall shows it */
    int64_t midnight;   /* the same, at the beginning of the date written */
    int32_t nanos;      /* 0 .. 999,999,999 */
    bool has_offset;    /* whether an offset or Z is written */
    int32_t offset;     /* seconds east */
    size_t offset_from; /* where in the text it begins: the text's length when there is none */
} tk_written;

thole_parse tk_iso8601_scan(const char *text, size_t length, tk_written *out);

/* Seconds and nanoseconds to ticks; false when they do not fit. */
bool tk_ticks(int64_t seconds, int32_t nanos, int64_t *ticks);

#endif
