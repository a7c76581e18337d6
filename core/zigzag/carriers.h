/* Thole carriers: which places and links carry the bars that are alive at one position.
 *
 * A bar is an interval of homology classes, one at each position. At a position, the classes of all bars alive there
 * form a basis that fits both how they began and how they end (the interval decomposition of Carlsson and de
 * Silva, "Zigzag persistence", Found. Comput. Math. 10, 2010); a carrier is a representative of such a class. Classes
 * of bars that begin or end together may be mixed with one another and are not unique; the choice here depends on
 * nothing but the data and the position.
 *
 * Dimension 0: one part (a piece as it is at the position), or several that the bar tells apart: it lasts while they
 * do not join. Dimension 1: closed walks. A walk is never longer than needed by a single link: where two links
 * of it in a row are bridged by a third that fills the triangle, the third stands in for them. */
#ifndef THOLE_CARRIERS_H
#define THOLE_CARRIERS_H

#include "zigzag/zigzag.h"

typedef struct thole_carriers thole_carriers;

/* The carriers of dimension `dim` (0 or 1, asked for in the barcode's options) at `position` (0 .. 2W - 2). The network must be
 * the one the barcode was computed from: another is THOLE_ARGUMENT where that shows. Costs one more run over the
 * positions. The caller owns *out and gives it back with thole_carriers_release. */
THOLE_API thole_status thole_barcode_carriers(thole_context *context, const thole_barcode *barcode,
                                              const thole_network *network, size_t position, uint32_t dim,
                                              thole_carriers **out, thole_error *error);
THOLE_API void thole_carriers_release(thole_carriers *carriers);

/* One for each bar of the dimension that is alive at the position, in the order of bars. */
THOLE_API size_t thole_carriers_count(const thole_carriers *carriers);
THOLE_API size_t thole_carriers_bar(const thole_carriers *carriers, size_t i); /* its number in the barcode */

/* The parts of carrier i: closed walks (nodes in order, the first not repeated at the end), or pieces (nodes in the order of
 * their numbers). */
THOLE_API size_t thole_carriers_parts(const thole_carriers *carriers, size_t i);
THOLE_API const uint32_t *thole_carriers_part(const thole_carriers *carriers, size_t i, size_t part, size_t *nodes);

#endif
