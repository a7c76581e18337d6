/* Random networks against the judge.
 *
 * CASES multiplies their number, SEED sets where they begin; a case that fails is made smaller while it
 * still fails, and printed. */
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

enum { NETWORKS = 6000 };

/* How a case is run. */
typedef struct trial {
    uint32_t block;
    int threads;
    bool view; /* of a larger network, by a filter */
} trial;

/* What the filter keeps: a rule that the judge's list and the network's can both be asked. */
static bool kept(int u, int v, long start, long finish) {
    return (unsigned long)(3 * (u + v) + u * v + start + finish) % 4 != 0;
}

static judge_case only_kept(const judge_case *c) {
    judge_case out = *c;
    out.events = 0;
    for (int i = 0; i < c->events; i++) {
        const judge_event *e = &c->event[i];
        if (kept(e->u, e->v, e->start, e->finish))
            out.event[out.events++] = *e;
    }
    return out;
}

static void select_kept(thole_context *context, thole_network **network) {
    uint32_t rows[JUDGE_EVENTS];
    size_t n = 0, events = thole_network_count(*network);
    thole_network *view;
    thole_error error;
    for (size_t i = 0; i < events; i++) {
        thole_event e = thole_network_event(*network, i);
        if (kept((int)e.from, (int)e.to, (long)e.start, (long)e.finish))
            rows[n++] = (uint32_t)i;
    }
    if (thole_network_select(context, *network, rows, n, &view, &error) != THOLE_OK)
        fail_msg("%s", error.text);
    thole_network_release(*network);
    *network = view;
}

/* Cells as defined: the runs of positions in a row that a simplex is there, of each simplex. */
static uint64_t count_cells(const judge_case *c, int d) {
    static bool before[1 << JUDGE_NODES], now[1 << JUDGE_NODES];
    uint64_t cells = 0;
    memset(before, 0, sizeof before);
    for (int t = 0; t < 2 * c->windows - 1; t++) {
        judge_simplex *list;
        size_t n = judge_simplices(c, t, d, &list);
        memset(now, 0, sizeof now);
        for (size_t i = 0; i < n; i++) {
            now[list[i]] = true;
            cells += !before[list[i]];
        }
        free(list);
        memcpy(before, now, sizeof before);
    }
    return cells;
}

static int highest(unsigned dims) {
    int p = 0;
    while (dims >> (p + 1) != 0)
        p++;
    return p;
}

/* What is wrong with the numbers beside the bars, or NULL. */
static const char *check_numbers(thole_context *context, const judge_case *c, const thole_barcode *barcode) {
    thole_error error;
    uint64_t betti[JUDGE_POSITIONS];
    for (int d = 0; d <= highest(c->dims) + 1; d++)
        if (thole_barcode_counts(barcode)->cells[d] != count_cells(c, d))
            return "the cells are counted wrong";
    for (int p = 0; p < 8; p++) {
        thole_status status = thole_barcode_betti(context, barcode, (uint32_t)p, betti, &error);
        if ((c->dims >> p & 1) == 0) {
            if (status != THOLE_ARGUMENT)
                return "Betti numbers of a dimension that was not asked for";
            continue;
        }
        for (int t = 0; t < 2 * c->windows - 1; t++)
            if (status != THOLE_OK || betti[t] != judge_betti(c, t, p))
                return "the Betti numbers differ";
    }
    return NULL;
}

typedef struct answer {
    judge_bar bars[JUDGE_BARS];
    size_t n;
    const char *wrong;
} answer;

static void ask_core(const judge_case *c, const judge_case *judged, trial how, answer *out) {
    static char text[1200];
    thole_memory memory = {0};
    thole_context context = {.memory = &memory, .threads = how.threads};
    thole_network *network;
    thole_windows *windows;
    thole_barcode *barcode = NULL;
    thole_error error = {.status = THOLE_OK, .text = ""};
    out->n = 0;
    out->wrong = NULL;
    run_case_make(&context, c, &network, &windows);
    if (how.view)
        select_kept(&context, &network);
    thole_zigzag_options options = run_case_options(c, how.block);
    if (thole_zigzag(&context, network, windows, &options, &barcode, &error) != THOLE_OK) {
        snprintf(text, sizeof text, "it refuses: %s", error.text);
        out->wrong = text;
    } else {
        out->n = thole_barcode_count(barcode);
        for (size_t i = 0; i < out->n && i < JUDGE_BARS; i++)
            out->bars[i] = run_case_bar(thole_barcode_bar(barcode, i));
        out->wrong = check_numbers(&context, judged, barcode);
    }
    thole_barcode_release(barcode);
    thole_network_release(network);
    thole_windows_release(windows);
    if (out->wrong == NULL && atomic_load(&memory.used) != 0)
        out->wrong = "memory is left in use";
}

/* What went wrong with a case, or NULL; the judge's bars go to *want. */
static const char *verdict(const judge_case *c, trial how, bool show, answer *want) {
    static answer got;
    judge_case judged = how.view ? only_kept(c) : *c;
    want->n = judge_barcode(&judged, want->bars);
    ask_core(c, &judged, how, &got);
    bool same = run_case_same(want->bars, want->n, got.bars, got.n);
    if (show && !same) {
        run_case_print_bars("the judge", want->bars, want->n);
        run_case_print_bars("the core ", got.bars, got.n);
    }
    return got.wrong != NULL ? got.wrong : same ? NULL : "the bars differ";
}

static bool still_fails(const judge_case *c, void *user) {
    static answer want;
    return verdict(c, *(trial *)user, false, &want) != NULL;
}

/* How many bars there were of each dimension and kind: cases without any would prove nothing. */
typedef struct harvest {
    uint64_t bars[4][4];
} harvest;

static void gather(harvest *h, const answer *a) {
    for (size_t i = 0; i < a->n; i++)
        h->bars[a->bars[i].dim][2 * a->bars[i].open_start + a->bars[i].open_end]++;
}

static uint64_t show_harvest(const harvest *h) {
    uint64_t all = 0;
    printf("bars             closed-closed   closed-open   open-closed     open-open\n");
    for (int p = 0; p < 4; p++) {
        printf("  dimension %d ", p);
        for (int k = 0; k < 4; k++) {
            printf("%14llu", (unsigned long long)h->bars[p][k]);
            all += h->bars[p][k];
        }
        printf("\n");
    }
    return all;
}

static void random_networks_agree_with_the_judge(void **state) {
    (void)state;
    static const uint32_t blocks[] = {0, 1, 2, 3, 4, 5, 7, 100};
    uint64_t seed = dice_setting("SEED", 20310504), cases = dice_cases(NETWORKS);
    static answer want;
    harvest got = {{{0}}};
    printf("seed %llu, %llu networks\n", (unsigned long long)seed, (unsigned long long)cases);
    for (uint64_t i = 0; i < cases; i++) {
        dice d = {seed + i * UINT64_C(1000003)};
        judge_case c;
        random_case(&d, &c);
        trial how = {blocks[dice_below(&d, 8)], dice_from(&d, 1, 2), dice_below(&d, 5) == 0};
        if (verdict(&c, how, false, &want) == NULL) {
            gather(&got, &want);
            continue;
        }
        random_case_shrink(&c, still_fails, &how);
        judge_case shown = how.view ? only_kept(&c) : c;
        const char *what = verdict(&c, how, true, &want);
        judge_print(&shown);
        fail_msg("case %llu of seed %llu, block %u, threads %d%s: %s", (unsigned long long)i,
                 (unsigned long long)seed, (unsigned)how.block, how.threads, how.view ? ", a view" : "",
                 what);
    }
    uint64_t bars = show_harvest(&got);
    assert_true(bars > cases);
    /* With thousands of cases each kind has shown itself in each dimension. */
    for (int p = 0; p < 4 && cases >= NETWORKS; p++)
        for (int k = 0; k < 4; k++)
            assert_true(got.bars[p][k] > (p < 3 ? 20u : 0u));
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
    static answer want;
    const char *what = verdict(c, (trial){.threads = 1}, true, &want);
    if (what != NULL)
        fail_msg("%s", what);
}

/* Two places linked in windows 1 and 3, not in 2. Each link makes a component of its own: it is there in
 * its window and the join beside it, and nothing connects it to the other. */
static void a_link_that_returns(void **state) {
    (void)state;
    judge_case c = {.nodes = 2,
                    .events = 2,
                    .windows = 3,
                    .event = {{0, 1, 0, 1}, {0, 1, 2, 3}},
                    .from = {0, 1, 2},
                    .to = {1, 2, 3},
                    .radius = 1,
                    .dims = 3};
    expect(&c, 2, (judge_bar[]){{0, 0, 1, false, false}, {0, 3, 4, false, false}});
}

/* A square of four links whose last comes in window 2 and leaves in 3: before and after, a path. Its loop
 * is there from the join that adds the link (position 1) to the join that still has it (position 3). */
static void a_square_that_opens_and_closes(void **state) {
    (void)state;
    judge_case c = {.nodes = 4,
                    .events = 4,
                    .windows = 3,
                    .event = {{0, 1, 0, 3}, {1, 2, 0, 3}, {2, 3, 0, 3}, {3, 0, 1, 2}},
                    .from = {0, 1, 2},
                    .to = {1, 2, 3},
                    .radius = 1,
                    .dims = 3};
    expect(&c, 2, (judge_bar[]){{0, 0, 4, false, false}, {1, 1, 3, false, false}});
}

/* A triangle is a loop of the graph and filled at radius 1. */
static void a_triangle(void **state) {
    (void)state;
    judge_case c = {.nodes = 3,
                    .events = 3,
                    .windows = 1,
                    .event = {{0, 1, 0, 1}, {1, 2, 0, 1}, {2, 0, 0, 1}},
                    .from = {0},
                    .to = {1},
                    .radius = -1,
                    .dims = 3};
    expect(&c, 2, (judge_bar[]){{0, 0, 0, false, false}, {1, 0, 0, false, false}});
    c.radius = 1;
    expect(&c, 1, (judge_bar[]){{0, 0, 0, false, false}});
}

/* Two links with a place in common, the middle one gone in window 2: 0-1-2-3 falls apart into 0-1 and 2-3
 * and joins again. One component lasts throughout; the other part is there only while the middle link is
 * not: born by its deletion at position 2, killed by its addition at 3: open at both ends, at position 2
 * alone. */
static void two_parts_for_a_while(void **state) {
    (void)state;
    judge_case c = {.nodes = 4,
                    .events = 4,
                    .windows = 3,
                    .event = {{0, 1, 0, 3}, {2, 3, 0, 3}, {1, 2, 0, 1}, {1, 2, 2, 3}},
                    .from = {0, 1, 2},
                    .to = {1, 2, 3},
                    .radius = 1,
                    .dims = 1};
    expect(&c, 2, (judge_bar[]){{0, 0, 4, false, false}, {0, 2, 2, true, true}});
}

/* A loop killed by its chord: a square in window 1, both triangles filled from window 2 on at radius 1. The
 * chord comes with the join: closed at its birth (there from the start), open at its death. */
static void a_loop_that_is_filled(void **state) {
    (void)state;
    judge_case c = {.nodes = 4,
                    .events = 5,
                    .windows = 2,
                    .event = {{0, 1, 0, 2}, {1, 2, 0, 2}, {2, 3, 0, 2}, {3, 0, 0, 2}, {0, 2, 1, 2}},
                    .from = {0, 1},
                    .to = {1, 2},
                    .radius = 1,
                    .dims = 2};
    expect(&c, 1, (judge_bar[]){{1, 0, 0, false, true}});
}

/* No events, or none but a self-loop, make an empty complex everywhere: no bars, whichever nodes have names.
 */
static void nothing_at_all(void **state) {
    (void)state;
    judge_case c = {.nodes = 3, .windows = 2, .from = {0, 1}, .to = {1, 2}, .radius = 1, .dims = 7};
    for (int i = 0; i < 4; i++) {
        c.all_nodes = i % 2 == 1;
        c.events = i / 2;
        c.event[0] = (judge_event){1, 1, 0, 2};
        expect(&c, 0, NULL);
    }
}

/* At an intersection join only what both windows share is left. The two windows share the link 0-1 only: 2
 * is in window 1 through 1-2 and in window 2 through 0-2, but at the join it has no link, so it is not
 * there. The loop of neither closes. */
static void an_intersection(void **state) {
    (void)state;
    judge_case c = {.nodes = 3,
                    .events = 3,
                    .windows = 2,
                    .event = {{0, 1, 0, 2}, {1, 2, 0, 1}, {0, 2, 1, 2}},
                    .from = {0, 1},
                    .to = {1, 2},
                    .radius = -1,
                    .dims = 3,
                    .intersection = true};
    expect(&c, 1, (judge_bar[]){{0, 0, 2, false, false}});
    /* Now 2 is a part of its own at the join: there by a deletion, gone by an addition. */
    c.all_nodes = true;
    expect(&c, 2, (judge_bar[]){{0, 0, 2, false, false}, {0, 1, 1, true, true}});
}

int main(void) {
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(a_link_that_returns),
        cmocka_unit_test(a_square_that_opens_and_closes),
        cmocka_unit_test(a_triangle),
        cmocka_unit_test(two_parts_for_a_while),
        cmocka_unit_test(a_loop_that_is_filled),
        cmocka_unit_test(an_intersection),
        cmocka_unit_test(nothing_at_all),
        cmocka_unit_test(random_networks_agree_with_the_judge),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
