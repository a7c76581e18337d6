#include "support/plan.h"

#include <setjmp.h>
#include <stdarg.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

#include <cmocka.h>

static void must(thole_status status, const thole_error *error) {
    if (status != THOLE_OK)
        fail_msg("%s", error->text);
}

void plan_shape(const shape *s, bool overlap, plan *out) {
    thole_memory memory = {0};
    thole_context context = {.memory = &memory, .threads = 1};
    thole_network *network;
    thole_windows *windows;
    shape_make(&context, s, &network, &windows);
    out->nodes = s->nodes;
    out->events = thole_network_count(network);
    out->windows = thole_windows_count(windows);
    assert_true(out->events <= PLAN_EVENTS && out->windows <= PLAN_WINDOWS);
    for (size_t i = 0; i < out->events; i++)
        out->event[i] = thole_network_event(network, i);
    for (size_t i = 0; i < out->windows; i++) {
        out->from[i] = thole_windows_start(windows, i);
        out->to[i] = thole_windows_finish(windows, i) + (overlap ? 5 : 0);
    }
    thole_network_release(network);
    thole_windows_release(windows);
}

void plan_link(plan *p, uint32_t u, uint32_t v, int64_t start, int64_t finish) {
    assert_true(p->events < PLAN_EVENTS);
    p->event[p->events++] = (thole_event){u, v, start, finish};
}

/* The network and the windows. */
static void make(thole_context *context, const plan *p, thole_network **network, thole_windows **windows) {
    thole_clock clock = {.kind = THOLE_PLAIN, .unit = "s"};
    thole_builder *builder;
    thole_error error;
    must(thole_builder_open(context, &clock, &builder, &error), &error);
    for (uint32_t i = 0; i < p->nodes; i++) {
        char name[16];
        uint32_t node;
        int n = snprintf(name, sizeof name, "%u", (unsigned)i);
        must(thole_builder_node(builder, name, (size_t)n, &node, &error), &error);
    }
    for (size_t i = 0; i < p->events; i++) {
        bool kept;
        must(thole_builder_event(builder, p->event[i], &kept, &error), &error);
    }
    must(thole_builder_finish(builder, network, &error), &error);
    must(thole_windows_list(context, NULL, p->windows, p->from, p->to, NULL, windows, &error), &error);
}

bars plan_bars(const plan *p, thole_zigzag_options options, int threads) {
    thole_memory memory = {0};
    thole_context context = {.memory = &memory, .threads = threads};
    thole_network *network;
    thole_windows *windows;
    thole_barcode *barcode;
    thole_error error;
    make(&context, p, &network, &windows);
    must(thole_zigzag(&context, network, windows, &options, &barcode, &error), &error);
    bars out = {.n = thole_barcode_count(barcode)};
    out.at = malloc((out.n + 1) * sizeof *out.at);
    assert_non_null(out.at);
    for (size_t i = 0; i < out.n; i++)
        out.at[i] = thole_barcode_bar(barcode, i);
    thole_barcode_release(barcode);
    thole_network_release(network);
    thole_windows_release(windows);
    assert_int_equal(atomic_load(&memory.used), 0);
    return out;
}

bars bars_copy(bars b) {
    bars out = {malloc((b.n + 1) * sizeof *b.at), b.n};
    assert_non_null(out.at);
    memcpy(out.at, b.at, b.n * sizeof *b.at);
    return out;
}

void bars_free(bars *b) {
    free(b->at);
    *b = (bars){NULL, 0};
}

static int by_place(const void *x, const void *y) {
    const thole_bar *a = x, *b = y;
    const int64_t keys[][2] = {
        {a->dim, b->dim}, {a->first, b->first}, {a->last, b->last}, {a->kind, b->kind}};
    for (size_t i = 0; i < 4; i++)
        if (keys[i][0] != keys[i][1])
            return keys[i][0] < keys[i][1] ? -1 : 1;
    return 0;
}

static void tell(char text[80], thole_bar bar) {
    snprintf(text, 80, "dimension %d, %u to %u, %s", bar.dim, (unsigned)bar.first, (unsigned)bar.last,
             thole_bar_kind_name((thole_bar_kind)bar.kind));
}

void bars_expect_same(bars want, bars got, const char *what) {
    qsort(want.at, want.n, sizeof *want.at, by_place);
    qsort(got.at, got.n, sizeof *got.at, by_place);
    for (size_t i = 0; i < want.n && i < got.n; i++)
        if (by_place(&want.at[i], &got.at[i]) != 0) {
            char a[80], b[80];
            tell(a, want.at[i]);
            tell(b, got.at[i]);
            fail_msg("%s: bar %zu should be %s; is %s", what, i, a, b);
        }
    if (want.n != got.n)
        fail_msg("%s: there should be %zu bars; there are %zu", what, want.n, got.n);
    bars_free(&want);
    bars_free(&got);
}

static uint8_t kind_of(bool open_start, bool open_end) {
    if (open_start)
        return open_end ? THOLE_OPEN_OPEN : THOLE_OPEN_CLOSED;
    return open_end ? THOLE_CLOSED_OPEN : THOLE_CLOSED_CLOSED;
}

bars bars_cut(bars b, uint32_t low, uint32_t high) {
    bars out = bars_copy(b);
    out.n = 0;
    for (size_t i = 0; i < b.n; i++) {
        thole_bar bar = b.at[i];
        if (bar.last < low || bar.first > high)
            continue;
        bool open_start = bar.first > low && (bar.kind == THOLE_OPEN_CLOSED || bar.kind == THOLE_OPEN_OPEN);
        bool open_end = bar.last < high && (bar.kind == THOLE_CLOSED_OPEN || bar.kind == THOLE_OPEN_OPEN);
        uint32_t first = bar.first < low ? low : bar.first, last = bar.last > high ? high : bar.last;
        out.at[out.n++] = (thole_bar){first - low, last - low, bar.dim, kind_of(open_start, open_end)};
    }
    qsort(out.at, out.n, sizeof *out.at, by_place);
    return out;
}

bars bars_through_diamonds(bars of_unions, uint32_t last) {
    bars out = bars_copy(of_unions);
    for (size_t i = 0; i < out.n; i++) {
        thole_bar *bar = &out.at[i];
        if (bar->first == bar->last && bar->first % 2 == 1) {
            assert_true(bar->dim > 0);
            assert_int_equal(bar->kind, THOLE_CLOSED_CLOSED);
            *bar = (thole_bar){bar->first, bar->last, (uint8_t)(bar->dim - 1), THOLE_OPEN_OPEN};
            continue;
        }
        if (bar->first > 0)
            bar->first = bar->first % 2 == 1 ? bar->first + 1 : bar->first - 1;
        if (bar->last < last)
            bar->last = bar->last % 2 == 1 ? bar->last - 1 : bar->last + 1;
    }
    return out;
}
