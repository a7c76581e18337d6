#include "zigzag/run.h"

/* A task is a group of blocks, decomposed and glued by one thread; a few tasks a thread wait to be glued to the
 * chain at a time: enough to keep all threads busy, few enough that what waits takes little memory. */
enum { GROUP = 8, GROUPS_A_THREAD = 8 };

/* The dimensions that the complex can have homology in. */
static thole_status plan(tz_run *x, thole_error *error) {
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

static thole_status one_block(tz_run *x, tz_worker *w, size_t k, tz_value *out, thole_error *error) {
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
static thole_status ready(tz_run *x, tz_worker *w, thole_error *error) {
    w->arena.memory = x->context->memory;
    if (w->node_mark != NULL || x->stays.nodes == 0)
        return THOLE_OK;
    w->node_mark = tb_resize(x->context->memory, NULL, 0, x->stays.nodes, sizeof *w->node_mark);
    if (w->node_mark == NULL)
        return tb_refused(x->context->memory, error, "the nodes of a block");
    memset(w->node_mark, 0xFF, (size_t)x->stays.nodes * sizeof *w->node_mark);
    return THOLE_OK;
}

static thole_status cut_blocks(tz_run *x, uint32_t also, thole_error *error) {
    double density = 0;
    thole_status status = ready(x, &x->workers[0], error);
    tc_work making = {.context = x->context, .arena = &x->workers[0].arena, .node_mark = x->workers[0].node_mark, .error = error};
    if (status == THOLE_OK && x->options->block == 0)
        status = tc_density(&making, &x->stays, x->options, x->top, &density);
    if (status == THOLE_OK)
        status = tc_blocks_of(&x->stays, x->options->join, x->options->block, density, also, &x->blocks, error);
    return status;
}

static thole_status one_group(void *user, size_t task, int which, thole_error *error) {
    tz_run *x = user;
    tz_worker *w = &x->workers[which];
    thole_status status = ready(x, w, error);
    if (status != THOLE_OK)
        return status;
    size_t first = x->batch_first + task * x->group, end = first + x->group, all = x->batch_end;
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
static bool collect(tz_run *x, tz_value *value, tz_bars *bars) {
    for (int p = 0; p < value->dims; p++) {
        tz_span *span = &value->dim[p];
        if (bars != NULL && span->bars.n > 0) {
            if (!TB_VEC_RESERVE(x->context->memory, bars, bars->n + span->bars.n))
                return false;
            memcpy(bars->at + bars->n, span->bars.at, span->bars.n * sizeof *span->bars.at);
            bars->n += span->bars.n;
        }
        span->bars.n = 0;
    }
    return true;
}

/* Glue a value to the chain, or begin the chain with it. The value is taken over. */
static thole_status lengthen(tz_run *x, tz_value *chain, tz_value *value, bool seal, tz_bars *bars, thole_error *error) {
    bool fine = true;
    if (chain->memory == NULL) {
        *chain = *value;
        *value = (tz_value){0};
        fine = !seal || tz_value_seal_left(chain);
    } else {
        tz_value glued;
        thole_status status = tz_glue(x->context, chain, value, &glued, error);
        if (status != THOLE_OK)
            return status;
        tz_value_clear(chain);
        tz_value_clear(value);
        *chain = glued;
    }
    return fine && collect(x, chain, bars) ? THOLE_OK : tb_refused(x->context->memory, error, "the bars");
}

thole_status tz_run_blocks(tz_run *x, size_t from, size_t to, bool seal, tz_bars *bars, double low, double high,
                           tz_value *out, thole_error *error) {
    size_t n = to - from, threads = (size_t)x->worker_count;
    x->group = n / (threads * GROUPS_A_THREAD);
    x->group = x->group < 1 ? 1 : x->group > GROUP ? GROUP : x->group;
    size_t stride = x->group * x->batch_size;
    x->batch_end = to;
    tz_value chain = {0};
    thole_status status = THOLE_OK;
    for (size_t k = 0; status == THOLE_OK && k < n; k += stride) {
        size_t blocks = n - k < stride ? n - k : stride, tasks = (blocks + x->group - 1) / x->group;
        x->batch_first = from + k;
        status = tb_parallel(x->context, tasks, one_group, x, "computing the zigzag", low + (high - low) * (double)k / (double)n,
                             low + (high - low) * (double)(k + blocks) / (double)n, error);
        for (size_t i = 0; status == THOLE_OK && i < tasks; i++)
            status = lengthen(x, &chain, &x->batch[i], seal, bars, error);
        for (size_t i = 0; i < tasks; i++)
            if (x->batch[i].memory != NULL)
                tz_value_clear(&x->batch[i]);
    }
    if (status == THOLE_OK)
        *out = chain;
    else if (chain.memory != NULL)
        tz_value_clear(&chain);
    return status;
}

thole_status tz_run_position(tz_run *x, uint32_t position, tc_block *block, tz_value *value, thole_error *error) {
    tz_worker *w = &x->workers[0];
    tb_arena_reset(&w->arena);
    tc_work making = {.context = x->context, .arena = &w->arena, .node_mark = w->node_mark, .error = error};
    tc_position one;
    thole_status status = tc_position_of(&making, &x->stays, position, &one);
    if (status == THOLE_OK)
        status = tc_block_make(&making, &x->stays, &one.blocks, 0, x->options, x->top, block);
    if (status != THOLE_OK || value == NULL)
        return status;
    tz_work work = {.context = x->context, .arena = &w->arena, .error = error};
    status = tz_decompose(&work, block, x->dims, x->wanted, value);
    if (status != THOLE_OK)
        tz_value_clear(value);
    return status;
}

thole_status tz_run_open(thole_context *context, const thole_network *network, const thole_windows *windows,
                         const thole_zigzag_options *options, uint32_t also, tz_run *out, thole_error *error) {
    *out = (tz_run){.context = context, .options = options, .worker_count = tb_threads(context)};
    thole_status status = plan(out, error);
    if (status != THOLE_OK)
        return status;
    out->batch_size = (size_t)out->worker_count * GROUPS_A_THREAD;
    out->workers = tb_new(context->memory, (size_t)out->worker_count, sizeof *out->workers);
    out->batch = tb_new(context->memory, out->batch_size, sizeof *out->batch);
    if (out->workers == NULL || out->batch == NULL)
        return tb_refused(context->memory, error, "the blocks of time");
    status = tc_stays_of(context, network, windows, options->join, options->all_nodes, &out->stays, error);
    if (status == THOLE_OK)
        status = cut_blocks(out, also, error);
    return status;
}

void tz_run_clear(tz_run *x) {
    thole_memory *memory = x->context->memory;
    for (int i = 0; x->workers != NULL && i < x->worker_count; i++) {
        if (x->workers[i].arena.memory != NULL)
            tb_arena_clear(&x->workers[i].arena);
        tb_free(memory, x->workers[i].node_mark, x->stays.nodes, sizeof *x->workers[i].node_mark);
    }
    tb_free(memory, x->workers, (size_t)x->worker_count, sizeof *x->workers);
    tb_free(memory, x->batch, x->batch_size, sizeof *x->batch);
    if (x->blocks.memory != NULL)
        tc_blocks_clear(&x->blocks);
    if (x->stays.memory != NULL)
        tc_stays_clear(&x->stays);
}
