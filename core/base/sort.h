/* Inside the core: sorting numbers in linear time, by digits; stable. */
#ifndef TB_SORT_H
#define TB_SORT_H

#include <stddef.h>
#include <stdint.h>

/* Sort n records of `width` bytes (a multiple of 4) by the uint32_t at byte `key`, stable, using `scratch` of the same
 * size. The result is in `at`. Digits that all records share cost one look each. */
void tb_sort_by_u32(void *at, void *scratch, size_t n, size_t width, size_t key);

/* The same by the uint64_t at byte `key`. */
void tb_sort_by_u64(void *at, void *scratch, size_t n, size_t width, size_t key);

#endif
