/* The zigzag of a network: blocks of time decomposed side by side, glued in order. */
#include "zigzag/zigzag.h"

#include "base/parallel.h"
#include "zigzag/barcode.h"
#include "zigzag/decompose.h"

/* A task is a group of blocks, decomposed and glued by one thread; a few tasks a thread wait to be glued to the
 * chain at a time: enough to keep all threads busy, few enough that what waits takes little memory. */
enum { GROUP = 8, GROUPS_A_THREAD = 8 };

typedef struct worker {
    tb_arena arena;
    uint32_t *node_mark;
} worker;

typedef struct run {
    thole_context *context;
    const thole_zigzag_options *options;
    tc_stays stays;
    tc_blocks blocks;
    int dims, top;
    uint32_t wanted;
    worker *workers;
    int worker_count;
    size_t group;      /* blocks a task */
    tz_value *batch;   /* one a task */
    size_t batch_size; /* tasks at a time */
    size_t batch_first; /* the first task's first block */
    tz_value chain;    /* all blocks so far, its left end sealed */
    bool started;
    thole_barcode *barcode;
} run;

/* The dimensions that the complex can have homology in. */
static thole_status plan(run *x, thole_error *error) {
    const thole_zigzag_options *o = x->options;
    if (o->dims == 0 || o->dims >> (THOLE_MOST_DIMENSION + 1) != 0)
        return thole_fail(error, THOLE_ARGUMENT, "dims must name dimensions from 0 to %d", THOLE_MOST_DIMENSION);
    if ((o->radius_kind != THOLE_RADIUS_GRAPH && o->radius_kind != THOLE_RADIUS_HOPS) ||
        (o->join != THOLE_JOIN_UNION && o->join != THOLE_JOIN_INTERSECTION))
        return thole_fail(error, THOLE_ARGUMENT, "the radius is graph or a number of hops, the join union or intersection");
    int highest = 0;
    for (int p = 0; p <= THOLE_MOST_DIMENSION; p++)
        if ((o->dims >> p & 1) != 0)
            highest = p;
    int most = o->radius_kind == THOLE_RADIUS_GRAPH ? 1 : o->radius == 0 ? 0 : THOLE_MOST_DIMENSION;
    if (highest > most) {
        highest = most;
        while (highest > 0 && (o->dims >> highest & 1) == 0)
            highest--;
    }
    x->dims = highest + 1;
    x->top = x->dims;
    if (o->radius_kind == THOLE_RADIUS_GRAPH && x->top > 1)
        x->top = 1;
    if (o->radius_kind == THOLE_RADIUS_HOPS && o->radius == 0)
        x->top = 0;
    x->wanted = o->dims & ((1u << x->dims) - 1);
    return THOLE_OK;
}

static thole_status one_block(run *x, worker *w, size_t k, tz_value *out, thole_error *error) {
    tc_work making = {.context = x->context, .arena = &w->arena, .node_mark = w->node_mark, .error = error};
    tz_work work = {.context = x->context, .arena = &w->arena, .error = error};
    tc_block block;
    thole_status status = tc_block_make(&making, &x->stays, &x->blocks, k, x->options, x->top, &block);
    if (status == THOLE_OK) {
        status = tz_decompose(&work, &block, x->dims, x->wanted, out);
        if (status != THOLE_OK)
            tz_value_clear(out);
    }
    if (status == THOLE_OK && k == 0)
        for (int d = 0; d <= x->top; d++) /* what is there from the very start was in no block before */
            out->cells[d] = block.cells[d].n;
    tb_arena_reset(&w->arena);
    return status;
}

/* A worker's scratch, made when it is first used. */
static thole_status ready(run *x, worker *w, thole_error *error) {
    w->arena.memory = x->context->memory;
    if (w->node_mark != NULL || x->stays.nodes == 0)
        return THOLE_OK;
    w->node_mark = tb_resize(x->context->memory, NULL, 0, x->stays.nodes, sizeof *w->node_mark);
    if (w->node_mark == NULL)
        return tb_refused(x->context->memory, error, "the nodes of a block");
    memset(w->node_mark, 0xFF, (size_t)x->stays.nodes * sizeof *w->node_mark);
    return THOLE_OK;
}

static thole_status cut_blocks(run *x, thole_error *error) {
    double density = 0;
    x->workers = tb_new(x->context->memory, (size_t)x->worker_count, sizeof *x->workers);
    if (x->workers == NULL)
        return tb_refused(x->context->memory, error, "the blocks of time");
    thole_status status = ready(x, &x->workers[0], error);
    tc_work making = {.context = x->context, .arena = &x->workers[0].arena, .node_mark = x->workers[0].node_mark, .error = error};
    if (status == THOLE_OK && x->options->block == 0)
        status = tc_density(&making, &x->stays, x->options, x->top, &density);
    if (status == THOLE_OK)
        status = tc_blocks_of(&x->stays, x->options->join, x->options->block, density, &x->blocks, error);
    return status;
}

static thole_status one_group(void *user, size_t task, int which, thole_error *error) {
    run *x = user;
    worker *w = &x->workers[which];
    thole_status status = ready(x, w, error);
    if (status != THOLE_OK)
        return status;
    size_t first = x->batch_first + task * x->group, end = first + x->group, all = tc_blocks_count(&x->blocks);
    tz_value sum;
    status = one_block(x, w, first, &sum, error);
    for (size_t k = first + 1; status == THOLE_OK && k < end && k < all; k++) {
        tz_value next, glued;
        status = one_block(x, w, k, &next, error);
        if (status == THOLE_OK) {
            status = tz_glue(x->context, &sum, &next, &glued, error);
            tz_value_clear(&next);
        }
        tz_value_clear(&sum);
        if (status == THOLE_OK)
            sum = glued;
    }
    if (status == THOLE_OK)
        x->batch[task] = sum;
    return status;
}

/* Finished bars leave the chain at once, so that gluing does not move them again. */
static bool collect(run *x, tz_value *value) {
    for (int p = 0; p < value->dims; p++) {
        tz_span *span = &value->dim[p];
        if (!TB_VEC_RESERVE(x->context->memory, &x->barcode->bars, x->barcode->bars.n + span->bars.n))
            return false;
        if (span->bars.n > 0)
            memcpy(x->barcode->bars.at + x->barcode->bars.n, span->bars.at, span->bars.n * sizeof *span->bars.at);
        x->barcode->bars.n += span->bars.n;
        span->bars.n = 0;
    }
    return true;
}

static thole_status glue_one(run *x, tz_value *value, thole_error *error) {
    thole_status status = THOLE_OK;
    bool fine = true;
    if (!x->started) {
        x->chain = *value;
        *value = (tz_value){0};
        x->started = true;
        fine = tz_value_seal_left(&x->chain);
    } else {
        tz_value glued;
        status = tz_glue(x->context, &x->chain, value, &glued, error);
        if (status != THOLE_OK)
            return status;
        tz_value_clear(&x->chain);
        tz_value_clear(value);
        x->chain = glued;
    }
    return fine && collect(x, &x->chain) ? THOLE_OK : tb_refused(x->context->memory, error, "the bars");
}

static thole_status all_blocks(run *x, thole_error *error) {
    size_t n = tc_blocks_count(&x->blocks), threads = (size_t)x->worker_count;
    x->group = n / (threads * GROUPS_A_THREAD);
    x->group = x->group < 1 ? 1 : x->group > GROUP ? GROUP : x->group;
    x->batch_size = threads * GROUPS_A_THREAD;
    size_t stride = x->group * x->batch_size;
    x->batch = tb_new(x->context->memory, x->batch_size, sizeof *x->batch);
    if (x->batch == NULL)
        return tb_refused(x->context->memory, error, "the blocks of time");
    thole_status status = THOLE_OK;
    for (size_t k = 0; status == THOLE_OK && k < n; k += stride) {
        size_t blocks = n - k < stride ? n - k : stride, tasks = (blocks + x->group - 1) / x->group;
        x->batch_first = k;
        status = tb_parallel(x->context, tasks, one_group, x, "computing the zigzag", (double)k / (double)n,
                             (double)(k + blocks) / (double)n, error);
        for (size_t i = 0; status == THOLE_OK && i < tasks; i++)
            status = glue_one(x, &x->batch[i], error);
    }
    if (status == THOLE_OK && !(tz_value_seal_right(&x->chain) && collect(x, &x->chain)))
        status = tb_refused(x->context->memory, error, "the bars");
    return status;
}

static void run_clear(run *x) {
    for (size_t i = 0; x->batch != NULL && i < x->batch_size; i++)
        if (x->batch[i].memory != NULL)
            tz_value_clear(&x->batch[i]);
    for (int i = 0; x->workers != NULL && i < x->worker_count; i++) {
        if (x->workers[i].arena.memory != NULL)
            tb_arena_clear(&x->workers[i].arena);
        tb_free(x->context->memory, x->workers[i].node_mark, x->stays.nodes, sizeof *x->workers[i].node_mark);
    }
    tb_free(x->context->memory, x->workers, (size_t)x->worker_count, sizeof *x->workers);
    tb_free(x->context->memory, x->batch, x->batch_size, sizeof *x->batch);
    if (x->started)
        tz_value_clear(&x->chain);
    if (x->blocks.memory != NULL)
        tc_blocks_clear(&x->blocks);
    if (x->stays.memory != NULL)
        tc_stays_clear(&x->stays);
}

/* The peak of this run alone, above what was in use before it. */
static size_t begin_peak(thole_memory *memory, size_t *before) {
    *before = atomic_load(&memory->used);
    atomic_store(&memory->hit_ceiling, false);
    return atomic_exchange(&memory->peak, *before);
}
static size_t end_peak(thole_memory *memory, size_t before, size_t old_peak) {
    size_t peak = atomic_load(&memory->peak);
    if (peak < old_peak)
        atomic_store(&memory->peak, old_peak);
    return peak - before;
}

thole_status thole_zigzag(thole_context *context, const thole_network *network, thole_windows *windows,
                          const thole_zigzag_options *options, thole_barcode **out, thole_error *error) {
    run x = {.context = context, .options = options, .worker_count = tb_threads(context)};
    thole_status status = plan(&x, error);
    if (status != THOLE_OK)
        return status;
    size_t before, old_peak = begin_peak(context->memory, &before);
    x.barcode = tz_barcode_new(context->memory, thole_network_clock(network), windows, options);
    if (x.barcode == NULL)
        status = tb_refused(context->memory, error, "the barcode");
    if (status == THOLE_OK)
        status = tc_stays_of(context, network, windows, options->join, options->all_nodes, &x.stays, error);
    if (status == THOLE_OK)
        status = cut_blocks(&x, error);
    if (status == THOLE_OK)
        status = all_blocks(&x, error);
    if (status == THOLE_OK) {
        for (int d = 0; d <= x.top; d++)
            x.barcode->counts.cells[d] = x.chain.cells[d];
        x.barcode->counts.blocks = tc_blocks_count(&x.blocks);
        if (!tz_barcode_sort(x.barcode))
            status = tb_refused(context->memory, error, "the bars");
    }
    run_clear(&x);
    if (x.barcode != NULL)
        x.barcode->counts.peak_bytes = end_peak(context->memory, before, old_peak);
    if (status == THOLE_OK)
        *out = x.barcode;
    else
        thole_barcode_release(x.barcode);
    return status;
}
