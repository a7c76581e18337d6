/* The steps of a run over blocks of time, for the barcode and for looks at single positions. */
#ifndef TZ_RUN_H
#define TZ_RUN_H

#include "zigzag/decompose.h"

typedef struct tz_worker {
    tb_arena arena;
    uint32_t *node_mark; /* one a node, all TC_NONE between blocks */
} tz_worker;

typedef TB_VEC(thole_bar) tz_bars;

typedef struct tz_run {
    thole_context *context;
    const thole_zigzag_options *options;
    tc_stays stays;
    tc_blocks blocks;
    int dims, top;   /* homology dimensions 0 .. dims - 1; cells up to top */
    uint32_t wanted; /* the dimensions asked for, a bit each */
    tz_worker *workers;
    int worker_count;
    size_t group;       /* blocks a task */
    tz_value *batch;    /* one a task */
    size_t batch_size;  /* tasks at a time */
    size_t batch_first; /* the first task's first block */
    size_t batch_end;   /* the block after the last task's */
} tz_run;

/* Place the links and cut the blocks, one of them at position `also` unless that is TC_NONE. Clear with tz_run_clear, after a failure too. */
thole_status tz_run_open(thole_context *context, const thole_network *network, const thole_windows *windows,
                         const thole_zigzag_options *options, uint32_t also, tz_run *out, thole_error *error);
void tz_run_clear(tz_run *run);

/* The value of blocks from .. to - 1, glued; seal: with its left end sealed. Finished bars leave it as they come:
 * appended to *bars, or forgotten when that is NULL. Progress is told between the shares `low` and `high`. */
thole_status tz_run_blocks(tz_run *run, size_t from, size_t to, bool seal, tz_bars *bars, double low, double high,
                           tz_value *out, thole_error *error);

/* The one-position block at `position`: its cells, in the arena of the first worker, valid until the next call on
 * the run; and, unless value is NULL, its value. */
thole_status tz_run_position(tz_run *run, uint32_t position, tc_block *block, tz_value *value, thole_error *error);

#endif
