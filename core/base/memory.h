/* Inside the core: allocation, growable arrays, reference counts.
 * Every block is freed with its own size, so that no header is stored. */
#ifndef TB_MEMORY_H
#define TB_MEMORY_H

#include <string.h>

#include "base/base.h"

/* Resize `block` from old_n to new_n items of `item` bytes. NULL on overflow,
 * refusal or ceiling, with the old block untouched. new_n = 0 frees and
 * returns NULL. */
void *tb_resize(thole_memory *memory, void *block, size_t old_n, size_t new_n, size_t item);

/* n items, all bytes zero; NULL on failure (and for n = 0: one byte is never
 * wanted, so callers treat n = 0 before). */
void *tb_new(thole_memory *memory, size_t n, size_t item);

/* Free n items of `item` bytes; NULL is accepted. */
void tb_free(thole_memory *memory, void *block, size_t n, size_t item);

/* The failure that a refused allocation is: THOLE_LIMIT when the ceiling was
 * the reason, else THOLE_NO_MEMORY. `what` says what the memory was for. */
thole_status tb_refused(thole_memory *memory, thole_error *error, const char *what);

/* Make room for `need` items (growth by half), keeping *cap in items. False on
 * refusal, with the array untouched. */
bool tb_reserve(thole_memory *memory, void **at, size_t *cap, size_t need, size_t item);

/* A growable array of T: struct { T *at; size_t n, cap; } */
#define TB_VEC(T)                                                                                  \
    struct {                                                                                       \
        T *at;                                                                                     \
        size_t n, cap;                                                                             \
    }

/* Room for `need` items in all; true on success. */
#define TB_VEC_RESERVE(memory, v, need)                                                            \
    ((need) <= (v)->cap || tb_reserve((memory), (void **)&(v)->at, &(v)->cap, (need), sizeof *(v)->at))

/* Append one value; true on success. */
#define TB_VEC_PUSH(memory, v, value)                                                              \
    (TB_VEC_RESERVE((memory), (v), (v)->n + 1) ? ((v)->at[(v)->n++] = (value), true) : false)

/* Free the array; the vector is empty and usable afterwards. */
#define TB_VEC_CLEAR(memory, v)                                                                    \
    (tb_free((memory), (v)->at, (v)->cap, sizeof *(v)->at), (v)->at = NULL, (v)->n = (v)->cap = 0)

/* Give back unused capacity (keeps the old block when that is refused). */
#define TB_VEC_TRIM(memory, v) tb_trim((memory), (void **)&(v)->at, &(v)->cap, (v)->n, sizeof *(v)->at)
void tb_trim(thole_memory *memory, void **at, size_t *cap, size_t n, size_t item);

/* Reference counts: start at 1. tb_unref is true for the last holder. */
typedef _Atomic size_t tb_refs;
static inline void tb_ref(tb_refs *refs) { atomic_fetch_add_explicit(refs, 1, memory_order_relaxed); }
static inline bool tb_unref(tb_refs *refs) {
    return atomic_fetch_sub_explicit(refs, 1, memory_order_acq_rel) == 1;
}

#endif
