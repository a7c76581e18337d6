#include "support/random_case.h"

#include <string.h>

enum { SPAN = 40 };

/* What links may ever be there. */
typedef enum pattern {
    PATTERN_ANY,        /* events between any two nodes, at any time */
    PATTERN_COMPLETE,   /* every two nodes */
    PATTERN_PAIRS,      /* all but opposite ones: spheres of octahedra and their kin */
    PATTERN_THIRDS,     /* three parts, linked across */
    PATTERN_HALVES,     /* two parts, linked across */
    PATTERN_CYCLE,      /* a cycle, for powers of it */
    PATTERN_CHORDS,     /* a cycle and a few chords */
    PATTERN_SUSPENSION, /* a cycle of the others, under two poles */
    PATTERNS
} pattern;

static void put(judge_case *c, int u, int v, long start, long finish) {
    if (c->events < JUDGE_EVENTS)
        c->event[c->events++] = (judge_event){u, v, start, finish};
}

static void random_windows(dice *d, judge_case *c) {
    c->windows = dice_from(d, 1, 8);
    int style = dice_from(d, 0, 4);
    for (int i = 0; i < c->windows; i++) {
        if (style == 0 || style == 4) { /* one after the other */
            c->from[i] = i * SPAN / c->windows;
            c->to[i] = (i + 1) * SPAN / c->windows;
        } else if (style == 1) { /* half overlapping */
            c->from[i] = i * SPAN / (c->windows + 1);
            c->to[i] = c->from[i] + 2 * SPAN / (c->windows + 1) + 1;
        } else { /* gaps, overlaps, windows inside windows, the same one twice, some after everything */
            c->from[i] = dice_from(d, 0, SPAN + 6);
            c->to[i] = c->from[i] + dice_from(d, 1, style == 2 ? 8 : 30);
        }
    }
    for (int i = 1; i < c->windows; i++) /* by start, then finish */
        for (int k = i; k > 0; k--) {
            long *a = c->from + k, *b = c->to + k;
            if (a[0] > a[-1] || (a[0] == a[-1] && b[0] >= b[-1]))
                break;
            long from = a[0], to = b[0];
            a[0] = a[-1], b[0] = b[-1];
            a[-1] = from, b[-1] = to;
        }
}

static void events_anywhere(dice *d, judge_case *c) {
    static const int most_events[] = {8, 25, 60, 110, 200}, stays[] = {0, 1, 2, 5, 10, 20, 40};
    int most = most_events[dice_below(d, 5)], n = dice_from(d, most / 4, most);
    for (int i = 0; i < n; i++) {
        int u = dice_from(d, 0, c->nodes - 1), v = dice_from(d, 0, c->nodes - 1); /* u = v: a self-loop */
        if (i > 0 && dice_below(d, 4) == 0) { /* a link that returns, the other way round */
            u = c->event[i - 1].v;
            v = c->event[i - 1].u;
        }
        int start = dice_from(d, 0, SPAN);
        put(c, u, v, start, start + stays[dice_below(d, 7)]);
        if (dice_below(d, 10) == 0) /* a row that is there twice */
            put(c, u, v, c->event[c->events - 1].start, c->event[c->events - 1].finish);
    }
}

static bool may_link(pattern kind, int nodes, int u, int v, uint32_t roll) {
    int ring = kind == PATTERN_SUSPENSION ? nodes - 2 : nodes;
    bool next = v - u == 1 || v - u == ring - 1;
    switch (kind) {
    case PATTERN_PAIRS: return u / 2 != v / 2;
    case PATTERN_THIRDS: return u % 3 != v % 3;
    case PATTERN_HALVES: return u % 2 != v % 2;
    case PATTERN_CYCLE: return next;
    case PATTERN_CHORDS: return next || roll % 6 == 0;
    case PATTERN_SUSPENSION: return v >= ring ? u < ring : next;
    default: return true;
    }
}

/* Whether a node without a partner, in PATTERN_PAIRS, comes and goes with all of its links at once: a cone
 * that fills the sphere of the others. */
static bool is_cone(const judge_case *c, pattern kind, int v) {
    return kind == PATTERN_PAIRS && v == c->nodes - 1 && v % 2 == 0;
}

/* A link is on and off by turns: how long each depends on how busy the case is. */
static void links_by_turns(dice *d, judge_case *c, pattern kind) {
    static const int on[] = {6, 15, 30, 60}, off[] = {3, 8, 20};
    int longest_on = on[dice_below(d, 4)], longest_off = off[dice_below(d, 3)];
    if (is_cone(c, kind, c->nodes - 1) && dice_below(d, 3) > 0) {
        longest_on = 90; /* the sphere is there most of the time */
        longest_off = 2;
    }
    dice together = {dice_next(d)};
    for (int u = 0; u < c->nodes; u++)
        for (int v = u + 1; v < c->nodes; v++) {
            if (!may_link(kind, c->nodes, u, v, dice_below(d, 6)))
                continue;
            bool cone = is_cone(c, kind, v);
            dice turns = cone ? together : (dice){dice_next(d)};
            int most_on = cone ? 15 : longest_on, most_off = cone ? 10 : longest_off;
            int t = dice_below(&turns, 2) == 0 ? 0 : dice_from(&turns, 0, most_off);
            while (t < SPAN) {
                int stay = dice_below(&turns, 12) == 0 ? 0 : dice_from(&turns, 1, most_on);
                put(c, u, v, t, t + stay);
                t += stay + dice_from(&turns, 1, most_off);
            }
        }
}

void random_case(dice *d, judge_case *c) {
    static const pattern kinds[] = {PATTERN_ANY,    PATTERN_ANY,       PATTERN_ANY,    PATTERN_COMPLETE,
                                    PATTERN_PAIRS,  PATTERN_PAIRS,     PATTERN_PAIRS,  PATTERN_THIRDS,
                                    PATTERN_HALVES, PATTERN_CYCLE,     PATTERN_CHORDS, PATTERN_CYCLE,
                                    PATTERN_CHORDS, PATTERN_SUSPENSION};
    static const int radii[] = {-1, -1, -1, 0, 1, 1, 1, 1, 2, 2, 3, 8};
    static const unsigned dims[] = {1, 2, 3, 3, 7, 7, 7, 4, 5, 6, 8, 10, 15};
    *c = (judge_case){.nodes = dice_from(d, 3, 9)};
    pattern kind = kinds[dice_below(d, sizeof kinds / sizeof *kinds)];
    random_windows(d, c);
    if (kind == PATTERN_SUSPENSION && c->nodes < 6)
        c->nodes = 6;
    if (kind == PATTERN_PAIRS && dice_below(d, 3) > 0)
        c->nodes = (c->nodes < 6 ? 6 : 8) + dice_from(d, 0, 1);
    c->radius = radii[dice_below(d, sizeof radii / sizeof *radii)];
    /* Voids are at radius 1 here, */
    if (kind == PATTERN_PAIRS || kind == PATTERN_SUSPENSION)
        c->radius = dice_below(d, 6) == 0 ? c->radius : 1;
    /* and here in powers that are spheres of two or three dimensions. */
    if (kind == PATTERN_CYCLE || kind == PATTERN_CHORDS) {
        static const int spheres[][2] = {{6, 2}, {9, 3}, {8, 3}};
        uint32_t i = dice_below(d, 6);
        c->radius = i < 3 ? spheres[i][1] : dice_from(d, 1, 3);
        c->nodes = i < 3 && kind == PATTERN_CYCLE ? spheres[i][0] : c->nodes;
    }
    c->intersection = dice_below(d, 2) == 1;
    c->all_nodes = dice_below(d, 5) == 0;
    c->dims = dims[dice_below(d, sizeof dims / sizeof *dims)];
    if ((kind == PATTERN_PAIRS || kind == PATTERN_CYCLE) && (c->dims < 4 || (c->nodes > 7 && c->dims < 8)))
        c->dims = 15;
    if (kind == PATTERN_ANY)
        events_anywhere(d, c);
    else
        links_by_turns(d, c, kind);
}

/* ---- making a failing case smaller ------------------------------------------------------- */

static void drop_window(judge_case *c, int i) {
    size_t after = (size_t)(c->windows - i - 1);
    memmove(c->from + i, c->from + i + 1, after * sizeof *c->from);
    memmove(c->to + i, c->to + i + 1, after * sizeof *c->to);
    c->windows--;
}

void random_case_shrink(judge_case *c, bool (*fails)(const judge_case *c, void *user), void *user) {
    for (bool again = true; again;) {
        again = false;
        for (int i = 0; i < c->events + c->windows + 8; i++) {
            judge_case less = *c;
            if (i < c->events) {
                less.event[i] = less.event[--less.events];
            } else if (i < c->events + c->windows) {
                if (c->windows == 1)
                    continue;
                drop_window(&less, i - c->events);
            } else {
                less.dims &= ~(1u << (i - c->events - c->windows));
                if (less.dims == 0 || less.dims == c->dims)
                    continue;
            }
            if (fails(&less, user)) {
                *c = less;
                again = true;
                i--; /* what has taken its place */
            }
        }
    }
}
