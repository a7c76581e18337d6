#include "base/names.h"

/* Multiply-fold over eight bytes at a time; the seed keeps inputs from being
 * prepared against it. */
static uint64_t fold(uint64_t a, uint64_t b) {
    uint64_t x = (a ^ (b >> 32)) * UINT64_C(0x9E3779B97F4A7C15);
    x ^= x >> 29;
    x = (x ^ b) * UINT64_C(0xBF58476D1CE4E5B9);
    return x ^ (x >> 32);
}

static uint64_t hash_of(uint64_t seed, const char *text, size_t length) {
    uint64_t h = seed ^ (uint64_t)length, word;
    for (; length >= 8; text += 8, length -= 8) {
        memcpy(&word, text, 8);
        h = fold(h, word);
    }
    word = 0;
    if (length > 0)
        memcpy(&word, text, length);
    return fold(h, word);
}

static const uint64_t HIGH = UINT64_C(0xFFFFFFFF00000000);

static bool same(const tb_names *names, uint32_t id, const char *text, size_t length) {
    return names->length.at[id] == length && (length == 0 || memcmp(names->text.at + names->start.at[id], text, length) == 0);
}

/* Twice the slots; the stored half of the hash is enough to place them again
 * because the table never has more than 2^32 slots in its low bits' reach. */
static bool rehash(thole_memory *memory, tb_names *names) {
    size_t slots = names->slots == 0 ? 64 : names->slots * 2;
    uint64_t *slot = tb_new(memory, slots, sizeof *slot);
    if (slot == NULL)
        return false;
    for (size_t i = 0; i < names->slots; i++) {
        if (names->slot[i] == 0)
            continue;
        size_t at = (size_t)(names->slot[i] >> 32) & (slots - 1);
        while (slot[at] != 0)
            at = (at + 1) & (slots - 1);
        slot[at] = names->slot[i];
    }
    tb_free(memory, names->slot, names->slots, sizeof *names->slot);
    names->slot = slot;
    names->slots = slots;
    return true;
}

bool tb_names_put(thole_memory *memory, tb_names *names, const char *text, size_t length, uint32_t *id) {
    if (names->seed == 0)
        names->seed = fold((uint64_t)(uintptr_t)names, (uint64_t)(uintptr_t)text) | 1;
    if (names->start.n * 2 >= names->slots && !rehash(memory, names))
        return false;
    uint64_t hash = hash_of(names->seed, text, length);
    size_t at = (size_t)(hash >> 32) & (names->slots - 1);
    for (; names->slot[at] != 0; at = (at + 1) & (names->slots - 1)) {
        uint32_t found = (uint32_t)(names->slot[at] - 1);
        if ((names->slot[at] & HIGH) == (hash & HIGH) && same(names, found, text, length)) {
            *id = found;
            return true;
        }
    }
    if (names->start.n >= UINT32_MAX - 2 || length >= UINT32_MAX)
        return false;
    if (!TB_VEC_RESERVE(memory, &names->text, names->text.n + length + 1) ||
        !TB_VEC_RESERVE(memory, &names->start, names->start.n + 1) ||
        !TB_VEC_RESERVE(memory, &names->length, names->length.n + 1))
        return false;
    *id = (uint32_t)names->start.n;
    names->start.at[names->start.n++] = names->text.n;
    names->length.at[names->length.n++] = (uint32_t)length;
    if (length > 0)
        memcpy(names->text.at + names->text.n, text, length);
    names->text.n += length;
    names->text.at[names->text.n++] = '\0';
    names->slot[at] = (hash & HIGH) | ((uint64_t)*id + 1);
    return true;
}

uint32_t tb_names_find(const tb_names *names, const char *text, size_t length) {
    if (names->slots == 0)
        return TB_NO_NAME;
    uint64_t hash = hash_of(names->seed, text, length);
    for (size_t at = (size_t)(hash >> 32) & (names->slots - 1); names->slot[at] != 0; at = (at + 1) & (names->slots - 1)) {
        uint32_t found = (uint32_t)(names->slot[at] - 1);
        if ((names->slot[at] & HIGH) == (hash & HIGH) && same(names, found, text, length))
            return found;
    }
    return TB_NO_NAME;
}

const char *tb_names_get(const tb_names *names, uint32_t id, size_t *length) {
    if (length != NULL)
        *length = names->length.at[id];
    return names->text.at + names->start.at[id];
}

size_t tb_names_bytes(const tb_names *names) {
    return names->text.cap + names->start.cap * sizeof(size_t) + names->length.cap * sizeof(uint32_t) +
           names->slots * sizeof(uint64_t);
}

void tb_names_trim(thole_memory *memory, tb_names *names) {
    TB_VEC_TRIM(memory, &names->text);
    TB_VEC_TRIM(memory, &names->start);
    TB_VEC_TRIM(memory, &names->length);
}

void tb_names_clear(thole_memory *memory, tb_names *names) {
    TB_VEC_CLEAR(memory, &names->text);
    TB_VEC_CLEAR(memory, &names->start);
    TB_VEC_CLEAR(memory, &names->length);
    tb_free(memory, names->slot, names->slots, sizeof *names->slot);
    *names = (tb_names){0};
}
