/* A small table, each name in the one place that its hash says; the builder knows all the others. */
#include "ingest/recent.h"

#include <string.h>

thole_status ti_recent_node(ti_recent *recent, thole_builder *builder, const char *text, size_t length,
                            uint32_t *node, thole_error *error) {
    uint64_t a = 0, b = 0;
    if (recent == NULL || length > TI_RECENT_LENGTH)
        return thole_builder_node(builder, text, length, node, error);
    if (length > 8) { /* the second word overlaps the first, which together tell all bytes */
        memcpy(&a, text, 8);
        memcpy(&b, text + length - 8, 8);
    } else {
        static const unsigned char ONES[16] = {255, 255, 255, 255, 255, 255, 255, 255};
        uint64_t kept;
        memcpy(&kept, ONES + 8 - length, 8);
        memcpy(&a, text, 8);
        a &= kept;
    }
    uint64_t hash = ((a ^ (b << 29 | b >> 35)) + length) * UINT64_C(0x9E3779B97F4A7C15);
    ti_recent_name *name = &recent->name[(hash ^ hash >> 29) >> (64 - TI_RECENT_BITS)];
    if (name->length == length && name->word[0] == a && name->word[1] == b) {
        *node = name->node;
        return THOLE_OK;
    }
    thole_status status = thole_builder_node(builder, text, length, node, error);
    if (status == THOLE_OK)
        *name = (ti_recent_name){.word = {a, b}, .length = (uint32_t)length, .node = *node};
    return status;
}
