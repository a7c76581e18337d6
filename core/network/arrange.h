/* Inside the network: the order of a store's events. */
#ifndef TN_ARRANGE_H
#define TN_ARRANGE_H

#include "base/memory.h"
#include "network/network.h"

/* Negative, 0 or positive as `a` comes before `b`, is equal or comes after: by start, finish, lower node, higher node. */
int tn_event_order(const thole_event *a, const thole_event *b);

/* Sort events so, equal ones by the order they are in. *row (not set when the events are in order already, so
 * initialise it to NULL) gets n numbers: the places they had before, when `with_rows`; tb_free it. False when memory
 * is refused, with the events in some order. Takes time linear in n but for long runs of close times far apart. */
bool tn_arrange(thole_memory *memory, thole_event *events, size_t n, bool with_rows, uint32_t **row);

#endif
