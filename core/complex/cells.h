/* Cells of one block: every simplex with its stays inside the block.
 *
 * A cell is one maximal stay of one simplex, cut to the block. Cells of a dimension are
 * in the order of their nodes (ascending, compared one by one), then of their first
 * position: at any one position that order is the same in every block that holds it, which
 * is what lets two blocks speak of the same simplex by its place in that order. */
#ifndef TC_CELLS_H
#define TC_CELLS_H

#include "base/arena.h"
#include "base/parallel.h"
#include "complex/blocks.h"

enum { TC_TOP = THOLE_MOST_DIMENSION + 1 }; /* homology up to p needs cells up to p + 1 */
#define TC_NONE UINT32_MAX

/* The cells of one dimension d. Positions count from the block's first. */
typedef struct tc_cells {
    uint32_t n;
    uint32_t *first, *last; /* n each */
    uint32_t *face;         /* (d + 1) a cell: its faces' numbers in dimension d - 1; NULL for d = 0 */
    uint32_t *node;         /* (d + 1) a cell: its nodes, ascending; NULL where nobody needs them */
} tc_cells;

typedef struct tc_block {
    uint32_t first, last; /* positions of the whole zigzag */
    int top;              /* highest dimension whose cells are made */
    tc_cells cells[TC_TOP + 1];
} tc_block;

/* "window 3" or "windows 3 to 5": where a block is, for messages. */
#define TC_WHERE 48
const char *tc_where(const tc_block *block, char out[TC_WHERE]);

/* What a worker brings to the making of cells. */
typedef struct tc_work {
    thole_context *context;
    tb_arena *arena;       /* everything below and the cells live here */
    uint32_t *node_mark;   /* one a node of the network, all TC_NONE between calls */
    thole_error *error;
} tc_work;

/* Make the cells of block k up to dimension `top` (0 .. TC_TOP) at the options' radius. All arrays are the
 * arena's. THOLE_LIMIT says what to lower when the memory ceiling is in the way. */
thole_status tc_block_make(tc_work *work, const tc_stays *stays, const tc_blocks *blocks, size_t k,
                           const thole_zigzag_options *options, int top, tc_block *out);

/* One position as a block of its own; in the arena. */
typedef struct tc_position {
    tc_blocks blocks; /* not to be cleared */
    uint32_t cut[2];
    uint64_t start[2];
} tc_position;
thole_status tc_position_of(tc_work *work, const tc_stays *stays, uint32_t position, tc_position *out);

/* Cells of dimension 2 and up for each link, at a few positions: 0 where top < 2. What it makes is given back. */
thole_status tc_density(tc_work *work, const tc_stays *stays, const thole_zigzag_options *options, int top, double *out);

/* ---- steps, shared by the files of this room ----------------------------- */

/* Links of a block: stays cut to it, positions counted from its first, by (u, v, first). */
typedef struct tc_links {
    uint32_t n;
    tc_stay *at;
} tc_links;

/* Replace the links by those of the graph that joins nodes at hop distance <= radius at each
 * position (radius >= 2). length: positions of the block. */
thole_status tc_power_links(tc_work *work, tc_links *links, uint32_t radius, uint32_t length);

/* Cells of dimension d >= 2 from those of d - 1 (and, for d = 2, the links). */
thole_status tc_triangles(tc_work *work, tc_block *block);
thole_status tc_cliques(tc_work *work, tc_block *block, int d);

/* Refuse before memory is touched when about `cells` more cells of dimension d cannot fit under the ceiling. */
thole_status tc_check_estimate(tc_work *work, const tc_block *block, int d, uint64_t cells);

/* The refusal of memory while cells are made, in the words of a recipe. */
thole_status tc_cells_refused(tc_work *work, const tc_block *block, int d, uint64_t cells);

#endif
