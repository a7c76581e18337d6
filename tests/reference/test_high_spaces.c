/* Spaces of high dimension, and surfaces, whose homology is in the literature, in networks that lose a place
 * for a while. */
#include <setjmp.h>
#include <stdarg.h>
#include <stddef.h>
#include <stdint.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

#include <cmocka.h>

#include "support/plan.h"

static plan here; /* too large for the stack */

/* Windows 1 to 5; what is lost is lost in window 3. */
enum { WINDOWS = 5, LAST = 2 * WINDOWS - 2, LOST = 4 };

static void begin(uint32_t nodes) {
    here.nodes = nodes;
    here.events = 0;
    here.windows = WINDOWS;
    for (int w = 0; w < WINDOWS; w++) {
        here.from[w] = w;
        here.to[w] = w + 1;
    }
}

static void link_all_the_time(uint32_t u, uint32_t v) { plan_link(&here, u, v, 0, WINDOWS); }

static void link_but_in_window_3(uint32_t u, uint32_t v) {
    plan_link(&here, u, v, 0, 2);
    plan_link(&here, u, v, 3, WINDOWS);
}

static void add(bars *list, uint8_t dim, uint32_t first, uint32_t last, size_t many) {
    list->at = realloc(list->at, (list->n + many + 1) * sizeof *list->at);
    assert_non_null(list->at);
    for (size_t i = 0; i < many; i++)
        list->at[list->n++] = (thole_bar){first, last, dim, THOLE_CLOSED_CLOSED};
}

/* With union joins a loss in window 3 is seen at its own position alone; with intersections at the joins
 * beside it too. */
static void add_lost(bars *list, uint8_t dim, thole_join join, size_t many) {
    uint32_t beside = join == THOLE_JOIN_UNION ? 1 : 2;
    add(list, dim, 0, LOST - beside, many);
    add(list, dim, LOST + beside, LAST, many);
}

static thole_zigzag_options at_radius_1(uint32_t dims, int join) {
    return (thole_zigzag_options){.radius_kind = THOLE_RADIUS_HOPS,
                                  .radius = 1,
                                  .dims = dims,
                                  .join = join == 0 ? THOLE_JOIN_UNION : THOLE_JOIN_INTERSECTION};
}

/* ---- joins of discrete sets ----------------------------------------------------------------------- */

/* `parts` sets of size[i] nodes, nodes of different sets linked: the clique complex is the join of the sets,
 * a wedge of (size[0] - 1) ... (size[parts - 1] - 1) spheres of dimension parts - 1 (homology of joins:
 * Milnor, "Construction of universal bundles II", Ann. of Math. 63, 1956; from memory). In window 3 the first
 * node of the first set is gone. */
static void expect_wedge(uint32_t parts, const uint32_t size[]) {
    size_t with = 1, without = 1;
    uint32_t nodes = 0, part[32];
    for (uint32_t i = 0; i < parts; i++) {
        for (uint32_t k = 0; k < size[i]; k++)
            part[nodes++] = i;
        with *= size[i] - 1;
        without *= i == 0 ? size[i] - 2 : size[i] - 1;
    }
    begin(nodes);
    for (uint32_t u = 0; u < nodes; u++)
        for (uint32_t v = u + 1; v < nodes; v++) {
            if (part[u] == part[v])
                continue;
            if (u == 0)
                link_but_in_window_3(u, v);
            else
                link_all_the_time(u, v);
        }
    for (int join = 0; join < 2; join++) {
        thole_zigzag_options options = at_radius_1((1u << parts) - 1, join);
        bars want = {NULL, 0};
        add(&want, 0, 0, LAST, 1);
        /* Spheres that need no lost node last; of the others two sets are told apart by the gap. */
        add(&want, (uint8_t)(parts - 1), 0, LAST, without);
        add_lost(&want, (uint8_t)(parts - 1), options.join, with - without);
        char what[64];
        snprintf(what, sizeof what, "%u parts, the first of %u nodes", (unsigned)parts, (unsigned)size[0]);
        bars_expect_same(want, plan_bars(&here, options, 1 + join), what);
    }
}

static void spheres_up_to_the_highest_dimension(void **state) {
    (void)state;
    static const uint32_t two[8] = {2, 2, 2, 2, 2, 2, 2, 2}; /* the octahedron and its kin */
    for (uint32_t parts = 2; parts <= THOLE_MOST_DIMENSION + 1; parts++)
        expect_wedge(parts, two);
}

static void wedges_of_spheres(void **state) {
    (void)state;
    expect_wedge(2, (uint32_t[]){4, 5});
    expect_wedge(3, (uint32_t[]){3, 3, 3});
    expect_wedge(3, (uint32_t[]){6, 2, 4});
    expect_wedge(4, (uint32_t[]){3, 3, 3, 3});
    expect_wedge(4, (uint32_t[]){2, 5, 2, 3});
    expect_wedge(5, (uint32_t[]){3, 2, 3, 2, 3});
}

/* ---- surfaces ------------------------------------------------------------------------------------------ */

/* Whether the triangles close up to a surface: each side in two of them, those round a node in one ring. */
static void expect_surface(const int (*triangle)[3], int triangles, int nodes, int euler) {
    int sides = 0;
    for (int u = 0; u < nodes; u++)
        for (int v = u + 1; v < nodes; v++) {
            int on = 0;
            for (int t = 0; t < triangles; t++) {
                int ends = 0;
                for (int k = 0; k < 3; k++)
                    ends += triangle[t][k] == u || triangle[t][k] == v;
                on += ends == 2;
            }
            assert_true(on == 0 || on == 2);
            sides += on == 2;
        }
    assert_int_equal(nodes - sides + triangles, euler);
    for (int v = 0; v < nodes; v++) { /* walk round v, from one triangle to the next */
        int around = 0, start = -1, from, to, steps = 0;
        for (int t = 0; t < triangles; t++)
            for (int k = 0; k < 3; k++)
                if (triangle[t][k] == v) {
                    around++;
                    start = t;
                }
        assert_true(start >= 0);
        from = start;
        to = triangle[start][0] == v ? triangle[start][1] : triangle[start][0];
        do {
            int next = -1, across = -1;
            for (int t = 0; t < triangles && next < 0; t++) {
                bool has_v = false, has_to = false;
                for (int k = 0; k < 3; k++) {
                    has_v = has_v || triangle[t][k] == v;
                    has_to = has_to || triangle[t][k] == to;
                }
                if (t != from && has_v && has_to)
                    next = t;
            }
            assert_true(next >= 0);
            for (int k = 0; k < 3; k++)
                if (triangle[next][k] != v && triangle[next][k] != to)
                    across = triangle[next][k];
            from = next;
            to = across;
            steps++;
        } while (from != start && steps <= triangles);
        assert_int_equal(steps, around);
    }
}

/* The barycentric subdivision, which is the clique complex of its links: a node for each corner, side and
 * triangle, linked when one is part of the other. In window 3 the middle of the first triangle is gone. */
static void subdivide(const int (*triangle)[3], int triangles, int nodes) {
    static int side[64][64];
    uint32_t next = (uint32_t)nodes;
    memset(side, 0, sizeof side);
    begin(0);
    for (int t = 0; t < triangles; t++) {
        uint32_t middle = next++;
        for (int k = 0; k < 3; k++) {
            int u = triangle[t][k], v = triangle[t][(k + 1) % 3];
            int low = u < v ? u : v, high = u < v ? v : u;
            if (side[low][high] == 0) {
                side[low][high] = (int)next++;
                link_all_the_time((uint32_t)low, (uint32_t)side[low][high]);
                link_all_the_time((uint32_t)high, (uint32_t)side[low][high]);
            }
            void (*join)(uint32_t, uint32_t) = t == 0 ? link_but_in_window_3 : link_all_the_time;
            join((uint32_t)u, middle);
            join((uint32_t)side[low][high], middle);
        }
    }
    here.nodes = next;
}

/* A closed surface with `loops` classes of dimension 1 over Z/2 has one of dimension 2, which a hole ends and
 * nothing else (the rim of the hole bounds the rest of the surface, over Z/2). */
static void expect_bars_of_surface(size_t loops, const char *what) {
    for (int join = 0; join < 2; join++) {
        thole_zigzag_options options = at_radius_1(7, join);
        bars want = {NULL, 0};
        add(&want, 0, 0, LAST, 1);
        add(&want, 1, 0, LAST, loops);
        add_lost(&want, 2, options.join, 1);
        bars_expect_same(want, plan_bars(&here, options, 2 - join), what);
    }
}

/* Moebius's torus of seven nodes: triangles {i, i+1, i+3} and {i, i+2, i+3} modulo 7 (Gesammelte Werke II,
 * 1886, p. 553; from memory, and checked above to be a surface of Euler number 0). Homology over Z/2: 1,
 * 2, 1. */
static void a_torus(void **state) {
    (void)state;
    int triangle[14][3];
    for (int i = 0; i < 7; i++) {
        memcpy(triangle[2 * i], (int[]){i, (i + 1) % 7, (i + 3) % 7}, sizeof triangle[0]);
        memcpy(triangle[2 * i + 1], (int[]){i, (i + 2) % 7, (i + 3) % 7}, sizeof triangle[0]);
    }
    expect_surface((const int(*)[3])triangle, 14, 7, 0);
    subdivide((const int(*)[3])triangle, 14, 7);
    expect_bars_of_surface(2, "a torus");
}

/* The projective plane of six nodes, half of an icosahedron (checked above to be a surface of Euler number 1,
 * which is that plane by the classification of surfaces). Homology over Z/2: 1, 1, 1 (Hatcher, "Algebraic
 * Topology", 2002, example 2.42 and universal coefficients); over the rationals it would be 1, 0, 0: this is
 * where Z/2 shows. */
static void a_projective_plane(void **state) {
    (void)state;
    static const int triangle[10][3] = {{0, 1, 2}, {0, 2, 3}, {0, 3, 4}, {0, 4, 5}, {0, 5, 1},
                                        {1, 2, 4}, {2, 3, 5}, {3, 4, 1}, {4, 5, 2}, {5, 1, 3}};
    expect_surface(triangle, 10, 6, 1);
    subdivide(triangle, 10, 6);
    expect_bars_of_surface(1, "a projective plane");
}

int main(void) {
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(spheres_up_to_the_highest_dimension),
        cmocka_unit_test(wedges_of_spheres),
        cmocka_unit_test(a_torus),
        cmocka_unit_test(a_projective_plane),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
