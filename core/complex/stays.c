#include "complex/stays.h"

#include "base/parallel.h"
#include "base/sort.h"

/* An event's run of windows [lo, hi], between the nodes u < v. */
typedef struct run {
    uint32_t u, v, lo, hi;
} run;

/* Events are taken in chunks, one a task; links in ranges of their lower node, one a task. */
enum { CHUNK = 1 << 15, RANGE = 1 << 15 };

typedef struct chunk {
    TB_VEC(run) runs;
    uint64_t outside;
} chunk;

typedef struct range {
    size_t from, to; /* runs */
    TB_VEC(tc_stay) stays;
} range;

typedef struct gather {
    thole_context *context;
    thole_memory *memory;
    const thole_network *network;
    const thole_windows *windows;
    thole_join join;
    size_t events;
    uint32_t count;     /* windows */
    uint32_t positions;
    bool nested;        /* some window ends before an earlier one does */
    int64_t *latest;    /* with nested windows: the latest finish of windows 0 .. i */
    chunk *chunks;
    size_t chunk_count;
    run *runs;          /* all, by lower node */
    size_t run_count;
    range *ranges;
    size_t range_count;
} gather;

static void gather_clear(gather *g) {
    for (size_t i = 0; g->chunks != NULL && i < g->chunk_count; i++)
        TB_VEC_CLEAR(g->memory, &g->chunks[i].runs);
    for (size_t i = 0; g->ranges != NULL && i < g->range_count; i++)
        TB_VEC_CLEAR(g->memory, &g->ranges[i].stays);
    tb_free(g->memory, g->latest, g->count, sizeof *g->latest);
    tb_free(g->memory, g->chunks, g->chunk_count, sizeof *g->chunks);
    tb_free(g->memory, g->ranges, g->range_count, sizeof *g->ranges);
    tb_free(g->memory, g->runs, g->run_count, sizeof *g->runs);
}

/* ---- which windows an event is in --------------------------------------------- */

/* Finishes never go back, or `latest` is used in their place. */
static int64_t finish_by(const gather *g, uint32_t i) {
    return g->nested ? g->latest[i] : thole_windows_finish(g->windows, i);
}

/* The first window that has not ended when an event starts. */
static uint32_t first_open(const gather *g, int64_t start) {
    uint32_t lo = 0, hi = g->count;
    while (lo < hi) {
        uint32_t middle = lo + (hi - lo) / 2;
        if (finish_by(g, middle) <= start)
            lo = middle + 1;
        else
            hi = middle;
    }
    return lo;
}

static bool too_late(const gather *g, uint32_t window, const thole_event *event) {
    int64_t start = thole_windows_start(g->windows, window);
    return event->start == event->finish ? start > event->start : start >= event->finish;
}

/* The first window from `from` on that starts when an event is over. Most events touch few windows: gallop. */
static uint32_t first_too_late(const gather *g, uint32_t from, const thole_event *event) {
    uint32_t lo = from, hi = g->count, step = 1;
    while (lo + step < hi && !too_late(g, lo + step, event)) {
        lo += step;
        step *= 2;
    }
    if (lo + step < hi)
        hi = lo + step;
    while (lo < hi) {
        uint32_t middle = lo + (hi - lo) / 2;
        if (too_late(g, middle, event))
            hi = middle;
        else
            lo = middle + 1;
    }
    return lo;
}

/* Record the windows from `first` on that the event is active in. */
static bool record(const gather *g, chunk *c, const thole_event *event, uint32_t first) {
    uint32_t end = first_too_late(g, first, event), u = event->from, v = event->to;
    size_t before = c->runs.n;
    if (u > v) {
        u = event->to;
        v = event->from;
    }
    if (!g->nested) {
        if (first < end && !TB_VEC_PUSH(g->memory, &c->runs, ((run){u, v, first, end - 1})))
            return false;
    } else {
        for (uint32_t i = first; i < end;) {
            if (thole_windows_finish(g->windows, i) <= event->start) {
                i++;
                continue;
            }
            uint32_t lo = i;
            while (i < end && thole_windows_finish(g->windows, i) > event->start)
                i++;
            if (!TB_VEC_PUSH(g->memory, &c->runs, ((run){u, v, lo, i - 1})))
                return false;
        }
    }
    c->outside += c->runs.n == before;
    return true;
}

static thole_status place_chunk(void *user, size_t task, int worker, thole_error *error) {
    gather *g = user;
    (void)worker;
    chunk *c = &g->chunks[task];
    size_t from = task * CHUNK, to = from + CHUNK < g->events ? from + CHUNK : g->events;
    bool fine = TB_VEC_RESERVE(g->memory, &c->runs, to - from);
    uint32_t first = first_open(g, thole_network_event(g->network, from).start);
    for (size_t i = from; fine && i < to; i++) {
        thole_event event = thole_network_event(g->network, i); /* they come by start */
        while (first < g->count && finish_by(g, first) <= event.start)
            first++;
        fine = record(g, c, &event, first);
    }
    return fine ? THOLE_OK : tb_refused(g->memory, error, "the links of the windows");
}

/* ---- links and their stays ------------------------------------------------------ */

/* All runs in the order of their lower nodes, within one in the order of the events; and the ranges. */
static bool by_lower_node(gather *g, uint32_t nodes) {
    for (size_t i = 0; i < g->chunk_count; i++)
        g->run_count += g->chunks[i].runs.n;
    size_t *start = tb_new(g->memory, (size_t)nodes + 1, sizeof *start);
    g->runs = tb_resize(g->memory, NULL, 0, g->run_count, sizeof *g->runs);
    g->ranges = tb_new(g->memory, g->run_count / RANGE + 1, sizeof *g->ranges);
    bool fine = start != NULL && (g->runs != NULL || g->run_count == 0) && g->ranges != NULL;
    g->range_count = g->ranges != NULL ? g->run_count / RANGE + 1 : 0;
    for (size_t i = 0; fine && i < g->chunk_count; i++)
        for (size_t k = 0; k < g->chunks[i].runs.n; k++)
            start[g->chunks[i].runs.at[k].u + 1]++;
    for (size_t i = 0; fine && i < nodes; i++)
        start[i + 1] += start[i];
    /* A range ends with the node that reaches its share; later ones may stay empty. */
    for (size_t i = 0, r = 0; fine && i < nodes; i++) {
        g->ranges[r].to = start[i + 1];
        if (start[i + 1] - g->ranges[r].from >= RANGE && r + 1 < g->range_count) {
            r++;
            g->ranges[r].from = g->ranges[r].to = start[i + 1];
        }
    }
    for (size_t i = 0; fine && i < g->chunk_count; i++) {
        for (size_t k = 0; k < g->chunks[i].runs.n; k++) {
            run r = g->chunks[i].runs.at[k];
            g->runs[start[r.u]++] = r;
        }
        TB_VEC_CLEAR(g->memory, &g->chunks[i].runs);
    }
    tb_free(g->memory, start, (size_t)nodes + 1, sizeof *start);
    return fine;
}

/* Merge the runs of one link and append its stays. */
static bool append_stays(gather *g, range *out, run *runs, size_t n, run *scratch) {
    if (g->nested)
        tb_sort_by_u32(runs, scratch, n, sizeof *runs, offsetof(run, lo));
    for (size_t i = 0; i < n;) {
        uint32_t lo = runs[i].lo, hi = runs[i].hi;
        const run *link = &runs[i];
        for (i++; i < n && runs[i].lo <= hi + 1; i++)
            if (runs[i].hi > hi)
                hi = runs[i].hi;
        uint32_t first = 2 * lo, last = 2 * hi;
        if (g->join == THOLE_JOIN_UNION) {
            first -= first > 0;
            last += last + 1 < g->positions;
        }
        if (!TB_VEC_PUSH(g->memory, &out->stays, ((tc_stay){link->u, link->v, first, last})))
            return false;
    }
    return true;
}

static thole_status merge_range(void *user, size_t task, int worker, thole_error *error) {
    gather *g = user;
    (void)worker;
    range *r = &g->ranges[task];
    size_t n = r->to - r->from;
    if (n == 0)
        return THOLE_OK;
    run *scratch = tb_resize(g->memory, NULL, 0, n, sizeof *scratch), *runs = g->runs + r->from;
    bool fine = scratch != NULL;
    for (size_t i = 0, end = 0; fine && i < n; i = end) {
        while (end < n && runs[end].u == runs[i].u)
            end++;
        tb_sort_by_u32(runs + i, scratch, end - i, sizeof *runs, offsetof(run, v));
        for (size_t k = i, stop = i; fine && k < end; k = stop) {
            while (stop < end && runs[stop].v == runs[k].v)
                stop++;
            fine = append_stays(g, r, runs + k, stop - k, scratch);
        }
    }
    tb_free(g->memory, scratch, n, sizeof *scratch);
    return fine ? THOLE_OK : tb_refused(g->memory, error, "the links of the windows");
}

static bool put_together(gather *g, tc_stays *out) {
    size_t n = 0;
    for (size_t i = 0; i < g->range_count; i++)
        n += g->ranges[i].stays.n;
    if (n >= UINT32_MAX || !TB_VEC_RESERVE(g->memory, &out->list, n))
        return false;
    for (size_t i = 0; i < g->range_count; i++) {
        if (g->ranges[i].stays.n > 0)
            memcpy(out->list.at + out->list.n, g->ranges[i].stays.at, g->ranges[i].stays.n * sizeof(tc_stay));
        out->list.n += g->ranges[i].stays.n;
        TB_VEC_CLEAR(g->memory, &g->ranges[i].stays);
    }
    return true;
}

static bool keep_nodes(tc_stays *out, const thole_network *network) {
    uint32_t nodes = out->nodes;
    if (nodes == 0)
        return true;
    uint8_t *seen = tb_new(out->memory, nodes, 1);
    if (seen == NULL)
        return false;
    size_t n = thole_network_count(network);
    for (size_t i = 0; i < n; i++) {
        thole_event event = thole_network_event(network, i);
        seen[event.from] = seen[event.to] = 1;
    }
    bool fine = true;
    for (uint32_t i = 0; fine && i < nodes; i++)
        fine = !seen[i] || TB_VEC_PUSH(out->memory, &out->kept, i);
    tb_free(out->memory, seen, nodes, 1);
    return fine;
}

static bool find_nested(gather *g) {
    for (uint32_t i = 1; i < g->count && !g->nested; i++)
        g->nested = thole_windows_finish(g->windows, i) < thole_windows_finish(g->windows, i - 1);
    if (!g->nested)
        return true;
    g->latest = tb_resize(g->memory, NULL, 0, g->count, sizeof *g->latest);
    for (uint32_t i = 0; g->latest != NULL && i < g->count; i++) {
        int64_t finish = thole_windows_finish(g->windows, i);
        g->latest[i] = i > 0 && g->latest[i - 1] > finish ? g->latest[i - 1] : finish;
    }
    return g->latest != NULL;
}

thole_status tc_stays_of(thole_context *context, const thole_network *network, const thole_windows *windows,
                         thole_join join, bool all_nodes, tc_stays *out, thole_error *error) {
    static const char phase[] = "placing links in windows";
    thole_memory *memory = context->memory;
    *out = (tc_stays){.memory = memory, .nodes = thole_network_nodes(network)};
    size_t count = thole_windows_count(windows), events = thole_network_count(network);
    if (count > UINT32_C(0x7FFFFFF0))
        return thole_fail(error, THOLE_LIMIT, "%zu windows are more than 2,147,483,632: use fewer or longer ones", count);
    out->positions = (uint32_t)(2 * count - 1);
    gather g = {.context = context, .memory = memory, .network = network, .windows = windows, .join = join,
                .events = events, .count = (uint32_t)count, .positions = out->positions};
    g.chunk_count = (events + CHUNK - 1) / CHUNK;
    g.chunks = events == 0 ? NULL : tb_new(memory, g.chunk_count, sizeof *g.chunks);
    bool fine = (events == 0 || g.chunks != NULL) && find_nested(&g) && (!all_nodes || keep_nodes(out, network));
    thole_status status = fine ? tb_parallel(context, g.chunk_count, place_chunk, &g, phase, 0, 0.5, error) : THOLE_OK;
    for (size_t i = 0; fine && i < g.chunk_count; i++)
        out->outside += g.chunks[i].outside;
    if (fine && status == THOLE_OK && (fine = by_lower_node(&g, out->nodes)))
        status = tb_parallel(context, g.range_count, merge_range, &g, phase, 0.5, 1, error);
    if (status == THOLE_OK && !(fine && put_together(&g, out)))
        status = tb_refused(memory, error, "the links of the windows");
    gather_clear(&g);
    if (status != THOLE_OK)
        tc_stays_clear(out);
    return status;
}

void tc_stays_clear(tc_stays *stays) {
    TB_VEC_CLEAR(stays->memory, &stays->list);
    TB_VEC_CLEAR(stays->memory, &stays->kept);
}
