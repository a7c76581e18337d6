/* Errors as values: filled by the callee, owned by the caller. */
#include <stdarg.h>
#include <stdio.h>
#include <string.h>

#include "base/base.h"

/* Cut `text`, of `size` bytes with a NUL at its end, before a character that
 * was cut in two: UTF-8 continuation bytes are 10xxxxxx. */
static void end_at_character(char *text, size_t size) {
    size_t n = size - 1, tail = n;
    while (tail > 0 && n - tail < 4 && ((unsigned char)text[tail - 1] & 0xC0u) == 0x80u)
        tail--;
    if (tail == 0)
        return;
    unsigned char lead = (unsigned char)text[tail - 1];
    size_t want = lead >= 0xF0u ? 3 : lead >= 0xE0u ? 2 : lead >= 0xC0u ? 1 : 0;
    if (n - tail < want)
        text[tail - 1] = '\0';
}

thole_status thole_fail(thole_error *error, thole_status status, const char *format, ...) {
    if (error != NULL) {
        char text[sizeof error->text]; /* an argument may be the old text itself */
        va_list list;
        va_start(list, format);
        int n = vsnprintf(text, sizeof text, format, list);
        va_end(list);
        if (n < 0)
            text[0] = '\0';
        else if ((size_t)n >= sizeof text)
            end_at_character(text, sizeof text);
        memcpy(error->text, text, sizeof text);
        error->status = status;
    }
    return status;
}

const char *thole_status_name(thole_status status) {
    switch (status) {
    case THOLE_OK: return "done";
    case THOLE_NO_MEMORY: return "out of memory";
    case THOLE_LIMIT: return "limit reached";
    case THOLE_ARGUMENT: return "bad argument";
    case THOLE_INPUT: return "bad input";
    case THOLE_FILE: return "file error";
    case THOLE_CANCELLED: return "cancelled";
    case THOLE_CALLBACK: return "callback failed";
    }
    return "unknown";
}

#ifndef THOLE_VERSION
#define THOLE_VERSION "0.1.0"
#endif
const char *thole_version(void) { return THOLE_VERSION; }
