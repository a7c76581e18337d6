#include "base/sort.h"

#include <stdbool.h>
#include <string.h>

enum { DIGIT = 8, DIGITS = 1 << DIGIT, FEW = 48 };

static uint64_t key_of(const char *record, size_t key, size_t key_bytes) {
    if (key_bytes == 4) {
        uint32_t value;
        memcpy(&value, record + key, 4);
        return value;
    }
    uint64_t value;
    memcpy(&value, record + key, 8);
    return value;
}

/* Records are moved by a copy of known width where the width is common. */
static inline void move(char *to, const char *from, size_t width) {
    switch (width) {
    case 4: memcpy(to, from, 4); break;
    case 8: memcpy(to, from, 8); break;
    case 12: memcpy(to, from, 12); break;
    case 16: memcpy(to, from, 16); break;
    default: memcpy(to, from, width);
    }
}

static void insert_few(char *at, char *spare, size_t n, size_t width, size_t key, size_t key_bytes) {
    for (size_t i = 1; i < n; i++) {
        uint64_t mine = key_of(at + i * width, key, key_bytes);
        size_t j = i;
        while (j > 0 && key_of(at + (j - 1) * width, key, key_bytes) > mine)
            j--;
        if (j == i)
            continue;
        move(spare, at + i * width, width);
        memmove(at + (j + 1) * width, at + j * width, (i - j) * width);
        move(at + j * width, spare, width);
    }
}

static void by_digits(char *at, char *scratch, size_t n, size_t width, size_t key, size_t key_bytes) {
    if (n < 2)
        return;
    if (n <= FEW) {
        insert_few(at, scratch, n, width, key, key_bytes);
        return;
    }
    size_t count[8][DIGITS];
    memset(count, 0, sizeof count);
    bool sorted = true;
    uint64_t before = 0;
    for (size_t i = 0; i < n; i++) {
        uint64_t k = key_of(at + i * width, key, key_bytes);
        sorted = sorted && before <= k;
        before = k;
        for (size_t d = 0; d < key_bytes; d++)
            count[d][k >> (d * DIGIT) & (DIGITS - 1)]++;
    }
    if (sorted)
        return;
    char *from = at, *to = scratch;
    for (size_t d = 0; d < key_bytes; d++) {
        size_t *c = count[d], sum = 0;
        bool shared = false;
        for (size_t i = 0; i < DIGITS; i++) {
            shared = shared || c[i] == n;
            size_t here = c[i];
            c[i] = sum;
            sum += here;
        }
        if (shared)
            continue;
        for (size_t i = 0; i < n; i++) {
            const char *record = from + i * width;
            size_t place = c[key_of(record, key, key_bytes) >> (d * DIGIT) & (DIGITS - 1)]++;
            move(to + place * width, record, width);
        }
        char *other = from;
        from = to;
        to = other;
    }
    if (from != at)
        memcpy(at, from, n * width);
}

void tb_sort_by_u32(void *at, void *scratch, size_t n, size_t width, size_t key) {
    by_digits(at, scratch, n, width, key, 4);
}
void tb_sort_by_u64(void *at, void *scratch, size_t n, size_t width, size_t key) {
    by_digits(at, scratch, n, width, key, 8);
}
