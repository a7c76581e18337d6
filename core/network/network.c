/* Views of a store: what is in them and how they are made. */
#include <math.h>

#include "base/parallel.h"
#include "base/sort.h"
#include "network/store.h"

void tn_column_clear(thole_memory *memory, tn_column *column) {
    tb_free(memory, column->integer, column->cap, sizeof *column->integer);
    tb_free(memory, column->real, column->cap, sizeof *column->real);
    tb_free(memory, column->text, column->cap, sizeof *column->text);
    column->integer = NULL;
    column->real = NULL;
    column->text = NULL;
    column->cap = 0;
}

void tn_store_release(tn_store *store) {
    if (store == NULL || !tb_unref(&store->refs))
        return;
    thole_memory *memory = store->memory;
    for (size_t i = 0; i < store->columns.n; i++)
        tn_column_clear(memory, &store->columns.at[i]);
    TB_VEC_CLEAR(memory, &store->columns);
    TB_VEC_CLEAR(memory, &store->events);
    TB_VEC_CLEAR(memory, &store->reasons);
    TB_VEC_CLEAR(memory, &store->remarks);
    tb_names_clear(memory, &store->nodes);
    tb_names_clear(memory, &store->texts);
    tb_names_clear(memory, &store->names);
    thole_zone_release(store->clock.zone);
    tb_free(memory, store, 1, sizeof *store);
}

thole_network *tn_view_new(tn_store *store, uint32_t *rows, size_t count) {
    thole_network *network = tb_new(store->memory, 1, sizeof *network);
    if (network == NULL)
        return NULL;
    atomic_init(&network->refs, 1);
    tb_ref(&store->refs);
    network->store = store;
    network->rows = rows;
    network->count = count;
    return network;
}

thole_network *thole_network_retain(thole_network *network) {
    tb_ref(&network->refs);
    return network;
}

void thole_network_release(thole_network *network) {
    if (network == NULL || !tb_unref(&network->refs))
        return;
    tn_store *store = network->store;
    tb_free(store->memory, network->rows, network->count > 0 ? network->count : 1, sizeof *network->rows);
    tb_free(store->memory, network, 1, sizeof *network);
    tn_store_release(store);
}

const thole_clock *thole_network_clock(const thole_network *network) { return &network->store->clock; }
const thole_account *thole_network_account(const thole_network *network) { return &network->store->account; }
size_t thole_network_count(const thole_network *network) { return network->count; }
uint32_t thole_network_row(const thole_network *network, size_t i) { return tn_row(network, i); }
thole_event thole_network_event(const thole_network *network, size_t i) {
    return network->store->events.at[tn_row(network, i)];
}

uint32_t thole_network_nodes(const thole_network *network) { return (uint32_t)network->store->nodes.start.n; }
const char *thole_network_node_name(const thole_network *network, uint32_t node, size_t *length) {
    return tb_names_get(&network->store->nodes, node, length);
}
bool thole_network_find_node(const thole_network *network, const char *name, size_t length, uint32_t *node) {
    uint32_t found = tb_names_find(&network->store->nodes, name, length);
    if (found == TB_NO_NAME)
        return false;
    *node = found;
    return true;
}

uint32_t thole_network_columns(const thole_network *network) { return (uint32_t)network->store->columns.n; }
const char *thole_network_column_name(const thole_network *network, uint32_t column) {
    return tb_names_get(&network->store->names, network->store->columns.at[column].name, NULL);
}
thole_type thole_network_column_type(const thole_network *network, uint32_t column) {
    return network->store->columns.at[column].type;
}
bool thole_network_find_column(const thole_network *network, const char *name, uint32_t *column) {
    uint32_t found = tb_names_find(&network->store->names, name, strlen(name));
    if (found == TB_NO_NAME)
        return false;
    *column = found; /* names are put in column by column */
    return true;
}

thole_value thole_network_value(const thole_network *network, uint32_t column, size_t i) {
    const tn_column *c = &network->store->columns.at[column];
    uint32_t row = tn_row(network, i);
    thole_value value = {.type = c->type};
    switch (c->type) {
    case THOLE_INTEGER:
        value.integer = c->integer[row];
        value.present = value.integer != TN_NO_INTEGER;
        break;
    case THOLE_REAL:
        value.real = c->real[row];
        value.present = !isnan(value.real);
        break;
    case THOLE_TEXT:
        value.present = c->text[row] != TB_NO_NAME;
        if (value.present)
            value.text = tb_names_get(&network->store->texts, c->text[row], &value.length);
        break;
    }
    return value;
}

size_t thole_network_bytes(const thole_network *network, size_t *view_bytes) {
    const tn_store *store = network->store;
    if (view_bytes != NULL)
        *view_bytes = sizeof *network + (network->rows == NULL ? 0 : network->count * sizeof *network->rows);
    size_t bytes = sizeof *store + store->events.cap * sizeof *store->events.at +
                   store->columns.cap * sizeof *store->columns.at + tb_names_bytes(&store->nodes) +
                   tb_names_bytes(&store->texts) + tb_names_bytes(&store->names);
    for (size_t i = 0; i < store->columns.n; i++)
        bytes += store->columns.at[i].cap * (store->columns.at[i].type == THOLE_TEXT ? 4 : 8);
    return bytes;
}

/* ---- summary -------------------------------------------------------------------- */

/* Distinct unordered pairs among the events of a view. */
static bool count_links(const thole_network *network, thole_memory *memory, uint64_t *links) {
    size_t n = network->count;
    *links = 0;
    if (n == 0)
        return true;
    uint64_t *keys = tb_resize(memory, NULL, 0, 2 * n, sizeof *keys);
    if (keys == NULL)
        return false;
    for (size_t i = 0; i < n; i++) {
        thole_event e = thole_network_event(network, i);
        keys[i] = e.from < e.to ? (uint64_t)e.from << 32 | e.to : (uint64_t)e.to << 32 | e.from;
    }
    tb_sort_by_u64(keys, keys + n, n, sizeof *keys, 0);
    for (size_t i = 0; i < n; i++)
        *links += i == 0 || keys[i] != keys[i - 1];
    tb_free(memory, keys, 2 * n, sizeof *keys);
    return true;
}

thole_status thole_network_summarise(thole_context *context, const thole_network *network, thole_summary *out,
                                     thole_error *error) {
    thole_summary s = {.events = network->count, .any = network->count > 0};
    uint32_t nodes = thole_network_nodes(network);
    uint8_t *seen = nodes == 0 ? NULL : tb_new(context->memory, nodes, 1);
    if (nodes > 0 && seen == NULL)
        return tb_refused(context->memory, error, "a summary");
    s.first_start = INT64_MAX;
    s.last_finish = INT64_MIN;
    for (size_t i = 0; i < network->count; i++) {
        thole_event e = thole_network_event(network, i);
        s.contacts += e.start == e.finish;
        s.nodes += !seen[e.from];
        seen[e.from] = 1;
        s.nodes += !seen[e.to];
        seen[e.to] = 1;
        s.first_start = e.start < s.first_start ? e.start : s.first_start;
        s.last_finish = e.finish > s.last_finish ? e.finish : s.last_finish;
    }
    if (!s.any)
        s.first_start = s.last_finish = 0; /* no events: no span */
    tb_free(context->memory, seen, nodes, 1);
    if (!count_links(network, context->memory, &s.links))
        return tb_refused(context->memory, error, "a summary");
    *out = s;
    return THOLE_OK;
}

/* ---- choosing ------------------------------------------------------------------- */

thole_status thole_network_select(thole_context *context, thole_network *network, const uint32_t *view_rows, size_t n,
                                  thole_network **out, thole_error *error) {
    for (size_t i = 0; i < n; i++)
        if (view_rows[i] >= network->count || (i > 0 && view_rows[i] <= view_rows[i - 1]))
            return thole_fail(error, THOLE_ARGUMENT, "row %zu of a selection is %u: rows must ascend and be below %zu",
                              i + 1, (unsigned)view_rows[i], network->count);
    thole_memory *memory = network->store->memory;
    (void)context;
    /* An empty view still has rows, or it would stand for the whole store. */
    uint32_t *rows = tb_resize(memory, NULL, 0, n > 0 ? n : 1, sizeof *rows);
    if (rows == NULL)
        return tb_refused(memory, error, "a selection");
    for (size_t i = 0; i < n; i++)
        rows[i] = tn_row(network, view_rows[i]);
    thole_network *view = tn_view_new(network->store, rows, n);
    if (view == NULL) {
        tb_free(memory, rows, n > 0 ? n : 1, sizeof *rows);
        return tb_refused(memory, error, "a selection");
    }
    *out = view;
    return THOLE_OK;
}

thole_status thole_network_between(thole_context *context, thole_network *network, int64_t start, int64_t finish,
                                   thole_network **out, thole_error *error) {
    if (start >= finish)
        return thole_fail(error, THOLE_ARGUMENT, "a span must finish after it starts");
    size_t n = 0, count = network->count;
    uint32_t *rows = count == 0 ? NULL : tb_resize(context->memory, NULL, 0, count, sizeof *rows);
    if (count > 0 && rows == NULL)
        return tb_refused(context->memory, error, "a selection");
    for (size_t i = 0; i < count; i++) {
        thole_event e = thole_network_event(network, i);
        if (e.start >= finish)
            break; /* they come by start */
        if (e.finish > start || (e.start == e.finish && e.start == start))
            rows[n++] = (uint32_t)i;
    }
    thole_status status = thole_network_select(context, network, rows, n, out, error);
    tb_free(context->memory, rows, count, sizeof *rows);
    return status;
}
