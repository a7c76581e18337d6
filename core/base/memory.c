/* Allocation through one interface, counted, with a ceiling. */
#if defined(__linux__)
#define _DEFAULT_SOURCE /* madvise */
#endif
#include "base/memory.h"

#include <stdlib.h>
#if defined(__linux__)
#include <sys/mman.h>
#endif

/* Large new blocks ask for large pages, where the system has them: the first touch of a page is dear, above all on
 * virtual machines (measured on one: 13 us for each 4 KiB, 0.3 us with large pages). Only an optimisation; large
 * blocks that grow stay as they are, because moving large pages costs more than it saves. */
static void *new_large(size_t bytes) {
#if defined(MADV_HUGEPAGE)
    static const size_t PAGE = (size_t)2 << 20;
    size_t rounded = (bytes + PAGE - 1) / PAGE * PAGE; /* bytes <= PTRDIFF_MAX */
    void *block = aligned_alloc(PAGE, rounded);
    if (block != NULL)
        (void)madvise(block, rounded, MADV_HUGEPAGE);
    return block;
#else
    return malloc(bytes);
#endif
}

static void *by_library(void *block, size_t old_bytes, size_t new_bytes) {
    enum { LARGE = 4 << 20 };
    if (new_bytes == 0) {
        free(block);
        return NULL;
    }
    if (new_bytes < LARGE || old_bytes > new_bytes / 4)
        return realloc(block, new_bytes);
    void *fresh = new_large(new_bytes);
    if (fresh != NULL && block != NULL) {
        memcpy(fresh, block, old_bytes);
        free(block);
    }
    return fresh;
}

/* Add to `used` unless that passes the ceiling. */
static bool take(thole_memory *memory, size_t more) {
    size_t used = atomic_fetch_add_explicit(&memory->used, more, memory_order_relaxed) + more;
    if (memory->ceiling != 0 && used > memory->ceiling) {
        atomic_fetch_sub_explicit(&memory->used, more, memory_order_relaxed);
        atomic_store_explicit(&memory->hit_ceiling, true, memory_order_relaxed);
        return false;
    }
    size_t peak = atomic_load_explicit(&memory->peak, memory_order_relaxed);
    while (used > peak && !atomic_compare_exchange_weak_explicit(&memory->peak, &peak, used, memory_order_relaxed,
                                                                 memory_order_relaxed)) {
    }
    return true;
}

void *tb_resize(thole_memory *memory, void *block, size_t old_n, size_t new_n, size_t item) {
    if (item != 0 && new_n > (size_t)PTRDIFF_MAX / item)
        return NULL;
    size_t old_bytes = old_n * item, new_bytes = new_n * item;
    if (old_bytes == new_bytes)
        return block;
    if (new_bytes > old_bytes) {
        atomic_fetch_add_explicit(&memory->calls, 1, memory_order_relaxed);
        if (!take(memory, new_bytes - old_bytes))
            return NULL;
    }
    void *fresh = memory->resize != NULL ? memory->resize(memory->user, block, old_bytes, new_bytes)
                                         : by_library(block, old_bytes, new_bytes);
    if (new_bytes > old_bytes) {
        if (fresh == NULL)
            atomic_fetch_sub_explicit(&memory->used, new_bytes - old_bytes, memory_order_relaxed);
        return fresh;
    }
    /* A shrink that the allocator refuses keeps the old, larger block: it is
     * still valid, and the smaller size is what we account and free by. */
    atomic_fetch_sub_explicit(&memory->used, old_bytes - new_bytes, memory_order_relaxed);
    return new_bytes != 0 && fresh == NULL ? block : fresh;
}

void *tb_new(thole_memory *memory, size_t n, size_t item) {
    void *block = tb_resize(memory, NULL, 0, n, item);
    if (block != NULL)
        memset(block, 0, n * item);
    return block;
}

void tb_free(thole_memory *memory, void *block, size_t n, size_t item) {
    if (block != NULL)
        (void)tb_resize(memory, block, n, 0, item);
}

thole_status tb_refused(thole_memory *memory, thole_error *error, const char *what) {
    if (atomic_load_explicit(&memory->hit_ceiling, memory_order_relaxed))
        return thole_fail(error, THOLE_LIMIT, "%s needs more than the memory ceiling of %zu MB: lower the request or raise max_memory",
                          what, memory->ceiling / 1000000);
    return thole_fail(error, THOLE_NO_MEMORY, "out of memory for %s", what);
}

bool tb_reserve(thole_memory *memory, void **at, size_t *cap, size_t need, size_t item) {
    if (need <= *cap)
        return true;
    size_t grown = *cap + *cap / 2 + 8;
    if (grown < need)
        grown = need;
    void *fresh = tb_resize(memory, *at, *cap, grown, item);
    if (fresh == NULL && grown > need) /* the generous step may be what was refused */
        fresh = tb_resize(memory, *at, *cap, grown = need, item);
    if (fresh == NULL)
        return false;
    *at = fresh;
    *cap = grown;
    return true;
}

void tb_trim(thole_memory *memory, void **at, size_t *cap, size_t n, size_t item) {
    if (n < *cap) {
        *at = tb_resize(memory, *at, *cap, n, item);
        *cap = n;
    }
}
