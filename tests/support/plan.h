/* Networks as lists of events that a test can change, and barcodes as lists of bars. */
#ifndef PLAN_H
#define PLAN_H

#include "bench/shapes.h"

enum { PLAN_EVENTS = 80000, PLAN_WINDOWS = 2100 };

/* Large: keep it static. */
typedef struct plan {
    uint32_t nodes; /* named "0", "1", ... */
    size_t events, windows;
    thole_event event[PLAN_EVENTS];
    int64_t from[PLAN_WINDOWS], to[PLAN_WINDOWS];
} plan;

/* A shape's network and windows; `overlap`: each window longer by half of the next one. */
void plan_shape(const shape *s, bool overlap, plan *out);

void plan_link(plan *p, uint32_t u, uint32_t v, int64_t start, int64_t finish);

/* Bars of a barcode, malloc'ed. */
typedef struct bars {
    thole_bar *at;
    size_t n;
} bars;

/* The core's barcode; the test fails where there is none, or where memory stays in use. */
bars plan_bars(const plan *p, thole_zigzag_options options, int threads);

bars bars_copy(bars b);
void bars_free(bars *b);

/* What positions low to high see of the bars: cut to them, counted from low, and closed where cut. In the
 * order dim, first, last. */
bars bars_cut(bars b, uint32_t low, uint32_t high);

/* From the bars of a graph with union joins and all nodes kept (`last`: its last position) those with
 * intersections. Where a join is exactly the union of its two windows, Mayer and Vietoris say how intervals
 * change when the intersection takes its place: one that begins or ends at a window or the join beside it
 * moves to the other of the two, one that is in the join alone goes down by a dimension (the strong diamond
 * principle: Carlsson and de Silva, "Zigzag persistence", Found. Comput. Math. 10, 2010). Fails when a piece
 * is in a join alone. */
bars bars_through_diamonds(bars of_unions, uint32_t last);

/* Fail, with `what`, unless both have the same bars as often, in whatever order. Frees both. */
void bars_expect_same(bars want, bars got, const char *what);

#endif
