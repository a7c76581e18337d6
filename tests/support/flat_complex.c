#include "support/flat_complex.h"

#include <m4ri/m4ri.h>
#include <stdbool.h>
#include <stdlib.h>
#include <string.h>

/* Cliques of d + 1 nodes each, in lexicographic order. */
typedef struct cliques {
    size_t n;
    int d;
    int *node;
} cliques;

static bool linked(const flat_graph *g, int u, int v) {
    size_t low = 0, high = g->links;
    while (low < high) {
        size_t middle = (low + high) / 2;
        const int *e = &g->end[2 * middle];
        if (e[0] < u || (e[0] == u && e[1] < v))
            low = middle + 1;
        else
            high = middle;
    }
    return low < g->links && g->end[2 * low] == u && g->end[2 * low + 1] == v;
}

static void keep(cliques *c, const int *first, int last) {
    size_t wide = (size_t)c->d + 1;
    if ((c->n & (c->n - 1)) == 0)
        c->node = realloc(c->node, (c->n == 0 ? 1 : 2 * c->n) * wide * sizeof *c->node);
    memcpy(c->node + c->n * wide, first, (wide - 1) * sizeof *first);
    c->node[c->n * wide + wide - 1] = last;
    c->n++;
}

/* Each clique and each higher node that all of its nodes are linked to. */
static cliques grow(const flat_graph *g, const cliques *from) {
    cliques out = {0, from->d + 1, NULL};
    size_t wide = (size_t)from->d + 1;
    for (size_t i = 0; i < from->n; i++) {
        const int *nodes = from->node + i * wide;
        for (int v = nodes[wide - 1] + 1; v < g->nodes; v++) {
            bool all = true;
            for (size_t k = 0; all && k < wide; k++)
                all = linked(g, nodes[k], v);
            if (all)
                keep(&out, nodes, v);
        }
    }
    return out;
}

static size_t place(const cliques *c, const int *node) {
    size_t wide = (size_t)c->d + 1, low = 0, high = c->n;
    while (low < high) {
        size_t middle = (low + high) / 2;
        const int *mine = c->node + middle * wide;
        int order = 0;
        for (size_t k = 0; order == 0 && k < wide; k++)
            order = (mine[k] > node[k]) - (mine[k] < node[k]);
        if (order < 0)
            low = middle + 1;
        else
            high = middle;
    }
    return low;
}

static size_t rank(const cliques *low, const cliques *high) {
    if (low->n == 0 || high->n == 0)
        return 0;
    mzd_t *matrix = mzd_init((rci_t)high->n, (rci_t)low->n);
    size_t wide = (size_t)high->d + 1;
    int face[16];
    for (size_t i = 0; i < high->n; i++)
        for (size_t k = 0; k < wide; k++) {
            for (size_t j = 0, m = 0; j < wide; j++)
                if (j != k)
                    face[m++] = high->node[i * wide + j];
            mzd_write_bit(matrix, (rci_t)i, (rci_t)place(low, face), 1);
        }
    size_t r = (size_t)mzd_echelonize(matrix, 0);
    mzd_free(matrix);
    return r;
}

static cliques nodes_of(const flat_graph *g) {
    cliques out = {0, 0, NULL};
    for (int v = 0; v < g->nodes; v++) {
        bool there = false;
        for (size_t k = 0; !there && k < 2 * g->links; k++)
            there = g->end[k] == v;
        if (there)
            keep(&out, &v, v);
    }
    return out;
}

void flat_betti(const flat_graph *g, int top, size_t betti[]) {
    cliques low = nodes_of(g);
    size_t rank_below = 0;
    for (int p = 0; p <= top; p++) {
        cliques high;
        if (p == 0) { /* the links themselves: quicker than trying all pairs */
            high = (cliques){g->links, 1, malloc((2 * g->links + 1) * sizeof(int))};
            if (g->links > 0)
                memcpy(high.node, g->end, 2 * g->links * sizeof(int));
        } else {
            high = grow(g, &low);
        }
        size_t r = rank(&low, &high);
        betti[p] = low.n - rank_below - r;
        rank_below = r;
        free(low.node);
        low = high;
    }
    free(low.node);
}

size_t flat_cycles(const flat_graph *g, size_t *components) {
    int *parent = malloc((size_t)(g->nodes + 1) * sizeof *parent);
    cliques nodes = nodes_of(g);
    for (int v = 0; v < g->nodes; v++)
        parent[v] = v;
    *components = nodes.n;
    for (size_t k = 0; k < g->links; k++) {
        int a = g->end[2 * k], b = g->end[2 * k + 1];
        while (parent[a] != a)
            a = parent[a];
        while (parent[b] != b)
            b = parent[b];
        *components -= a != b;
        parent[a] = b;
    }
    size_t cycles = g->links - nodes.n + *components;
    free(parent);
    free(nodes.node);
    return cycles;
}
