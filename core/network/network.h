/* Thole network: link events in time, with typed attributes, as read.
 *
 * A network is an immutable, shared view of a store: the store holds every
 * event read, a view selects some of them. Filters make new views that share
 * the store.
 *
 * Numbers: nodes and events are uint32_t (at most 4,294,967,290 of each; more
 * is THOLE_LIMIT), times int64_t ticks (clock/clock.h).
 */
#ifndef THOLE_NETWORK_H
#define THOLE_NETWORK_H

#include "base/base.h"
#include "clock/clock.h"

typedef struct thole_network thole_network;
typedef struct thole_builder thole_builder;

/* A link between two nodes, active on the half-open interval [start, finish);
 * with start = finish it is a contact, active at that instant. */
typedef struct thole_event {
    uint32_t from, to;
    int64_t start, finish;
} thole_event;

typedef enum thole_type { THOLE_INTEGER, THOLE_REAL, THOLE_TEXT } thole_type;

typedef struct thole_value {
    thole_type type;
    bool present;
    int64_t integer;  /* THOLE_INTEGER */
    double real;      /* THOLE_REAL */
    const char *text; /* THOLE_TEXT: NUL-ended, owned by the network */
    size_t length;
} thole_value;

/* Something counted on the way in: rows skipped for a reason, times that
 * occur twice, a column whose numbers became text. */
typedef struct thole_tally {
    char what[96];      /* "finish before start" */
    uint64_t count;
    uint64_t first_line; /* line of the first one, from 1; 0 when there is none */
} thole_tally;

/* What became of the input. */
typedef struct thole_account {
    char source[512];    /* name of the input, cut from the left when longer */
    uint64_t rows;       /* data rows seen: events + self_loops + skipped */
    uint64_t events;     /* events kept in the store */
    uint64_t contacts;   /* of these, with start = finish */
    uint64_t self_loops; /* rows set aside because both ends are the same node */
    uint64_t repeats;    /* events equal to another in both ends (either way round), start and finish; kept */
    uint64_t skipped;    /* rows set aside as faulty: sum of the `skipped` tallies */
    const thole_tally *reasons; /* why rows were skipped */
    size_t reason_count;
    const thole_tally *remarks; /* what was kept but repaired or worth a remark */
    size_t remark_count;
} thole_account;

/* ---- building ----------------------------------------------------------- */

/* Begin a network. The clock's zone is retained. */
THOLE_API thole_status thole_builder_open(thole_context *context, const thole_clock *clock, thole_builder **out,
                                          thole_error *error);
THOLE_API void thole_builder_release(thole_builder *builder);

/* Name the source for the account. */
THOLE_API void thole_builder_source(thole_builder *builder, const char *name);

/* Add an attribute column; earlier events miss it. Names are distinct and none
 * of from, to, start, finish (THOLE_ARGUMENT). */
THOLE_API thole_status thole_builder_column(thole_builder *builder, const char *name, thole_type type, uint32_t *column,
                                            thole_error *error);

/* The number of the node of that name, made when new. */
THOLE_API thole_status thole_builder_node(thole_builder *builder, const char *name, size_t length, uint32_t *node,
                                          thole_error *error);

/* Add an event; its attributes are missing until set. A self-loop is counted
 * and set aside, with *kept false. finish < start is THOLE_ARGUMENT. */
THOLE_API thole_status thole_builder_event(thole_builder *builder, thole_event event, bool *kept, thole_error *error);

/* Set an attribute of the event added last. The value's type must be the
 * column's. INT64_MIN as an integer, and NaN as a real, stand for missing. */
THOLE_API thole_status thole_builder_set(thole_builder *builder, uint32_t column, const thole_value *value,
                                         thole_error *error);

/* The type of a column, and its change integer -> real -> text with the values
 * held so far (integers beyond 2^53 do not become real but THOLE_LIMIT; reals
 * become the shortest text that reads back equal). */
THOLE_API thole_type thole_builder_column_type(const thole_builder *builder, uint32_t column);
THOLE_API thole_status thole_builder_promote(thole_builder *builder, uint32_t column, thole_type type,
                                             thole_error *error);

/* Count a row that is skipped (reason) or a repair (remark), at `line`. The same
 * `what` adds up. A skipped row also counts in rows. */
THOLE_API thole_status thole_builder_skip(thole_builder *builder, const char *what, uint64_t line, thole_error *error);
THOLE_API thole_status thole_builder_remark(thole_builder *builder, const char *what, uint64_t line,
                                            thole_error *error);

/* Sort the events by (start, finish, lower node, higher node, order added),
 * count repeats, trim, and hand out the network. Frees the builder, on failure too. */
THOLE_API thole_status thole_builder_finish(thole_builder *builder, thole_network **out, thole_error *error);

/* ---- reading ------------------------------------------------------------ */

THOLE_API thole_network *thole_network_retain(thole_network *network);
THOLE_API void thole_network_release(thole_network *network);

/* What times mean in it, and what became of its input. */
THOLE_API const thole_clock *thole_network_clock(const thole_network *network);
THOLE_API const thole_account *thole_network_account(const thole_network *network);

THOLE_API size_t thole_network_count(const thole_network *network);            /* events in this view */
THOLE_API thole_event thole_network_event(const thole_network *network, size_t i); /* i < count; by start */
THOLE_API uint32_t thole_network_row(const thole_network *network, size_t i);  /* its number in the store */

/* Nodes are numbered from 0 in the order in which they were made. A name is NUL-ended, *length (may be NULL) its bytes;
 * node < the number of nodes. Finding is false for a name that is no node's. */
THOLE_API uint32_t thole_network_nodes(const thole_network *network); /* nodes of the store, in view or not */
THOLE_API const char *thole_network_node_name(const thole_network *network, uint32_t node, size_t *length);
THOLE_API bool thole_network_find_node(const thole_network *network, const char *name, size_t length, uint32_t *node);

/* Attribute columns, and the value of one in event i of this view (i < count). */
THOLE_API uint32_t thole_network_columns(const thole_network *network);
THOLE_API const char *thole_network_column_name(const thole_network *network, uint32_t column);
THOLE_API thole_type thole_network_column_type(const thole_network *network, uint32_t column);
THOLE_API bool thole_network_find_column(const thole_network *network, const char *name, uint32_t *column);
THOLE_API thole_value thole_network_value(const thole_network *network, uint32_t column, size_t i);

/* Bytes of the store (shared) and of this view alone. */
THOLE_API size_t thole_network_bytes(const thole_network *network, size_t *view_bytes);

/* What a view holds. */
typedef struct thole_summary {
    uint64_t events, contacts;
    uint32_t nodes; /* that occur in the view */
    uint64_t links; /* distinct unordered pairs */
    bool any;       /* whether the two below mean something */
    int64_t first_start, last_finish;
} thole_summary;
THOLE_API thole_status thole_network_summarise(thole_context *context, const thole_network *network,
                                               thole_summary *out, thole_error *error);

/* ---- choosing ----------------------------------------------------------- */

/* A view of the events numbered view_rows[0..n-1] (indices into this view, ascending,
 * each below its count: else THOLE_ARGUMENT). The array is copied. */
THOLE_API thole_status thole_network_select(thole_context *context, thole_network *network, const uint32_t *view_rows,
                                            size_t n, thole_network **out, thole_error *error);

/* A view of the events active at some instant of [start, finish) (a contact: at an
 * instant t with start <= t < finish). start >= finish is THOLE_ARGUMENT.
 * Events keep their own times. */
THOLE_API thole_status thole_network_between(thole_context *context, thole_network *network, int64_t start,
                                             int64_t finish, thole_network **out, thole_error *error);

#endif
