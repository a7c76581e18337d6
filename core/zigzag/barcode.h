/* The barcode object, as the zigzag fills it. */
#ifndef TZ_BARCODE_H
#define TZ_BARCODE_H

#include "base/memory.h"
#include "zigzag/zigzag.h"

struct thole_barcode {
    tb_refs refs;
    thole_memory *memory;
    thole_windows *windows; /* retained */
    thole_clock clock;      /* its zone retained */
    thole_zigzag_options options;
    thole_zigzag_counts counts;
    TB_VEC(thole_bar) bars;
};

/* An empty barcode for these windows. NULL when refused. */
thole_barcode *tz_barcode_new(thole_memory *memory, const thole_clock *clock, thole_windows *windows,
                              const thole_zigzag_options *options);

/* Put the bars in their order and give back slack. False when memory is refused. */
bool tz_barcode_sort(thole_barcode *barcode);

#endif
