/* Single positions, and how dense the complex is at a few of them. */
#include "complex/cells.h"

enum { SAMPLES = 4 };

thole_status tc_position_of(tc_work *work, const tc_stays *stays, uint32_t position, tc_position *out) {
    uint32_t *stay = TB_TAKE(work->arena, uint32_t, stays->list.n);
    if (stay == NULL)
        return tb_refused(work->context->memory, work->error, "one position");
    *out = (tc_position){.cut = {position, position}};
    for (size_t i = 0; i < stays->list.n; i++)
        if (stays->list.at[i].first <= position && position <= stays->list.at[i].last)
            stay[out->start[1]++] = (uint32_t)i;
    out->blocks = (tc_blocks){.cut = {.at = out->cut, .n = 2, .cap = 2}, .start = out->start, .stay = stay};
    return THOLE_OK;
}

thole_status tc_density(tc_work *work, const tc_stays *stays, const thole_zigzag_options *options, int top, double *out) {
    *out = 0;
    if (top < 2 || stays->list.n == 0)
        return THOLE_OK;
    double links = 0, higher = 0;
    thole_status status = THOLE_OK;
    for (uint32_t k = 0; status == THOLE_OK && k < SAMPLES; k++) {
        /* A block of one position; joins and windows in turn. */
        uint32_t t = (uint32_t)((uint64_t)(stays->positions - 1) * (2 * k + 1) / (2 * SAMPLES)) | (k & 1);
        if (t >= stays->positions)
            t = stays->positions - 1;
        tc_position one;
        tc_block block;
        status = tc_position_of(work, stays, t, &one);
        if (status == THOLE_OK)
            status = tc_block_make(work, stays, &one.blocks, 0, options, 2, &block);
        if (status == THOLE_OK) {
            links += block.cells[1].n;
            higher += block.cells[2].n;
        }
        tb_arena_reset(work->arena);
    }
    if (status == THOLE_OK && links > 0)
        *out = higher / links;
    return status;
}
