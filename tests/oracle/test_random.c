/* Random networks against the judge.
 *
 * CASES multiplies their number, SEED sets where they begin; a case that fails is made smaller while it
 * still fails, and printed. */
#include <setjmp.h>
#include <stdarg.h>
#include <stddef.h>
#include <stdint.h>
#include <stdio.h>

#include <cmocka.h>

#include "support/dice.h"
#include "support/run_case.h"

enum { NETWORKS = 3000 };

static void random_windows(dice *d, judge_case *c, int span) {
    c->windows = dice_from(d, 1, 8);
    int style = dice_from(d, 0, 3);
    for (int i = 0; i < c->windows; i++) {
        if (style == 0) { /* one after the other */
            c->from[i] = i * span / c->windows;
            c->to[i] = c->from[i] + (span / c->windows > 0 ? span / c->windows : 1);
        } else if (style == 1) { /* half overlapping */
            c->from[i] = i * span / (c->windows + 1);
            c->to[i] = c->from[i] + 2 * span / (c->windows + 1) + 1;
        } else { /* gaps, overlaps, windows inside windows, the same one twice */
            c->from[i] = dice_from(d, 0, span);
            c->to[i] = c->from[i] + dice_from(d, 1, style == 2 ? 8 : 30);
        }
    }
    for (int i = 1; i < c->windows; i++) /* by start, then finish */
        for (int k = i; k > 0 && (c->from[k] < c->from[k - 1] || (c->from[k] == c->from[k - 1] && c->to[k] < c->to[k - 1])); k--) {
            long a = c->from[k], b = c->to[k];
            c->from[k] = c->from[k - 1], c->to[k] = c->to[k - 1];
            c->from[k - 1] = a, c->to[k - 1] = b;
        }
}

static void random_case(dice *d, judge_case *c) {
    static const int most_events[] = {8, 25, 60, 110, 200};
    static const int radii[] = {-1, -1, 0, 1, 1, 1, 2, 2, 3};
    static const unsigned dims[] = {1, 2, 3, 3, 7, 7, 7, 4, 6, 15};
    static const int stays[] = {0, 1, 2, 5, 10, 20, 40};
    const int span = 40;
    *c = (judge_case){.nodes = dice_from(d, 3, 9)};
    random_windows(d, c, span);
    int most = most_events[dice_below(d, 5)];
    c->events = dice_from(d, most / 4, most);
    for (int i = 0; i < c->events; i++) {
        judge_event *e = &c->event[i];
        e->u = (int)dice_below(d, (uint32_t)c->nodes);
        e->v = (int)dice_below(d, (uint32_t)c->nodes); /* now and then a self-loop */
        e->start = dice_from(d, 0, span);
        e->finish = e->start + stays[dice_below(d, 7)];
        if (i > 0 && dice_below(d, 4) == 0) { /* a link that returns */
            e->u = c->event[i - 1].v;
            e->v = c->event[i - 1].u;
        }
    }
    c->radius = radii[dice_below(d, 9)];
    c->intersection = dice_below(d, 2) == 1;
    c->all_nodes = dice_below(d, 5) == 0;
    c->dims = dims[dice_below(d, 10)];
    if (c->nodes > 7 && c->dims == 15)
        c->dims = 7;
}

/* What went wrong with a case, or NULL. */
static const char *verdict(const judge_case *c, uint32_t block, int threads, bool show) {
    static judge_bar want[JUDGE_BARS], got[JUDGE_BARS];
    static char text[1200];
    thole_memory memory = {0};
    thole_context context = {.memory = &memory, .threads = threads};
    thole_error error = {.status = THOLE_OK, .text = ""};
    size_t n = judge_barcode(c, want), m = run_case_bars(&context, c, block, got, &error);
    if (m == SIZE_MAX) {
        snprintf(text, sizeof text, "it refuses: %s", error.text);
        return text;
    }
    if (show && !run_case_same(want, n, got, m)) {
        run_case_print_bars("the judge", want, n);
        run_case_print_bars("the core ", got, m);
    }
    if (!run_case_same(want, n, got, m))
        return "the bars differ";
    return atomic_load(&memory.used) != 0 ? "memory is left in use" : NULL;
}

/* Leave out events and windows while the verdict stays bad. */
static void make_smaller(judge_case *c, uint32_t block, int threads) {
    for (bool again = true; again;) {
        again = false;
        for (int i = 0; i < c->events; i++) {
            judge_case less = *c;
            less.event[i] = less.event[--less.events];
            if (verdict(&less, block, threads, false) != NULL) {
                *c = less;
                again = true;
            }
        }
        for (int i = 0; i < c->windows && c->windows > 1; i++) {
            judge_case less = *c;
            for (int k = i; k + 1 < less.windows; k++) {
                less.from[k] = less.from[k + 1];
                less.to[k] = less.to[k + 1];
            }
            less.windows--;
            if (verdict(&less, block, threads, false) != NULL) {
                *c = less;
                again = true;
            }
        }
    }
}

static void random_networks_agree_with_the_judge(void **state) {
    (void)state;
    static const uint32_t blocks[] = {0, 1, 2, 3, 4, 5, 7, 100};
    uint64_t seed = dice_setting("SEED", 20310504), cases = dice_cases(NETWORKS);
    printf("seed %llu, %llu networks\n", (unsigned long long)seed, (unsigned long long)cases);
    uint64_t bars = 0;
    for (uint64_t i = 0; i < cases; i++) {
        dice d = {seed + i * UINT64_C(1000003)};
        judge_case c;
        random_case(&d, &c);
        uint32_t block = blocks[dice_below(&d, 8)];
        int threads = dice_from(&d, 1, 2);
        const char *what = verdict(&c, block, threads, false);
        if (what == NULL) {
            static judge_bar want[JUDGE_BARS];
            bars += judge_barcode(&c, want);
            continue;
        }
        make_smaller(&c, block, threads);
        what = verdict(&c, block, threads, true);
        judge_print(&c);
        fail_msg("case %llu of seed %llu, block %u, threads %d: %s", (unsigned long long)i, (unsigned long long)seed,
                 (unsigned)block, threads, what);
    }
    printf("%llu bars\n", (unsigned long long)bars);
    assert_true(bars > cases); /* the cases say something */
}

/* ---- the judge itself, against what a hand can work out -------------------------------- */

static void expect(const judge_case *c, size_t n, const judge_bar *bars) {
    judge_bar got[JUDGE_BARS];
    size_t m = judge_barcode(c, got);
    if (!run_case_same(bars, n, got, m)) {
        run_case_print_bars("by hand  ", bars, n);
        run_case_print_bars("the judge", got, m);
        fail_msg("the judge is wrong");
    }
    const char *what = verdict(c, 0, 1, true);
    if (what != NULL)
        fail_msg("%s", what);
}

/* Two places linked in windows 1 and 3, not in 2. Each link makes a component of its own: it is there in its window and
 * the join beside it, and nothing connects it to the other. */
static void a_link_that_returns(void **state) {
    (void)state;
    judge_case c = {.nodes = 2, .events = 2, .windows = 3, .event = {{0, 1, 0, 1}, {0, 1, 2, 3}}, .from = {0, 1, 2}, .to = {1, 2, 3},
                    .radius = 1, .dims = 3};
    expect(&c, 2, (judge_bar[]){{0, 0, 1, false, false}, {0, 3, 4, false, false}});
}

/* A square of four links whose last comes in window 2 and leaves in 3: before and after, a path. Its loop is there from the join
 * that adds the link (position 1) to the join that still has it (position 3). */
static void a_square_that_opens_and_closes(void **state) {
    (void)state;
    judge_case c = {.nodes = 4, .events = 4, .windows = 3, .event = {{0, 1, 0, 3}, {1, 2, 0, 3}, {2, 3, 0, 3}, {3, 0, 1, 2}},
                    .from = {0, 1, 2}, .to = {1, 2, 3}, .radius = 1, .dims = 3};
    expect(&c, 2, (judge_bar[]){{0, 0, 4, false, false}, {1, 1, 3, false, false}});
}

/* A triangle is a loop of the graph and filled at radius 1. */
static void a_triangle(void **state) {
    (void)state;
    judge_case c = {.nodes = 3, .events = 3, .windows = 1, .event = {{0, 1, 0, 1}, {1, 2, 0, 1}, {2, 0, 0, 1}}, .from = {0}, .to = {1},
                    .radius = -1, .dims = 3};
    expect(&c, 2, (judge_bar[]){{0, 0, 0, false, false}, {1, 0, 0, false, false}});
    c.radius = 1;
    expect(&c, 1, (judge_bar[]){{0, 0, 0, false, false}});
}

/* Two links with a place in common, the middle one gone in window 2: 0-1-2-3 falls apart into 0-1 and 2-3 and joins again.
 * One component lasts throughout; the other part is there only while the middle link is not: born by its deletion at position
 * 2, killed by its addition at 3: open at both ends, at position 2 alone. */
static void two_parts_for_a_while(void **state) {
    (void)state;
    judge_case c = {.nodes = 4, .events = 4, .windows = 3, .event = {{0, 1, 0, 3}, {2, 3, 0, 3}, {1, 2, 0, 1}, {1, 2, 2, 3}},
                    .from = {0, 1, 2}, .to = {1, 2, 3}, .radius = 1, .dims = 1};
    expect(&c, 2, (judge_bar[]){{0, 0, 4, false, false}, {0, 2, 2, true, true}});
}

/* A loop killed by its chord: a square in window 1, both triangles filled from window 2 on at radius 1. The chord comes with
 * the join: closed at its birth (there from the start), open at its death. */
static void a_loop_that_is_filled(void **state) {
    (void)state;
    judge_case c = {.nodes = 4, .events = 5, .windows = 2, .event = {{0, 1, 0, 2}, {1, 2, 0, 2}, {2, 3, 0, 2}, {3, 0, 0, 2}, {0, 2, 1, 2}},
                    .from = {0, 1}, .to = {1, 2}, .radius = 1, .dims = 2};
    expect(&c, 1, (judge_bar[]){{1, 0, 0, false, true}});
}

/* At an intersection join only what both windows share is left. The two windows share the link 0-1 only: 2 is in window 1
 * through 1-2 and in window 2 through 0-2, but at the join it has no link, so it is not there. The loop of neither closes. */
static void an_intersection(void **state) {
    (void)state;
    judge_case c = {.nodes = 3, .events = 3, .windows = 2, .event = {{0, 1, 0, 2}, {1, 2, 0, 1}, {0, 2, 1, 2}}, .from = {0, 1}, .to = {1, 2},
                    .radius = -1, .dims = 3, .intersection = true};
    expect(&c, 1, (judge_bar[]){{0, 0, 2, false, false}});
    c.all_nodes = true; /* now 2 is a part of its own at the join: there by a deletion, gone by an addition */
    expect(&c, 2, (judge_bar[]){{0, 0, 2, false, false}, {0, 1, 1, true, true}});
}

int main(void) {
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(a_link_that_returns),   cmocka_unit_test(a_square_that_opens_and_closes),
        cmocka_unit_test(a_triangle),            cmocka_unit_test(two_parts_for_a_while),
        cmocka_unit_test(a_loop_that_is_filled), cmocka_unit_test(an_intersection),
        cmocka_unit_test(random_networks_agree_with_the_judge),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
