/* Inside the core: which known word a misspelt one is nearest to, for error messages. */
#ifndef TB_NEAREST_H
#define TB_NEAREST_H

#include "base/base.h"

/* Word i of a list, NUL-ended. */
typedef const char *tb_word_at(const void *words, size_t i);

/* The index of the word with the fewest changes to `wanted` (one letter put in, left out, replaced, or two
 * neighbours exchanged; upper and lower case are the same, bytes of UTF-8 count as letters), the first of
 * equals; n when the list is empty or none has at least half of its letters in place. Takes no memory. */
size_t tb_nearest(const char *wanted, size_t n, tb_word_at *word, const void *words);

#endif
