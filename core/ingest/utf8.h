/* Inside the core: whether bytes are UTF-8. */
#ifndef TI_UTF8_H
#define TI_UTF8_H

#include <stdbool.h>
#include <stddef.h>

/* The length of the longest beginning that is UTF-8 (RFC 3629: shortest forms, no surrogates, up to
 * U+10FFFF); NUL counts as a character. */
size_t ti_utf8_sound(const char *text, size_t length);

#endif
