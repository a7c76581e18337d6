/* Inside the core: a region of memory that is given back all at once. For the
 * scratch of one task: many arrays, one release, no bookkeeping. */
#ifndef TB_ARENA_H
#define TB_ARENA_H

#include "base/memory.h"

typedef struct tb_chunk tb_chunk;

/* A block that grew elsewhere and is given back with the arena. */
typedef struct tb_adopted {
    void *block;
    size_t bytes;
} tb_adopted;

/* Zero-initialise with `memory` set. Not for several threads at once. */
typedef struct tb_arena {
    thole_memory *memory;
    tb_chunk *chunks; /* newest first */
    size_t free_from; /* in the newest chunk */
    TB_VEC(tb_adopted) adopted;
} tb_arena;

/* n items of `item` bytes, not set to anything; a valid pointer for n = 0 too.
 * NULL when refused. Lives until the arena is reset or cleared. */
void *tb_arena_take(tb_arena *arena, size_t n, size_t item);

/* The same with every byte `fill`. */
void *tb_arena_fill(tb_arena *arena, size_t n, size_t item, int fill);

/* Make a growable array's block the arena's, without a copy, and empty the array. False when refused: it is
 * then still the caller's. */
bool tb_arena_adopt(tb_arena *arena, void **at, size_t *n, size_t *cap, size_t item);
#define TB_ADOPT(arena, v) tb_arena_adopt((arena), (void **)&(v)->at, &(v)->n, &(v)->cap, sizeof *(v)->at)

/* Forget everything taken, keeping one chunk for the next task. */
void tb_arena_reset(tb_arena *arena);
void tb_arena_clear(tb_arena *arena);

/* n items of type T from an arena. */
#define TB_TAKE(arena, T, n) ((T *)tb_arena_take((arena), (n), sizeof(T)))
#define TB_FILL(arena, T, n, byte) ((T *)tb_arena_fill((arena), (n), sizeof(T), (byte)))

#endif
