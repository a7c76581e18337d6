/* Properties that any barcode must have, on networks too large to judge by definition. */
#include <setjmp.h>
#include <stdarg.h>
#include <stddef.h>
#include <stdint.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

#include <cmocka.h>

#include "support/dice.h"
#include "support/plan.h"

/* ---- what the networks are -------------------------------------------------------------------- */

/* Some hundreds of cells a window, in all shapes, with every kind of bar. */
static const shape shapes[] = {
    {SHAPE_TIMETABLE, 60, 40, 70, 0.3}, {SHAPE_CONTACTS, 40, 40, 110, 0.3},
    {SHAPE_RING, 30, 60, 30, 0.1},      {SHAPE_PATH, 31, 60, 30, 0.3},
    {SHAPE_ISLANDS, 48, 40, 60, 0.4},   {SHAPE_FLICKER, 50, 40, 60, 1},
    {SHAPE_STAR, 60, 40, 40, 0.3},      {SHAPE_TIMETABLE, 20, 300, 22, 0.2},
    {SHAPE_CONTACTS, 24, 150, 90, 0.5},
};
enum { SHAPES = sizeof shapes / sizeof *shapes };

static thole_zigzag_options options_for(size_t turn, uint32_t dims) {
    static const thole_zigzag_options all[] = {
        {.radius_kind = THOLE_RADIUS_HOPS, .radius = 1, .join = THOLE_JOIN_UNION},
        {.radius_kind = THOLE_RADIUS_GRAPH, .join = THOLE_JOIN_INTERSECTION},
        {.radius_kind = THOLE_RADIUS_HOPS, .radius = 1, .join = THOLE_JOIN_INTERSECTION, .all_nodes = true},
        {.radius_kind = THOLE_RADIUS_HOPS, .radius = 2, .join = THOLE_JOIN_INTERSECTION},
        {.radius_kind = THOLE_RADIUS_GRAPH, .join = THOLE_JOIN_UNION, .all_nodes = true},
    };
    thole_zigzag_options out = all[turn % (sizeof all / sizeof *all)];
    out.dims = dims;
    return out;
}

/* All shapes with all options, or fewer with the multiplier CASES below 1. */
static size_t rounds(void) {
    return dice_cases(5 * SHAPES) < 5 * SHAPES ? (size_t)dice_cases(5 * SHAPES) : 5 * SHAPES;
}

static plan here, there; /* too large for the stack */

/* Neither where time is cut into blocks nor how many threads there are can be seen. */
static void blocks_and_threads_leave_no_trace(void **state) {
    (void)state;
    static const uint32_t blocks[] = {1, 2, 3, 5, 16, 100000};
    size_t kinds[4] = {0}, all = 0;
    for (size_t i = 0; i < rounds(); i++) {
        plan_shape(&shapes[i % SHAPES], i % 2 == 1, &here);
        thole_zigzag_options options = options_for(i, 7);
        bars base = plan_bars(&here, options, 1);
        for (size_t k = 0; k < base.n; k++)
            kinds[base.at[k].kind]++;
        all += base.n;
        for (size_t k = 0; k < 3; k++) {
            options.block = blocks[(i + 2 * k) % 6];
            bars_expect_same(bars_copy(base), plan_bars(&here, options, (int)(i + k) % 4 + 1),
                             "another block length");
        }
        bars_free(&base);
    }
    printf("%zu bars\n", all);
    for (int k = 0; k < 4; k++)
        assert_true(kinds[k] > (rounds() == 5 * SHAPES ? 100u : 0u));
}

/* A zigzag cut short has the bars cut short, closed where they are cut: a direct sum of intervals restricted
 * to a run of positions is the direct sum of the restricted intervals. */
static void fewer_windows_cut_bars_short(void **state) {
    (void)state;
    dice d = {dice_setting("SEED", 31)};
    for (size_t i = 0; i < rounds(); i++) {
        plan_shape(&shapes[i % SHAPES], i % 2 == 1, &here);
        thole_zigzag_options options = options_for(i, 7);
        uint32_t a = dice_below(&d, (uint32_t)here.windows), b = dice_below(&d, (uint32_t)here.windows);
        uint32_t low = 2 * (a < b ? a : b), high = 2 * (a < b ? b : a);
        bars whole = plan_bars(&here, options, 1), cut = bars_cut(whole, low, high);
        here.windows = high / 2 - low / 2 + 1;
        memmove(here.from, here.from + low / 2, here.windows * sizeof *here.from);
        memmove(here.to, here.to + low / 2, here.windows * sizeof *here.to);
        bars_expect_same(cut, plan_bars(&here, options, 1), "fewer windows");
        bars_free(&whole);
    }
}

/* Window i once more right after itself: both and their join have the same complex, so that whatever lives at
 * i lives at the two new positions, and what comes later comes two positions later. */
static void a_window_said_twice_only_stretches(void **state) {
    (void)state;
    dice d = {dice_setting("SEED", 32)};
    for (size_t i = 0; i < rounds(); i++) {
        plan_shape(&shapes[i % SHAPES], i % 2 == 1, &here);
        thole_zigzag_options options = options_for(i, 7);
        bars once = plan_bars(&here, options, 1);
        there = here;
        there.windows = 0;
        uint32_t place[2 * PLAN_WINDOWS][2]; /* where a position has gone: its first and last copy */
        for (size_t w = 0; w < here.windows; w++) {
            size_t copies = dice_below(&d, 4) == 0 ? 2 + dice_below(&d, 2) : 1;
            place[2 * w][0] = (uint32_t)(2 * there.windows);
            for (size_t k = 0; k < copies; k++) {
                there.from[there.windows] = here.from[w];
                there.to[there.windows++] = here.to[w];
            }
            place[2 * w][1] = (uint32_t)(2 * there.windows - 2);
            place[2 * w + 1][0] = place[2 * w + 1][1] = (uint32_t)(2 * there.windows - 1);
        }
        assert_true(there.windows > here.windows && there.windows <= PLAN_WINDOWS);
        for (size_t k = 0; k < once.n; k++) {
            once.at[k].first = place[once.at[k].first][0];
            once.at[k].last = place[once.at[k].last][1];
        }
        bars_expect_same(once, plan_bars(&there, options, 1), "windows twice");
    }
}

/* Only the order of times counts: stretched to the very ends of what a tick can be, the barcode stays. */
static void times_may_be_as_far_apart_as_they_go(void **state) {
    (void)state;
    for (size_t i = 0; i < SHAPES; i++) {
        plan_shape(&shapes[i], i % 2 == 1, &here);
        thole_zigzag_options options = options_for(i, 7);
        there = here;
        uint64_t most = 0;
        for (size_t k = 0; k < here.windows; k++)
            most = (uint64_t)here.to[k] > most ? (uint64_t)here.to[k] : most;
        for (size_t k = 0; k < here.events; k++)
            most = (uint64_t)here.event[k].finish > most ? (uint64_t)here.event[k].finish : most;
        uint64_t step = UINT64_MAX / most;
#define FAR(t)                                                                                               \
    ((int64_t)((uint64_t)(t) == most ? (uint64_t)INT64_MAX : (uint64_t)INT64_MIN + step * (uint64_t)(t)))
        for (size_t k = 0; k < here.windows; k++) {
            there.from[k] = FAR(here.from[k]);
            there.to[k] = FAR(here.to[k]);
        }
        for (size_t k = 0; k < here.events; k++) {
            there.event[k].start = FAR(here.event[k].start);
            there.event[k].finish = FAR(here.event[k].finish);
        }
#undef FAR
        assert_true(there.from[0] == INT64_MIN && there.to[there.windows - 1] > INT64_MAX / 2);
        bars_expect_same(plan_bars(&here, options, 1), plan_bars(&there, options, 2), "stretched time");
    }
}

/* Two copies that share no node: every bar twice. */
static void two_copies_double_every_bar(void **state) {
    (void)state;
    for (size_t i = 0; i < rounds(); i++) {
        plan_shape(&shapes[i % SHAPES], i % 2 == 1, &here);
        thole_zigzag_options options = options_for(i, 7);
        bars once = plan_bars(&here, options, 1),
             twice = {malloc((2 * once.n + 1) * sizeof *once.at), 2 * once.n};
        for (size_t k = 0; k < twice.n; k++)
            twice.at[k] = once.at[k / 2];
        for (size_t k = 0, n = here.events; k < n; k++) {
            thole_event e = here.event[k];
            plan_link(&here, e.from + here.nodes, e.to + here.nodes, e.start, e.finish);
        }
        here.nodes *= 2;
        bars_expect_same(twice, plan_bars(&here, options, 1), "two copies");
        bars_free(&once);
    }
}

/* A radius beyond the longest way in the network reaches no further. */
static void a_radius_beyond_everything_changes_nothing(void **state) {
    (void)state;
    shape s = {SHAPE_PATH, 9, 40, 8, 0.3};
    plan_shape(&s, false, &here);
    thole_zigzag_options options = {.radius_kind = THOLE_RADIUS_HOPS, .radius = 8, .dims = 7};
    bars far = plan_bars(&here, options, 1);
    assert_true(far.n > 20);
    options.radius = UINT32_MAX;
    bars_expect_same(far, plan_bars(&here, options, 1), "the highest radius");
}

/* Link every node below `nodes` with a new one, at all times. */
static void add_pole(plan *p, uint32_t nodes) {
    for (uint32_t v = 0; v < nodes; v++)
        plan_link(p, v, p->nodes, p->from[0], p->to[p->windows - 1]);
    p->nodes++;
}

/* Under two poles that are linked with everything but each other a clique complex becomes its suspension:
 * homology moves up by one dimension, and of the pieces one is no longer told (reduced homology of a
 * suspension, a handbook fact: Hatcher, "Algebraic Topology", 2002, section 2.1, exercise 20). Under one pole
 * it is a cone, and nothing is left but one piece. */
static void poles_lift_bars_by_a_dimension(void **state) {
    (void)state;
    for (size_t i = 0; i < 2 * SHAPES && i < rounds(); i++) {
        shape s = shapes[i % SHAPES];
        s.windows = s.windows < 25 ? s.windows : 25;
        plan_shape(&s, i % 2 == 1, &here);
        thole_zigzag_options options = {
            .radius_kind = THOLE_RADIUS_HOPS, .radius = 1, .dims = 3, .all_nodes = true};
        options.join = i / 2 % 2 == 0 ? THOLE_JOIN_UNION : THOLE_JOIN_INTERSECTION;
        there = here;
        add_pole(&there, here.nodes);
        options.dims = 7;
        bars cone = plan_bars(&there, options, 1);
        assert_int_equal(cone.n, 1);
        assert_true(cone.at[0].dim == 0 && cone.at[0].first == 0 && cone.at[0].last == 2 * here.windows - 2);
        options.dims = 3;
        for (int lift = 0; lift < 2; lift++) {
            bars low = plan_bars(&here, options, 1);
            bool gone = false;
            for (size_t k = 0; k < low.n; k++) {
                bool all = low.at[k].first == 0 && low.at[k].last == 2 * here.windows - 2;
                if (all && low.at[k].dim == 0 && !gone)
                    gone = true; /* the piece of the suspension itself */
                else
                    low.at[k].dim++;
            }
            assert_true(gone);
            uint32_t nodes = here.nodes;
            add_pole(&here, nodes);
            add_pole(&here, nodes);
            options.dims = 2 * options.dims + 1;
            bars_expect_same(low, plan_bars(&here, options, 1), "a suspension");
        }
        bars_free(&cone);
    }
}

/* ---- unions against intersections ----------------------------------------------------------- */

/* See bars_through_diamonds: no clique of a graph is in a union without being in one of the two. */
static void unions_and_intersections_tell_the_same(void **state) {
    (void)state;
    size_t joins_only = 0;
    for (size_t i = 0; i < 2 * SHAPES && i < rounds(); i++) {
        plan_shape(&shapes[i % SHAPES], i >= SHAPES, &here);
        thole_zigzag_options options = {.radius_kind = THOLE_RADIUS_GRAPH, .dims = 3, .all_nodes = true};
        bars of_unions = plan_bars(&here, options, 1);
        for (size_t k = 0; k < of_unions.n; k++)
            joins_only += of_unions.at[k].first == of_unions.at[k].last && of_unions.at[k].first % 2 == 1;
        options.join = THOLE_JOIN_INTERSECTION;
        bars_expect_same(bars_through_diamonds(of_unions, (uint32_t)(2 * here.windows - 2)),
                         plan_bars(&here, options, 2), "intersections");
        bars_free(&of_unions);
    }
    assert_true(joins_only > (rounds() == 5 * SHAPES ? 100u : 0u));
}

int main(void) {
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(blocks_and_threads_leave_no_trace),
        cmocka_unit_test(fewer_windows_cut_bars_short),
        cmocka_unit_test(a_window_said_twice_only_stretches),
        cmocka_unit_test(times_may_be_as_far_apart_as_they_go),
        cmocka_unit_test(two_copies_double_every_bar),
        cmocka_unit_test(a_radius_beyond_everything_changes_nothing),
        cmocka_unit_test(poles_lift_bars_by_a_dimension),
        cmocka_unit_test(unions_and_intersections_tell_the_same),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
