/* Reduced boundary columns of the cells that kill, their pivots already known.
 *
 * Only rows of births are kept: a chain whose boundary is wanted is a cycle, and a cycle is
 * determined by its part on births, because the cells that kill are independent. */
#ifndef TZ_COLUMNS_H
#define TZ_COLUMNS_H

#include "zigzag/pairs.h"

typedef struct tz_columns {
    const tz_order *order;
    int d;         /* dimension of the columns' cells; rows are of dimension d - 1 */
    tz_lists rows; /* column rank -> row ranks, for columns that are not their own boundary */
    tz_lists made_of; /* with chains: column rank -> the column ranks that add up to it, for the same columns */
    bool chains;
} tz_columns;

/* Reduce the columns of dimension d that have a victim. chains: keep what each is made of.
 * Clear with tz_columns_clear, after a failure too. */
thole_status tz_columns_make(tz_work *work, const tz_order *order, int d, bool chains, tz_columns *out);
void tz_columns_clear(tz_columns *columns);

/* Toggle a column's rows into `rows`, and what it is made of into `chain` (may be NULL). */
void tz_columns_add(const tz_columns *columns, uint32_t column, tz_bits *rows, tz_bits *chain);

#endif
