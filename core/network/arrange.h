/* Inside the network: the order of a store's events. */
#ifndef TN_ARRANGE_H
#define TN_ARRANGE_H

#include "base/memory.h"
#include "network/network.h"

static inline uint32_t tn_low_node(const thole_event *e) { return e->from < e->to ? e->from : e->to; }
static inline uint32_t tn_high_node(const thole_event *e) { return e->from < e->to ? e->to : e->from; }

/* Negative, 0 or positive as `a` comes before `b`, is equal or comes after: by start, finish, lower node,
 * higher node. */
static inline int tn_event_order(const thole_event *a, const thole_event *b) {
    if (a->start != b->start)
        return a->start < b->start ? -1 : 1;
    if (a->finish != b->finish)
        return a->finish < b->finish ? -1 : 1;
    if (tn_low_node(a) != tn_low_node(b))
        return tn_low_node(a) < tn_low_node(b) ? -1 : 1;
    return tn_high_node(a) < tn_high_node(b) ? -1 : tn_high_node(a) > tn_high_node(b);
}

/* Sort events so, equal ones by the order they are in. *row (not set when the events are in order already, so
 * initialise it to NULL) gets n numbers: the places they had before, when `with_rows`; tb_free it. False when
 * memory is refused, with the events in some order. Takes time linear in n but for long runs of close times
 * far apart. */
bool tn_arrange(thole_memory *memory, thole_event *events, size_t n, bool with_rows, uint32_t **row);

#endif
