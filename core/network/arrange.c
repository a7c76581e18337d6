/* Sorting events by spreading them over buckets of time, and each bucket again, until few are left in one.
 *
 * Logs are mostly in order of time already: then an event moves only a little, and the copies stay in the cache. When all
 * starts in a bucket are equal, the finishes are spread, and then the nodes. Every pass keeps the order of
 * equals. */
#include "network/arrange.h"

enum { FEW = 24, AIM = 8, MOST_BITS = 12, KEYS = 4 };

static const uint64_t SIGN = UINT64_C(1) << 63;

static inline uint32_t low_node(const thole_event *e) { return e->from < e->to ? e->from : e->to; }
static inline uint32_t high_node(const thole_event *e) { return e->from < e->to ? e->to : e->from; }

/* Key 0 .. 3 as a number that sorts as unsigned. */
static inline uint64_t key_of(const thole_event *e, int key) {
    return key == 0   ? (uint64_t)e->start ^ SIGN
           : key == 1 ? (uint64_t)e->finish ^ SIGN
           : key == 2 ? low_node(e)
                      : high_node(e);
}

int tn_event_order(const thole_event *a, const thole_event *b) {
    if (a->start != b->start)
        return a->start < b->start ? -1 : 1;
    if (a->finish != b->finish)
        return a->finish < b->finish ? -1 : 1;
    if (low_node(a) != low_node(b))
        return low_node(a) < low_node(b) ? -1 : 1;
    return high_node(a) < high_node(b) ? -1 : high_node(a) > high_node(b);
}

/* Two copies of everything; a part of the events is in one of them, at the same place. `rows` may be NULL. */
typedef struct copies {
    thole_event *events[2];
    uint32_t *rows[2];
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

/* Sort the n events from `first` on, which lie in copy `in` and are equal in the keys before `key`, into copy 0. Each
 * level takes MOST_BITS off the range of one key, so that the recursion is at most 4 * 6 deep. */
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
    uint32_t begin[(1 << MOST_BITS) + 1];
    size_t buckets = (size_t)((most - least) >> shift) + 1;
    memset(begin, 0, (buckets + 1) * sizeof *begin);
    for (size_t i = 0; i < n; i++)
        begin[((key_of(&events[i], key) - least) >> shift) + 1]++;
    for (size_t b = 0; b < buckets; b++)
        begin[b + 1] += begin[b];
    thole_event *to = c->events[1 - in] + first;
    for (size_t i = 0; i < n; i++) {
        uint32_t place = begin[(key_of(&events[i], key) - least) >> shift]++;
        to[place] = events[i];
        if (c->rows[0] != NULL)
            c->rows[1 - in][first + place] = c->rows[in][first + i];
    }
    for (size_t b = 0, from = 0; b < buckets; from = begin[b++]) /* begin[b] is where bucket b ends now */
        if (begin[b] > from)
            spread(c, 1 - in, first + from, begin[b] - from, shift == 0 ? key + 1 : key);
}

bool tn_arrange(thole_memory *memory, thole_event *events, size_t n, bool with_rows, uint32_t **row) {
    size_t i = 1;
    while (i < n && tn_event_order(&events[i - 1], &events[i]) <= 0)
        i++;
    if (i >= n)
        return true;
    copies c = {.events = {events, tb_resize(memory, NULL, 0, n, sizeof *events)}};
    bool fine = c.events[1] != NULL;
    for (int k = 0; k < 2 && with_rows && fine; k++)
        fine = (c.rows[k] = tb_resize(memory, NULL, 0, n, sizeof *c.rows[k])) != NULL;
    if (fine) {
        for (i = 0; with_rows && i < n; i++)
            c.rows[0][i] = (uint32_t)i;
        spread(&c, 0, 0, n, 0);
        *row = c.rows[0];
    } else {
        tb_free(memory, c.rows[0], n, sizeof *c.rows[0]);
    }
    tb_free(memory, c.rows[1], n, sizeof *c.rows[1]);
    tb_free(memory, c.events[1], n, sizeof *events);
    return fine;
}
