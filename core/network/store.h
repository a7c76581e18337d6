/* The store that views of a network share, and the view itself. */
#ifndef TN_STORE_H
#define TN_STORE_H

#include "base/names.h"
#include "network/network.h"

#define TN_MOST_EVENTS UINT32_C(4294967290)

#define TN_NO_INTEGER INT64_MIN /* missing; text uses TB_NO_NAME, reals NaN */

/* One attribute; exactly one of the arrays is used, by type. */
typedef struct tn_column {
    uint32_t name; /* in store->names */
    thole_type type;
    size_t cap; /* items of the array */
    int64_t *integer;
    double *real;
    uint32_t *text; /* in store->texts */
} tn_column;

/* Everything read. Immutable once a network is handed out. */
typedef struct tn_store {
    tb_refs refs;
    thole_memory *memory;
    thole_clock clock; /* its zone retained */
    tb_names nodes, texts, names;
    TB_VEC(thole_event) events; /* by (start, finish, lower node, higher node, order added) */
    TB_VEC(tn_column) columns;
    thole_account account;
    TB_VEC(thole_tally) reasons;
    TB_VEC(thole_tally) remarks;
} tn_store;

struct thole_network {
    tb_refs refs;
    tn_store *store;
    uint32_t *rows; /* events of the store in this view, ascending; NULL: all of them */
    size_t count;
};

void tn_store_release(tn_store *store);

/* A view of `count` rows of a store (rows NULL: all), taking `rows` over. NULL when refused, with
 * rows still the caller's. The store is retained. */
thole_network *tn_view_new(tn_store *store, uint32_t *rows, size_t count);

/* Free a column's array. */
void tn_column_clear(thole_memory *memory, tn_column *column);

static inline uint32_t tn_row(const thole_network *network, size_t i) {
    return network->rows == NULL ? (uint32_t)i : network->rows[i];
}

#endif
