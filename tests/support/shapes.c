#include "bench/shapes.h"

#include <stdio.h>
#include <stdlib.h>

#include "support/dice.h"

enum { WINDOW = 10 };

static void must(thole_status status, const thole_error *error) {
    if (status != THOLE_OK) {
        fprintf(stderr, "cannot make the network: %s\n", error->text);
        exit(1);
    }
}

typedef struct live {
    uint32_t u, v, since;
} live;

/* A fresh link in slot i of the shape. */
static live fresh_link(dice *d, const shape *s, uint32_t i, uint32_t window) {
    uint32_t n = s->nodes, u = dice_below(d, n), v;
    switch (s->kind) {
    case SHAPE_STAR: return (live){0, 1 + dice_below(d, n - 1), window};
    case SHAPE_PATH: return (live){i % (n - 1), i % (n - 1) + 1, window};
    case SHAPE_RING: return (live){i % n, (i + 1) % n, window};
    case SHAPE_ISLANDS: v = u / 4 * 4 + dice_below(d, 4); break;
    case SHAPE_CONTACTS: { /* groups of eight that people change with the window */
        uint32_t group = dice_below(d, n / 8);
        u = (group * 8 + dice_below(d, 8) + window / 6 * 3) % n;
        v = (group * 8 + dice_below(d, 8) + window / 6 * 3) % n;
        break;
    }
    default: v = dice_below(d, 20) == 0 ? dice_below(d, n) : (u + 1 + dice_below(d, 5)) % n;
    }
    return (live){u, u == v ? (u + 1) % n : v, window};
}

void shape_make(thole_context *context, const shape *s, thole_network **network, thole_windows **windows) {
    thole_clock clock = {.kind = THOLE_PLAIN, .unit = "s"};
    thole_builder *builder;
    thole_error error;
    dice d = {20310504};
    must(thole_builder_open(context, &clock, &builder, &error), &error);
    for (uint32_t i = 0; i < s->nodes; i++) {
        char name[16];
        uint32_t node;
        int n = snprintf(name, sizeof name, "%u", (unsigned)i);
        must(thole_builder_node(builder, name, (size_t)n, &node, &error), &error);
    }
    live *links = malloc(s->links * sizeof *links);
    for (uint32_t i = 0; links != NULL && i < s->links; i++)
        links[i] = fresh_link(&d, s, i, 0);
    for (uint32_t w = 1; links != NULL && w <= s->windows; w++)
        for (uint32_t i = 0; i < s->links; i++) {
            bool change = w == s->windows || (double)(dice_next(&d) >> 11) / 9007199254740992.0 < s->turnover;
            if (!change)
                continue;
            /* Rings and paths lose a link and have it back a window later. */
            bool gap = s->kind == SHAPE_RING || s->kind == SHAPE_PATH;
            thole_event event = {links[i].u, links[i].v, (int64_t)links[i].since * WINDOW, (int64_t)w * WINDOW};
            bool kept;
            if (event.start < event.finish)
                must(thole_builder_event(builder, event, &kept, &error), &error);
            links[i] = fresh_link(&d, s, i, w + gap);
        }
    free(links);
    must(thole_builder_finish(builder, network, &error), &error);
    must(thole_windows_sliding(context, 0, (int64_t)s->windows * WINDOW, WINDOW, WINDOW, windows, &error), &error);
}
