/* A real week of a railway: what is alive at each window and join, against ranks computed by M4RI on
 * complexes that are built here straight from the rows. The data and its source: NOTICE.md beside this file.
 */
#include <setjmp.h>
#include <stdarg.h>
#include <stddef.h>
#include <stdint.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <zlib.h>

#include <cmocka.h>

#include "support/dice.h"
#include "support/flat_complex.h"
#include "support/plan.h"
#include "thole.h"

enum { MOST_ROWS = 70000, LENGTH = 1200, STEP = 600, MOST_NODES = 512 };
static const char path[] = "tests/reference/rail-week.csv.gz";

typedef struct row {
    int u, v, start, finish;
} row;

static row rows[MOST_ROWS];
static int row_count, first_start, last_finish, most_node;

static int read_rows(void **state) {
    (void)state;
    gzFile file = gzopen(path, "rb");
    char line[256];
    assert_non_null(file);
    assert_non_null(gzgets(file, line, sizeof line)); /* header */
    first_start = INT32_MAX;
    while (gzgets(file, line, sizeof line) != NULL) {
        row *r = &rows[row_count++];
        char *at = line;
        int *fields[] = {&r->u, &r->v, &r->start, &r->finish};
        for (int i = 0; i < 4; i++)
            *fields[i] = (int)strtol(at, &at, 10), at++;
        first_start = r->start < first_start ? r->start : first_start;
        last_finish = r->finish > last_finish ? r->finish : last_finish;
        most_node = r->u > most_node ? r->u : most_node;
        most_node = r->v > most_node ? r->v : most_node;
    }
    gzclose(file);
    assert_int_equal(row_count, 60670);
    assert_true(most_node < MOST_NODES);
    return 0;
}

static int by_link(const void *a, const void *b) {
    const int *x = a, *y = b;
    return x[0] != y[0] ? (x[0] > y[0]) - (x[0] < y[0]) : (x[1] > y[1]) - (x[1] < y[1]);
}

/* The links active in either span, or in both of them; or the pairs within `radius` hops of each other by
 * such links. */
static size_t links_between(const int spans[2][2], bool both, int radius, int *out) {
    static unsigned char far[MOST_NODES][MOST_NODES], in[MOST_NODES][MOST_NODES];
    memset(in, 0, sizeof in);
    for (int i = 0; i < row_count; i++)
        for (int k = 0; k < 2; k++) {
            int a = spans[k][0], b = spans[k][1];
            bool active = rows[i].start == rows[i].finish ? a <= rows[i].start && rows[i].start < b
                                                          : rows[i].start < b && rows[i].finish > a;
            if (active && rows[i].u != rows[i].v) {
                in[rows[i].u][rows[i].v] |= (unsigned char)(1 << k);
                in[rows[i].v][rows[i].u] |= (unsigned char)(1 << k);
            }
        }
    for (int u = 0; u < MOST_NODES; u++)
        for (int v = 0; v < MOST_NODES; v++)
            far[u][v] = in[u][v] == 3 || (in[u][v] != 0 && !both) ? 1 : 255;
    for (int hop = 2; hop <= radius; hop++) /* one more hop at a time */
        for (int u = 0; u <= most_node; u++)
            for (int v = 0; v <= most_node; v++)
                for (int w = 0; far[u][v] == hop - 1 && w <= most_node; w++)
                    if (far[v][w] == 1 && far[u][w] == 255 && u != w)
                        far[u][w] = (unsigned char)hop;
    size_t n = 0;
    for (int u = 0; u <= most_node; u++)
        for (int v = u + 1; v <= most_node; v++)
            if (far[u][v] != 255) {
                out[2 * n] = u;
                out[2 * n + 1] = v;
                n++;
            }
    qsort(out, n, 2 * sizeof *out, by_link);
    return n;
}

static size_t windows_of_week(void) {
    size_t n = 1;
    while (first_start + (int)(n - 1) * STEP + LENGTH < last_finish)
        n++;
    return n;
}

/* Betti numbers by the core, read through its own reader: betti[p][position]. */
static size_t core_betti(thole_zigzag_options options, uint64_t *betti[]) {
    thole_memory memory = {0};
    thole_context context = {.memory = &memory, .threads = 2};
    thole_contacts_options columns = {
        .from = {"from", 0}, .to = {"to", 0}, .start = {"start", 0}, .finish = {"finish", 0}};
    thole_network *network = NULL;
    thole_windows *windows = NULL;
    thole_barcode *barcode = NULL;
    thole_error error = {.text = ""};
    thole_status status = thole_read_contacts(&context, path, &columns, &network, &error);
    if (status == THOLE_OK)
        status = thole_windows_sliding(&context, first_start * THOLE_TICKS_A_UNIT,
                                       last_finish * THOLE_TICKS_A_UNIT, LENGTH * THOLE_TICKS_A_UNIT,
                                       STEP * THOLE_TICKS_A_UNIT, &windows, &error);
    if (status == THOLE_OK)
        status = thole_zigzag(&context, network, windows, &options, &barcode, &error);
    if (status != THOLE_OK)
        fail_msg("%s", error.text);
    size_t positions = 2 * thole_windows_count(windows) - 1;
    for (uint32_t p = 0; p < 4; p++)
        if (options.dims >> p & 1) {
            betti[p] = calloc(positions, sizeof *betti[p]);
            assert_int_equal(thole_barcode_betti(&context, barcode, p, betti[p], &error), THOLE_OK);
        }
    thole_barcode_release(barcode);
    thole_windows_release(windows);
    thole_network_release(network);
    assert_int_equal(atomic_load(&memory.used), 0);
    return positions;
}

/* Compare at every `stride`-th position from `from` on. */
static void compare(thole_zigzag_options options, int top, size_t from, size_t stride) {
    uint64_t *betti[4] = {NULL};
    size_t positions = core_betti(options, betti), loops = 0, looked = 0;
    assert_int_equal(positions, 2 * windows_of_week() - 1);
    int *links = malloc(sizeof *links * MOST_NODES * MOST_NODES);
    for (size_t t = from; t < positions; t += stride) {
        int a = first_start + (int)(t / 2) * STEP, b = first_start + (int)((t + 1) / 2) * STEP;
        const int spans[2][2] = {{a, a + LENGTH}, {b, b + LENGTH}};
        flat_graph graph = {
            most_node + 1,
            links_between(spans, options.join == THOLE_JOIN_INTERSECTION, (int)options.radius, links), links};
        size_t want[4];
        if (options.radius_kind == THOLE_RADIUS_GRAPH)
            want[1] = flat_cycles(&graph, &want[0]);
        else
            flat_betti(&graph, top, want);
        for (int p = 0; p <= top; p++)
            if (betti[p][t] != want[p])
                fail_msg("position %zu, dimension %d: %zu bars are alive, the rank says %zu", t, p,
                         (size_t)betti[p][t], want[p]);
        loops += want[1];
        looked++;
    }
    printf("%zu positions agree; %zu loops in them\n", looked, loops);
    assert_true(loops > 0);
    free(links);
    for (int p = 0; p < 4; p++)
        free(betti[p]);
}

/* b1 = links - nodes + components: Euler's formula for graphs, a handbook fact. */
static void every_position_as_a_graph(void **state) {
    (void)state;
    compare((thole_zigzag_options){.radius_kind = THOLE_RADIUS_GRAPH, .dims = 3}, 1, 0, 1);
}

static void every_position_at_radius_1(void **state) {
    (void)state;
    compare((thole_zigzag_options){.radius_kind = THOLE_RADIUS_HOPS, .radius = 1, .dims = 3}, 1, 0, 1);
}

static void every_position_at_radius_1_with_intersections(void **state) {
    (void)state;
    compare(
        (thole_zigzag_options){
            .radius_kind = THOLE_RADIUS_HOPS, .radius = 1, .dims = 3, .join = THOLE_JOIN_INTERSECTION},
        1, 0, 1);
}

static void every_seventh_position_at_radius_2(void **state) {
    (void)state;
    compare((thole_zigzag_options){.radius_kind = THOLE_RADIUS_HOPS, .radius = 2, .dims = 3}, 1, 3, 7);
}

static void some_positions_at_radius_2_in_dimension_2(void **state) {
    (void)state;
    compare((thole_zigzag_options){.radius_kind = THOLE_RADIUS_HOPS, .radius = 2, .dims = 7}, 2, 90, 171);
}

/* ---- the whole barcode, which Betti numbers alone do not tell ------------------------------------- */

static plan week; /* too large for the stack */

static void plan_week(void) {
    week.nodes = (uint32_t)most_node + 1;
    week.events = 0;
    week.windows = windows_of_week();
    for (int i = 0; i < row_count; i++)
        plan_link(&week, (uint32_t)rows[i].u, (uint32_t)rows[i].v, rows[i].start, rows[i].finish);
    for (size_t w = 0; w < week.windows; w++) {
        week.from[w] = first_start + (int64_t)w * STEP;
        week.to[w] = week.from[w] + LENGTH;
    }
}

static void unions_and_intersections_of_the_week(void **state) {
    (void)state;
    thole_zigzag_options options = {.radius_kind = THOLE_RADIUS_GRAPH, .dims = 3, .all_nodes = true};
    plan_week();
    bars of_unions = plan_bars(&week, options, 1);
    printf("%zu bars\n", of_unions.n);
    assert_true(of_unions.n > 1000);
    options.join = THOLE_JOIN_INTERSECTION;
    bars_expect_same(bars_through_diamonds(of_unions, (uint32_t)(2 * week.windows - 2)),
                     plan_bars(&week, options, 2), "intersections");
    bars_free(&of_unions);
}

/* The barcode of each sixth of the week is the week's, cut; sixths share no block of time with the whole, so
 * that this is another computation. */
static void parts_of_the_week(void **state) {
    (void)state;
    static const thole_zigzag_options all[] = {
        {.radius_kind = THOLE_RADIUS_HOPS, .radius = 1, .dims = 3},
        {.radius_kind = THOLE_RADIUS_HOPS, .radius = 2, .dims = 3},
        {.radius_kind = THOLE_RADIUS_GRAPH, .dims = 3, .join = THOLE_JOIN_INTERSECTION}};
    for (size_t i = 0; i < sizeof all / sizeof *all; i++) {
        plan_week();
        bars whole = plan_bars(&week, all[i], 2);
        assert_true(whole.n > 500);
        for (size_t part = 0; part < 6; part++) {
            plan_week();
            size_t low = week.windows * part / 6, n = week.windows * (part + 1) / 6 - low;
            memmove(week.from, week.from + low, n * sizeof *week.from);
            memmove(week.to, week.to + low, n * sizeof *week.to);
            week.windows = n;
            bars cut = bars_cut(whole, (uint32_t)(2 * low), (uint32_t)(2 * (low + n) - 2));
            bars_expect_same(cut, plan_bars(&week, all[i], 1), "a part of the week");
        }
        bars_free(&whole);
    }
}

int main(void) {
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(every_position_as_a_graph),
        cmocka_unit_test(every_position_at_radius_1),
        cmocka_unit_test(every_position_at_radius_1_with_intersections),
        cmocka_unit_test(every_seventh_position_at_radius_2),
        cmocka_unit_test(some_positions_at_radius_2_in_dimension_2),
        cmocka_unit_test(unions_and_intersections_of_the_week),
        cmocka_unit_test(parts_of_the_week),
    };
    return cmocka_run_group_tests(tests, read_rows, NULL);
}
