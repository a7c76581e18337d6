#include "support/judge.h"

#include <stdio.h>
#include <stdlib.h>
#include <string.h>

/* ---- vectors over Z/2 of any length ---------------------------------------------------- */

typedef struct vec {
    uint64_t *w;
} vec;
static size_t words(size_t bits) { return (bits + 63) / 64 + 1; }
static vec vec_new(size_t bits) { return (vec){calloc(words(bits), 8)}; }
static void vec_flip(vec v, size_t i) { v.w[i / 64] ^= UINT64_C(1) << (i % 64); }
static bool vec_has(vec v, size_t i) { return v.w[i / 64] >> (i % 64) & 1; }
static void vec_add(vec v, vec x, size_t bits) {
    for (size_t i = 0; i < words(bits); i++)
        v.w[i] ^= x.w[i];
}
static size_t vec_top(vec v, size_t bits) {
    for (size_t i = words(bits); i-- > 0;)
        if (v.w[i] != 0)
            return 64 * i + 63 - (size_t)__builtin_clzll(v.w[i]);
    return SIZE_MAX;
}

/* Rows reduced so that their highest bits differ. Each may carry a second vector along. */
typedef struct basis {
    size_t bits, more;
    vec *row, *tail; /* by highest bit; w NULL where there is none */
    size_t rank;
} basis;
static basis basis_new(size_t bits, size_t more) {
    return (basis){bits, more, calloc(bits + 1, sizeof(vec)), calloc(bits + 1, sizeof(vec)), 0};
}
/* Reduce v (and its tail) by the basis; true when something is left. */
static bool basis_reduce(const basis *b, vec v, vec tail) {
    for (size_t top; (top = vec_top(v, b->bits)) != SIZE_MAX;) {
        if (b->row[top].w == NULL)
            return true;
        vec_add(v, b->row[top], b->bits);
        if (tail.w != NULL)
            vec_add(tail, b->tail[top], b->more);
    }
    return false;
}
/* Put a copy of v (and its tail) in; false when v depends on what is there (v and tail are then reduced). */
static bool basis_put(basis *b, vec v, vec tail) {
    if (!basis_reduce(b, v, tail))
        return false;
    size_t top = vec_top(v, b->bits);
    b->row[top] = vec_new(b->bits);
    vec_add(b->row[top], v, b->bits);
    if (b->more > 0) {
        b->tail[top] = vec_new(b->more);
        vec_add(b->tail[top], tail, b->more);
    }
    b->rank++;
    return true;
}
static void basis_free(basis *b) {
    for (size_t i = 0; i < b->bits; i++) {
        free(b->row[i].w);
        free(b->tail[i].w);
    }
    free(b->row);
    free(b->tail);
}

/* ---- complexes by definition ----------------------------------------------------------- */

typedef struct graph {
    bool there[JUDGE_NODES];
    bool link[JUDGE_NODES][JUDGE_NODES];
} graph;

static bool active(const judge_event *e, long a, long b) {
    return e->start == e->finish ? a <= e->start && e->start < b : e->start < b && e->finish > a;
}

static void links_of_window(const judge_case *c, int window, bool link[JUDGE_NODES][JUDGE_NODES]) {
    memset(link, 0, sizeof(bool) * JUDGE_NODES * JUDGE_NODES);
    for (int i = 0; i < c->events; i++) {
        const judge_event *e = &c->event[i];
        if (e->u != e->v && active(e, c->from[window], c->to[window]))
            link[e->u][e->v] = link[e->v][e->u] = true;
    }
}

static graph graph_at(const judge_case *c, int position) {
    graph g = {{false}, {{false}}};
    bool other[JUDGE_NODES][JUDGE_NODES];
    links_of_window(c, position / 2, g.link);
    links_of_window(c, (position + 1) / 2, other);
    for (int u = 0; u < c->nodes; u++)
        for (int v = 0; v < c->nodes; v++)
            g.link[u][v] = c->intersection ? g.link[u][v] && other[u][v] : g.link[u][v] || other[u][v];
    for (int u = 0; u < c->nodes; u++)
        for (int v = 0; v < c->nodes; v++)
            g.there[u] = g.there[u] || g.link[u][v];
    for (int i = 0; c->all_nodes && i < c->events; i++)
        if (c->event[i].u != c->event[i].v)
            g.there[c->event[i].u] = g.there[c->event[i].v] = true;
    if (c->radius < 2)
        return g;
    int far[JUDGE_NODES][JUDGE_NODES]; /* Floyd and Warshall */
    for (int u = 0; u < c->nodes; u++)
        for (int v = 0; v < c->nodes; v++)
            far[u][v] = u == v ? 0 : g.link[u][v] ? 1 : 1000;
    for (int k = 0; k < c->nodes; k++)
        for (int u = 0; u < c->nodes; u++)
            for (int v = 0; v < c->nodes; v++)
                if (far[u][k] + far[k][v] < far[u][v])
                    far[u][v] = far[u][k] + far[k][v];
    for (int u = 0; u < c->nodes; u++)
        for (int v = 0; v < c->nodes; v++)
            g.link[u][v] = u != v && far[u][v] <= c->radius;
    return g;
}

size_t judge_simplices(const judge_case *c, int position, int d, judge_simplex **out) {
    graph g = graph_at(c, position);
    size_t n = 0;
    *out = malloc(sizeof **out << c->nodes);
    int most = c->radius < 0 ? 1 : c->radius == 0 ? 0 : JUDGE_NODES;
    for (unsigned s = 1; d <= most && s < 1u << c->nodes; s++) {
        if (__builtin_popcount(s) != d + 1)
            continue;
        bool clique = true;
        for (int u = 0; u < c->nodes; u++)
            for (int v = 0; v < c->nodes; v++)
                if ((s >> u & 1) && (s >> v & 1) && (u == v ? !g.there[u] : !g.link[u][v]))
                    clique = false;
        if (clique)
            (*out)[n++] = (judge_simplex)s;
    }
    return n;
}

/* ---- homology of one position ------------------------------------------------------------ */

typedef struct space {
    judge_simplex *cell[3]; /* of dimensions p-1, p, p+1 */
    size_t n[3];
    size_t betti;
    vec *cycle;   /* betti of them, chains of p-cells */
    basis filled; /* boundaries, then those cycles; tails are coordinates */
} space;

static size_t find(const judge_simplex *list, size_t n, judge_simplex s) {
    for (size_t i = 0; i < n; i++)
        if (list[i] == s)
            return i;
    abort(); /* a face is missing: the judge itself is wrong */
}

static void add_boundary(judge_simplex s, const judge_simplex *low, size_t n, vec v) {
    if (__builtin_popcount(s) == 1)
        return;
    for (int u = 0; u < JUDGE_NODES; u++)
        if (s >> u & 1)
            vec_flip(v, find(low, n, (judge_simplex)(s & ~(1u << u))));
}

static space space_at(const judge_case *c, int position, int p) {
    space s = {{NULL, NULL, NULL}, {0, 0, 0}, 0, NULL, {0}};
    for (int k = 0; k < 3; k++) {
        if (p - 1 + k >= 0)
            s.n[k] = judge_simplices(c, position, p - 1 + k, &s.cell[k]);
    }
    s.cycle = calloc(s.n[1] + 1, sizeof(vec));
    s.filled = basis_new(s.n[1], s.n[1]);
    for (size_t i = 0; i < s.n[2]; i++) {
        vec v = vec_new(s.n[1]), none = vec_new(s.n[1]);
        add_boundary(s.cell[2][i], s.cell[1], s.n[1], v);
        basis_put(&s.filled, v, none);
        free(v.w);
        free(none.w);
    }
    basis bounds = basis_new(s.n[0], s.n[1]);
    for (size_t i = 0; i < s.n[1]; i++) {
        vec v = vec_new(s.n[0]), chain = vec_new(s.n[1]);
        add_boundary(s.cell[1][i], s.cell[0], s.n[0], v);
        vec_flip(chain, i);
        if (!basis_put(&bounds, v, chain)) { /* chain is now a cycle */
            vec copy = vec_new(s.n[1]), coordinate = vec_new(s.n[1]);
            vec_add(copy, chain, s.n[1]);
            vec_flip(coordinate, s.betti);
            if (basis_put(&s.filled, copy, coordinate)) {
                s.cycle[s.betti] = vec_new(s.n[1]);
                vec_add(s.cycle[s.betti++], chain, s.n[1]);
            }
            free(copy.w);
            free(coordinate.w);
        }
        free(v.w);
        free(chain.w);
    }
    basis_free(&bounds);
    return s;
}

static void space_free(space *s) {
    for (int k = 0; k < 3; k++)
        free(s->cell[k]);
    for (size_t i = 0; i < s->betti; i++)
        free(s->cycle[i].w);
    free(s->cycle);
    basis_free(&s->filled);
}

size_t judge_betti(const judge_case *c, int position, int p) {
    space s = space_at(c, position, p);
    size_t betti = s.betti;
    space_free(&s);
    return betti;
}

/* Row i: where the map of the inclusion sends class i of `from`. */
static vec *induced(const space *from, const space *to) {
    vec *map = calloc(from->betti + 1, sizeof(vec));
    for (size_t i = 0; i < from->betti; i++) {
        vec chain = vec_new(to->n[1]);
        map[i] = vec_new(to->n[1]);
        for (size_t k = 0; k < from->n[1]; k++)
            if (vec_has(from->cycle[i], k))
                vec_flip(chain, find(to->cell[1], to->n[1], from->cell[1][k]));
        if (basis_reduce(&to->filled, chain, map[i]))
            abort(); /* a cycle that is none */
        free(chain.w);
    }
    return map;
}

bool judge_spans(const judge_case *c, int position, int p, const judge_simplex *chain, size_t n,
                 const judge_simplex *const *with, const size_t *lengths, size_t with_count) {
    space s = space_at(c, position, p);
    basis b = basis_new(s.n[1], 0);
    vec none = {NULL};
    for (size_t i = 0; i < s.n[2]; i++) {
        vec v = vec_new(s.n[1]);
        add_boundary(s.cell[2][i], s.cell[1], s.n[1], v);
        basis_put(&b, v, none);
        free(v.w);
    }
    for (size_t k = 0; k < with_count; k++) {
        vec v = vec_new(s.n[1]);
        for (size_t i = 0; i < lengths[k]; i++)
            vec_flip(v, find(s.cell[1], s.n[1], with[k][i]));
        basis_put(&b, v, none);
        free(v.w);
    }
    vec v = vec_new(s.n[1]);
    for (size_t i = 0; i < n; i++)
        vec_flip(v, find(s.cell[1], s.n[1], chain[i]));
    bool left = basis_reduce(&b, v, none);
    free(v.w);
    basis_free(&b);
    space_free(&s);
    return !left;
}

/* ---- relations ----------------------------------------------------------------------------- */

/* Pairs (v, w) of classes at i and at the position reached: generators, not reduced. */
typedef struct relation {
    vec *v, *w;
    size_t n, cap;
} relation;
static void relation_put(relation *r, vec v, vec w) {
    if (r->n == r->cap) {
        r->cap = 2 * r->cap + 8;
        r->v = realloc(r->v, r->cap * sizeof(vec));
        r->w = realloc(r->w, r->cap * sizeof(vec));
    }
    r->v[r->n] = v;
    r->w[r->n++] = w;
}
static void relation_free(relation *r) {
    for (size_t i = 0; i < r->n; i++) {
        free(r->v[i].w);
        free(r->w[i].w);
    }
    free(r->v);
    free(r->w);
}

enum { MOST_CLASSES = 192 }; /* vectors of classes are this long */

static void add_image(vec to, vec from, vec *map, size_t classes, size_t width) {
    for (size_t i = 0; i < classes; i++)
        if (vec_has(from, i))
            for (size_t k = 0; k < width; k++)
                if (vec_has(map[i], k))
                    vec_flip(to, k);
}

/* Compose with an arrow that goes the same way: w becomes f(w). */
static relation forward(const relation *r, vec *map, const space *from, const space *to) {
    relation out = {0};
    for (size_t i = 0; i < r->n; i++) {
        vec v = vec_new(MOST_CLASSES), w = vec_new(MOST_CLASSES);
        vec_add(v, r->v[i], MOST_CLASSES);
        add_image(w, r->w[i], map, from->betti, to->betti);
        relation_put(&out, v, w);
    }
    return out;
}

/* Compose with an arrow g that comes back: pairs (v, x) with (v, g(x)) in r. They are the dependencies among the w of r
 * and the images of g. */
static relation backward(const relation *r, vec *map, const space *next, const space *here) {
    relation out = {0};
    basis b = basis_new(MOST_CLASSES, 2 * MOST_CLASSES);
    for (size_t i = 0; i < r->n + next->betti; i++) {
        vec w = vec_new(MOST_CLASSES), pair = vec_new(2 * MOST_CLASSES);
        if (i < r->n) {
            vec_add(w, r->w[i], MOST_CLASSES);
            for (size_t k = 0; k < MOST_CLASSES; k++)
                if (vec_has(r->v[i], k))
                    vec_flip(pair, k);
        } else {
            for (size_t k = 0; k < here->betti; k++)
                if (vec_has(map[i - r->n], k))
                    vec_flip(w, k);
            vec_flip(pair, MOST_CLASSES + i - r->n);
        }
        if (!basis_put(&b, w, pair)) {
            vec v = vec_new(MOST_CLASSES), x = vec_new(MOST_CLASSES);
            for (size_t k = 0; k < MOST_CLASSES; k++) {
                if (vec_has(pair, k))
                    vec_flip(v, k);
                if (vec_has(pair, MOST_CLASSES + k))
                    vec_flip(x, k);
            }
            relation_put(&out, v, x);
        }
        free(w.w);
        free(pair.w);
    }
    basis_free(&b);
    return out;
}

/* dim of the domain less dim of the kernel. */
static long rank_of(const relation *r) {
    basis domain = basis_new(MOST_CLASSES, 0), image = basis_new(MOST_CLASSES, MOST_CLASSES), kernel = basis_new(MOST_CLASSES, 0);
    vec none = {NULL};
    for (size_t i = 0; i < r->n; i++) {
        vec v = vec_new(MOST_CLASSES), w = vec_new(MOST_CLASSES), t = vec_new(MOST_CLASSES);
        vec_add(v, r->v[i], MOST_CLASSES);
        basis_put(&domain, v, none);
        vec_add(w, r->w[i], MOST_CLASSES);
        vec_add(t, r->v[i], MOST_CLASSES);
        if (!basis_put(&image, w, t))
            basis_put(&kernel, t, none);
        free(v.w);
        free(w.w);
        free(t.w);
    }
    long rank = (long)domain.rank - (long)kernel.rank;
    basis_free(&domain);
    basis_free(&image);
    basis_free(&kernel);
    return rank;
}

/* r[j] for j >= i. */
static void ranks_from(const judge_case *c, const space *s, vec **map, int i, long *r) {
    int positions = 2 * c->windows - 1;
    relation now = {0};
    for (size_t k = 0; k < s[i].betti; k++) {
        vec v = vec_new(MOST_CLASSES), w = vec_new(MOST_CLASSES);
        vec_flip(v, k);
        vec_flip(w, k);
        relation_put(&now, v, w);
    }
    for (int j = i;; j++) {
        r[j] = rank_of(&now);
        if (j + 1 == positions)
            break;
        /* Into a union join and out of an intersection join the arrow goes on; otherwise it comes back. */
        bool on = (j % 2 == 0) != c->intersection;
        relation next = on ? forward(&now, map[j], &s[j], &s[j + 1]) : backward(&now, map[j], &s[j + 1], &s[j]);
        relation_free(&now);
        now = next;
    }
    relation_free(&now);
}

static size_t bars_of(const judge_case *c, int p, judge_bar *out) {
    int positions = 2 * c->windows - 1;
    space s[JUDGE_POSITIONS];
    vec *map[JUDGE_POSITIONS] = {NULL};
    long r[JUDGE_POSITIONS + 2][JUDGE_POSITIONS + 2];
    memset(r, 0, sizeof r); /* r[i + 1][j]: one of margin on each side */
    for (int t = 0; t < positions; t++)
        s[t] = space_at(c, t, p);
    for (int t = 0; t + 1 < positions; t++)
        map[t] = (t % 2 == 0) != c->intersection ? induced(&s[t], &s[t + 1]) : induced(&s[t + 1], &s[t]);
    for (int i = 0; i < positions; i++)
        ranks_from(c, s, map, i, r[i + 1]);
    for (int t = 0; t < positions; t++)
        if (s[t].betti > MOST_CLASSES)
            abort(); /* raise MOST_CLASSES */
    size_t n = 0;
    for (int i = 0; i < positions; i++)
        for (int j = i; j < positions; j++) {
            long many = r[i + 1][j] - (i > 0 ? r[i][j] : 0) - r[i + 1][j + 1] + (i > 0 ? r[i][j + 1] : 0);
            if (many < 0)
                abort(); /* the judge itself is wrong */
            bool from_bigger = i > 0 && ((i - 1) % 2 == 0) == c->intersection; /* the arrow before i comes back from i */
            bool into_bigger = j + 1 < positions && (j % 2 == 0) != c->intersection;
            for (long k = 0; k < many && n < JUDGE_BARS; k++)
                out[n++] = (judge_bar){p, i, j, from_bigger, into_bigger};
        }
    for (int t = 0; t < positions; t++) {
        for (size_t k = 0; map[t] != NULL && k < ((t % 2 == 0) != c->intersection ? s[t].betti : s[t + 1].betti); k++)
            free(map[t][k].w);
        free(map[t]);
    }
    for (int t = 0; t < positions; t++)
        space_free(&s[t]);
    return n;
}

size_t judge_barcode(const judge_case *c, judge_bar out[JUDGE_BARS]) {
    size_t n = 0;
    for (int p = 0; p < 8; p++)
        if (c->dims >> p & 1)
            n += bars_of(c, p, out + n);
    return n;
}

void judge_print(const judge_case *c) {
    printf("  radius ");
    printf(c->radius < 0 ? "graph" : "%d", c->radius);
    printf(", join %s, dims", c->intersection ? "intersection" : "union");
    for (int p = 0; p < 8; p++)
        if (c->dims >> p & 1)
            printf(" %d", p);
    printf("%s\n  windows", c->all_nodes ? ", all nodes" : "");
    for (int i = 0; i < c->windows; i++)
        printf(" [%ld, %ld)", c->from[i], c->to[i]);
    printf("\n");
    for (int i = 0; i < c->events; i++)
        printf("  %d - %d  [%ld, %ld)\n", c->event[i].u, c->event[i].v, c->event[i].start, c->event[i].finish);
}
