/* Inside the core: what is wrong with a row, as a message or as a count. */
#ifndef TI_ROW_FAULTS_H
#define TI_ROW_FAULTS_H

#include "ingest/header.h"

/* Where faults go: to the error at the first one, or counted by reason. Before there is a builder (the clock
 * is not known yet) counts are kept here. */
typedef struct ti_faults {
    const char *name;
    const ti_rows *rows;
    thole_builder *builder;
    bool skip;
    struct {
        char what[sizeof((thole_tally *)0)->what];
        uint64_t count, first_line;
    } early[32];
    size_t early_n;
} ti_faults;

/* A fault of the row read last, in the field that begins at byte `from` of it: the text is "before value
 * after", value in quotes and left out when NULL. THOLE_OK when it was counted as `reason`; THOLE_INPUT with
 * the message otherwise. */
thole_status ti_fault(ti_faults *faults, size_t from, const char *reason, const char *before,
                      const ti_field *value, const char *after, thole_error *error);

/* The fault that the row read last has by itself (rows->flaw); `columns` is how many it should have. */
thole_status ti_fault_flaw(ti_faults *faults, size_t columns, thole_error *error);

/* Give early counts to the builder. */
thole_status ti_faults_attach(ti_faults *faults, thole_builder *builder, thole_error *error);

#endif
