/* An independent judge of barcodes: slow, plain, and sharing no code with the core.
 *
 * From events and windows it builds the complex at every position by definition, computes homology there over Z/2, the
 * maps that inclusions induce, and the multiplicity of every interval from ranks of linear relations: r(i, j), the number
 * of intervals that hold [i, j], is dim dom - dim ker of the relation between the spaces at i and j that the arrows
 * between them compose to; then m(i, j) = r(i, j) - r(i-1, j) - r(i, j+1) + r(i-1, j+1). (The rank of a zigzag relation:
 * Carlsson and de Silva, "Zigzag persistence", 2010.) */
#ifndef JUDGE_H
#define JUDGE_H

#include <stdbool.h>
#include <stddef.h>
#include <stdint.h>

enum { JUDGE_NODES = 12, JUDGE_EVENTS = 256, JUDGE_WINDOWS = 16, JUDGE_POSITIONS = 2 * JUDGE_WINDOWS - 1, JUDGE_BARS = 4096 };

typedef struct judge_event {
    int u, v;
    long start, finish;
} judge_event;

/* A case: everything that a barcode depends on. radius -1 is graph. */
typedef struct judge_case {
    int nodes, events, windows;
    judge_event event[JUDGE_EVENTS];
    long from[JUDGE_WINDOWS], to[JUDGE_WINDOWS];
    int radius;
    bool intersection, all_nodes;
    unsigned dims;
} judge_case;

typedef struct judge_bar {
    int dim, first, last;
    bool open_start, open_end;
} judge_bar;

/* A set of nodes as bits; a simplex is one. */
typedef uint16_t judge_simplex;

/* The simplices of dimension d at a position, ascending, malloc'ed into *out; returns how many. */
size_t judge_simplices(const judge_case *c, int position, int d, judge_simplex **out);

/* The Betti number of dimension p at a position. */
size_t judge_betti(const judge_case *c, int position, int p);

/* All bars of the asked dimensions, in the order dim, first, last; returns how many. */
size_t judge_barcode(const judge_case *c, judge_bar out[JUDGE_BARS]);

/* Whether the chain (a list of simplices of dimension p, all at the position) is a boundary there, after adding the
 * chains `with` (each `lengths[k]` long). */
bool judge_spans(const judge_case *c, int position, int p, const judge_simplex *chain, size_t n,
                 const judge_simplex *const *with, const size_t *lengths, size_t with_count);

/* Print a case so that a person can draw it. */
void judge_print(const judge_case *c);

#endif
