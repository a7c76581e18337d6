/* Sorting events by spreading them over buckets of time, and each bucket again, until few are left in one.
 * When all starts in a bucket are equal, the finishes are spread, and then the nodes.
 *
 * Logs are mostly in order of time already, or nearly: then they are sorted piece by piece, each merged into
 * those before it, with a small copy instead of one of everything. Every pass keeps the order of equals. */
#include "network/arrange.h"

enum { FEW = 24, AIM = 2, MOST_BITS = 14, KEYS = 4, NEAR = 1 << 15, COUNTS = (1 << MOST_BITS) + 1 };

static const uint64_t SIGN = UINT64_C(1) << 63;

/* Key 0 .. 3 as a number that sorts as unsigned. */
static inline uint64_t key_of(const thole_event *e, int key) {
    return key == 0   ? (uint64_t)e->start ^ SIGN
           : key == 1 ? (uint64_t)e->finish ^ SIGN
           : key == 2 ? tn_low_node(e)
                      : tn_high_node(e);
}

/* Two copies of everything; a part of the events is in one of them, at the same place. `rows` may be NULL. */
typedef struct copies {
    thole_event *events[2];
    uint32_t *rows[2];
    uint32_t *begin; /* COUNTS, for one spread at a time */
} copies;

static void insert(thole_event *events, uint32_t *rows, size_t n) {
    for (size_t i = 1; i < n; i++) {
        thole_event event = events[i];
        uint32_t row = rows != NULL ? rows[i] : 0;
        size_t j = i;
        for (; j > 0 && tn_event_order(&events[j - 1], &event) > 0; j--) {
            events[j] = events[j - 1];
            if (rows != NULL)
                rows[j] = rows[j - 1];
        }
        events[j] = event;
        if (rows != NULL)
            rows[j] = row;
    }
}

/* Move places first .. first + n - 1 from copy `in` to copy 0. */
static void bring_home(copies *c, int in, size_t first, size_t n) {
    if (in == 0)
        return;
    memcpy(c->events[0] + first, c->events[1] + first, n * sizeof *c->events[0]);
    if (c->rows[0] != NULL)
        memcpy(c->rows[0] + first, c->rows[1] + first, n * sizeof *c->rows[0]);
}

/* Bits of a number; 0 for 0. */
static unsigned width_of(uint64_t value) {
    unsigned n = 0;
    for (; value != 0; value >>= 1)
        n++;
    return n;
}

/* Move the n events from `first` on from copy `in` to the other, by ((key - least) >> shift), below
 * `buckets`. */
static void scatter(copies *c, int in, size_t first, size_t n, int key, uint64_t least, unsigned shift,
                    size_t buckets) {
    const thole_event *events = c->events[in] + first;
    thole_event *to = c->events[1 - in] + first;
    memset(c->begin, 0, (buckets + 1) * sizeof *c->begin);
    for (size_t i = 0; i < n; i++)
        c->begin[((key_of(&events[i], key) - least) >> shift) + 1]++;
    for (size_t b = 0; b < buckets; b++)
        c->begin[b + 1] += c->begin[b];
    for (size_t i = 0; i < n; i++) {
        uint32_t place = c->begin[(key_of(&events[i], key) - least) >> shift]++;
        to[place] = events[i];
        if (c->rows[0] != NULL)
            c->rows[1 - in][first + place] = c->rows[in][first + i];
    }
}

/* Sort the n events from `first` on, which lie in copy `in` and are equal in the keys before `key`, into copy
 * 0. Each level takes some bits off the range of one key, at least two, so that the recursion is at most 96
 * deep. */
static void spread(copies *c, int in, size_t first, size_t n, int key) {
    const thole_event *events = c->events[in] + first;
    uint64_t least = 0, most = 0;
    for (; n > FEW && key < KEYS; key++) {
        least = most = key_of(&events[0], key);
        for (size_t i = 1; i < n; i++) {
            uint64_t k = key_of(&events[i], key);
            least = k < least ? k : least;
            most = k > most ? k : most;
        }
        if (least != most)
            break;
    }
    if (n <= FEW || key == KEYS) {
        bring_home(c, in, first, n);
        if (n <= FEW)
            insert(c->events[0] + first, c->rows[0] != NULL ? c->rows[0] + first : NULL, n);
        return;
    }
    unsigned bits = width_of(n / AIM), width = width_of(most - least);
    bits = bits < MOST_BITS ? bits : MOST_BITS;
    unsigned shift = width > bits ? width - bits : 0;
    scatter(c, in, first, n, key, least, shift, (size_t)((most - least) >> shift) + 1);
    /* the buckets are found again by their keys, as `begin` is for the next spread */
    const thole_event *to = c->events[1 - in] + first;
    for (size_t from = 0, end; from < n; from = end) {
        uint64_t bucket = (key_of(&to[from], key) - least) >> shift;
        for (end = from + 1; end < n && (key_of(&to[end], key) - least) >> shift == bucket;)
            end++;
        spread(c, 1 - in, first + from, end - from, shift == 0 ? key + 1 : key);
    }
}

/* ---- logs that are nearly in order ---------------------------------------- */

/* Merge places mid .. end - 1, in order, into the places before them, in order too, when they reach back at
 * most NEAR places. Copy 1 has room for NEAR. */
static bool merge_back(copies *c, size_t mid, size_t end) {
    thole_event *events = c->events[0], *left = c->events[1];
    uint32_t *rows = c->rows[0], *left_rows = c->rows[1];
    size_t low = mid > NEAR ? mid - NEAR : 0, high = mid;
    if (low > 0 && tn_event_order(&events[low - 1], &events[mid]) > 0)
        return false;
    while (low < high) { /* the first place that comes after what is merged in */
        size_t middle = low + (high - low) / 2;
        if (tn_event_order(&events[middle], &events[mid]) <= 0)
            low = middle + 1;
        else
            high = middle;
    }
    size_t n = mid - low, i = 0, j = mid;
    memcpy(left, events + low, n * sizeof *left);
    if (rows != NULL)
        memcpy(left_rows, rows + low, n * sizeof *rows);
    for (size_t to = low; i < n; to++) {
        bool take_left = j == end || tn_event_order(&left[i], &events[j]) <= 0;
        events[to] = take_left ? left[i] : events[j];
        if (rows != NULL)
            rows[to] = take_left ? left_rows[i] : rows[j];
        i += take_left;
        j += !take_left;
    }
    return true;
}

/* Sort by pieces of NEAR events, which stay in the cache, each merged into those before it. False when the
 * events are further from their order than that; they are in some other order then, with equals still in
 * theirs. */
static bool arrange_near(copies *c, size_t n) {
    for (size_t first = 0; first < n; first += NEAR) {
        size_t count = n - first < NEAR ? n - first : NEAR;
        copies piece = *c;
        piece.events[0] += first;
        if (piece.rows[0] != NULL)
            piece.rows[0] += first;
        spread(&piece, 0, 0, count, 0);
        if (first > 0 && !merge_back(c, first, first + count))
            return false;
    }
    return true;
}

/* Make copy 1 of n places. */
static bool make_copy(copies *c, thole_memory *memory, size_t n) {
    c->events[1] = tb_resize(memory, NULL, 0, n, sizeof *c->events[1]);
    c->rows[1] = c->rows[0] != NULL ? tb_resize(memory, NULL, 0, n, sizeof *c->rows[1]) : NULL;
    return c->events[1] != NULL && (c->rows[0] == NULL || c->rows[1] != NULL);
}

static void drop_copy(copies *c, thole_memory *memory, size_t n) {
    tb_free(memory, c->events[1], n, sizeof *c->events[1]);
    tb_free(memory, c->rows[1], n, sizeof *c->rows[1]);
}

bool tn_arrange(thole_memory *memory, thole_event *events, size_t n, bool with_rows, uint32_t **row) {
    size_t i = 1;
    while (i < n && tn_event_order(&events[i - 1], &events[i]) <= 0)
        i++;
    if (i >= n)
        return true;
    copies c = {.events = {events, NULL}};
    size_t small = n < NEAR ? n : NEAR;
    if (with_rows) {
        if ((c.rows[0] = tb_resize(memory, NULL, 0, n, sizeof *c.rows[0])) == NULL)
            return false;
        for (i = 0; i < n; i++)
            c.rows[0][i] = (uint32_t)i;
    }
    c.begin = tb_resize(memory, NULL, 0, COUNTS, sizeof *c.begin);
    bool fine = c.begin != NULL && make_copy(&c, memory, small), done = fine && arrange_near(&c, n);
    drop_copy(&c, memory, small);
    if (fine && !done) {
        fine = make_copy(&c, memory, n);
        if (fine)
            spread(&c, 0, 0, n, 0);
        drop_copy(&c, memory, n);
    }
    tb_free(memory, c.begin, COUNTS, sizeof *c.begin);
    if (fine)
        *row = c.rows[0];
    else
        tb_free(memory, c.rows[0], n, sizeof *c.rows[0]);
    return fine;
}
