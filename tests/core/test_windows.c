/* Windows: what is cut, what is refused, and exact centres. */
#include <setjmp.h>
#include <stdarg.h>
#include <stddef.h>
#include <stdint.h>
#include <stdio.h>

#include <cmocka.h>

#include "support/dice.h"
#include "thole.h"

static thole_memory memory;
static thole_context context = {.memory = &memory, .threads = 1};
static thole_error error;

static void sliding_by_hand(void **state) {
    (void)state;
    static const struct { int64_t start, finish, length, step; size_t n; int64_t last_start; } cases[] = {
        {0, 10, 5, 5, 2, 5},  {0, 10, 5, 2, 4, 6},   {0, 11, 5, 5, 3, 10}, {0, 10, 20, 3, 1, 0},
        {0, 10, 1, 4, 3, 8},  {-7, -2, 2, 1, 4, -4}, {0, 1, 1, 1, 1, 0},   {0, 9, 3, 6, 2, 6},
    };
    for (size_t i = 0; i < sizeof cases / sizeof *cases; i++) {
        thole_windows *w;
        assert_int_equal(thole_windows_sliding(&context, cases[i].start, cases[i].finish, cases[i].length, cases[i].step, &w, &error), THOLE_OK);
        assert_int_equal(thole_windows_count(w), cases[i].n);
        assert_int_equal(thole_windows_start(w, cases[i].n - 1), cases[i].last_start);
        assert_int_equal(thole_windows_finish(w, cases[i].n - 1), cases[i].last_start + cases[i].length);
        assert_string_equal(thole_windows_label(w, 0), "");
        thole_windows_release(w);
    }
}

/* The last window is the first that reaches the finish, or the last that starts before it. */
static void sliding_by_its_rule(void **state) {
    (void)state;
    for (uint64_t k = 0; k < dice_cases(3000); k++) {
        dice d = {dice_setting("SEED", 8) + k};
        int64_t start = dice_from(&d, -50, 50), finish = start + dice_from(&d, 1, 100), length = dice_from(&d, 1, 40), step = dice_from(&d, 1, 40);
        size_t want = 0;
        for (int64_t a = start; a < finish; a += step) {
            want++;
            if (a + length >= finish)
                break;
        }
        thole_windows *w;
        assert_int_equal(thole_windows_sliding(&context, start, finish, length, step, &w, &error), THOLE_OK);
        assert_int_equal(thole_windows_count(w), want);
        thole_windows_release(w);
    }
}

static void what_is_refused(void **state) {
    (void)state;
    thole_windows *w = NULL;
    const int64_t good[] = {0, 5}, ends[] = {5, 9}, empty_end[] = {5, 5}, back[] = {5, 0}, equal[] = {3, 3}, shorter[] = {9, 8};
    assert_int_equal(thole_windows_list(&context, NULL, 2, good, empty_end, NULL, &w, &error), THOLE_ARGUMENT);
    assert_string_equal(error.text, "window 2 is empty: it starts at 0.000000005 and finishes at 0.000000005; a window must finish after it starts");
    assert_int_equal(thole_windows_list(&context, NULL, 2, back, ends, NULL, &w, &error), THOLE_ARGUMENT);
    assert_int_equal(thole_windows_list(&context, NULL, 0, good, ends, NULL, &w, &error), THOLE_ARGUMENT);
    assert_int_equal(thole_windows_list(&context, NULL, 2, equal, shorter, NULL, &w, &error), THOLE_ARGUMENT);
    assert_int_equal(thole_windows_sliding(&context, 0, 10, 0, 1, &w, &error), THOLE_ARGUMENT);
    assert_int_equal(thole_windows_sliding(&context, 0, 10, 1, 0, &w, &error), THOLE_ARGUMENT);
    assert_int_equal(thole_windows_sliding(&context, 10, 10, 1, 1, &w, &error), THOLE_ARGUMENT);
    assert_int_equal(thole_windows_sliding(&context, 0, INT64_MAX, 1, 1, &w, &error), THOLE_LIMIT);
    assert_int_equal(thole_windows_sliding(&context, INT64_MIN, INT64_MAX, INT64_MAX, INT64_MAX, &w, &error), THOLE_LIMIT);
    assert_int_equal(thole_windows_sliding(&context, INT64_MIN, INT64_MAX, INT64_MAX, INT64_C(1) << 62, &w, &error), THOLE_OK);
    assert_int_equal(thole_windows_count(w), 3);
    assert_int_equal(thole_windows_finish(w, 2), INT64_MAX);
    thole_windows_release(w);
    assert_int_equal(thole_windows_sliding(&context, INT64_MAX - 5, INT64_MAX, 10, 1, &w, &error), THOLE_LIMIT);
    assert_int_equal(atomic_load(&memory.used), 0);
}

/* The mean of four numbers, in quarters, also where their sum does not fit. */
static void centres_are_exact(void **state) {
    (void)state;
    const int64_t big = INT64_MAX - 3, starts[] = {-7, -2, big - 9}, ends[] = {-4, 8, big};
    const char *const labels[] = {"dawn", NULL, "dusk"};
    thole_windows *w;
    int quarters;
    assert_int_equal(thole_windows_list(&context, NULL, 3, starts, ends, labels, &w, &error), THOLE_OK);
    assert_int_equal(thole_windows_centre(w, 0, &quarters), -6); /* -5.5 */
    assert_int_equal(quarters, 2);
    assert_int_equal(thole_windows_centre(w, 1, &quarters), -2); /* (-7 - 4 - 2 + 8) / 4 = -1.25 */
    assert_int_equal(quarters, 3);
    assert_int_equal(thole_windows_centre(w, 4, &quarters), big - 5); /* big - 4.5 */
    assert_int_equal(quarters, 2);
    assert_string_equal(thole_windows_label(w, 0), "dawn");
    assert_string_equal(thole_windows_label(w, 1), "");
    assert_string_equal(thole_windows_label(w, 2), "dusk");
    thole_windows_release(w);
    assert_int_equal(atomic_load(&memory.used), 0);
}

int main(void) {
    const struct CMUnitTest tests[] = {cmocka_unit_test(sliding_by_hand), cmocka_unit_test(sliding_by_its_rule),
                                       cmocka_unit_test(what_is_refused), cmocka_unit_test(centres_are_exact)};
    return cmocka_run_group_tests(tests, NULL, NULL);
}
