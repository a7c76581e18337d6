/* Thole choose: some of the bars of a barcode, and how long bars live. */
#ifndef THOLE_CHOOSE_H
#define THOLE_CHOOSE_H

#include "zigzag/zigzag.h"

/* Which bars. Zero-initialised, it is all of them.
 * dims, kinds: bit p, bit k asks for dimension p, for thole_bar_kind k; 0 for all.
 * at: only bars alive at `position`.
 * lasting: only bars whose lifespan is at least `shortest` ticks.
 * longest: only that many, the longest first, equally long ones in the barcode's order; 0 for all that
 *   pass, in the barcode's order. */
typedef struct thole_choice {
    uint32_t dims, kinds;
    bool at, lasting;
    uint32_t position;
    uint64_t shortest;
    size_t longest;
} thole_choice;

/* The bars chosen: *out gets their numbers, *n how many. The caller gives them back with
 * thole_chosen_release. Cost: linear in the bars. */
THOLE_API thole_status thole_barcode_choose(thole_context *context, const thole_barcode *barcode,
                                            const thole_choice *choice, size_t **out, size_t *n,
                                            thole_error *error);
THOLE_API void thole_chosen_release(thole_context *context, size_t *chosen, size_t n);

/* Lifespan of bar i: from the centre of its first position to that of its last, as *ticks and *quarters
 * (0..3) of a tick. True when it is negative, which windows that lie inside one another can make it. */
THOLE_API bool thole_barcode_lifespan(const thole_barcode *barcode, size_t i, uint64_t *ticks, int *quarters);

#endif
