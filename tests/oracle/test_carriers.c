/* Carriers of bars on random networks: at every position they are cycles of the complex there, a basis of its
 * homology together, a boundary where an addition is about to kill the bar, and one where a deletion has just
 * borne it. */
#include <setjmp.h>
#include <stdarg.h>
#include <stddef.h>
#include <stdint.h>
#include <stdio.h>
#include <stdlib.h>

#include <cmocka.h>

#include "support/dice.h"
#include "support/run_case.h"

enum { NETWORKS = 150, MOST_CHAIN = 512, MOST_BARS = 256 };

static void random_case(dice *d, judge_case *c) {
    static const int radii[] = {-1, 1, 1, 2};
    *c = (judge_case){.nodes = dice_from(d, 4, 9), .windows = dice_from(d, 1, 6), .dims = 3};
    for (int i = 0; i < c->windows; i++) {
        c->from[i] = 6 * i;
        c->to[i] = 6 * i + dice_from(d, 4, 9);
    }
    c->events = dice_from(d, 4, 60);
    for (int i = 0; i < c->events; i++) {
        int start = dice_from(d, 0, 36);
        c->event[i] =
            (judge_event){(int)dice_below(d, (uint32_t)c->nodes), (int)dice_below(d, (uint32_t)c->nodes),
                          start, start + dice_from(d, 0, 9)};
    }
    c->radius = radii[dice_below(d, 4)];
    c->intersection = dice_below(d, 2) == 1;
}

typedef struct chain {
    judge_simplex cell[MOST_CHAIN];
    size_t n;
} chain;

static void toggle(chain *x, judge_simplex s) {
    for (size_t i = 0; i < x->n; i++)
        if (x->cell[i] == s) {
            x->cell[i] = x->cell[--x->n];
            return;
        }
    assert_true(x->n < MOST_CHAIN);
    x->cell[x->n++] = s;
}

static bool there(const judge_case *c, int position, int p, const chain *x) {
    judge_simplex *all;
    size_t n = judge_simplices(c, position, p, &all);
    bool fine = true;
    for (size_t i = 0; i < x->n; i++) {
        bool found = false;
        for (size_t k = 0; k < n; k++)
            found = found || all[k] == x->cell[i];
        fine = fine && found;
    }
    free(all);
    return fine;
}

static chain chain_of(const thole_carriers *carriers, size_t i, uint32_t dim) {
    chain x = {.n = 0};
    for (size_t part = 0; part < thole_carriers_parts(carriers, i); part++) {
        size_t n;
        const uint32_t *nodes = thole_carriers_part(carriers, i, part, &n);
        assert_true(n >= (dim == 1 ? 3u : 1u));
        if (dim == 0)
            toggle(&x, (judge_simplex)(1u << nodes[0]));
        for (size_t k = 0; dim == 1 && k < n; k++)
            toggle(&x, (judge_simplex)(1u << nodes[k] | 1u << nodes[(k + 1) % n]));
    }
    return x;
}

static uint64_t check_position(thole_context *context, const judge_case *c, const thole_network *network,
                               const thole_barcode *barcode, int t, uint32_t dim) {
    static chain chains[MOST_BARS];
    const judge_simplex *lists[MOST_BARS];
    size_t lengths[MOST_BARS];
    thole_error error;
    thole_carriers *carriers;
    int positions = 2 * c->windows - 1;
    assert_int_equal(thole_barcode_carriers(context, barcode, network, (size_t)t, dim, &carriers, &error),
                     THOLE_OK);
    size_t n = thole_carriers_count(carriers);
    assert_int_equal(n, judge_betti(c, t, (int)dim));
    for (size_t i = 0; i < n; i++) {
        chains[i] = chain_of(carriers, i, dim);
        lists[i] = chains[i].cell;
        lengths[i] = chains[i].n;
        assert_true(there(c, t, (int)dim, &chains[i]));
        /* independent of those before it, and so no boundary */
        assert_false(judge_spans(c, t, (int)dim, chains[i].cell, chains[i].n, lists, lengths, i));
        thole_bar bar = thole_barcode_bar(barcode, thole_carriers_bar(carriers, i));
        assert_true((int)bar.first <= t && t <= (int)bar.last && bar.dim == dim);
        bool into_bigger = t + 1 < positions && (t % 2 == 0) != c->intersection;
        bool from_bigger = t > 0 && ((t - 1) % 2 == 0) == c->intersection;
        if ((int)bar.last == t && into_bigger)
            assert_true(judge_spans(c, t + 1, (int)dim, chains[i].cell, chains[i].n, NULL, NULL, 0));
        if ((int)bar.first == t && from_bigger)
            assert_true(judge_spans(c, t - 1, (int)dim, chains[i].cell, chains[i].n, NULL, NULL, 0));
    }
    thole_carriers_release(carriers);
    return n;
}

static void carriers_carry(void **state) {
    (void)state;
    uint64_t seed = dice_setting("SEED", 7), cases = dice_cases(NETWORKS), carriers = 0;
    printf("seed %llu, %llu networks\n", (unsigned long long)seed, (unsigned long long)cases);
    for (uint64_t i = 0; i < cases; i++) {
        dice d = {seed + i * UINT64_C(1000003)};
        judge_case c;
        random_case(&d, &c);
        thole_memory memory = {0};
        thole_context context = {.memory = &memory, .threads = dice_from(&d, 1, 2)};
        thole_network *network;
        thole_windows *windows;
        thole_barcode *barcode;
        thole_error error;
        run_case_make(&context, &c, &network, &windows);
        thole_zigzag_options options = run_case_options(&c, (uint32_t)dice_from(&d, 0, 4));
        assert_int_equal(thole_zigzag(&context, network, windows, &options, &barcode, &error), THOLE_OK);
        for (int t = 0; t < 2 * c.windows - 1; t++)
            for (uint32_t dim = 0; dim < 2; dim++)
                carriers += check_position(&context, &c, network, barcode, t, dim);
        thole_barcode_release(barcode);
        thole_network_release(network);
        thole_windows_release(windows);
        assert_int_equal(atomic_load(&memory.used), 0);
    }
    printf("%llu carriers\n", (unsigned long long)carriers);
    assert_true(carriers > 5 * cases);
}

/* A pentagon with a tail: its loop is the five nodes in order, whatever hangs on it; and with a chord that
 * fills a triangle at radius 1, the loop takes the chord and leaves the corner out. */
static void a_loop_is_told_in_order(void **state) {
    (void)state;
    judge_case c = {
        .nodes = 7,
        .events = 6,
        .windows = 1,
        .from = {0},
        .to = {1},
        .radius = 1,
        .dims = 2,
        .event = {{0, 1, 0, 1}, {1, 2, 0, 1}, {2, 3, 0, 1}, {3, 4, 0, 1}, {4, 0, 0, 1}, {2, 6, 0, 1}}};
    for (int chord = 0; chord < 2; chord++) {
        if (chord == 1)
            c.event[c.events++] = (judge_event){1, 3, 0, 1};
        thole_memory memory = {0};
        thole_context context = {.memory = &memory, .threads = 1};
        thole_network *network;
        thole_windows *windows;
        thole_barcode *barcode;
        thole_carriers *carriers;
        thole_error error;
        run_case_make(&context, &c, &network, &windows);
        thole_zigzag_options options = run_case_options(&c, 0);
        assert_int_equal(thole_zigzag(&context, network, windows, &options, &barcode, &error), THOLE_OK);
        assert_int_equal(thole_barcode_carriers(&context, barcode, network, 0, 1, &carriers, &error),
                         THOLE_OK);
        assert_int_equal(thole_carriers_count(carriers), 1);
        assert_int_equal(thole_carriers_parts(carriers, 0), 1);
        size_t n;
        const uint32_t *walk = thole_carriers_part(carriers, 0, 0, &n);
        bool seen[7] = {false};
        for (size_t i = 0; i < n; i++)
            seen[walk[i]] = true;
        assert_int_equal(n, chord == 0 ? 5 : 4);
        assert_true(seen[0] && seen[1] && seen[3] && seen[4] && seen[2] == (chord == 0) && !seen[6]);
        thole_carriers_release(carriers);
        assert_int_equal(thole_barcode_carriers(&context, barcode, network, 1, 1, &carriers, &error),
                         THOLE_ARGUMENT);
        assert_int_equal(thole_barcode_carriers(&context, barcode, network, 0, 0, &carriers, &error),
                         THOLE_ARGUMENT);
        thole_barcode_release(barcode);
        thole_network_release(network);
        thole_windows_release(windows);
        assert_int_equal(atomic_load(&memory.used), 0);
    }
}

int main(void) {
    const struct CMUnitTest tests[] = {cmocka_unit_test(a_loop_is_told_in_order),
                                       cmocka_unit_test(carriers_carry)};
    return cmocka_run_group_tests(tests, NULL, NULL);
}
