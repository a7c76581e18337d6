/* Inside the core: nodes met lately, so that most names need not be searched for in the builder. */
#ifndef TI_RECENT_H
#define TI_RECENT_H

#include "network/network.h"

enum { TI_RECENT_BITS = 11, TI_RECENT_LENGTH = 16 };

typedef struct ti_recent_name {
    uint64_t word[2]; /* its first and its last eight bytes, or all of a short one and 0 */
    uint32_t length;  /* 0: nothing is here */
    uint32_t node;
} ti_recent_name;

/* Zero-initialised memory for 2^TI_RECENT_BITS names. */
typedef struct ti_recent {
    ti_recent_name name[1 << TI_RECENT_BITS];
} ti_recent;

/* As thole_builder_node, which it asks where `recent` (may be NULL) does not know. Eight bytes from `text` on
 * may be read, whatever its length. */
thole_status ti_recent_node(ti_recent *recent, thole_builder *builder, const char *text, size_t length,
                            uint32_t *node, thole_error *error);

#endif
