/* UTF-8 by the table of well-formed byte sequences of the Unicode Standard (table 3-7). */
#include "ingest/utf8.h"

#include <stdint.h>
#include <string.h>

size_t ti_utf8_sound(const char *text, size_t length) {
    const unsigned char *p = (const unsigned char *)text, *end = p + length;
    while (p < end) {
        uint64_t word;
        if (*p < 0x80) {
            while (end - p >= 8 && (memcpy(&word, p, 8), (word & UINT64_C(0x8080808080808080)) == 0))
                p += 8;
            while (p < end && *p < 0x80)
                p++;
            continue;
        }
        /* the second byte's range tells overlong forms, surrogates and what is beyond U+10FFFF */
        unsigned char low = 0x80, high = 0xBF;
        int more;
        if (*p >= 0xC2 && *p <= 0xDF)
            more = 1;
        else if ((*p & 0xF0) == 0xE0)
            more = 2, low = *p == 0xE0 ? 0xA0 : low, high = *p == 0xED ? 0x9F : high;
        else if (*p >= 0xF0 && *p <= 0xF4)
            more = 3, low = *p == 0xF0 ? 0x90 : low, high = *p == 0xF4 ? 0x8F : high;
        else
            break;
        if (end - p <= more || p[1] < low || p[1] > high)
            break;
        int i = 2;
        while (i <= more && (p[i] & 0xC0) == 0x80)
            i++;
        if (i <= more)
            break;
        p += more + 1;
    }
    return (size_t)(p - (const unsigned char *)text);
}
