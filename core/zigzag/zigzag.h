/* Thole zigzag: persistent homology, over Z/2, of a network cut into windows.
 *
 * W windows give 2W - 1 positions: position 2i is window i, position 2i + 1 the
 * join of windows i and i + 1 (both counted from 0). People see window numbers
 * from 1 and joins as halves: position p is shown as 1 + p/2.
 */
#ifndef THOLE_ZIGZAG_H
#define THOLE_ZIGZAG_H

#include "complex/complex.h"
#include "network/network.h"
#include "network/windows.h"

/* What happens at the two ends of a bar's closed range of positions. Closed at the
 * start: born by an addition (or alive at the first position). Open at the start: born by a
 * deletion. Open at the finish: killed by an addition. Closed at the finish: by a
 * deletion (or alive at the last position). */
typedef enum thole_bar_kind {
    THOLE_CLOSED_OPEN,
    THOLE_OPEN_CLOSED,
    THOLE_CLOSED_CLOSED,
    THOLE_OPEN_OPEN
} thole_bar_kind;

typedef struct thole_bar {
    uint32_t first, last; /* positions, first <= last */
    uint8_t dim;
    uint8_t kind; /* thole_bar_kind */
} thole_bar;

typedef struct thole_barcode thole_barcode;

/* Counts of a run, for reports and benches. cells[d]: cells (maximal stays of
 * simplices) of dimension d, each counted once however many blocks it spans. */
typedef struct thole_zigzag_counts {
    uint64_t cells[THOLE_MOST_DIMENSION + 2];
    uint64_t blocks;
    size_t peak_bytes; /* most memory in use during the run, less what was in use before */
} thole_zigzag_counts;

/* Compute the barcode. Methods: Dey and Hou, "Fast computation of zigzag
 * persistence" (ESA 2022), in blocks of time that are glued by the interval
 * decomposition of Carlsson and de Silva, "Zigzag persistence" (Found. Comput. Math. 10, 2010).
 * Needs memory for the largest block; past context->memory->ceiling THOLE_LIMIT says what
 * to lower. Retains the windows. */
THOLE_API thole_status thole_zigzag(thole_context *context, const thole_network *network, thole_windows *windows,
                                    const thole_zigzag_options *options, thole_barcode **out, thole_error *error);

THOLE_API thole_barcode *thole_barcode_retain(thole_barcode *barcode);
THOLE_API void thole_barcode_release(thole_barcode *barcode);
/* How many bars there are. */
THOLE_API size_t thole_barcode_count(const thole_barcode *barcode);
/* Bar i, in the order dim, first, last, kind (by name: closed-closed, closed-open, open-closed, open-open). */
THOLE_API thole_bar thole_barcode_bar(const thole_barcode *barcode, size_t i);
THOLE_API thole_windows *thole_barcode_windows(const thole_barcode *barcode); /* not retained for the caller */
THOLE_API const thole_clock *thole_barcode_clock(const thole_barcode *barcode);
THOLE_API const thole_zigzag_options *thole_barcode_options(const thole_barcode *barcode);
THOLE_API const thole_zigzag_counts *thole_barcode_counts(const thole_barcode *barcode);
THOLE_API size_t thole_barcode_bytes(const thole_barcode *barcode);

/* "closed-open" and so on, with a plain hyphen; never NULL. */
THOLE_API const char *thole_bar_kind_name(thole_bar_kind kind);

/* Betti numbers of dimension `dim` at each of the 2W - 1 positions, into out[]. */
THOLE_API thole_status thole_barcode_betti(thole_context *context, const thole_barcode *barcode, uint32_t dim,
                                           uint64_t *out, thole_error *error);

#endif
