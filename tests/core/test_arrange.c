/* The order of events against a stable comparison sort, for logs in order, nearly in order, and in none. */
#include <setjmp.h>
#include <stdarg.h>
#include <stdlib.h>
#include <string.h>

#include <cmocka.h>

#include "network/arrange.h"

static uint64_t seed = UINT64_C(0x853C49E6748FEA9B);

static uint64_t next_random(void) {
    seed ^= seed << 13;
    seed ^= seed >> 7;
    return seed ^= seed << 17;
}

/* The C library's sort over (start, finish, lower node, higher node, place), written out on its own. */
typedef struct plain {
    thole_event event;
    uint32_t low, high, place;
} plain;

static int compare(const void *x, const void *y) {
    const plain *a = x, *b = y;
    if (a->event.start != b->event.start)
        return a->event.start < b->event.start ? -1 : 1;
    if (a->event.finish != b->event.finish)
        return a->event.finish < b->event.finish ? -1 : 1;
    if (a->low != b->low)
        return a->low < b->low ? -1 : 1;
    if (a->high != b->high)
        return a->high < b->high ? -1 : 1;
    return a->place < b->place ? -1 : 1;
}

enum { ORDERED, NEARLY, ANYHOW, FEW_TIMES, FAR_APART, ONE_TIME, SHAPES };

static thole_event make_event(int shape, size_t i, size_t n) {
    uint32_t nodes = shape == ONE_TIME ? 40 : 1u << (1 + n % 20);
    thole_event e = {.from = (uint32_t)(next_random() % nodes), .to = (uint32_t)(next_random() % nodes)};
    int64_t at = (int64_t)i * 1000000000;
    switch (shape) {
    case ORDERED: e.start = at; break;
    case NEARLY: e.start = at + (int64_t)(next_random() % 50) * 1000000000; break;
    case ANYHOW: e.start = (int64_t)(next_random() >> 2) * (next_random() % 2 ? 1 : -1); break;
    case FEW_TIMES: e.start = (int64_t)(next_random() % 5) - 2; break;
    case FAR_APART:
        e.start = next_random() % 1000 == 0 ? INT64_MIN : (int64_t)(next_random() % 100000);
        break;
    default: e.start = 7; break;
    }
    e.finish = shape == ONE_TIME ? 9 : e.start + (int64_t)(next_random() % 3) * 60;
    return e;
}

static void test_against_library(void **state) {
    (void)state;
    static const size_t SIZES[] = {0, 1, 2, 3, 24, 25, 26, 300, 5000, 32768, 32769, 70000, 150000};
    for (size_t k = 0; k < sizeof SIZES / sizeof *SIZES; k++) {
        for (int shape = 0; shape < SHAPES; shape++) {
            thole_memory memory = {0};
            size_t n = SIZES[k];
            thole_event *events = malloc((n + 1) * sizeof *events);
            plain *wanted = malloc((n + 1) * sizeof *wanted);
            assert_true(events != NULL && wanted != NULL);
            for (size_t i = 0; i < n; i++) {
                events[i] = make_event(shape, i, n + k);
                bool turned = events[i].from > events[i].to;
                wanted[i] = (plain){events[i], turned ? events[i].to : events[i].from,
                                    turned ? events[i].from : events[i].to, (uint32_t)i};
            }
            bool with_rows = (k + (size_t)shape) % 2 == 0;
            uint32_t *row = NULL;
            assert_true(tn_arrange(&memory, events, n, with_rows, &row));
            qsort(wanted, n, sizeof *wanted, compare);
            for (size_t i = 0; i < n; i++) {
                const thole_event *w = &wanted[i].event;
                if (events[i].start != w->start || events[i].finish != w->finish ||
                    events[i].from != w->from || events[i].to != w->to ||
                    (row != NULL && row[i] != wanted[i].place) ||
                    (row == NULL && with_rows && wanted[i].place != i))
                    fail_msg("shape %d of %zu: event %zu", shape, n, i);
            }
            assert_true(with_rows || row == NULL);
            tb_free(&memory, row, n, sizeof *row);
            assert_int_equal(atomic_load(&memory.used), 0);
            free(events);
            free(wanted);
        }
    }
}

/* A log in near order is sorted without a second copy of it. */
static void test_little_memory(void **state) {
    (void)state;
    enum { N = 400000 };
    thole_memory memory = {0};
    thole_event *events = malloc(N * sizeof *events);
    assert_non_null(events);
    for (size_t i = 0; i < N; i++)
        events[i] = make_event(NEARLY, i, N);
    uint32_t *row = NULL;
    assert_true(tn_arrange(&memory, events, N, false, &row));
    assert_true(atomic_load(&memory.peak) < N * sizeof *events / 10);
    free(events);
}

/* Every allocation refused: false, nothing lost, all given back. */
static long until;

static void *refusing(void *user, void *block, size_t old_bytes, size_t new_bytes) {
    (void)user;
    if (new_bytes == 0) {
        free(block);
        return NULL;
    }
    return new_bytes > old_bytes && until-- == 0 ? NULL : realloc(block, new_bytes);
}

static void test_refused_memory(void **state) {
    (void)state;
    enum { N = 100000 };
    thole_memory memory = {.resize = refusing};
    thole_event *events = malloc(N * sizeof *events);
    assert_non_null(events);
    long n = 0;
    for (bool fine = false; !fine; n++) {
        uint32_t *row = NULL;
        uint64_t before = 0, after = 0;
        for (size_t i = 0; i < N; i++) {
            events[i] = make_event(ANYHOW, i, N);
            before += (uint64_t)events[i].start * 31 + events[i].from;
        }
        until = n;
        fine = tn_arrange(&memory, events, N, true, &row);
        for (size_t i = 0; i < N; i++)
            after += (uint64_t)events[i].start * 31 + events[i].from;
        assert_true(after == before);
        assert_true(fine || row == NULL);
        tb_free(&memory, row, N, sizeof *row);
        assert_int_equal(atomic_load(&memory.used), 0);
    }
    assert_true(n > 5);
    free(events);
}

int main(void) {
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_against_library),
        cmocka_unit_test(test_little_memory),
        cmocka_unit_test(test_refused_memory),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
