#include "base/arena.h"

struct tb_chunk {
    tb_chunk *older;
    size_t bytes; /* this header included */
};

enum { CHUNK = 256 * 1024, ALIGN = 16, MOST_KEPT = 64 * 1024 * 1024 };
#define HEADER ((sizeof(tb_chunk) + ALIGN - 1) / ALIGN * ALIGN)

void *tb_arena_take(tb_arena *arena, size_t n, size_t item) {
    if (item != 0 && n > (size_t)PTRDIFF_MAX / 2 / item)
        return NULL;
    size_t bytes = (n * item + ALIGN) / ALIGN * ALIGN; /* at least one unit, so that pointers differ */
    if (arena->chunks == NULL || arena->chunks->bytes - arena->free_from < bytes) {
        size_t size = HEADER + bytes > CHUNK ? HEADER + bytes : CHUNK;
        tb_chunk *chunk = tb_resize(arena->memory, NULL, 0, size, 1);
        if (chunk == NULL)
            return NULL;
        *chunk = (tb_chunk){.older = arena->chunks, .bytes = size};
        arena->chunks = chunk;
        arena->free_from = HEADER;
    }
    void *block = (char *)arena->chunks + arena->free_from;
    arena->free_from += bytes;
    return block;
}

void *tb_arena_fill(tb_arena *arena, size_t n, size_t item, int fill) {
    void *block = tb_arena_take(arena, n, item);
    if (block != NULL)
        memset(block, fill, n * item);
    return block;
}

bool tb_arena_adopt(tb_arena *arena, void **at, size_t *n, size_t *cap, size_t item) {
    if (*at != NULL && !TB_VEC_PUSH(arena->memory, &arena->adopted, ((tb_adopted){*at, *cap * item})))
        return false;
    *at = NULL;
    *n = *cap = 0;
    return true;
}

static void give_back(tb_arena *arena) {
    for (size_t i = 0; i < arena->adopted.n; i++)
        tb_free(arena->memory, arena->adopted.at[i].block, arena->adopted.at[i].bytes, 1);
    arena->adopted.n = 0;
}

static void drop(tb_arena *arena, tb_chunk *until) {
    while (arena->chunks != until) {
        tb_chunk *older = arena->chunks->older;
        tb_free(arena->memory, arena->chunks, arena->chunks->bytes, 1);
        arena->chunks = older;
    }
}

void tb_arena_reset(tb_arena *arena) {
    /* One chunk as large as all of them serves the next task of the same size without going back to the
     * system, which is what costs; a huge task does not hold its memory through small ones. */
    give_back(arena);
    size_t total = 0;
    for (tb_chunk *chunk = arena->chunks; chunk != NULL; chunk = chunk->older)
        total += chunk->bytes;
    arena->free_from = HEADER;
    if (arena->chunks == NULL || (arena->chunks->older == NULL && total <= MOST_KEPT))
        return;
    drop(arena, NULL);
    if (total <= MOST_KEPT && (arena->chunks = tb_resize(arena->memory, NULL, 0, total, 1)) != NULL)
        *arena->chunks = (tb_chunk){.older = NULL, .bytes = total};
}

void tb_arena_clear(tb_arena *arena) {
    give_back(arena);
    TB_VEC_CLEAR(arena->memory, &arena->adopted);
    drop(arena, NULL);
}
