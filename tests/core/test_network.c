/* The store and its views: order, accounts, attributes, choosing, memory. */
#include <math.h>
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
#include "thole.h"

static const thole_clock plain = {.kind = THOLE_PLAIN, .unit = "s"};

typedef struct item {
    uint32_t from, to;
    int64_t start, finish;
    int64_t seats; /* < 0: missing */
} item;

static thole_status add_items(thole_builder *b, const item *items, size_t n, thole_error *error) {
    uint32_t seats;
    thole_status status = thole_builder_column(b, "seats", THOLE_INTEGER, &seats, error);
    for (uint32_t i = 0; status == THOLE_OK && i < 8; i++) {
        char name[2] = {(char)('A' + i), 0};
        uint32_t node;
        status = thole_builder_node(b, name, 1, &node, error);
    }
    for (size_t i = 0; status == THOLE_OK && i < n; i++) {
        bool kept;
        status = thole_builder_event(b, (thole_event){items[i].from, items[i].to, items[i].start, items[i].finish}, &kept, error);
        thole_value value = {.type = THOLE_INTEGER, .present = items[i].seats >= 0, .integer = items[i].seats};
        if (status == THOLE_OK && kept)
            status = thole_builder_set(b, seats, &value, error);
    }
    return status;
}

static thole_status make(thole_context *context, const item *items, size_t n, thole_network **out, thole_error *error) {
    thole_builder *b;
    thole_status status = thole_builder_open(context, &plain, &b, error);
    if (status != THOLE_OK)
        return status;
    status = add_items(b, items, n, error);
    if (status == THOLE_OK)
        return thole_builder_finish(b, out, error);
    thole_builder_release(b);
    return status;
}

static size_t random_items(dice *d, item *items, size_t n) {
    for (size_t i = 0; i < n; i++) {
        int64_t start = dice_from(d, -20, 20);
        items[i] = (item){dice_below(d, 8), dice_below(d, 8), start, start + dice_from(d, 0, 6), dice_from(d, -1, 9)};
    }
    return n;
}

/* start, finish, then the lower and the higher node */
static int order(const thole_event *a, const thole_event *b) {
    uint32_t al = a->from < a->to ? a->from : a->to, bl = b->from < b->to ? b->from : b->to;
    uint32_t ah = a->from ^ a->to ^ al, bh = b->from ^ b->to ^ bl;
    if (a->start != b->start)
        return a->start < b->start ? -1 : 1;
    if (a->finish != b->finish)
        return a->finish < b->finish ? -1 : 1;
    return al != bl ? (al < bl ? -1 : 1) : ah < bh ? -1 : ah > bh;
}

static void events_are_in_order_whatever_the_order_of_rows(void **state) {
    (void)state;
    for (uint64_t k = 0; k < dice_cases(200); k++) {
        dice d = {dice_setting("SEED", 1) + k};
        static item items[500], shuffled[500];
        size_t n = random_items(&d, items, dice_below(&d, 500));
        memcpy(shuffled, items, sizeof items);
        for (size_t i = n; i > 1; i--) {
            size_t j = dice_below(&d, (uint32_t)i);
            item t = shuffled[i - 1];
            shuffled[i - 1] = shuffled[j];
            shuffled[j] = t;
        }
        thole_memory memory = {0};
        thole_context context = {.memory = &memory, .threads = 1};
        thole_network *a, *b;
        thole_error error;
        assert_int_equal(make(&context, items, n, &a, &error), THOLE_OK);
        assert_int_equal(make(&context, shuffled, n, &b, &error), THOLE_OK);
        const thole_account *account = thole_network_account(a);
        size_t loops = 0, contacts = 0, repeats = 0, seats = 0;
        for (size_t i = 0; i < n; i++) {
            loops += items[i].from == items[i].to;
            contacts += items[i].from != items[i].to && items[i].start == items[i].finish;
            seats += items[i].from != items[i].to && items[i].seats > 0 ? (size_t)items[i].seats : 0;
        }
        size_t count = thole_network_count(a), seats_now = 0;
        for (size_t i = 0; i < count; i++) {
            thole_event e = thole_network_event(a, i), f = thole_network_event(b, i);
            assert_int_equal(order(&e, &f), 0);
            if (i > 0) {
                thole_event before = thole_network_event(a, i - 1);
                assert_true(order(&before, &e) <= 0);
                repeats += order(&before, &e) == 0;
            }
            thole_value value = thole_network_value(a, 0, i);
            seats_now += value.present ? (size_t)value.integer : 0;
        }
        assert_int_equal(account->rows, n);
        assert_int_equal(account->events, count);
        assert_int_equal(account->self_loops, loops);
        assert_int_equal(account->contacts, contacts);
        assert_int_equal(account->repeats, repeats);
        assert_int_equal(count, n - loops);
        assert_int_equal(seats_now, seats); /* attributes travelled with their events */
        thole_network_release(a);
        thole_network_release(b);
        assert_int_equal(atomic_load(&memory.used), 0);
    }
}

static void an_event_takes_at_most_forty_bytes(void **state) {
    (void)state;
    thole_memory memory = {0};
    thole_context context = {.memory = &memory, .threads = 1};
    thole_builder *b;
    thole_network *network;
    thole_error error;
    dice d = {3};
    enum { EVENTS = 200000, NODES = 1000 };
    assert_int_equal(thole_builder_open(&context, &plain, &b, &error), THOLE_OK);
    for (uint32_t i = 0; i < NODES; i++) {
        char name[12];
        uint32_t node;
        int n = snprintf(name, sizeof name, "%u", (unsigned)i);
        assert_int_equal(thole_builder_node(b, name, (size_t)n, &node, &error), THOLE_OK);
    }
    for (int i = 0; i < EVENTS; i++) {
        bool kept;
        int64_t start = (int64_t)dice_below(&d, 1000000);
        assert_int_equal(thole_builder_event(b, (thole_event){dice_below(&d, NODES), dice_below(&d, NODES), start, start + 5}, &kept, &error), THOLE_OK);
    }
    assert_int_equal(thole_builder_finish(b, &network, &error), THOLE_OK);
    double each = (double)atomic_load(&memory.used) / (double)thole_network_count(network);
    printf("%.1f bytes an event, names included\n", each);
    assert_true(each <= 40);
    size_t view_bytes, before = atomic_load(&memory.used);
    thole_network *view;
    assert_int_equal(thole_network_between(&context, network, 0, 1000, &view, &error), THOLE_OK);
    assert_true(thole_network_bytes(view, &view_bytes) == thole_network_bytes(network, NULL)); /* one store */
    assert_int_equal(atomic_load(&memory.used) - before, view_bytes);
    thole_network_release(network); /* the view keeps the store */
    assert_true(thole_network_count(view) > 0);
    thole_network_release(view);
    assert_int_equal(atomic_load(&memory.used), 0);
}

static void between_and_select_choose(void **state) {
    (void)state;
    for (uint64_t k = 0; k < dice_cases(200); k++) {
        dice d = {dice_setting("SEED", 2) + k};
        static item items[200];
        size_t n = random_items(&d, items, 150), want = 0;
        thole_memory memory = {0};
        thole_context context = {.memory = &memory, .threads = 1};
        thole_network *all, *some;
        thole_error error;
        assert_int_equal(make(&context, items, n, &all, &error), THOLE_OK);
        int64_t a = dice_from(&d, -25, 20), b = a + dice_from(&d, 1, 15);
        assert_int_equal(thole_network_between(&context, all, a, b, &some, &error), THOLE_OK);
        size_t count = thole_network_count(some), at = 0;
        for (size_t i = 0; i < thole_network_count(all); i++) {
            thole_event e = thole_network_event(all, i);
            bool in = e.start == e.finish ? a <= e.start && e.start < b : e.start < b && e.finish > a;
            want += in;
            if (in) {
                assert_true(at < count);
                assert_int_equal(thole_network_row(some, at++), i);
            }
        }
        assert_int_equal(count, want);
        thole_summary s;
        assert_int_equal(thole_network_summarise(&context, some, &s, &error), THOLE_OK);
        bool node[8] = {false}, link[8][8] = {{false}};
        size_t nodes = 0, links = 0;
        for (size_t i = 0; i < count; i++) {
            thole_event e = thole_network_event(some, i);
            nodes += !node[e.from];
            nodes += !node[e.to]; /* the ends differ: self-loops are set aside */
            node[e.from] = node[e.to] = true;
            links += !link[e.from][e.to];
            link[e.from][e.to] = link[e.to][e.from] = true;
        }
        assert_int_equal(s.nodes, nodes);
        assert_int_equal(s.links, links);
        assert_int_equal(s.any, count > 0);
        uint32_t bad[2] = {1, 1}, far[1] = {(uint32_t)count};
        thole_network *none = NULL;
        assert_int_equal(thole_network_select(&context, some, bad, 2, &none, &error), THOLE_ARGUMENT);
        assert_int_equal(thole_network_select(&context, some, far, 1, &none, &error), THOLE_ARGUMENT);
        assert_int_equal(thole_network_between(&context, all, 3, 3, &none, &error), THOLE_ARGUMENT);
        assert_int_equal(thole_network_select(&context, some, NULL, 0, &none, &error), THOLE_OK);
        assert_int_equal(thole_network_count(none), 0);
        thole_network_release(none);
        thole_network_release(some);
        thole_network_release(all);
        assert_int_equal(atomic_load(&memory.used), 0);
    }
}

static void columns_change_their_type_with_what_they_hold(void **state) {
    (void)state;
    thole_memory memory = {0};
    thole_context context = {.memory = &memory, .threads = 1};
    thole_builder *b;
    thole_network *network;
    thole_error error;
    bool kept;
    uint32_t u, v, column, other;
    assert_int_equal(thole_builder_open(&context, &plain, &b, &error), THOLE_OK);
    assert_int_equal(thole_builder_node(b, "A", 1, &u, &error), THOLE_OK);
    assert_int_equal(thole_builder_node(b, "B", 1, &v, &error), THOLE_OK);
    assert_int_equal(thole_builder_event(b, (thole_event){u, v, 0, 1}, &kept, &error), THOLE_OK); /* before the column: missing */
    assert_int_equal(thole_builder_column(b, "fare", THOLE_INTEGER, &column, &error), THOLE_OK);
    assert_int_equal(thole_builder_column(b, "fare", THOLE_TEXT, &other, &error), THOLE_ARGUMENT);
    assert_int_equal(thole_builder_column(b, "start", THOLE_TEXT, &other, &error), THOLE_ARGUMENT);
    thole_value seven = {.type = THOLE_INTEGER, .present = true, .integer = 7}, half = {.type = THOLE_REAL, .present = true, .real = 0.1},
                word = {.type = THOLE_TEXT, .present = true, .text = "free", .length = 4};
    assert_int_equal(thole_builder_event(b, (thole_event){u, v, 1, 2}, &kept, &error), THOLE_OK);
    assert_int_equal(thole_builder_set(b, column, &seven, &error), THOLE_OK);
    assert_int_equal(thole_builder_set(b, column, &half, &error), THOLE_ARGUMENT);
    assert_int_equal(thole_builder_promote(b, column, THOLE_REAL, &error), THOLE_OK);
    assert_int_equal(thole_builder_event(b, (thole_event){u, v, 2, 3}, &kept, &error), THOLE_OK);
    assert_int_equal(thole_builder_set(b, column, &half, &error), THOLE_OK);
    assert_int_equal(thole_builder_promote(b, column, THOLE_TEXT, &error), THOLE_OK);
    assert_int_equal(thole_builder_promote(b, column, THOLE_REAL, &error), THOLE_ARGUMENT);
    assert_int_equal(thole_builder_event(b, (thole_event){v, u, 3, 4}, &kept, &error), THOLE_OK);
    assert_int_equal(thole_builder_set(b, column, &word, &error), THOLE_OK);
    assert_int_equal(thole_builder_event(b, (thole_event){u, v, 9, 8}, &kept, &error), THOLE_ARGUMENT);
    assert_int_equal(thole_builder_finish(b, &network, &error), THOLE_OK);
    static const char *const want[] = {NULL, "7", "0.1", "free"};
    for (size_t i = 0; i < 4; i++) {
        thole_value value = thole_network_value(network, column, i);
        assert_int_equal(value.present, want[i] != NULL);
        if (want[i] != NULL)
            assert_string_equal(value.text, want[i]);
    }
    thole_network_release(network);
    /* 2^53 + 1 is no double. */
    assert_int_equal(thole_builder_open(&context, &plain, &b, &error), THOLE_OK);
    assert_int_equal(thole_builder_node(b, "A", 1, &u, &error), THOLE_OK);
    assert_int_equal(thole_builder_node(b, "B", 1, &v, &error), THOLE_OK);
    assert_int_equal(thole_builder_column(b, "id", THOLE_INTEGER, &column, &error), THOLE_OK);
    assert_int_equal(thole_builder_event(b, (thole_event){u, v, 0, 1}, &kept, &error), THOLE_OK);
    seven.integer = (INT64_C(1) << 53) + 1;
    assert_int_equal(thole_builder_set(b, column, &seven, &error), THOLE_OK);
    assert_int_equal(thole_builder_promote(b, column, THOLE_REAL, &error), THOLE_LIMIT);
    assert_int_equal(thole_builder_promote(b, column, THOLE_TEXT, &error), THOLE_OK);
    thole_builder_release(b);
    assert_int_equal(atomic_load(&memory.used), 0);
}

/* ---- filters ---------------------------------------------------------------------------------------- */

enum { MOST_TESTS = 64 };
typedef struct tree {
    thole_test tests[MOST_TESTS];
    thole_value values[MOST_TESTS * 3];
    size_t test_count, value_count;
} tree;

static const char *const fields[] = {"start", "finish", "duration", "seats", "from", "to"};

static void random_test(dice *d, tree *t, thole_test *out, int depth) {
    uint32_t what = dice_below(d, depth > 3 ? 3 : 6);
    if (what >= 3 && t->test_count + 3 < MOST_TESTS) {
        static const thole_test_kind inner[] = {THOLE_TEST_ALL, THOLE_TEST_ANY, THOLE_TEST_NOT};
        size_t n = what == 5 ? 1 : dice_below(d, 4), first = t->test_count;
        t->test_count += n;
        *out = (thole_test){.kind = inner[what - 3], .children = t->tests + first, .child_count = n};
        for (size_t i = 0; i < n; i++)
            random_test(d, t, t->tests + first + i, depth + 1);
        return;
    }
    uint32_t field = dice_below(d, what == 1 ? 4 : 6);
    *out = (thole_test){.field = fields[field]};
    if (what == 2) {
        out->kind = THOLE_TEST_PRESENT;
    } else if (what == 1) {
        out->kind = THOLE_TEST_RANGE;
        int64_t low = dice_from(d, -10, 10);
        out->min = (thole_value){.type = THOLE_INTEGER, .present = dice_below(d, 2) == 1, .integer = low};
        out->max = (thole_value){.type = THOLE_REAL, .present = dice_below(d, 2) == 1, .real = (double)low + 3.5};
    } else {
        out->kind = THOLE_TEST_EQUAL;
        out->value_count = dice_below(d, 4);
        out->values = t->values + t->value_count;
        static const char *const names[] = {"A", "B", "C", "nowhere"};
        for (size_t i = 0; i < out->value_count; i++) {
            const char *name = names[dice_below(d, 4)];
            t->values[t->value_count++] =
                field >= 4 ? (thole_value){.type = THOLE_TEXT, .present = true, .text = name, .length = strlen(name)}
                           : (thole_value){.type = THOLE_INTEGER, .present = true, .integer = dice_from(d, -5, 9)};
        }
    }
}

/* The same test, one event at a time, the slow way. */
static bool holds(const thole_network *net, size_t i, const thole_test *t) {
    bool all = true, any = false;
    for (size_t k = 0; k < t->child_count; k++) {
        bool child = holds(net, i, &t->children[k]);
        all = all && child;
        any = any || child;
    }
    if (t->kind == THOLE_TEST_ALL)
        return all;
    if (t->kind == THOLE_TEST_ANY)
        return any;
    if (t->kind == THOLE_TEST_NOT)
        return !all;
    thole_event e = thole_network_event(net, i);
    bool present = true;
    double x = 0;
    const char *text = NULL;
    if (strcmp(t->field, "start") == 0)
        x = (double)e.start;
    else if (strcmp(t->field, "finish") == 0)
        x = (double)e.finish;
    else if (strcmp(t->field, "duration") == 0)
        x = (double)(e.finish - e.start);
    else if (strcmp(t->field, "seats") == 0) {
        thole_value v = thole_network_value(net, 0, i);
        present = v.present;
        x = (double)v.integer;
    } else
        text = thole_network_node_name(net, strcmp(t->field, "from") == 0 ? e.from : e.to, NULL);
    if (t->kind == THOLE_TEST_PRESENT || !present)
        return present && t->kind == THOLE_TEST_PRESENT;
    if (t->kind == THOLE_TEST_RANGE)
        return (!t->min.present || x >= (double)t->min.integer) && (!t->max.present || x <= t->max.real);
    for (size_t k = 0; k < t->value_count; k++)
        if (text != NULL ? strcmp(text, t->values[k].text) == 0 : x == (double)t->values[k].integer)
            return true;
    return false;
}

static void filters_agree_with_one_event_at_a_time(void **state) {
    (void)state;
    size_t kept = 0, dropped = 0;
    for (uint64_t k = 0; k < dice_cases(500); k++) {
        dice d = {dice_setting("SEED", 4) + k};
        static item items[300];
        static tree t;
        t.test_count = t.value_count = 0;
        size_t n = random_items(&d, items, 200);
        thole_memory memory = {0};
        thole_context context = {.memory = &memory, .threads = 1};
        thole_network *all, *part, *chosen;
        thole_error error = {.text = ""};
        thole_test test;
        random_test(&d, &t, &test, 0);
        assert_int_equal(make(&context, items, n, &all, &error), THOLE_OK);
        assert_int_equal(thole_network_between(&context, all, -15, 15, &part, &error), THOLE_OK); /* a view of a view */
        bool drop = dice_below(&d, 2) == 1;
        if (thole_network_keep(&context, part, &test, drop, &chosen, &error) != THOLE_OK)
            fail_msg("%s", error.text);
        size_t at = 0;
        for (size_t i = 0; i < thole_network_count(part); i++)
            if (holds(part, i, &test) != drop) {
                assert_true(at < thole_network_count(chosen));
                assert_int_equal(thole_network_row(chosen, at++), thole_network_row(part, i));
            }
        assert_int_equal(at, thole_network_count(chosen));
        kept += at;
        dropped += thole_network_count(part) - at;
        thole_network_release(chosen);
        thole_network_release(part);
        thole_network_release(all);
        assert_int_equal(atomic_load(&memory.used), 0);
    }
    assert_true(kept > dice_cases(10000) && dropped > dice_cases(10000)); /* both sides were seen */
}

static void wrong_filters_are_refused(void **state) {
    (void)state;
    thole_memory memory = {0};
    thole_context context = {.memory = &memory, .threads = 1};
    thole_network *all, *none = NULL;
    thole_error error;
    static const item one[] = {{0, 1, 0, 1, 5}};
    thole_value word = {.type = THOLE_TEXT, .present = true, .text = "x", .length = 1}, big = {.type = THOLE_INTEGER, .present = true};
    assert_int_equal(make(&context, one, 1, &all, &error), THOLE_OK);
    thole_test misspelt = {.kind = THOLE_TEST_PRESENT, .field = "seast"}, text = {.kind = THOLE_TEST_EQUAL, .field = "seats", .values = &word, .value_count = 1},
               range = {.kind = THOLE_TEST_RANGE, .field = "from", .min = big}, deep[80];
    assert_int_equal(thole_network_keep(&context, all, &misspelt, false, &none, &error), THOLE_ARGUMENT);
    assert_string_equal(error.text, "links have no field \"seast\": did you mean \"seats\"?");
    assert_int_equal(thole_network_keep(&context, all, &text, false, &none, &error), THOLE_ARGUMENT);
    assert_int_equal(thole_network_keep(&context, all, &range, false, &none, &error), THOLE_ARGUMENT);
    for (int i = 0; i < 80; i++)
        deep[i] = (thole_test){.kind = THOLE_TEST_NOT, .children = &deep[i + 1 < 80 ? i + 1 : i], .child_count = 1};
    deep[79] = (thole_test){.kind = THOLE_TEST_ALL};
    assert_int_equal(thole_network_keep(&context, all, &deep[0], false, &none, &error), THOLE_LIMIT);
    assert_int_equal(thole_network_keep(&context, all, &deep[70], false, &none, &error), THOLE_OK);
    thole_network_release(none);
    /* 2^53 + 1 and 2^53 are the same double and yet not equal. */
    thole_value close = {.type = THOLE_REAL, .present = true, .real = 9007199254740992.0};
    thole_network *large, *found;
    const item huge[] = {{0, 1, 0, 1, (INT64_C(1) << 53) + 1}, {0, 1, 1, 2, INT64_C(1) << 53}};
    thole_test same = {.kind = THOLE_TEST_EQUAL, .field = "seats", .values = &close, .value_count = 1};
    assert_int_equal(make(&context, huge, 2, &large, &error), THOLE_OK);
    assert_int_equal(thole_network_keep(&context, large, &same, false, &found, &error), THOLE_OK);
    assert_int_equal(thole_network_count(found), 1);
    thole_network_release(found);
    thole_network_release(large);
    thole_network_release(all);
    assert_int_equal(atomic_load(&memory.used), 0);
}

/* ---- failing memory ------------------------------------------------------------------------------------ */

static void every_allocation_fails(void **state) {
    (void)state;
    dice d = {9};
    static item items[300];
    size_t n = random_items(&d, items, 300);
    thole_value five = {.type = THOLE_INTEGER, .present = true, .integer = 5};
    thole_test leaf = {.kind = THOLE_TEST_EQUAL, .field = "seats", .values = &five, .value_count = 1},
               test = {.kind = THOLE_TEST_ANY, .children = &leaf, .child_count = 1};
    long told = 0;
    for (long k = 0;; k++) {
        faults f = {.left = k, .for_good = true};
        thole_memory memory = faults_memory(&f);
        thole_context context = {.memory = &memory, .threads = 1};
        thole_network *all = NULL, *some = NULL;
        thole_windows *windows = NULL;
        thole_summary s;
        thole_error error = {.status = THOLE_OK, .text = ""};
        int64_t starts[] = {0, 5}, finishes[] = {5, 9};
        const char *const labels[] = {"first", NULL};
        thole_status status = make(&context, items, n, &all, &error);
        if (status == THOLE_OK)
            status = thole_network_keep(&context, all, &test, false, &some, &error);
        if (status == THOLE_OK)
            status = thole_network_summarise(&context, some, &s, &error);
        if (status == THOLE_OK)
            status = thole_windows_list(&context, NULL, 2, starts, finishes, labels, &windows, &error);
        bool done = status == THOLE_OK && f.left > 0;
        if (status != THOLE_OK) {
            told++;
            assert_int_equal(status, THOLE_NO_MEMORY);
            assert_int_equal(error.status, THOLE_NO_MEMORY);
        }
        thole_windows_release(windows);
        thole_network_release(some);
        thole_network_release(all);
        assert_false(f.overwritten);
        assert_int_equal(f.blocks, 0);
        assert_int_equal(atomic_load(&memory.used), 0);
        if (done)
            break;
    }
    printf("%ld failures were told\n", told);
    assert_true(told > 15);
}

int main(void) {
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(events_are_in_order_whatever_the_order_of_rows), cmocka_unit_test(an_event_takes_at_most_forty_bytes),
        cmocka_unit_test(between_and_select_choose), cmocka_unit_test(columns_change_their_type_with_what_they_hold),
        cmocka_unit_test(filters_agree_with_one_event_at_a_time), cmocka_unit_test(wrong_filters_are_refused),
        cmocka_unit_test(every_allocation_fails)};
    return cmocka_run_group_tests(tests, NULL, NULL);
}
