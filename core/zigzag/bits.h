/* A set of numbers below a bound, over Z/2: toggle, lowest, highest, in steps of 64 a level. */
#ifndef TZ_BITS_H
#define TZ_BITS_H

#include "base/arena.h"

enum { TZ_LEVELS = 6 }; /* 64^6 > 2^32 */
#define TZ_EMPTY UINT32_MAX

typedef struct tz_bits {
    uint64_t *level[TZ_LEVELS]; /* level[0] holds the members; a bit above says that a word below is not zero */
    int levels;
} tz_bits;

/* An empty set for members below `bound`; the arena's. False when refused. */
bool tz_bits_make(tb_arena *arena, size_t bound, tz_bits *out);

/* Add x, or take it out when it is there. */
static inline void tz_bits_toggle(tz_bits *bits, uint32_t x) {
    uint64_t *word = &bits->level[0][x >> 6];
    uint64_t before = *word;
    *word ^= UINT64_C(1) << (x & 63);
    if (before != 0 && *word != 0)
        return;
    for (int i = 1; i < bits->levels; i++) { /* the word below became zero, or stopped being it */
        x >>= 6;
        word = &bits->level[i][x >> 6];
        before = *word;
        *word ^= UINT64_C(1) << (x & 63);
        if (before != 0 && *word != 0)
            return;
    }
}

static inline bool tz_bits_has(const tz_bits *bits, uint32_t x) { return bits->level[0][x >> 6] >> (x & 63) & 1; }

/* The highest (lowest) member, or TZ_EMPTY. */
static inline uint32_t tz_bits_highest(const tz_bits *bits) {
    uint32_t x = 0;
    for (int i = bits->levels - 1; i >= 0; i--) {
        uint64_t word = bits->level[i][x];
        if (word == 0)
            return TZ_EMPTY; /* only at the top */
        x = x << 6 | (uint32_t)(63 - __builtin_clzll(word));
    }
    return x;
}
static inline uint32_t tz_bits_lowest(const tz_bits *bits) {
    uint32_t x = 0;
    for (int i = bits->levels - 1; i >= 0; i--) {
        uint64_t word = bits->level[i][x];
        if (word == 0)
            return TZ_EMPTY;
        x = x << 6 | (uint32_t)__builtin_ctzll(word);
    }
    return x;
}

#endif
