/* Inside the core: eight bytes of text at a time. */
#ifndef TI_WORDS_H
#define TI_WORDS_H

#include <stddef.h>
#include <stdint.h>
#include <string.h>

#define TI_ONES UINT64_C(0x0101010101010101)
#define TI_HIGHS UINT64_C(0x8080808080808080)

/* Eight bytes, the first one lowest. */
static inline uint64_t ti_load(const char *at) {
    uint64_t word;
    memcpy(&word, at, sizeof word);
#if defined(__BYTE_ORDER__) && __BYTE_ORDER__ == __ORDER_BIG_ENDIAN__
    uint64_t turned = 0;
    for (int i = 0; i < 8; i++)
        turned |= (word >> (8 * i) & 0xFF) << (8 * (7 - i));
    word = turned;
#endif
    return word;
}

/* The high bit of each byte of `word` that is zero. The sum does not carry from byte to byte. */
static inline uint64_t ti_zeros(uint64_t word) {
    return ~(((word & ~TI_HIGHS) + ~TI_HIGHS) | word) & TI_HIGHS;
}

/* Which byte, from the lowest, the lowest bit of a mark is in. */
static inline size_t ti_first_byte(uint64_t marks) {
#if defined(__GNUC__)
    return (size_t)__builtin_ctzll(marks) >> 3;
#else
    size_t n = 0;
    for (; (marks & 0x80) == 0; marks >>= 8)
        n++;
    return n;
#endif
}

/* A number of 1 to 8 digits, or -1 when it is not one; eight bytes from `text` on may be read. The digits go
 * to the top of a word, with zeros before them, and are added up in pairs, fours and eight. */
static inline int64_t ti_short_number(const char *text, size_t length) {
    uint64_t word = ti_load(text) << (64 - 8 * length);
    if (length < 8)
        word |= TI_ONES * '0' >> (8 * length);
    const uint64_t tens = TI_ONES * 0xF0, zero = TI_ONES * '0';
    if ((word & tens) != zero || ((word + TI_ONES * 6) & tens) != zero)
        return -1;
    word -= zero;
    word = (word * 10 + (word >> 8)) & UINT64_C(0x00FF00FF00FF00FF);
    word = (word * 100 + (word >> 16)) & UINT64_C(0x0000FFFF0000FFFF);
    return (int64_t)((word * 10000 + (word >> 32)) & UINT32_MAX);
}

#endif
