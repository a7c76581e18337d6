/* Long networks of few nodes against the judge, run by run: the barcode of a run of windows is the whole
 * barcode, cut to the run and closed where it is cut. What the judge sees of a run are the windows and the
 * events in them alone. */
#include <setjmp.h>
#include <stdarg.h>
#include <stddef.h>
#include <stdint.h>
#include <stdio.h>
#include <stdlib.h>

#include <cmocka.h>

#include "support/plan.h"
#include "support/random_case.h"
#include "support/run_case.h"

enum { NETWORKS = 100, LONGEST_RUN = 12 };

static plan here; /* too large for the stack */

/* Random cases one after the other in time, so that events of one reach into the next. */
static void random_chain(dice *d, plan *out, judge_case *like) {
    int cases = dice_from(d, 6, 20);
    out->nodes = 0;
    out->events = out->windows = 0;
    random_case(d, like);
    like->all_nodes = false; /* what a run does not see would have to be there */
    for (int k = 0; k < cases; k++) {
        judge_case c;
        random_case(d, &c);
        int64_t later = 47 * k; /* after the start of the last window before */
        out->nodes = (uint32_t)c.nodes > out->nodes ? (uint32_t)c.nodes : out->nodes;
        for (int i = 0; i < c.events; i++)
            plan_link(out, (uint32_t)c.event[i].u, (uint32_t)c.event[i].v, c.event[i].start + later,
                      c.event[i].finish + later);
        for (int i = 0; i < c.windows; i++) {
            out->from[out->windows] = c.from[i] + later;
            out->to[out->windows++] = c.to[i] + later;
        }
    }
}

static bool seen(const thole_event *e, int64_t from, int64_t to) {
    return e->from != e->to && e->start < to &&
           (e->finish > from || (e->start == e->finish && e->start == from));
}

/* Windows low .. low + windows - 1 as a case; false when it has more events than a case can hold. */
static bool cut(const plan *p, size_t low, size_t windows, const judge_case *like, judge_case *out) {
    *out = *like;
    out->nodes = (int)p->nodes;
    out->events = 0;
    out->windows = (int)windows;
    for (size_t w = 0; w < windows; w++) {
        out->from[w] = (long)p->from[low + w];
        out->to[w] = (long)p->to[low + w];
    }
    for (size_t i = 0; i < p->events; i++) {
        const thole_event *e = &p->event[i];
        bool any = false;
        for (size_t w = low; w < low + windows; w++)
            any = any || seen(e, p->from[w], p->to[w]);
        if (any && out->events == JUDGE_EVENTS)
            return false;
        if (any)
            out->event[out->events++] =
                (judge_event){(int)e->from, (int)e->to, (long)e->start, (long)e->finish};
    }
    return true;
}

static uint64_t check_run(bars all, size_t low, size_t windows, const judge_case *like, const char *which) {
    static judge_bar want[JUDGE_BARS], got[JUDGE_BARS];
    judge_case c;
    if (!cut(&here, low, windows, like, &c))
        return 0;
    size_t n = judge_barcode(&c, want);
    bars seen_of_all = bars_cut(all, (uint32_t)(2 * low), (uint32_t)(2 * (low + windows - 1)));
    size_t m = seen_of_all.n;
    for (size_t i = 0; i < m && i < JUDGE_BARS; i++)
        got[i] = run_case_bar(seen_of_all.at[i]);
    bars_free(&seen_of_all);
    if (!run_case_same(want, n, got, m)) {
        run_case_print_bars("the judge", want, n);
        run_case_print_bars("the core ", got, m);
        judge_print(&c);
        fail_msg("windows %zu to %zu of %zu; %s", low + 1, low + windows, here.windows, which);
    }
    return 1;
}

static void runs_of_long_networks_agree_with_the_judge(void **state) {
    (void)state;
    static const uint32_t blocks[] = {0, 0, 1, 2, 6, 17};
    uint64_t seed = dice_setting("SEED", 1604), cases = dice_cases(NETWORKS), bars_seen = 0, runs = 0;
    printf("seed %llu, %llu networks\n", (unsigned long long)seed, (unsigned long long)cases);
    for (uint64_t i = 0; i < cases; i++) {
        dice d = {seed + i * UINT64_C(1000003)};
        judge_case like;
        random_chain(&d, &here, &like);
        thole_zigzag_options options = run_case_options(&like, blocks[dice_below(&d, 6)]);
        char which[100];
        snprintf(which, sizeof which, "network %llu of seed %llu, block %u", (unsigned long long)i,
                 (unsigned long long)seed, (unsigned)options.block);
        bars all = plan_bars(&here, options, dice_from(&d, 1, 3));
        for (size_t low = 0; low < here.windows; low += 1 + dice_below(&d, 4)) {
            size_t most = here.windows - low < LONGEST_RUN ? here.windows - low : LONGEST_RUN;
            runs += check_run(all, low, 1 + dice_below(&d, (uint32_t)most), &like, which);
        }
        bars_seen += all.n;
        bars_free(&all);
    }
    printf("%llu bars, %llu runs\n", (unsigned long long)bars_seen, (unsigned long long)runs);
    assert_true(bars_seen > 10 * cases && runs > 10 * cases);
}

int main(void) {
    const struct CMUnitTest tests[] = {cmocka_unit_test(runs_of_long_networks_agree_with_the_judge)};
    return cmocka_run_group_tests(tests, NULL, NULL);
}
