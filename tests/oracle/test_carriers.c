/* Carriers of bars on random networks. At every position they are cycles of the complex there and together a
 * basis of its homology; each comes from where its bar begins and goes on to where it ends, through all
 * positions between; and none depends on threads. */
#include <setjmp.h>
#include <stdarg.h>
#include <stddef.h>
#include <stdint.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

#include <cmocka.h>

#include "support/random_case.h"
#include "support/run_case.h"

enum { NETWORKS = 400, MOST_CHAIN = 512, MOST_BARS = 256 };

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

/* ---- spaces of chains as lists of bits: a chain of nodes, or of links, is a number ---------------- */

enum { MOST_VECTORS = 600 };

typedef struct span {
    uint64_t at[MOST_VECTORS];
    size_t n;
} span;

/* The bit of a simplex; a link's is behind those of nodes. */
static uint64_t bit_of(judge_simplex s) {
    int u = __builtin_ctz(s), v = 31 - __builtin_clz(s);
    return UINT64_C(1) << (u == v ? u : 9 + u * (17 - u) / 2 + v - u - 1);
}

static void add(span *x, uint64_t vector) {
    assert_true(x->n < MOST_VECTORS);
    x->at[x->n++] = vector;
}

/* Take a vector with that bit out of x, and the bit out of all others; 0 when none has it. */
static uint64_t take_out(span *x, int bit) {
    for (size_t with = 0; with < x->n; with++) {
        if ((x->at[with] >> bit & 1) == 0)
            continue;
        uint64_t vector = x->at[with];
        x->at[with] = x->at[--x->n];
        for (size_t i = 0; i < x->n; i++)
            if (x->at[i] >> bit & 1)
                x->at[i] ^= vector;
        return vector;
    }
    return 0;
}

/* Keep what is without the bits of `outside`. */
static void keep_without(span *x, uint64_t outside) {
    for (int bit = 0; bit < 64; bit++)
        if (outside >> bit & 1)
            take_out(x, bit);
}

/* A basis of x in its place. */
static void thin(span *x) {
    uint64_t basis[64];
    size_t n = 0;
    for (int bit = 0; bit < 64; bit++) {
        uint64_t vector = take_out(x, bit);
        if (vector != 0)
            basis[n++] = vector;
    }
    memcpy(x->at, basis, n * sizeof *basis);
    x->n = n;
}

static bool contains(span x, uint64_t vector) {
    for (int bit = 0; bit < 64; bit++) {
        uint64_t row = take_out(&x, bit);
        if (vector >> bit & 1)
            vector ^= row;
    }
    return vector == 0;
}

static uint64_t bits_at(const judge_case *c, int t, int p) {
    judge_simplex *list;
    size_t n = judge_simplices(c, t, p, &list);
    uint64_t bits = 0;
    for (size_t i = 0; i < n; i++)
        bits |= bit_of(list[i]);
    free(list);
    return bits;
}

/* Boundaries of the simplices of dimension p + 1 at t. */
static void add_bounds(const judge_case *c, int t, int p, span *x) {
    judge_simplex *list;
    size_t n = judge_simplices(c, t, p + 1, &list);
    for (size_t i = 0; i < n; i++) {
        uint64_t vector = 0;
        for (int u = 0; u < c->nodes; u++)
            if (list[i] >> u & 1)
                vector ^= bit_of((judge_simplex)(list[i] & ~(1u << u)));
        add(x, vector);
    }
    free(list);
}

static void cycles_at(const judge_case *c, int t, int p, span *x) {
    judge_simplex *list;
    size_t n = judge_simplices(c, t, p, &list);
    x->n = 0;
    for (size_t i = 0; i < n; i++) {
        uint64_t vector = bit_of(list[i]);
        for (int u = 0; p > 0 && u < c->nodes; u++)
            if (list[i] >> u & 1)
                vector ^= bit_of((judge_simplex)(1u << u));
        add(x, vector);
    }
    free(list);
    if (p > 0)
        keep_without(x, (UINT64_C(1) << 9) - 1);
}

/* Whether the complexes beside t hold the one at t, rather than the reverse. */
static bool within_neighbours(const judge_case *c, int t) { return (t % 2 == 0) != c->intersection; }

/* Whether `vector`, at t, belongs to cycles at all positions from a bar's end to t, neighbours being the same
 * but for a boundary in the larger complex; and, when the bar is open at that end, to one that is a boundary
 * just beyond. That is what an interval of a direct sum is. side: -1 for the start, 1 for the finish. */
static bool goes_through(const judge_case *c, int p, int end, int side, bool open, int t, uint64_t vector) {
    static span x;
    x.n = 0;
    if (open) {
        add_bounds(c, end + side, p, &x);
        keep_without(&x, ~bits_at(c, end, p));
    } else {
        cycles_at(c, end, p, &x);
    }
    add_bounds(c, end, p, &x);
    for (int at = end; at != t; at -= side) {
        thin(&x);
        if (!within_neighbours(c, at))
            keep_without(&x, ~bits_at(c, at - side, p));
        add_bounds(c, at - side, p, &x);
    }
    return contains(x, vector);
}

/* Pieces: each a whole one, in the order of its nodes. */
static void check_piece(const judge_case *c, int t, const uint32_t *nodes, size_t n) {
    judge_simplex *links;
    size_t m = judge_simplices(c, t, 1, &links);
    unsigned piece = 1u << nodes[0], told = 0;
    for (bool again = true; again;) {
        again = false;
        for (size_t i = 0; i < m; i++)
            if ((links[i] & piece) != 0 && (links[i] & ~piece) != 0) {
                piece |= links[i];
                again = true;
            }
    }
    for (size_t i = 0; i < n; i++) {
        assert_true(i == 0 || nodes[i - 1] < nodes[i]);
        told |= 1u << nodes[i];
    }
    assert_int_equal(told, piece);
    free(links);
}

/* Walks: where a link fills the triangle with two in a row, it stands in for them. */
static void check_walk(const judge_case *c, int t, const uint32_t *nodes, size_t n) {
    uint64_t links = bits_at(c, t, 1);
    for (size_t i = 0; i < n && n > 3 && c->radius > 0; i++)
        assert_true((links & bit_of((judge_simplex)(1u << nodes[i] | 1u << nodes[(i + 2) % n]))) == 0);
}

static uint64_t check_position(thole_context *context, const judge_case *c, const thole_network *network,
                               const thole_barcode *barcode, int t, uint32_t dim) {
    static chain chains[MOST_BARS];
    const judge_simplex *lists[MOST_BARS];
    size_t lengths[MOST_BARS];
    thole_error error;
    thole_carriers *carriers;
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
        judge_bar judged = run_case_bar(bar);
        uint64_t vector = 0;
        for (size_t k = 0; k < chains[i].n; k++)
            vector ^= bit_of(chains[i].cell[k]);
        assert_true(goes_through(c, (int)dim, judged.first, -1, judged.open_start, t, vector));
        assert_true(goes_through(c, (int)dim, judged.last, 1, judged.open_end, t, vector));
        for (size_t part = 0; part < thole_carriers_parts(carriers, i); part++) {
            size_t nodes;
            const uint32_t *at = thole_carriers_part(carriers, i, part, &nodes);
            if (dim == 0)
                check_piece(c, t, at, nodes);
            else
                check_walk(c, t, at, nodes);
        }
    }
    thole_carriers_release(carriers);
    return n;
}

/* Neither the number of threads nor the block length that the barcode was computed with can be seen. */
static void expect_same_carriers(thole_context *context, const thole_barcode *barcode, thole_context *other,
                                 const thole_barcode *copy, const thole_network *network, size_t t,
                                 uint32_t dim) {
    thole_carriers *a, *b;
    thole_error error;
    assert_int_equal(thole_barcode_carriers(context, barcode, network, t, dim, &a, &error), THOLE_OK);
    assert_int_equal(thole_barcode_carriers(other, copy, network, t, dim, &b, &error), THOLE_OK);
    assert_int_equal(thole_carriers_count(a), thole_carriers_count(b));
    for (size_t i = 0; i < thole_carriers_count(a); i++) {
        assert_int_equal(thole_carriers_bar(a, i), thole_carriers_bar(b, i));
        assert_int_equal(thole_carriers_parts(a, i), thole_carriers_parts(b, i));
        for (size_t part = 0; part < thole_carriers_parts(a, i); part++) {
            size_t n, m;
            const uint32_t *x = thole_carriers_part(a, i, part, &n), *y = thole_carriers_part(b, i, part, &m);
            assert_int_equal(n, m);
            assert_memory_equal(x, y, n * sizeof *x);
        }
    }
    thole_carriers_release(a);
    thole_carriers_release(b);
}

static void carriers_carry(void **state) {
    (void)state;
    uint64_t seed = dice_setting("SEED", 7), cases = dice_cases(NETWORKS), carriers = 0;
    printf("seed %llu, %llu networks\n", (unsigned long long)seed, (unsigned long long)cases);
    for (uint64_t i = 0; i < cases; i++) {
        dice d = {seed + i * UINT64_C(1000003)};
        judge_case c;
        random_case(&d, &c);
        c.dims |= 3;
        if (c.radius == 0)
            c.radius = 1;
        thole_memory memory = {0};
        thole_context context = {.memory = &memory, .threads = dice_from(&d, 1, 2)},
                      other = {.memory = &memory, .threads = 3};
        thole_network *network;
        thole_windows *windows;
        thole_barcode *barcode, *copy;
        thole_error error;
        run_case_make(&context, &c, &network, &windows);
        thole_zigzag_options options = run_case_options(&c, (uint32_t)dice_from(&d, 0, 4));
        assert_int_equal(thole_zigzag(&context, network, windows, &options, &barcode, &error), THOLE_OK);
        options.block = (uint32_t)dice_from(&d, 0, 4);
        assert_int_equal(thole_zigzag(&other, network, windows, &options, &copy, &error), THOLE_OK);
        for (int t = 0; t < 2 * c.windows - 1; t++)
            for (uint32_t dim = 0; dim < 2; dim++) {
                carriers += check_position(&context, &c, network, barcode, t, dim);
                expect_same_carriers(&context, barcode, &other, copy, network, (size_t)t, dim);
            }
        thole_barcode_release(copy);
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
