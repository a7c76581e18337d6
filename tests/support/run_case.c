#include "support/run_case.h"

#include <stdio.h>
#include <stdlib.h>

static void must(thole_status status, const thole_error *error) {
    if (status == THOLE_OK)
        return;
    printf("cannot make the case: %s\n", error->text);
    exit(1);
}

void run_case_make(thole_context *context, const judge_case *c, thole_network **network,
                   thole_windows **windows) {
    thole_clock clock = {.kind = THOLE_PLAIN, .unit = "s"};
    thole_error error;
    thole_builder *builder;
    must(thole_builder_open(context, &clock, &builder, &error), &error);
    for (int i = 0; i < c->nodes; i++) {
        char name[8];
        uint32_t node;
        int n = snprintf(name, sizeof name, "%d", i);
        must(thole_builder_node(builder, name, (size_t)n, &node, &error), &error);
    }
    for (int i = 0; i < c->events; i++) {
        const judge_event *e = &c->event[i];
        bool kept;
        must(thole_builder_event(builder, (thole_event){(uint32_t)e->u, (uint32_t)e->v, e->start, e->finish},
                                 &kept, &error),
             &error);
    }
    must(thole_builder_finish(builder, network, &error), &error);
    int64_t from[JUDGE_WINDOWS], to[JUDGE_WINDOWS];
    for (int i = 0; i < c->windows; i++) {
        from[i] = c->from[i];
        to[i] = c->to[i];
    }
    must(thole_windows_list(context, NULL, (size_t)c->windows, from, to, NULL, windows, &error), &error);
}

thole_zigzag_options run_case_options(const judge_case *c, uint32_t block) {
    return (thole_zigzag_options){.radius_kind = c->radius < 0 ? THOLE_RADIUS_GRAPH : THOLE_RADIUS_HOPS,
                                  .radius = c->radius < 0 ? 0 : (uint32_t)c->radius,
                                  .join = c->intersection ? THOLE_JOIN_INTERSECTION : THOLE_JOIN_UNION,
                                  .dims = c->dims,
                                  .all_nodes = c->all_nodes,
                                  .block = block};
}

judge_bar run_case_bar(thole_bar bar) {
    return (judge_bar){bar.dim, (int)bar.first, (int)bar.last,
                       bar.kind == THOLE_OPEN_CLOSED || bar.kind == THOLE_OPEN_OPEN,
                       bar.kind == THOLE_CLOSED_OPEN || bar.kind == THOLE_OPEN_OPEN};
}

size_t run_case_bars(thole_context *context, const judge_case *c, uint32_t block, judge_bar out[JUDGE_BARS],
                     thole_error *error) {
    thole_network *network;
    thole_windows *windows;
    thole_barcode *barcode = NULL;
    run_case_make(context, c, &network, &windows);
    thole_zigzag_options options = run_case_options(c, block);
    thole_status status = thole_zigzag(context, network, windows, &options, &barcode, error);
    size_t n = status == THOLE_OK ? thole_barcode_count(barcode) : SIZE_MAX;
    for (size_t i = 0; status == THOLE_OK && i < n && i < JUDGE_BARS; i++)
        out[i] = run_case_bar(thole_barcode_bar(barcode, i));
    thole_barcode_release(barcode);
    thole_network_release(network);
    thole_windows_release(windows);
    return n;
}

bool run_case_same(const judge_bar *a, size_t n, const judge_bar *b, size_t m) {
    if (n != m)
        return false;
    for (size_t i = 0; i < n; i++)
        if (a[i].dim != b[i].dim || a[i].first != b[i].first || a[i].last != b[i].last ||
            a[i].open_start != b[i].open_start || a[i].open_end != b[i].open_end)
            return false;
    return true;
}

void run_case_print_bars(const char *who, const judge_bar *bars, size_t n) {
    printf("  %s:", who);
    for (size_t i = 0; i < n; i++)
        printf(" %d%c%g,%g%c", bars[i].dim, bars[i].open_start ? '(' : '[', 1 + bars[i].first / 2.0,
               1 + bars[i].last / 2.0, bars[i].open_end ? ')' : ']');
    printf("\n");
}
