/* Complexes whose homology is in the literature, and properties that any barcode must have. */
#include <setjmp.h>
#include <stdarg.h>
#include <stddef.h>
#include <stdint.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

#include <cmocka.h>

#include "support/dice.h"
#include "support/run_case.h"

/* ---- clique complexes of powers of cycles ------------------------------------------------------ */

/* An n-cycle in three windows; in a fourth the link between its first two nodes is gone. */
static judge_case broken_cycle(int n, int radius, unsigned dims) {
    judge_case c = {
        .nodes = n, .windows = 4, .from = {0, 1, 2, 3}, .to = {1, 2, 3, 4}, .radius = radius, .dims = dims};
    for (int i = 0; i < n; i++)
        c.event[c.events++] = (judge_event){i, (i + 1) % n, 0, i == 0 ? 3 : 4};
    return c;
}

/* Bars of dimension p alive while the cycle is whole: spheres of that dimension, `many` of them. When the
 * cycle breaks its power becomes that of a path, which is contractible (a tree's Rips complexes are), so they
 * end there. */
static void expect_spheres(int n, int radius, int p, size_t many) {
    judge_case c = broken_cycle(n, radius, 15);
    judge_bar bars[JUDGE_BARS];
    thole_memory memory = {0};
    thole_context context = {.memory = &memory, .threads = 1};
    thole_error error = {.text = ""};
    size_t m = run_case_bars(&context, &c, 0, bars, &error), found = 0;
    if (m == SIZE_MAX)
        fail_msg("%s", error.text);
    for (size_t i = 0; i < m; i++) {
        if (bars[i].dim == 0) { /* one piece all the time */
            assert_int_equal(bars[i].first, 0);
            assert_int_equal(bars[i].last, 6);
            continue;
        }
        assert_int_equal(bars[i].dim, p);
        assert_int_equal(bars[i].first, 0);
        assert_int_equal(bars[i].last, 5); /* the join of windows 3 and 4 still has the link */
        found++;
    }
    assert_int_equal(found, many);
    assert_int_equal(m, many + 1);
}

/* Adamaszek, "Clique complexes and graph powers", Israel Journal of Mathematics 196 (2013): the complex of
 * the n-cycle at hop radius r is a circle for 0 < r/n < 1/3, a wedge of n - 2r - 1 two-spheres at 1/3, a
 * three-sphere for 1/3 < r/n < 2/5, and contractible where every two nodes are near. */
static void powers_of_cycles(void **state) {
    (void)state;
    static const struct {
        int n, r;
    } circles[] = {{4, 1}, {5, 1}, {7, 1}, {7, 2}, {8, 2}, {10, 3}, {11, 3}, {12, 3}};
    for (size_t i = 0; i < sizeof circles / sizeof *circles; i++)
        expect_spheres(circles[i].n, circles[i].r, 1, 1);
    expect_spheres(6, 2, 2, 1);
    expect_spheres(9, 3, 2, 2);
    expect_spheres(12, 4, 2, 3);
    expect_spheres(8, 3, 3, 1);
    expect_spheres(11, 4, 3, 1);
    expect_spheres(5, 2, 1, 0);
    expect_spheres(7, 3, 1, 0);
}

/* ---- a filtration that only grows ------------------------------------------------------------------ */

enum { GROWING = 300, MOST_CELLS = 4096 };

/* Where a cell that is new in window w is first there: at the join before it, which has all that either
 * window has; an intersection has what the window before it has. */
static int arrival(const judge_case *c, int w) { return w == 0 ? 0 : c->intersection ? 2 * w : 2 * w - 1; }

/* Ordinary persistence by the textbook column algorithm (Edelsbrunner, Letscher and Zomorodian, "Topological
 * persistence and simplification", 2002), on the cells by the window that they first appear in. */
static size_t ordinary(const judge_case *c, judge_bar *out) {
    static judge_simplex cell[MOST_CELLS];
    static int window[MOST_CELLS], low[MOST_CELLS];
    static bool column[MOST_CELLS][MOST_CELLS / 8], killed[MOST_CELLS];
    size_t n = 0;
    for (int w = 0; w < c->windows; w++)
        for (int d = 0; d <= 3; d++) {
            judge_simplex *now;
            size_t m = judge_simplices(c, 2 * w, d, &now);
            for (size_t i = 0; i < m; i++) {
                bool old = false;
                for (size_t k = 0; !old && k < n; k++)
                    old = cell[k] == now[i];
                if (!old) {
                    assert_true(n < MOST_CELLS / 8);
                    window[n] = w;
                    cell[n++] = now[i];
                }
            }
            free(now);
        }
    memset(column, 0, sizeof column);
    memset(killed, 0, sizeof killed);
    for (size_t j = 0; j < n; j++) {
        for (size_t i = 0; i < j; i++) /* faces: one node less */
            column[j][i] = (cell[i] & cell[j]) == cell[i] &&
                           __builtin_popcount(cell[i]) + 1 == __builtin_popcount(cell[j]);
        for (bool again = true; again;) {
            again = false;
            low[j] = -1;
            for (size_t i = 0; i < j; i++)
                if (column[j][i])
                    low[j] = (int)i;
            for (size_t k = 0; low[j] >= 0 && k < j && !again; k++)
                if (low[k] == low[j]) {
                    for (size_t i = 0; i < n; i++)
                        column[j][i] ^= column[k][i];
                    again = true;
                }
        }
        if (low[j] >= 0)
            killed[low[j]] = true;
    }
    size_t m = 0;
    for (size_t j = 0; j < n; j++) {
        int last = 2 * c->windows - 2;
        if (low[j] < 0 && !killed[j] && __builtin_popcount(cell[j]) <= 3) /* lives to the end */
            out[m++] =
                (judge_bar){__builtin_popcount(cell[j]) - 1, arrival(c, window[j]), last, false, false};
        if (low[j] >= 0 && window[low[j]] < window[j]) {
            int first = arrival(c, window[low[j]]);
            out[m++] = (judge_bar){__builtin_popcount(cell[low[j]]) - 1, first, arrival(c, window[j]) - 1,
                                   false, true};
        }
    }
    return m;
}

static int by_place(const void *x, const void *y) {
    const judge_bar *a = x, *b = y;
    int keys[][2] = {{a->dim, b->dim}, {a->first, b->first}, {a->last, b->last}, {a->open_end, b->open_end}};
    for (size_t i = 0; i < 4; i++)
        if (keys[i][0] != keys[i][1])
            return keys[i][0] < keys[i][1] ? -1 : 1;
    return 0;
}

static void growth_is_ordinary_persistence(void **state) {
    (void)state;
    uint64_t seed = dice_setting("SEED", 99), cases = dice_cases(GROWING), bars = 0;
    printf("seed %llu, %llu networks\n", (unsigned long long)seed, (unsigned long long)cases);
    for (uint64_t i = 0; i < cases; i++) {
        dice d = {seed + i * UINT64_C(1000003)};
        judge_case c = {.nodes = dice_from(&d, 3, 8), .windows = dice_from(&d, 2, 8), .dims = 7};
        c.radius = dice_below(&d, 2) == 0 ? 1 : dice_from(&d, -1, 3);
        c.intersection = dice_below(&d, 3) == 0;
        for (int w = 0; w < c.windows; w++) {
            c.from[w] = w;
            c.to[w] = w + 1;
        }
        c.events = dice_from(&d, 2, 24);
        for (int k = 0; k < c.events; k++) /* what comes stays */
            c.event[k] =
                (judge_event){(int)dice_below(&d, (uint32_t)c.nodes), (int)dice_below(&d, (uint32_t)c.nodes),
                              dice_from(&d, 0, c.windows - 1), c.windows};
        static judge_bar want[JUDGE_BARS], got[JUDGE_BARS];
        thole_memory memory = {0};
        thole_context context = {.memory = &memory, .threads = 1};
        thole_error error = {.text = ""};
        size_t n = ordinary(&c, want),
               m = run_case_bars(&context, &c, (uint32_t)dice_from(&d, 0, 4), got, &error);
        qsort(want, n, sizeof *want, by_place);
        qsort(got, m, sizeof *got, by_place);
        if (!run_case_same(want, n, got, m)) {
            judge_print(&c);
            run_case_print_bars("ordinary", want, n);
            run_case_print_bars("zigzag  ", got, m);
            fail_msg("case %llu of seed %llu", (unsigned long long)i, (unsigned long long)seed);
        }
        bars += n;
    }
    printf("%llu bars\n", (unsigned long long)bars);
    assert_true(bars > cases);
}

/* ---- properties --------------------------------------------------------------------------------------- */

static judge_case random_case(dice *d) {
    judge_case c = {.nodes = dice_from(d, 3, 10),
                    .windows = dice_from(d, 1, 10),
                    .radius = dice_from(d, -1, 2),
                    .dims = 7};
    for (int w = 0; w < c.windows; w++) {
        c.from[w] = 5 * w;
        c.to[w] = 5 * w + dice_from(d, 3, 9);
        if (w > 0 && c.to[w] < c.to[w - 1])
            c.to[w] = c.to[w - 1];
    }
    c.events = dice_from(d, 5, 90);
    for (int k = 0; k < c.events; k++) {
        int start = dice_from(d, 0, 50);
        c.event[k] = (judge_event){(int)dice_below(d, (uint32_t)c.nodes),
                                   (int)dice_below(d, (uint32_t)c.nodes), start, start + dice_from(d, 1, 12)};
    }
    c.intersection = dice_below(d, 2) == 1;
    return c;
}

/* Time turned round turns bars round: first and last change places, and so do births and deaths by addition
 * and deletion. */
static void time_turned_round(void **state) {
    (void)state;
    uint64_t cases = dice_cases(300), bars = 0;
    for (uint64_t i = 0; i < cases; i++) {
        dice d = {dice_setting("SEED", 5) + i * UINT64_C(1000003)};
        judge_case c = random_case(&d), back = c;
        static judge_bar a[JUDGE_BARS], b[JUDGE_BARS];
        for (int w = 0; w < c.windows; w++) {
            back.from[w] = 100 - c.to[c.windows - 1 - w];
            back.to[w] = 100 - c.from[c.windows - 1 - w];
        }
        for (int k = 0; k < c.events; k++) {
            back.event[k].start = 100 - c.event[k].finish;
            back.event[k].finish = 100 - c.event[k].start;
        }
        thole_memory memory = {0};
        thole_context context = {.memory = &memory, .threads = 1};
        thole_error error;
        size_t n = run_case_bars(&context, &c, 0, a, &error),
               m = run_case_bars(&context, &back, 0, b, &error);
        int last = 2 * c.windows - 2;
        for (size_t k = 0; k < m; k++)
            b[k] = (judge_bar){b[k].dim, last - b[k].last, last - b[k].first, b[k].open_end, b[k].open_start};
        qsort(a, n, sizeof *a, by_place);
        qsort(b, m, sizeof *b, by_place);
        /* equal places with different open starts may come in either order: count them instead */
        assert_int_equal(n, m);
        long balance = 0;
        for (size_t k = 0; k < n; k++) {
            assert_int_equal(by_place(&a[k], &b[k]), 0);
            balance += (long)a[k].open_start - (long)b[k].open_start;
        }
        assert_int_equal(balance, 0);
        bars += n;
    }
    assert_true(bars > 2 * cases);
}

/* Other numbers for the nodes, the same barcode. */
static void names_do_not_matter(void **state) {
    (void)state;
    uint64_t cases = dice_cases(300);
    for (uint64_t i = 0; i < cases; i++) {
        dice d = {dice_setting("SEED", 6) + i * UINT64_C(1000003)};
        judge_case c = random_case(&d), other = c;
        int name[JUDGE_NODES];
        for (int v = 0; v < c.nodes; v++) {
            int at = (int)dice_below(&d, (uint32_t)v + 1);
            name[v] = name[at];
            name[at] = v;
        }
        for (int k = 0; k < c.events; k++) {
            other.event[k].u = name[c.event[k].v];
            other.event[k].v = name[c.event[k].u];
        }
        static judge_bar a[JUDGE_BARS], b[JUDGE_BARS];
        thole_memory memory = {0};
        thole_context context = {.memory = &memory, .threads = 1};
        thole_error error;
        size_t n = run_case_bars(&context, &c, 0, a, &error),
               m = run_case_bars(&context, &other, 0, b, &error);
        assert_true(run_case_same(a, n, b, m));
    }
}

int main(void) {
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(powers_of_cycles), cmocka_unit_test(growth_is_ordinary_persistence),
        cmocka_unit_test(time_turned_round), cmocka_unit_test(names_do_not_matter)};
    return cmocka_run_group_tests(tests, NULL, NULL);
}
