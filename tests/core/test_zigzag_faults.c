/* The zigzag when memory fails, when the ceiling is low, and when it is told to stop. */
#include <limits.h>
#include <setjmp.h>
#include <stdarg.h>
#include <stddef.h>
#include <stdint.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

#include <cmocka.h>

#include "support/dice.h"
#include "support/faults.h"
#include "support/run_case.h"

static judge_case small_case(unsigned dims, int radius) {
    dice d = {11};
    judge_case c = {.nodes = 7, .windows = 5, .radius = radius, .dims = dims};
    for (int w = 0; w < c.windows; w++) {
        c.from[w] = 5 * w;
        c.to[w] = 5 * w + 7;
    }
    for (c.events = 0; c.events < 60; c.events++) {
        int start = dice_from(&d, 0, 30);
        c.event[c.events] =
            (judge_event){(int)dice_below(&d, 7), (int)dice_below(&d, 7), start, start + dice_from(&d, 0, 9)};
    }
    return c;
}

/* Whether the barcode is the judge's. */
static bool is_right(const thole_barcode *barcode, const judge_bar *want, size_t n) {
    static judge_bar got[JUDGE_BARS];
    size_t m = thole_barcode_count(barcode);
    for (size_t i = 0; i < m && i < JUDGE_BARS; i++)
        got[i] = run_case_bar(thole_barcode_bar(barcode, i));
    return run_case_same(want, n, got, m);
}

/* Every allocation of a run fails once, or from then on: a clean refusal each time, nothing kept, and the
 * next run, in the same memory, is right. */
static void every_allocation_fails(const judge_case *c, bool for_good, uint32_t block) {
    faults f = {.left = -1};
    thole_memory memory = faults_memory(&f);
    thole_context context = {.memory = &memory, .threads = 1};
    thole_network *network;
    thole_windows *windows;
    thole_barcode *barcode = NULL;
    thole_carriers *carriers = NULL;
    thole_error error;
    run_case_make(&context, c, &network, &windows);
    thole_zigzag_options options = run_case_options(c, block);
    size_t before = atomic_load(&memory.used);
    long blocks = f.blocks, failures = 0, recovered = 0;
    static judge_bar want[JUDGE_BARS];
    size_t n = judge_barcode(c, want);
    long stride = dice_cases(4) >= 4 ? 1 : 4; /* under the sanitizers the next run is not made each time */
    for (long k = 0;; k++) {
        f.left = k;
        f.for_good = for_good;
        error = (thole_error){.status = THOLE_OK, .text = ""};
        thole_status status = thole_zigzag(&context, network, windows, &options, &barcode, &error);
        if (status == THOLE_OK)
            status = thole_barcode_carriers(&context, barcode, network, 2, 1, &carriers, &error);
        bool untouched = f.left > 0;
        f.left = -1;
        assert_false(f.overwritten);
        if (status == THOLE_OK) {
            assert_true(is_right(barcode, want, n));
            if (untouched)
                break;
            recovered++; /* a smaller growth, or going without, did as well */
            thole_carriers_release(carriers);
            thole_barcode_release(barcode);
            barcode = NULL;
            carriers = NULL;
            continue;
        }
        failures++;
        assert_int_equal(status, THOLE_NO_MEMORY);
        assert_int_equal(error.status, THOLE_NO_MEMORY);
        assert_non_null(strstr(error.text, "out of memory"));
        assert_null(carriers);
        thole_barcode_release(barcode); /* made when the carriers were what failed */
        barcode = NULL;
        assert_int_equal(atomic_load(&memory.used), before);
        assert_int_equal(f.blocks, blocks);
        if (k % stride != 0)
            continue;
        assert_int_equal(thole_zigzag(&context, network, windows, &options, &barcode, &error), THOLE_OK);
        assert_true(is_right(barcode, want, n));
        thole_barcode_release(barcode);
        barcode = NULL;
        assert_int_equal(atomic_load(&memory.used), before);
    }
    printf("%ld failures of an allocation were told, %ld made good\n", failures, recovered);
    assert_true(failures > 10 && failures + recovered > 100);
    thole_carriers_release(carriers);
    thole_barcode_release(barcode);
    thole_network_release(network);
    thole_windows_release(windows);
    assert_int_equal(atomic_load(&memory.used), 0);
    assert_int_equal(f.blocks, 0);
}

static void memory_fails_once(void **state) {
    (void)state;
    judge_case a = small_case(7, 1), b = small_case(3, 2), c = small_case(3, -1);
    every_allocation_fails(&a, false, 2);
    every_allocation_fails(&b, false, 0);
    every_allocation_fails(&c, false, 1);
}

static void memory_fails_for_good(void **state) {
    (void)state;
    judge_case a = small_case(7, 1), b = small_case(3, 2), c = small_case(3, -1);
    b.intersection = c.all_nodes = true;
    every_allocation_fails(&a, true, 3);
    every_allocation_fails(&b, true, 0);
    every_allocation_fails(&c, true, 1);
}

/* An allocator for several threads at once that refuses from some call on. */
typedef struct shared_faults {
    _Atomic long left; /* calls that still succeed */
} shared_faults;

static void *shared_resize(void *user, void *block, size_t old_bytes, size_t new_bytes) {
    shared_faults *f = user;
    if (new_bytes == 0) {
        free(block);
        return NULL;
    }
    if (new_bytes > old_bytes && atomic_fetch_sub(&f->left, 1) <= 0)
        return NULL;
    return realloc(block, new_bytes);
}

/* The same while several threads ask for memory, in whatever order. */
static void memory_fails_in_any_thread(void **state) {
    (void)state;
    judge_case c = small_case(7, 1);
    static judge_bar want[JUDGE_BARS];
    size_t n = judge_barcode(&c, want);
    shared_faults f = {.left = LONG_MAX};
    thole_memory memory = {.resize = shared_resize, .user = &f};
    thole_context context = {.memory = &memory, .threads = 3};
    thole_network *network;
    thole_windows *windows;
    long failures = 0;
    run_case_make(&context, &c, &network, &windows);
    thole_zigzag_options options = run_case_options(&c, 1);
    size_t before = atomic_load(&memory.used);
    bool done = false;
    for (long k = 0; !done && k < 100000; k += 1 + k / 50) {
        thole_barcode *barcode = NULL;
        thole_error error = {.text = ""};
        atomic_store(&f.left, k);
        thole_status status = thole_zigzag(&context, network, windows, &options, &barcode, &error);
        done = atomic_load(&f.left) >= 0 && status == THOLE_OK;
        atomic_store(&f.left, LONG_MAX);
        if (status == THOLE_OK) {
            assert_true(is_right(barcode, want, n));
        } else {
            assert_int_equal(status, THOLE_NO_MEMORY);
            assert_null(barcode);
            failures++;
        }
        thole_barcode_release(barcode);
        assert_int_equal(atomic_load(&memory.used), before);
    }
    assert_true(done && failures > 20);
    thole_network_release(network);
    thole_windows_release(windows);
    assert_int_equal(atomic_load(&memory.used), 0);
}

/* A complete graph of `nodes` in a few windows. */
static thole_network *complete(thole_context *context, uint32_t nodes) {
    thole_clock clock = {.kind = THOLE_PLAIN, .unit = "s"};
    thole_builder *builder;
    thole_network *network;
    thole_error error;
    assert_int_equal(thole_builder_open(context, &clock, &builder, &error), THOLE_OK);
    for (uint32_t i = 0; i < nodes; i++) {
        char name[16];
        uint32_t node;
        int n = snprintf(name, sizeof name, "%u", (unsigned)i);
        assert_int_equal(thole_builder_node(builder, name, (size_t)n, &node, &error), THOLE_OK);
        bool kept;
        for (uint32_t k = 0; k < i; k++)
            assert_int_equal(thole_builder_event(builder, (thole_event){k, i, 0, 10}, &kept, &error),
                             THOLE_OK);
    }
    assert_int_equal(thole_builder_finish(builder, &network, &error), THOLE_OK);
    return network;
}

static void a_low_ceiling_is_told(void **state) {
    (void)state;
    for (int threads = 1; threads <= 2; threads++) {
        thole_memory memory = {0};
        thole_context context = {.memory = &memory, .threads = threads};
        thole_network *network = complete(&context, 150); /* 551,300 triangles, 20 million tetrahedra */
        thole_windows *windows;
        thole_barcode *barcode = NULL;
        thole_error error = {.text = ""};
        assert_int_equal(thole_windows_sliding(&context, 0, 10, 4, 2, &windows, &error), THOLE_OK);
        size_t before = atomic_load(&memory.used);
        memory.ceiling = before + 20000000;
        thole_zigzag_options options = {.radius_kind = THOLE_RADIUS_HOPS, .radius = 1, .dims = 7};
        assert_int_equal(thole_zigzag(&context, network, windows, &options, &barcode, &error), THOLE_LIMIT);
        assert_null(barcode);
        assert_non_null(strstr(
            error.text, "lower the radius or the dimensions, shorten the windows, or raise max_memory"));
        assert_int_equal(atomic_load(&memory.used), before);
        assert_true(atomic_load(&memory.peak) <= memory.ceiling);
        options.dims = 1; /* links alone fit: the same memory serves a smaller wish */
        assert_int_equal(thole_zigzag(&context, network, windows, &options, &barcode, &error), THOLE_OK);
        assert_int_equal(thole_barcode_count(barcode), 1);
        thole_barcode_release(barcode);
        thole_windows_release(windows);
        thole_network_release(network);
        assert_int_equal(atomic_load(&memory.used), 0);
    }
}

static bool stop_after(void *user, const char *phase, double done) {
    int *left = user;
    assert_non_null(phase);
    assert_true(done >= 0 && done <= 1);
    return (*left)-- == 0;
}

static void it_stops_when_told(void **state) {
    (void)state;
    judge_case c = small_case(3, 1);
    int told = 0;
    for (int ticks = 0; ticks < 1000; ticks++) {
        thole_memory memory = {0};
        int left = ticks;
        thole_context context = {.memory = &memory, .threads = 2};
        thole_network *network;
        thole_windows *windows;
        thole_barcode *barcode = NULL;
        thole_error error = {.text = ""};
        run_case_make(&context, &c, &network, &windows);
        context.tick = stop_after;
        context.tick_user = &left;
        thole_zigzag_options options = run_case_options(&c, 1);
        thole_status status = thole_zigzag(&context, network, windows, &options, &barcode, &error);
        bool done = status == THOLE_OK;
        if (!done) {
            told++;
            assert_int_equal(status, THOLE_CANCELLED);
            assert_null(barcode);
            assert_non_null(strstr(error.text, "stopped"));
        }
        thole_barcode_release(barcode);
        thole_network_release(network);
        thole_windows_release(windows);
        assert_int_equal(atomic_load(&memory.used), 0);
        if (done)
            break;
    }
    assert_true(told > 0 && told < 1000);
}

/* Progress that sets the flag, as another thread might, instead of asking to stop itself. */
static bool set_the_flag(void *user, const char *phase, double done) {
    _Atomic bool *stop = user;
    (void)phase;
    (void)done;
    atomic_store(stop, true);
    return false;
}

static void the_flag_alone_stops_it(void **state) {
    (void)state;
    judge_case c = small_case(3, 1);
    for (int from_the_start = 0; from_the_start < 2; from_the_start++) {
        _Atomic bool stop = from_the_start == 1;
        thole_memory memory = {0};
        thole_context context = {.memory = &memory, .threads = 2};
        thole_error error;
        thole_network *network;
        thole_windows *windows;
        thole_barcode *barcode = NULL;
        run_case_make(&context, &c, &network, &windows);
        size_t before = atomic_load(&memory.used);
        context.cancel = &stop;
        if (from_the_start == 0) {
            context.tick = set_the_flag;
            context.tick_user = &stop;
        }
        thole_zigzag_options options = run_case_options(&c, 1);
        assert_int_equal(thole_zigzag(&context, network, windows, &options, &barcode, &error),
                         THOLE_CANCELLED);
        assert_null(barcode);
        assert_int_equal(atomic_load(&memory.used), before);
        atomic_store(&stop, false);
        context.tick = NULL; /* and the next run is right */
        static judge_bar want[JUDGE_BARS];
        size_t n = judge_barcode(&c, want);
        assert_int_equal(thole_zigzag(&context, network, windows, &options, &barcode, &error), THOLE_OK);
        assert_true(is_right(barcode, want, n));
        thole_barcode_release(barcode);
        thole_network_release(network);
        thole_windows_release(windows);
        assert_int_equal(atomic_load(&memory.used), 0);
    }
}

static void bad_options_are_refused(void **state) {
    (void)state;
    judge_case c = small_case(3, 1);
    thole_memory memory = {0};
    thole_context context = {.memory = &memory, .threads = 1};
    thole_network *network;
    thole_windows *windows;
    thole_barcode *barcode = NULL;
    thole_error error;
    run_case_make(&context, &c, &network, &windows);
    thole_zigzag_options none = {.radius_kind = THOLE_RADIUS_HOPS, .radius = 1}, high = {.dims = 1u << 8},
                         odd = {.radius_kind = (thole_radius)7, .dims = 1};
    assert_int_equal(thole_zigzag(&context, network, windows, &none, &barcode, &error), THOLE_ARGUMENT);
    assert_int_equal(thole_zigzag(&context, network, windows, &high, &barcode, &error), THOLE_ARGUMENT);
    assert_int_equal(thole_zigzag(&context, network, windows, &odd, &barcode, &error), THOLE_ARGUMENT);
    /* Dimensions that the complex cannot have are no error, but empty. */
    thole_zigzag_options two_of_graph = {.radius_kind = THOLE_RADIUS_GRAPH, .dims = 4},
                         one_of_points = {.radius_kind = THOLE_RADIUS_HOPS, .dims = 2};
    assert_int_equal(thole_zigzag(&context, network, windows, &two_of_graph, &barcode, &error), THOLE_OK);
    assert_int_equal(thole_barcode_count(barcode), 0);
    thole_barcode_release(barcode);
    assert_int_equal(thole_zigzag(&context, network, windows, &one_of_points, &barcode, &error), THOLE_OK);
    assert_int_equal(thole_barcode_count(barcode), 0);
    uint64_t betti[9];
    assert_int_equal(thole_barcode_betti(&context, barcode, 0, betti, &error), THOLE_ARGUMENT);
    assert_int_equal(thole_barcode_betti(&context, barcode, 1, betti, &error), THOLE_OK);
    thole_barcode_release(barcode);
    thole_network_release(network);
    thole_windows_release(windows);
    assert_int_equal(atomic_load(&memory.used), 0);
}

int main(void) {
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(memory_fails_once),          cmocka_unit_test(memory_fails_for_good),
        cmocka_unit_test(memory_fails_in_any_thread), cmocka_unit_test(a_low_ceiling_is_told),
        cmocka_unit_test(it_stops_when_told),         cmocka_unit_test(the_flag_alone_stops_it),
        cmocka_unit_test(bad_options_are_refused)};
    return cmocka_run_group_tests(tests, NULL, NULL);
}
