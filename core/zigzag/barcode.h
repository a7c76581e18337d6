/* The barcode object, as the zigzag fills it. */
#ifndef TZ_BARCODE_H
#define TZ_BARCODE_H

#include "base/memory.h"
#include "zigzag/run.h"

struct thole_barcode {
    tb_refs refs;
    thole_memory *memory;
    thole_windows *windows; /* retained */
    thole_clock clock;      /* its zone retained */
    thole_zigzag_options options;
    thole_zigzag_counts counts;
    tz_bars bars;
};

/* An empty barcode for these windows. NULL when refused. */
thole_barcode *tz_barcode_new(thole_memory *memory, const thole_clock *clock, thole_windows *windows,
                              const thole_zigzag_options *options);

/* Fill the barcode with collected bars and those of a value that is sealed at both ends, in their order. False
 * when memory is refused. */
bool tz_barcode_take(thole_barcode *barcode, const tz_bars *bars, const tz_value *rest);

#endif
