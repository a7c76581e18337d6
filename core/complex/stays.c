#include "complex/stays.h"

#include <stdlib.h>

#include "base/parallel.h"

/* An event's run of windows, under its link's number. */
typedef struct run {
    uint32_t link, lo, hi;
} run;

typedef struct gather {
    thole_context *context;
    thole_memory *memory;
    const thole_windows *windows;
    uint32_t count;        /* windows */
    bool nested;           /* some window ends before an earlier one does */
    TB_VEC(run) runs;
    TB_VEC(uint64_t) keys; /* link number -> u << 32 | v */
    uint32_t *slot;        /* hash of key -> link number + 1 */
    size_t slots;
} gather;

static void gather_clear(gather *g) {
    TB_VEC_CLEAR(g->memory, &g->runs);
    TB_VEC_CLEAR(g->memory, &g->keys);
    tb_free(g->memory, g->slot, g->slots, sizeof *g->slot);
    g->slot = NULL;
}

static size_t spread(uint64_t key, size_t slots) {
    key *= UINT64_C(0x9E3779B97F4A7C15);
    key ^= key >> 32;
    key *= UINT64_C(0xD6E8FEB86659FD93);
    return (size_t)(key >> 20) & (slots - 1);
}

static bool rehash(gather *g) {
    size_t slots = g->slots == 0 ? 1024 : g->slots * 2;
    uint32_t *slot = tb_new(g->memory, slots, sizeof *slot);
    if (slot == NULL)
        return false;
    for (uint32_t i = 0; i < g->keys.n; i++) {
        size_t at = spread(g->keys.at[i], slots);
        while (slot[at] != 0)
            at = (at + 1) & (slots - 1);
        slot[at] = i + 1;
    }
    tb_free(g->memory, g->slot, g->slots, sizeof *g->slot);
    g->slot = slot;
    g->slots = slots;
    return true;
}

static bool link_number(gather *g, uint32_t a, uint32_t b, uint32_t *link) {
    uint64_t key = a < b ? (uint64_t)a << 32 | b : (uint64_t)b << 32 | a;
    if (g->keys.n * 2 >= g->slots && !rehash(g))
        return false;
    size_t at = spread(key, g->slots);
    for (; g->slot[at] != 0; at = (at + 1) & (g->slots - 1)) {
        if (g->keys.at[g->slot[at] - 1] == key) {
            *link = g->slot[at] - 1;
            return true;
        }
    }
    if (g->keys.n >= UINT32_MAX - 1 || !TB_VEC_PUSH(g->memory, &g->keys, key))
        return false;
    *link = (uint32_t)g->keys.n - 1;
    g->slot[at] = (uint32_t)g->keys.n;
    return true;
}

/* Windows of an event lie in [lo, hi): hi is the first window that starts too late. */
static uint32_t first_too_late(const gather *g, uint32_t from, const thole_event *event) {
    uint32_t lo = from, hi = g->count, step = 1;
    bool contact = event->start == event->finish;
#define TOO_LATE(i)                                                                                          \
    (contact ? thole_windows_start(g->windows, (i)) > event->start                                           \
             : thole_windows_start(g->windows, (i)) >= event->finish)
    while (lo + step < hi && !TOO_LATE(lo + step)) { /* most events touch few windows: gallop */
        lo += step;
        step *= 2;
    }
    if (lo + step < hi)
        hi = lo + step;
    while (lo < hi) {
        uint32_t middle = lo + (hi - lo) / 2;
        if (TOO_LATE(middle))
            hi = middle;
        else
            lo = middle + 1;
    }
#undef TOO_LATE
    return lo;
}

/* Record the windows from `first` on that the event is active in; *none when there are none. */
static bool record(gather *g, const thole_event *event, uint32_t first, bool *none) {
    uint32_t end = first_too_late(g, first, event);
    *none = true;
    if (first >= end)
        return true;
    uint32_t link;
    if (!g->nested) {
        *none = false;
        return link_number(g, event->from, event->to, &link) &&
               TB_VEC_PUSH(g->memory, &g->runs, ((run){link, first, end - 1}));
    }
    for (uint32_t i = first; i < end;) {
        if (thole_windows_finish(g->windows, i) <= event->start) {
            i++;
            continue;
        }
        uint32_t lo = i;
        while (i < end && thole_windows_finish(g->windows, i) > event->start)
            i++;
        *none = false;
        if (!link_number(g, event->from, event->to, &link) ||
            !TB_VEC_PUSH(g->memory, &g->runs, ((run){link, lo, i - 1})))
            return false;
    }
    return true;
}

/* Links in the order of their keys. */
static int by_key(const void *a, const void *b) {
    const uint64_t *x = a, *y = b;
    return *x < *y ? -1 : *x > *y;
}

/* Group runs by link, in the order of the links' keys; within a link by window. */
static bool group(gather *g, run **sorted, uint64_t **keys) {
    size_t links = g->keys.n, n = g->runs.n;
    *sorted = NULL;
    *keys = tb_resize(g->memory, NULL, 0, links + 1, sizeof **keys);
    uint32_t *rank = tb_resize(g->memory, NULL, 0, links + 1, sizeof *rank);
    size_t *start = tb_new(g->memory, links + 2, sizeof *start);
    *sorted = tb_resize(g->memory, NULL, 0, n + 1, sizeof **sorted);
    bool fine = *keys != NULL && rank != NULL && start != NULL && *sorted != NULL;
    if (fine && links > 0) {
        memcpy(*keys, g->keys.at, links * sizeof **keys);
        qsort(*keys, links, sizeof **keys, by_key);
        for (size_t i = 0; i < links; i++) {
            uint32_t link = 0;
            (void)link_number(g, (uint32_t)((*keys)[i] >> 32), (uint32_t)(*keys)[i], &link); /* is there */
            rank[link] = (uint32_t)i;
        }
        for (size_t i = 0; i < n; i++)
            start[rank[g->runs.at[i].link] + 1]++;
        for (size_t i = 0; i < links; i++)
            start[i + 1] += start[i];
        for (size_t i = 0; i < n; i++) { /* stable: events come by start, so a link's runs do too */
            run r = g->runs.at[i];
            r.link = rank[r.link];
            (*sorted)[start[r.link]++] = r;
        }
    }
    tb_free(g->memory, rank, links + 1, sizeof *rank);
    tb_free(g->memory, start, links + 2, sizeof *start);
    return fine;
}

static int by_lo(const void *a, const void *b) {
    const run *x = a, *y = b;
    return x->lo < y->lo ? -1 : x->lo > y->lo;
}

/* Merge the runs of one link and append its stays. */
static bool append_stays(tc_stays *out, uint64_t key, run *runs, size_t n, thole_join join, bool nested) {
    if (nested)
        qsort(runs, n, sizeof *runs, by_lo);
    for (size_t i = 0; i < n;) {
        uint32_t lo = runs[i].lo, hi = runs[i].hi;
        for (i++; i < n && runs[i].lo <= hi + 1; i++)
            if (runs[i].hi > hi)
                hi = runs[i].hi;
        uint32_t first = 2 * lo, last = 2 * hi;
        if (join == THOLE_JOIN_UNION) {
            first -= first > 0;
            last += last + 1 < out->positions;
        }
        if (out->list.n >= UINT32_MAX - 1 ||
            !TB_VEC_PUSH(out->memory, &out->list, ((tc_stay){(uint32_t)(key >> 32), (uint32_t)key, first, last})))
            return false;
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

static bool has_nested(const thole_windows *windows, uint32_t count) {
    for (uint32_t i = 1; i < count; i++)
        if (thole_windows_finish(windows, i) < thole_windows_finish(windows, i - 1))
            return true;
    return false;
}

thole_status tc_stays_of(thole_context *context, const thole_network *network, const thole_windows *windows,
                         thole_join join, bool all_nodes, tc_stays *out, thole_error *error) {
    *out = (tc_stays){.memory = context->memory, .nodes = thole_network_nodes(network)};
    size_t count = thole_windows_count(windows), events = thole_network_count(network);
    if (count > UINT32_C(0x7FFFFFF0))
        return thole_fail(error, THOLE_LIMIT, "%zu windows are more than 2,147,483,632: use fewer or longer ones", count);
    out->positions = (uint32_t)(2 * count - 1);
    gather g = {.context = context, .memory = context->memory, .windows = windows, .count = (uint32_t)count};
    g.nested = has_nested(windows, g.count);
    run *sorted = NULL;
    uint64_t *keys = NULL;
    thole_status status = THOLE_OK;
    bool fine = !all_nodes || keep_nodes(out, network);
    uint32_t first = 0; /* windows before it have ended before every event still to come */
    for (size_t i = 0; fine && i < events; i++) {
        if ((i & 0xFFFF) == 0 && (status = tb_tick(context, "placing links in windows",
                                                   (double)i / (double)events, error)) != THOLE_OK)
            goto done;
        thole_event event = thole_network_event(network, i);
        while (first < g.count && thole_windows_finish(windows, first) <= event.start)
            first++;
        bool none;
        fine = record(&g, &event, first, &none);
        out->outside += none;
    }
    fine = fine && group(&g, &sorted, &keys);
    for (size_t i = 0, end = 0; fine && i < g.runs.n; i = end) {
        while (end < g.runs.n && sorted[end].link == sorted[i].link)
            end++;
        fine = append_stays(out, keys[sorted[i].link], sorted + i, end - i, join, g.nested);
    }
    if (!fine)
        status = tb_refused(context->memory, error, "the links of the windows");
done:
    tb_free(g.memory, sorted, g.runs.n + 1, sizeof *sorted);
    tb_free(g.memory, keys, g.keys.n + 1, sizeof *keys);
    gather_clear(&g);
    if (status != THOLE_OK)
        tc_stays_clear(out);
    else
        TB_VEC_TRIM(context->memory, &out->list);
    return status;
}

void tc_stays_clear(tc_stays *stays) {
    TB_VEC_CLEAR(stays->memory, &stays->list);
    TB_VEC_CLEAR(stays->memory, &stays->kept);
}
