/* The mixed part: births of the back order that nothing kills, paired with births of the addition order. */
#ifndef TZ_MIXED_H
#define TZ_MIXED_H

#include "zigzag/columns.h"
#include "zigzag/value.h"

/* Dimension p, 1 <= p <= top (p = top only for links): closed-closed bars of dimension p, open-open ones of
 * p - 1. killers, back_killers: addition and back columns of dimension p + 1 (NULL at the top); cycles: back columns
 * of dimension p with their making (NULL for links, whose cycles come from the spanning forest). */
thole_status tz_mixed(tz_work *work, const tz_order *addition, const tz_order *back, int p, const tz_columns *killers,
                      const tz_columns *cycles, const tz_columns *back_killers, uint32_t wanted, tz_value *out);

/* The top dimension T >= 2, whose closed-closed bars nobody asks for: open-open bars of T - 1 from
 * coboundaries. cocycles: the back order's for dimension T. */
thole_status tz_mixed_top(tz_work *work, const tz_order *addition, const tz_order *back, const tz_cofaces *cofaces,
                          const tz_lists *cocycles, tz_value *out);

/* Add the closed-closed bar of births s (addition rank) and t (back rank) of dimension p. Where it touches an end
 * of the block it is the bar opened last there, and the caller adds its class. */
bool tz_closed_bar(tz_work *work, const tz_order *addition, const tz_order *back, int p, uint32_t s, uint32_t t,
                   tz_value *out);

/* The class of the cycle in `rows` (births of dimension d - 1, all at the edge) in the edge's coordinates, as the items of the
 * bar opened last on `end`; empties rows. */
bool tz_edge_coordinates(thole_memory *memory, const tz_columns *columns, tz_bits *rows, tz_end *end);

#endif
