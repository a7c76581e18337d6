/* Inside the core: a table of distinct texts, numbered from 0 in the order of
 * their first appearance. */
#ifndef TB_NAMES_H
#define TB_NAMES_H

#include "base/memory.h"

#define TB_NO_NAME UINT32_MAX

typedef struct tb_names {
    TB_VEC(char) text;       /* all texts, each followed by a NUL */
    TB_VEC(size_t) start;    /* where text i begins */
    TB_VEC(uint32_t) length; /* its bytes, without the NUL */
    uint64_t *slot;          /* open addressing: high half of the hash, then id + 1 */
    size_t slots;            /* a power of two, or 0 */
    uint64_t seed;           /* differs between runs, so that no input can be made to collide; ids do not depend on it */
} tb_names;

/* The number of `text` (length bytes, may hold anything but is kept NUL-ended),
 * added when new. False when memory is refused or 2^32 - 2 texts are held. */
bool tb_names_put(thole_memory *memory, tb_names *names, const char *text, size_t length, uint32_t *id);

/* The number of `text`, or TB_NO_NAME. */
uint32_t tb_names_find(const tb_names *names, const char *text, size_t length);

/* Text i, NUL-ended; *length (may be NULL) gets its bytes. */
const char *tb_names_get(const tb_names *names, uint32_t id, size_t *length);

size_t tb_names_bytes(const tb_names *names);
void tb_names_trim(thole_memory *memory, tb_names *names);
void tb_names_clear(thole_memory *memory, tb_names *names);

#endif
