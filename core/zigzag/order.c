#include "zigzag/order.h"

thole_status tz_refused(tz_work *work, const tc_block *block) {
    thole_memory *memory = work->context->memory;
    char where[TC_WHERE];
    if (!atomic_load(&memory->hit_ceiling))
        return thole_fail(work->error, THOLE_NO_MEMORY, "out of memory for the zigzag of %s", tc_where(block, where));
    return thole_fail(work->error, THOLE_LIMIT,
                      "the zigzag of %s does not fit under the memory ceiling of %zu MB: lower the radius or the "
                      "dimensions, shorten the windows, or raise max_memory",
                      tc_where(block, where), memory->ceiling / 1000000);
}

static bool rank_cells(tz_work *work, const tc_cells *cells, tz_way way, uint32_t length, tz_rank *out) {
    uint32_t n = cells->n;
    uint32_t *count = TB_FILL(work->arena, uint32_t, (size_t)length + 1, 0);
    out->rank = TB_TAKE(work->arena, uint32_t, n);
    out->at = TB_TAKE(work->arena, uint32_t, n);
    out->killer = TB_FILL(work->arena, uint32_t, n, 0xFF);
    out->victim = TB_FILL(work->arena, uint32_t, n, 0xFF);
    if (count == NULL || out->rank == NULL || out->at == NULL || out->killer == NULL || out->victim == NULL)
        return false;
#define KEY(i) (way == TZ_ADDITION ? cells->first[i] : length - 1 - cells->last[i])
    for (uint32_t i = 0; i < n; i++)
        count[KEY(i) + 1]++;
    out->at_edge = count[1];
    for (uint32_t t = 0; t < length; t++)
        count[t + 1] += count[t];
    for (uint32_t i = 0; i < n; i++) {
        uint32_t r = count[KEY(i)]++;
        out->rank[i] = r;
        out->at[r] = i;
    }
#undef KEY
    return true;
}

thole_status tz_order_make(tz_work *work, const tc_block *block, tz_way way, tz_order *out) {
    *out = (tz_order){.way = way, .block = block};
    uint32_t length = block->last - block->first + 1;
    for (int d = 0; d <= block->top; d++)
        if (!rank_cells(work, &block->cells[d], way, length, &out->dim[d]))
            return tz_refused(work, block);
    return THOLE_OK;
}
