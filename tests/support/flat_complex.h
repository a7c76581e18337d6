/* Betti numbers of the clique complex of one graph, from ranks that M4RI computes. */
#ifndef FLAT_COMPLEX_H
#define FLAT_COMPLEX_H

#include <stddef.h>

/* A simple graph on nodes 0 .. nodes-1: link k joins end[2k] < end[2k + 1], by (lower, higher), no two alike. Nodes without a link do not count. */
typedef struct flat_graph {
    int nodes;
    size_t links;
    const int *end;
} flat_graph;

/* Betti numbers 0 .. top of its clique complex, into betti[]; cliques up to dimension top + 1 are made. The
 * ranks are M4RI's (Debian libm4ri-dev; Albrecht and Bard, "The M4RI library"). */
void flat_betti(const flat_graph *graph, int top, size_t betti[]);

/* Links minus nodes plus components: the cycles of the graph itself. */
size_t flat_cycles(const flat_graph *graph, size_t *components);

#endif
