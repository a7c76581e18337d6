/* Thole complexes: what is built on the snapshots of windows, and on what stands between them.
 *
 * Complexes are truncated one dimension above the highest homology that is asked for. */
#ifndef THOLE_COMPLEX_H
#define THOLE_COMPLEX_H

#include "base/base.h"

/* graph: nodes and links only. hops: the clique complex of the graph that joins
 * nodes at hop distance <= radius in the position's own graph; radius 0 is nodes
 * only, 1 the clique complex of the snapshot. */
typedef enum thole_radius { THOLE_RADIUS_GRAPH, THOLE_RADIUS_HOPS } thole_radius;

/* What stands between two windows: the graph of both, or of what they share. */
typedef enum thole_join { THOLE_JOIN_UNION, THOLE_JOIN_INTERSECTION } thole_join;

enum { THOLE_MOST_DIMENSION = 7 };

/* Zero-initialise for the defaults: radius graph, union, dimension 0 only.
 * dims: bit p asks for homology of dimension p, p <= 7; none is THOLE_ARGUMENT. A dimension
 *   that the complex cannot have (1 and up at radius 0, 2 and up at graph) has no bars.
 * all_nodes: every node of the view belongs to every position, also without a link.
 * block: positions a block of time spans (at least 1); 0 chooses from the data. The barcode does not
 *   depend on it. */
typedef struct thole_zigzag_options {
    thole_radius radius_kind;
    uint32_t radius;
    thole_join join;
    uint32_t dims;
    bool all_nodes;
    uint32_t block;
} thole_zigzag_options;

#endif
