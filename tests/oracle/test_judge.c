/* The judge, judged: the same barcodes by another way, from complexes built by other code, with M4RI's
 * algebra.
 *
 * How many intervals hold all of [i, j] is the rank of the map from the limit to the colimit of the spaces
 * from i to j (Kim and Mémoli, "Generalized persistence diagrams for persistence modules over posets", J.
 * Appl. Comput. Topol. 5, 2021). Here both are written on chains, without a basis of homology anywhere: an
 * element of the limit is a cycle at each position such that neighbours differ by a boundary in the larger
 * complex; the colimit is all tuples of cycles, up to boundaries and up to moving a cycle along an arrow. */
#include <setjmp.h>
#include <stdarg.h>
#include <stddef.h>
#include <stdint.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

#include <cmocka.h>
#include <m4ri/m4ri.h>

#include "support/random_case.h"
#include "support/run_case.h"

enum { NETWORKS = 500, MOST_CELLS = 130, MOST_WINDOWS = 5 };

/* ---- complexes ---------------------------------------------------------------------------- */

/* The simplices of one dimension as sets of nodes. */
typedef struct layer {
    unsigned cell[MOST_CELLS];
    int n;
} layer;

/* A window has a link when some whole instant of it lies in an event: times are whole numbers here, so that
 * every stretch of time that two half-open intervals share has one. */
static bool has_link(const judge_case *c, int window, int u, int v) {
    for (int k = 0; k < c->events; k++) {
        const judge_event *e = &c->event[k];
        if (!((e->u == u && e->v == v) || (e->u == v && e->v == u)))
            continue;
        for (long t = c->from[window]; t < c->to[window]; t++)
            if (t == e->start || (e->start < t && t < e->finish))
                return true;
    }
    return false;
}

/* near[u]: the nodes within the radius of u at a position, u left out; *nodes: those that are there. */
static void neighbours(const judge_case *c, int position, unsigned near[JUDGE_NODES], unsigned *nodes) {
    int left = position / 2, right = position - left;
    unsigned link[JUDGE_NODES] = {0};
    *nodes = 0;
    for (int u = 0; u < c->nodes; u++)
        for (int v = 0; v < c->nodes; v++) {
            bool a = u != v && has_link(c, left, u, v), b = u != v && has_link(c, right, u, v);
            if (c->intersection ? a && b : a || b)
                link[u] |= 1u << v;
        }
    for (int u = 0; u < c->nodes; u++)
        *nodes |= link[u];
    for (int k = 0; c->all_nodes && k < c->events; k++)
        if (c->event[k].u != c->event[k].v)
            *nodes |= 1u << c->event[k].u | 1u << c->event[k].v;
    int hops = c->radius < 0 ? 1 : c->radius;
    for (int u = 0; u < c->nodes; u++) {
        unsigned ball = 1u << u;
        for (int hop = 0; hop < hops; hop++) {
            unsigned wider = ball;
            for (int v = 0; v < c->nodes; v++)
                wider |= ball >> v & 1 ? link[v] : 0;
            ball = wider;
        }
        near[u] = ball & ~(1u << u);
    }
}

/* Add `more` nodes, each above `last` and out of `common`, to the simplex. */
static void grow(const unsigned near[JUDGE_NODES], unsigned simplex, unsigned common, int last, int more,
                 layer *out) {
    if (more == 0) {
        assert_true(out->n < MOST_CELLS);
        out->cell[out->n++] = simplex;
        return;
    }
    for (int v = last + 1; v < JUDGE_NODES; v++)
        if (common >> v & 1)
            grow(near, simplex | 1u << v, common & near[v], v, more - 1, out);
}

static layer layer_at(const judge_case *c, int position, int d) {
    unsigned near[JUDGE_NODES] = {0}, nodes;
    layer out = {.n = 0};
    neighbours(c, position, near, &nodes);
    if (d >= 0 && d <= (c->radius < 0 ? 1 : JUDGE_NODES))
        grow(near, 0, nodes, -1, d + 1, &out);
    return out;
}

static int number_of(const layer *cells, unsigned simplex) {
    for (int i = 0; i < cells->n; i++)
        if (cells->cell[i] == simplex)
            return i;
    fail_msg("a face is missing");
    return -1;
}

/* ---- chains ----------------------------------------------------------------------------------- */

/* One position. The columns of `cycles` are a basis of the cycles, those of `bounds` the boundaries of the
 * cells one dimension up; NULL where there are none. Rows are cells. */
typedef struct spot {
    layer cells;
    mzd_t *cycles, *bounds;
} spot;

static int columns(const mzd_t *m) { return m == NULL ? 0 : m->ncols; }

static mzd_t *boundary(const layer *low, const layer *high) {
    if (low->n == 0 || high->n == 0)
        return NULL;
    mzd_t *m = mzd_init(low->n, high->n);
    for (int i = 0; i < high->n; i++)
        for (int v = 0; v < JUDGE_NODES; v++)
            if (high->cell[i] >> v & 1)
                mzd_write_bit(m, number_of(low, high->cell[i] & ~(1u << v)), i, 1);
    return m;
}

static spot spot_at(const judge_case *c, int position, int p) {
    spot s = {.cells = layer_at(c, position, p)};
    layer low = layer_at(c, position, p - 1), high = layer_at(c, position, p + 1);
    s.bounds = boundary(&s.cells, &high);
    mzd_t *down = boundary(&low, &s.cells);
    if (down != NULL) {
        s.cycles = mzd_kernel_left_pluq(down, 0);
        mzd_free(down);
    } else if (s.cells.n > 0) { /* every chain of nodes is a cycle */
        s.cycles = mzd_init(s.cells.n, s.cells.n);
        mzd_set_ui(s.cycles, 1);
    }
    return s;
}

static void spot_free(spot *s) {
    if (s->cycles != NULL)
        mzd_free(s->cycles);
    if (s->bounds != NULL)
        mzd_free(s->bounds);
}

/* Write columns of `m`, chains on `from`, into `out` at (row, column), as chains on `to`. */
static void place(mzd_t *out, int row, int column, const mzd_t *m, const layer *from, const layer *to) {
    for (int k = 0; k < columns(m); k++)
        for (int i = 0; i < from->n; i++)
            if (mzd_read_bit(m, i, k))
                mzd_write_bit(out, row + number_of(to, from->cell[i]), column + k, 1);
}

static bool goes_up(const judge_case *c, int t) { return (t % 2 == 0) != c->intersection; }

/* Cycles at i, one a column, that belong to an element of the limit over i .. j. */
static mzd_t *limit_at_first(const judge_case *c, spot *s, int i, int j) {
    int rows = 0, all = 0, at = 0, column[JUDGE_POSITIONS];
    for (int t = i; t <= j; t++) {
        column[t] = all;
        all += columns(s[t].cycles);
    }
    int extra = all;
    for (int t = i; t < j; t++) {
        const spot *big = goes_up(c, t) ? &s[t + 1] : &s[t];
        rows += big->cells.n;
        all += columns(big->bounds);
    }
    if (columns(s[i].cycles) == 0)
        return NULL;
    if (rows == 0)
        return i == j ? mzd_copy(NULL, s[i].cycles)
                      : NULL; /* unequal ends: nothing larger is there, so no cycles */
    mzd_t *equations = mzd_init(rows, all);
    for (int t = i; t < j; t++) {
        const spot *big = goes_up(c, t) ? &s[t + 1] : &s[t];
        place(equations, at, column[t], s[t].cycles, &s[t].cells, &big->cells);
        place(equations, at, column[t + 1], s[t + 1].cycles, &s[t + 1].cells, &big->cells);
        place(equations, at, extra, big->bounds, &big->cells, &big->cells);
        extra += columns(big->bounds);
        at += big->cells.n;
    }
    mzd_t *kernel = mzd_kernel_left_pluq(equations, 0), *out = NULL;
    mzd_free(equations);
    if (kernel != NULL) {
        mzd_t *part =
            mzd_submatrix(NULL, kernel, column[i], 0, column[i] + columns(s[i].cycles), kernel->ncols);
        out = mzd_mul(NULL, s[i].cycles, part, 0);
        mzd_free(part);
        mzd_free(kernel);
    }
    return out;
}

/* The rank, modulo what the colimit over i .. j identifies, of the columns of `chains` (at i; may be NULL).
 */
static int rank_in_colimit(const judge_case *c, const spot *s, int i, int j, const mzd_t *chains) {
    int rows = 0, all = columns(chains), row[JUDGE_POSITIONS];
    for (int t = i; t <= j; t++) {
        row[t] = rows;
        rows += s[t].cells.n;
        all += columns(s[t].bounds);
        if (t < j)
            all += columns(goes_up(c, t) ? s[t].cycles : s[t + 1].cycles);
    }
    if (rows == 0 || all == 0)
        return 0;
    mzd_t *m = mzd_init(rows, all);
    int at = 0;
    for (int t = i; t <= j; t++) {
        place(m, row[t], at, s[t].bounds, &s[t].cells, &s[t].cells);
        at += columns(s[t].bounds);
        if (t == j)
            continue;
        int small = goes_up(c, t) ? t : t + 1, big = goes_up(c, t) ? t + 1 : t;
        place(m, row[small], at, s[small].cycles, &s[small].cells, &s[small].cells);
        place(m, row[big], at, s[small].cycles, &s[small].cells, &s[big].cells);
        at += columns(s[small].cycles);
    }
    place(m, row[i], at, chains, &s[i].cells, &s[i].cells);
    int rank = mzd_echelonize(m, 0);
    mzd_free(m);
    return rank;
}

static int intervals_holding(const judge_case *c, spot *s, int i, int j) {
    mzd_t *limit = limit_at_first(c, s, i, j);
    if (limit == NULL)
        return 0;
    int with = rank_in_colimit(c, s, i, j, limit), without = rank_in_colimit(c, s, i, j, NULL);
    mzd_free(limit);
    return with - without;
}

static size_t second_barcode(const judge_case *c, judge_bar *out) {
    int positions = 2 * c->windows - 1;
    size_t n = 0;
    for (int p = 0; p < 4; p++) {
        spot s[JUDGE_POSITIONS];
        int r[JUDGE_POSITIONS + 2][JUDGE_POSITIONS + 2] = {{0}}; /* r[i + 1][j + 1], with a margin */
        if ((c->dims >> p & 1) == 0)
            continue;
        for (int t = 0; t < positions; t++)
            s[t] = spot_at(c, t, p);
        for (int i = 0; i < positions; i++)
            for (int j = i; j < positions; j++)
                r[i + 1][j + 1] = intervals_holding(c, s, i, j);
        for (int i = 0; i < positions; i++)
            for (int j = i; j < positions; j++) {
                int many = r[i + 1][j + 1] - r[i][j + 1] - r[i + 1][j + 2] + r[i][j + 2];
                assert_true(many >= 0);
                for (int k = 0; k < many;
                     k++) /* open: the arrow at that end leads to something larger outside */
                    out[n++] =
                        (judge_bar){p, i, j, i > 0 && !goes_up(c, i - 1), j + 1 < positions && goes_up(c, j)};
            }
        for (int t = 0; t < positions; t++)
            spot_free(&s[t]);
    }
    return n;
}

static bool judge_differs(const judge_case *c, void *user) {
    static judge_bar a[JUDGE_BARS], b[JUDGE_BARS];
    size_t n = judge_barcode(c, a), m = second_barcode(c, b);
    if (user != NULL)
        *(uint64_t *)user += n;
    return !run_case_same(a, n, b, m);
}

static void the_judge_agrees_with_another_way(void **state) {
    (void)state;
    uint64_t seed = dice_setting("SEED", 1867), cases = dice_cases(NETWORKS), bars = 0;
    static judge_bar a[JUDGE_BARS], b[JUDGE_BARS];
    printf("seed %llu, %llu networks\n", (unsigned long long)seed, (unsigned long long)cases);
    for (uint64_t i = 0; i < cases; i++) {
        dice d = {seed + i * UINT64_C(1000003)};
        judge_case c;
        random_case(&d, &c);
        c.windows = c.windows < MOST_WINDOWS ? c.windows : MOST_WINDOWS;
        if (judge_differs(&c, &bars)) {
            random_case_shrink(&c, judge_differs, NULL);
            judge_print(&c);
            run_case_print_bars("the judge  ", a, judge_barcode(&c, a));
            run_case_print_bars("another way", b, second_barcode(&c, b));
            fail_msg("case %llu of seed %llu", (unsigned long long)i, (unsigned long long)seed);
        }
    }
    printf("%llu bars\n", (unsigned long long)bars);
    assert_true(bars > cases);
}

int main(void) {
    const struct CMUnitTest tests[] = {cmocka_unit_test(the_judge_agrees_with_another_way)};
    return cmocka_run_group_tests(tests, NULL, NULL);
}
