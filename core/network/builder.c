/* Building a network: events and attributes as they come, sorted and trimmed at the end. */
#include <math.h>
#include <stdio.h>

#include "network/arrange.h"
#include "network/expect.h"
#include "clock/decimal.h"
#include "network/store.h"

struct thole_builder {
    thole_memory *memory;
    tn_store *store;
};

thole_status thole_builder_open(thole_context *context, const thole_clock *clock, thole_builder **out,
                                thole_error *error) {
    thole_memory *memory = context->memory;
    thole_builder *builder = tb_new(memory, 1, sizeof *builder);
    tn_store *store = tb_new(memory, 1, sizeof *store);
    if (builder == NULL || store == NULL) {
        tb_free(memory, builder, 1, sizeof *builder);
        tb_free(memory, store, 1, sizeof *store);
        return tb_refused(memory, error, "a network");
    }
    atomic_init(&store->refs, 1);
    store->memory = memory;
    store->clock = *clock;
    store->clock.unit[sizeof store->clock.unit - 1] = '\0';
    if (clock->zone != NULL)
        store->clock.zone = thole_zone_retain(clock->zone);
    *builder = (thole_builder){memory, store};
    *out = builder;
    return THOLE_OK;
}

void thole_builder_release(thole_builder *builder) {
    if (builder == NULL)
        return;
    tn_store_release(builder->store);
    tb_free(builder->memory, builder, 1, sizeof *builder);
}

void thole_builder_source(thole_builder *builder, const char *name) {
    char *to = builder->store->account.source;
    size_t length = strlen(name), room = sizeof builder->store->account.source - 1;
    const char *from = length > room ? name + (length - room) : name;
    while (from != name && ((unsigned char)*from & 0xC0u) == 0x80u)
        from++; /* not inside a character */
    memcpy(to, from, strlen(from) + 1);
}

static thole_status refused(thole_builder *builder, thole_error *error) {
    return tb_refused(builder->memory, error, "a network");
}

void tn_builder_expect(thole_builder *b, size_t events) {
    /* A guess must not be what reaches the ceiling. */
    size_t ceiling = b->memory->ceiling, room = ceiling == 0 ? SIZE_MAX : ceiling / (8 * sizeof(thole_event));
    if (events <= TN_MOST_EVENTS && events <= room)
        (void)TB_VEC_RESERVE(b->memory, &b->store->events, events);
}

/* ---- columns ---------------------------------------------------------------- */

/* Room for all events that there is room for, new places missing. */
static bool column_reserve(thole_builder *b, tn_column *column, size_t need) {
    if (need <= column->cap)
        return true;
    size_t cap = b->store->events.cap > need ? b->store->events.cap : need, from = column->cap;
    thole_memory *memory = b->memory;
    void *fresh = NULL;
    switch (column->type) {
    case THOLE_INTEGER:
        if ((fresh = tb_resize(memory, column->integer, from, cap, sizeof *column->integer)) != NULL)
            column->integer = fresh;
        for (size_t i = from; fresh != NULL && i < cap; i++)
            column->integer[i] = TN_NO_INTEGER;
        break;
    case THOLE_REAL:
        if ((fresh = tb_resize(memory, column->real, from, cap, sizeof *column->real)) != NULL)
            column->real = fresh;
        for (size_t i = from; fresh != NULL && i < cap; i++)
            column->real[i] = (double)NAN;
        break;
    case THOLE_TEXT:
        if ((fresh = tb_resize(memory, column->text, from, cap, sizeof *column->text)) != NULL)
            column->text = fresh;
        for (size_t i = from; fresh != NULL && i < cap; i++)
            column->text[i] = TB_NO_NAME;
        break;
    }
    if (fresh != NULL)
        column->cap = cap;
    return fresh != NULL;
}

thole_status thole_builder_column(thole_builder *b, const char *name, thole_type type, uint32_t *column,
                                  thole_error *error) {
    static const char *const taken[] = {"from", "to", "start", "finish"};
    for (size_t i = 0; i < sizeof taken / sizeof *taken; i++)
        if (strcmp(name, taken[i]) == 0)
            return thole_fail(error, THOLE_ARGUMENT, "an attribute cannot be called \"%s\": that is a link's own field", name);
    tn_store *s = b->store;
    if (tb_names_find(&s->names, name, strlen(name)) != TB_NO_NAME)
        return thole_fail(error, THOLE_ARGUMENT, "there are two columns \"%s\": give them different names", name);
    uint32_t id;
    if (!TB_VEC_RESERVE(b->memory, &s->columns, s->columns.n + 1))
        return refused(b, error);
    tn_column fresh = {.type = type};
    if (!column_reserve(b, &fresh, s->events.n))
        return refused(b, error);
    if (!tb_names_put(b->memory, &s->names, name, strlen(name), &id)) {
        tn_column_clear(b->memory, &fresh);
        return refused(b, error);
    }
    fresh.name = id;
    *column = (uint32_t)s->columns.n;
    s->columns.at[s->columns.n++] = fresh;
    return THOLE_OK;
}

thole_type thole_builder_column_type(const thole_builder *b, uint32_t column) { return b->store->columns.at[column].type; }

thole_status thole_builder_set(thole_builder *b, uint32_t column, const thole_value *value, thole_error *error) {
    tn_store *s = b->store;
    if (column >= s->columns.n || s->events.n == 0)
        return thole_fail(error, THOLE_ARGUMENT, "there is no such column or event to set");
    tn_column *c = &s->columns.at[column];
    if (!value->present)
        return THOLE_OK;
    if (value->type != c->type)
        return thole_fail(error, THOLE_ARGUMENT, "a value of another type for column \"%s\": promote the column first",
                          tb_names_get(&s->names, c->name, NULL));
    if (!column_reserve(b, c, s->events.n))
        return refused(b, error);
    size_t row = s->events.n - 1;
    if (c->type == THOLE_INTEGER)
        c->integer[row] = value->integer;
    else if (c->type == THOLE_REAL)
        c->real[row] = value->real;
    else if (!tb_names_put(b->memory, &s->texts, value->text, value->length, &c->text[row]))
        return refused(b, error);
    return THOLE_OK;
}

/* The shortest text that reads back equal, with a point whatever the locale. */
static int real_text(double value, char *out, size_t size) {
    int n = 0;
    for (int digits = 15; digits <= 17; digits++) {
        n = snprintf(out, size, "%.*g", digits, value);
        for (char *p = out; *p != '\0'; p++)
            if (*p == ',')
                *p = '.';
        tk_number number;
        if (tk_number_scan(out, (size_t)n, &number) == (size_t)n && tk_number_real(&number) == value)
            break;
    }
    return n;
}

static bool to_text(thole_builder *b, const tn_column *from, size_t row, uint32_t *id) {
    char text[40];
    int n;
    if (from->type == THOLE_INTEGER) {
        if (from->integer[row] == TN_NO_INTEGER)
            return true;
        n = snprintf(text, sizeof text, "%lld", (long long)from->integer[row]);
    } else {
        if (isnan(from->real[row]))
            return true;
        n = real_text(from->real[row], text, sizeof text);
    }
    return tb_names_put(b->memory, &b->store->texts, text, (size_t)n, id);
}

thole_status thole_builder_promote(thole_builder *b, uint32_t column, thole_type type, thole_error *error) {
    static const int64_t exact = INT64_C(1) << 53;
    tn_store *s = b->store;
    tn_column *c = &s->columns.at[column];
    if (type == c->type)
        return THOLE_OK;
    if (type < c->type)
        return thole_fail(error, THOLE_ARGUMENT, "a column only changes from integer to real to text");
    tn_column fresh = {.name = c->name, .type = type};
    size_t held = c->cap < s->events.n ? c->cap : s->events.n;
    if (!column_reserve(b, &fresh, s->events.n))
        return refused(b, error);
    for (size_t i = 0; i < held; i++) {
        if (type == THOLE_TEXT) {
            if (!to_text(b, c, i, &fresh.text[i])) {
                tn_column_clear(b->memory, &fresh);
                return refused(b, error);
            }
        } else if (c->integer[i] != TN_NO_INTEGER) {
            if (c->integer[i] > exact || c->integer[i] < -exact) {
                tn_column_clear(b->memory, &fresh);
                return thole_fail(error, THOLE_LIMIT, "column \"%s\" holds %lld, which no real holds exactly: read it as text",
                                  tb_names_get(&s->names, c->name, NULL), (long long)c->integer[i]);
            }
            fresh.real[i] = (double)c->integer[i];
        }
    }
    tn_column_clear(b->memory, c);
    *c = fresh;
    return THOLE_OK;
}

/* ---- nodes and events ---------------------------------------------------------- */

thole_status thole_builder_node(thole_builder *b, const char *name, size_t length, uint32_t *node, thole_error *error) {
    if (!tb_names_put(b->memory, &b->store->nodes, name, length, node))
        return b->store->nodes.start.n >= UINT32_MAX - 2
                   ? thole_fail(error, THOLE_LIMIT, "more than 4,294,967,293 nodes: use a smaller input")
                   : refused(b, error);
    return THOLE_OK;
}

thole_status thole_builder_event(thole_builder *b, thole_event event, bool *kept, thole_error *error) {
    tn_store *s = b->store;
    if (event.finish < event.start)
        return thole_fail(error, THOLE_ARGUMENT, "an event finishes before it starts");
    if (event.from >= s->nodes.start.n || event.to >= s->nodes.start.n)
        return thole_fail(error, THOLE_ARGUMENT, "an event between nodes that were not made");
    if (event.from != event.to) {
        if (s->events.n >= TN_MOST_EVENTS)
            return thole_fail(error, THOLE_LIMIT, "more than 4,294,967,290 events: use a smaller input");
        if (!TB_VEC_PUSH(b->memory, &s->events, event))
            return refused(b, error);
        s->account.contacts += event.start == event.finish;
    } else {
        s->account.self_loops++;
    }
    s->account.rows++;
    *kept = event.from != event.to;
    return THOLE_OK;
}

/* ---- tallies --------------------------------------------------------------------- */

typedef TB_VEC(thole_tally) tally_list;

static bool count(thole_memory *memory, tally_list *list, const char *what, uint64_t line) {
    for (size_t i = 0; i < list->n; i++)
        if (strncmp(list->at[i].what, what, sizeof list->at[i].what - 1) == 0) {
            list->at[i].count++;
            return true;
        }
    thole_tally tally = {.count = 1, .first_line = line};
    snprintf(tally.what, sizeof tally.what, "%s", what);
    return TB_VEC_PUSH(memory, list, tally);
}

/* The store's lists and a tally_list are the same struct but for their tags. */
#define COUNT(b, field, what, line)                                                                          \
    do {                                                                                                     \
        tally_list list_ = {(b)->store->field.at, (b)->store->field.n, (b)->store->field.cap};               \
        bool fine_ = count((b)->memory, &list_, (what), (line));                                             \
        (b)->store->field.at = list_.at, (b)->store->field.n = list_.n, (b)->store->field.cap = list_.cap;   \
        if (!fine_)                                                                                          \
            return refused((b), error);                                                                      \
    } while (0)

thole_status thole_builder_skip(thole_builder *b, const char *what, uint64_t line, thole_error *error) {
    COUNT(b, reasons, what, line);
    b->store->account.rows++;
    b->store->account.skipped++;
    return THOLE_OK;
}

thole_status thole_builder_remark(thole_builder *b, const char *what, uint64_t line, thole_error *error) {
    COUNT(b, remarks, what, line);
    return THOLE_OK;
}

/* ---- finishing ------------------------------------------------------------------- */

static void permute_column(tn_column *c, const uint32_t *row, size_t n, void *scratch) {
    size_t item = c->type == THOLE_TEXT ? sizeof *c->text : sizeof *c->integer;
    char *at = c->type == THOLE_TEXT ? (char *)c->text : c->type == THOLE_REAL ? (char *)c->real : (char *)c->integer;
    for (size_t i = 0; i < n; i++)
        memcpy((char *)scratch + i * item, at + row[i] * item, item);
    memcpy(at, scratch, n * item);
}

static bool sort_events(thole_builder *b) {
    tn_store *s = b->store;
    size_t n = s->events.n;
    uint32_t *row = NULL;
    if (!tn_arrange(b->memory, s->events.at, n, s->columns.n > 0, &row))
        return false;
    void *scratch = row != NULL ? tb_resize(b->memory, NULL, 0, n, sizeof(int64_t)) : NULL;
    for (size_t c = 0; scratch != NULL && c < s->columns.n; c++)
        permute_column(&s->columns.at[c], row, n, scratch);
    bool fine = row == NULL || scratch != NULL;
    tb_free(b->memory, scratch, n, sizeof(int64_t));
    tb_free(b->memory, row, n, sizeof *row);
    return fine;
}

/* Equal ones are neighbours now. */
static void count_repeats(tn_store *s) {
    for (size_t i = 1; i < s->events.n; i++)
        s->account.repeats += tn_event_order(&s->events.at[i - 1], &s->events.at[i]) == 0;
}

static void trim(thole_builder *b) {
    tn_store *s = b->store;
    TB_VEC_TRIM(b->memory, &s->events);
    for (size_t i = 0; i < s->columns.n; i++) {
        tn_column *c = &s->columns.at[i];
        size_t n = s->events.n;
        if (c->cap <= n)
            continue;
        if (c->integer != NULL)
            c->integer = tb_resize(b->memory, c->integer, c->cap, n, sizeof *c->integer);
        if (c->real != NULL)
            c->real = tb_resize(b->memory, c->real, c->cap, n, sizeof *c->real);
        if (c->text != NULL)
            c->text = tb_resize(b->memory, c->text, c->cap, n, sizeof *c->text);
        c->cap = n;
    }
    tb_names_trim(b->memory, &s->nodes);
    tb_names_trim(b->memory, &s->texts);
    tb_names_trim(b->memory, &s->names);
}

thole_status thole_builder_finish(thole_builder *b, thole_network **out, thole_error *error) {
    tn_store *s = b->store;
    bool fine = true;
    for (size_t i = 0; fine && i < s->columns.n; i++)
        fine = column_reserve(b, &s->columns.at[i], s->events.n);
    thole_network *network = NULL;
    if (fine && sort_events(b)) {
        count_repeats(s);
        trim(b);
        s->account.events = s->events.n;
        s->account.reasons = s->reasons.at;
        s->account.reason_count = s->reasons.n;
        s->account.remarks = s->remarks.at;
        s->account.remark_count = s->remarks.n;
        network = tn_view_new(s, NULL, s->events.n);
    }
    thole_status status = network != NULL ? THOLE_OK : refused(b, error);
    thole_builder_release(b);
    if (status == THOLE_OK)
        *out = network;
    return status;
}
