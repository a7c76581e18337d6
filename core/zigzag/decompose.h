/* One block of time decomposed into its bars. */
#ifndef TZ_DECOMPOSE_H
#define TZ_DECOMPOSE_H

#include "zigzag/order.h"
#include "zigzag/value.h"

/* Bars of homology dimensions 0 .. dims - 1 of the block, whose cells reach dimension dims (or less,
 * where the complex has no more). `wanted` has a bit for each dimension that is asked for: others are left empty.
 * Clear *out with tz_value_clear, after a failure too. */
thole_status tz_decompose(tz_work *work, const tc_block *block, int dims, uint32_t wanted, tz_value *out);

#endif
