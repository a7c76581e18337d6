/* Thole filters: conditions on the events of a network, compiled once, run in C.
 *
 * A filter is a tree. Leaves test one field of an event: "from", "to", "start", "finish",
 * "duration", or an attribute column. A missing attribute fails every test but "absent".
 */
#ifndef THOLE_FILTER_H
#define THOLE_FILTER_H

#include "network/network.h"

typedef enum thole_test_kind {
    THOLE_TEST_ALL,    /* every child holds (true when there are none) */
    THOLE_TEST_ANY,    /* some child holds (false when there are none) */
    THOLE_TEST_NOT,    /* its one child does not hold */
    THOLE_TEST_EQUAL,  /* the field equals one of values[] */
    THOLE_TEST_RANGE,  /* min <= field <= max; a bound that is not present is open */
    THOLE_TEST_PRESENT /* the field has a value */
} thole_test_kind;

/* One node of the tree, owned by the caller with everything it points to.
 * Values: for times and duration integer ticks; for from/to text; a number
 * compares with a number column of either type, exactly; text with a text column (bytes).
 * A type that can never match the column is THOLE_ARGUMENT, so that a misspelling is
 * seen, as is an unknown field (the message names the nearest one). */
typedef struct thole_test {
    thole_test_kind kind;
    const struct thole_test *children;
    size_t child_count;
    const char *field;
    const thole_value *values;
    size_t value_count;
    thole_value min, max;
} thole_test;

/* A view of the events for which the test holds (keep) or does not (drop). */
THOLE_API thole_status thole_network_keep(thole_context *context, thole_network *network, const thole_test *test,
                                          bool drop, thole_network **out, thole_error *error);

#endif
