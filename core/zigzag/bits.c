#include "zigzag/bits.h"

bool tz_bits_make(tb_arena *arena, size_t bound, tz_bits *out) {
    out->levels = 0;
    size_t words = bound;
    do {
        words = (words + 63) / 64;
        words += words == 0;
        out->level[out->levels] = TB_FILL(arena, uint64_t, words, 0);
        if (out->level[out->levels++] == NULL)
            return false;
    } while (words > 1);
    return true;
}
