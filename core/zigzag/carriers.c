#include "zigzag/carriers.h"

#include "base/parallel.h"
#include "base/sort.h"
#include "zigzag/barcode.h"
#include "zigzag/pairs.h"

typedef struct carrier {
    size_t bar, part, parts; /* parts are part .. part + parts - 1 */
} carrier;

struct thole_carriers {
    thole_memory *memory;
    TB_VEC(carrier) list;
    TB_VEC(size_t) start; /* part k: node[start[k]] .. node[start[k + 1] - 1] */
    TB_VEC(uint32_t) node;
};

void thole_carriers_release(thole_carriers *c) {
    if (c == NULL)
        return;
    TB_VEC_CLEAR(c->memory, &c->list);
    TB_VEC_CLEAR(c->memory, &c->start);
    TB_VEC_CLEAR(c->memory, &c->node);
    tb_free(c->memory, c, 1, sizeof *c);
}

size_t thole_carriers_count(const thole_carriers *c) { return c->list.n; }
size_t thole_carriers_bar(const thole_carriers *c, size_t i) { return c->list.at[i].bar; }
size_t thole_carriers_parts(const thole_carriers *c, size_t i) { return c->list.at[i].parts; }
const uint32_t *thole_carriers_part(const thole_carriers *c, size_t i, size_t part, size_t *nodes) {
    size_t k = c->list.at[i].part + part;
    *nodes = c->start.at[k + 1] - c->start.at[k];
    return c->node.at + c->start.at[k];
}

/* ---- the complex at the position ------------------------------------------------- */

/* Slots 0 .. slots-1 stand for its nodes, in their order; its cells all have one stay, so slot = node cell. */
typedef struct scene {
    thole_context *context;
    tb_arena *arena;
    const tc_block *block;
    tz_order order;      /* addition; coordinates are ranks in it, which here are cell numbers */
    uint32_t *parent;    /* node cell -> its parent in the forest of links that join, or itself */
    uint32_t *link;      /* node cell -> the link cell to its parent */
    uint32_t *depth;
    uint32_t *begin, *next; /* adjacency: links at a node: next[begin[v] ..] */
    tz_bits links;       /* the cycle being drawn, as link cells */
    uint32_t *walk;      /* room for a walk */
    thole_carriers *out;
} scene;

static bool lay_out(scene *s) {
    const tc_cells *links = &s->block->cells[1];
    uint32_t n = s->block->cells[0].n, m = s->block->top >= 1 ? links->n : 0;
    s->begin = TB_FILL(s->arena, uint32_t, (size_t)n + 2, 0);
    s->next = TB_TAKE(s->arena, uint32_t, 2 * (size_t)m);
    s->parent = TB_FILL(s->arena, uint32_t, n, 0xFF);
    s->link = TB_TAKE(s->arena, uint32_t, n);
    s->depth = TB_TAKE(s->arena, uint32_t, n);
    if (s->begin == NULL || s->next == NULL || s->parent == NULL || s->link == NULL || s->depth == NULL)
        return false;
    for (size_t i = 0; i < 2 * (size_t)m; i++)
        s->begin[links->face[i] + 2]++;
    for (uint32_t i = 0; i < n; i++)
        s->begin[i + 1] += s->begin[i];
    for (uint32_t i = 0; i < m; i++) {
        s->next[s->begin[links->face[2 * (size_t)i] + 1]++] = i;
        s->next[s->begin[links->face[2 * (size_t)i + 1] + 1]++] = i;
    }
    s->walk = TB_TAKE(s->arena, uint32_t, n);
    return s->walk != NULL && tz_bits_make(s->arena, m, &s->links);
}

static uint32_t far_end(const scene *s, uint32_t link, uint32_t node) {
    const uint32_t *ends = &s->block->cells[1].face[2 * (size_t)link];
    return ends[0] == node ? ends[1] : ends[0];
}

/* Root the forest of the links that join components: the ones whose absence from a cycle's coordinates
 * is made good by a path here. */
static bool root_forest(scene *s) {
    uint32_t n = s->block->cells[0].n;
    uint32_t *queue = TB_TAKE(s->arena, uint32_t, n);
    if (queue == NULL)
        return false;
    for (uint32_t root = 0; root < n; root++) {
        if (s->parent[root] != TC_NONE)
            continue;
        uint32_t head = 0, tail = 0;
        s->parent[root] = root;
        s->depth[root] = 0;
        queue[tail++] = root;
        while (head < tail) {
            uint32_t x = queue[head++];
            for (uint32_t i = s->begin[x]; i < s->begin[x + 1]; i++) {
                uint32_t link = s->next[i], y = far_end(s, link, x);
                if (s->order.dim[1].victim[link] == TC_NONE || s->parent[y] != TC_NONE)
                    continue;
                s->parent[y] = x;
                s->link[y] = link;
                s->depth[y] = s->depth[x] + 1;
                queue[tail++] = y;
            }
        }
    }
    return true;
}

/* ---- dimension 1 -------------------------------------------------------------------- */

/* Toggle the cycle of one coordinate: its link and the forest path between its ends. */
static void draw(scene *s, uint32_t link) {
    const uint32_t *ends = &s->block->cells[1].face[2 * (size_t)link];
    uint32_t a = ends[0], b = ends[1];
    tz_bits_toggle(&s->links, link);
    while (a != b) {
        if (s->depth[a] < s->depth[b]) {
            uint32_t c = a;
            a = b;
            b = c;
        }
        tz_bits_toggle(&s->links, s->link[a]);
        a = s->parent[a];
    }
}

static uint32_t link_between(const scene *s, uint32_t a, uint32_t b) {
    if (s->begin[a + 1] - s->begin[a] > s->begin[b + 1] - s->begin[b]) {
        uint32_t c = a;
        a = b;
        b = c;
    }
    for (uint32_t i = s->begin[a]; i < s->begin[a + 1]; i++)
        if (far_end(s, s->next[i], a) == b)
            return s->next[i];
    return TC_NONE;
}

/* Close a walk: with triangles filled, two links in a row that a third bridges give way to it. */
static bool keep_walk(scene *s, const uint32_t *path, size_t n) {
    uint32_t *walk = s->walk;
    memcpy(walk, path, n * sizeof *walk);
    bool filled = s->block->top >= 2;
    for (size_t i = 0, calm = 0; filled && n > 3 && calm < n;) {
        size_t before = (i + n - 1) % n, after = (i + 1) % n;
        if (link_between(s, walk[before], walk[after]) == TC_NONE) {
            i = after;
            calm++;
            continue;
        }
        memmove(walk + i, walk + i + 1, (n - i - 1) * sizeof *walk);
        n--;
        i = i >= n ? 0 : i;
        calm = 0;
    }
    for (size_t i = 0; i < n; i++)
        if (!TB_VEC_PUSH(s->context->memory, &s->out->node, s->block->cells[0].node[walk[i]]))
            return false;
    return TB_VEC_PUSH(s->context->memory, &s->out->start, s->out->node.n);
}

/* Take the drawn cycle apart into closed walks that visit no node twice: walk on until a node comes again. */
static bool write_walks(scene *s, uint32_t *path, uint32_t *place) {
    uint32_t first;
    while ((first = tz_bits_lowest(&s->links)) != TZ_EMPTY) {
        size_t n = 0;
        uint32_t at = s->block->cells[1].face[2 * (size_t)first];
        path[n++] = at;
        place[at] = 0;
        do {
            uint32_t link = TC_NONE;
            for (uint32_t i = s->begin[at]; link == TC_NONE && i < s->begin[at + 1]; i++)
                if (tz_bits_has(&s->links, s->next[i]))
                    link = s->next[i];
            tz_bits_toggle(&s->links, link); /* every node has an even number of them */
            at = far_end(s, link, at);
            if (place[at] == TC_NONE) {
                place[at] = (uint32_t)n;
                path[n++] = at;
                continue;
            }
            size_t from = place[at];
            for (size_t i = from + 1; i < n; i++)
                place[path[i]] = TC_NONE;
            if (!keep_walk(s, path + from, n - from))
                return false;
            n = from + 1;
        } while (n > 1 || tz_bits_has(&s->links, first));
        place[path[0]] = TC_NONE;
    }
    return true;
}

/* ---- dimension 0 --------------------------------------------------------------------- */

/* The nodes of the component that a node cell is the root of, by the forest. */
static bool write_piece(scene *s, uint32_t root) {
    uint32_t n = s->block->cells[0].n;
    for (uint32_t v = 0; v < n; v++) {
        uint32_t x = v;
        while (s->parent[x] != x)
            x = s->parent[x];
        if (x == root && !TB_VEC_PUSH(s->context->memory, &s->out->node, s->block->cells[0].node[v]))
            return false;
    }
    return TB_VEC_PUSH(s->context->memory, &s->out->start, s->out->node.n);
}

/* ---- bars and classes ------------------------------------------------------------------ */

/* A class with the bar that it belongs to. */
typedef struct claim {
    thole_bar bar;
    uint32_t number; /* of the class */
} claim;

static thole_bar bar_of(const tz_class *class, uint32_t dim, uint32_t last_position) {
    bool open_start = class->birth.how == TZ_BY_DELETION, open_end = class->death.how == TZ_BY_ADDITION;
    thole_bar bar = {.first = class->birth.how == TZ_REACHES ? 0 : class->birth.at,
                     .last = class->death.how == TZ_REACHES ? last_position : class->death.at,
                     .dim = (uint8_t)dim};
    bar.kind = (uint8_t)(open_start ? (open_end ? THOLE_OPEN_OPEN : THOLE_OPEN_CLOSED)
                                    : (open_end ? THOLE_CLOSED_OPEN : THOLE_CLOSED_CLOSED));
    return bar;
}

static bool same_bar(const thole_bar *a, const thole_bar *b) {
    return a->first == b->first && a->last == b->last && a->dim == b->dim && a->kind == b->kind;
}

static bool write_carrier(scene *s, const tz_classes *classes, const tz_class *class, uint32_t dim, size_t bar,
                          uint32_t *path, uint32_t *place) {
    size_t part = s->out->start.n - 1;
    for (size_t i = 0; i < class->length; i++) {
        uint32_t coordinate = classes->item.at[class->start + i];
        if (dim == 1)
            draw(s, coordinate);
        else if (!write_piece(s, coordinate))
            return false;
    }
    return (dim == 0 || write_walks(s, path, place)) &&
           TB_VEC_PUSH(s->context->memory, &s->out->list, ((carrier){bar, part, s->out->start.n - 1 - part}));
}

/* Give each bar alive at the position its class; equal bars take theirs in the order of the classes. */
static thole_status write_carriers(scene *s, const thole_barcode *barcode, const tz_classes *classes, uint32_t position,
                                   uint32_t dim, thole_error *error) {
    uint32_t n = s->block->cells[0].n, last = (uint32_t)(2 * thole_windows_count(barcode->windows) - 2);
    uint32_t *path = TB_TAKE(s->arena, uint32_t, (size_t)n + 1), *place = TB_FILL(s->arena, uint32_t, n, 0xFF);
    bool *taken = TB_FILL(s->arena, bool, classes->list.n, 0);
    if (path == NULL || place == NULL || taken == NULL || !TB_VEC_PUSH(s->context->memory, &s->out->start, 0))
        return tb_refused(s->context->memory, error, "the carriers of bars");
    size_t found = 0;
    for (size_t b = 0; b < barcode->bars.n; b++) {
        const thole_bar *bar = &barcode->bars.at[b];
        if (bar->dim != dim || bar->first > position || bar->last < position)
            continue;
        size_t i = 0;
        for (; i < classes->list.n; i++) {
            thole_bar mine = bar_of(&classes->list.at[i], dim, last);
            if (!taken[i] && same_bar(&mine, bar))
                break;
        }
        if (i == classes->list.n)
            break;
        taken[i] = true;
        found++;
        if (!write_carrier(s, classes, &classes->list.at[i], dim, b, path, place))
            return tb_refused(s->context->memory, error, "the carriers of bars");
    }
    if (found != classes->list.n)
        return thole_fail(error, THOLE_ARGUMENT, "the barcode is of another network: ask with the network that it was computed from");
    return THOLE_OK;
}

/* Classes at the position from what lies before it and what lies after. */
static thole_status find_classes(tz_run *run, uint32_t position, int dim, tz_classes *out, thole_error *error) {
    size_t n = tc_blocks_count(&run->blocks), k = 0;
    uint32_t last = run->stays.positions - 1;
    tz_value left = {0}, right = {0};
    tc_block block;
    while (run->blocks.cut.at[k] != position)
        k++;
    thole_status status = position > 0 ? tz_run_blocks(run, 0, k, true, NULL, 0, 0.5, &left, error)
                                       : tz_run_position(run, position, &block, &left, error);
    if (status == THOLE_OK && position == 0 && !tz_value_seal_left(&left))
        status = tb_refused(run->context->memory, error, "the carriers of bars");
    if (status == THOLE_OK)
        status = position < last ? tz_run_blocks(run, k, n, false, NULL, 0.5, 1, &right, error)
                                 : tz_run_position(run, position, &block, &right, error);
    if (status == THOLE_OK)
        status = tz_match(run->context, &left, &right, dim, out, error);
    tz_value_clear(&left);
    tz_value_clear(&right);
    return status;
}

thole_status thole_barcode_carriers(thole_context *context, const thole_barcode *barcode, const thole_network *network,
                                    size_t position, uint32_t dim, thole_carriers **out, thole_error *error) {
    thole_memory *memory = context->memory;
    size_t positions = 2 * thole_windows_count(barcode->windows) - 1;
    if (position >= positions)
        return thole_fail(error, THOLE_ARGUMENT, "there is no position %zu: the last is %zu", position, positions - 1);
    if (dim > 1 || (barcode->options.dims >> dim & 1) == 0)
        return thole_fail(error, THOLE_ARGUMENT, "carriers are for dimensions 0 and 1 that were computed, not %u", (unsigned)dim);
    tz_run run;
    tz_classes classes = {0};
    tc_block block;
    thole_carriers *carriers = tb_new(memory, 1, sizeof *carriers);
    uint32_t also = position == 0 || position + 1 == positions ? TC_NONE : (uint32_t)position;
    /* Blocks as the data has them, whatever the barcode was computed with: where classes may be mixed, the mixture
     * follows the blocks, and the answer should not. */
    thole_zigzag_options options = barcode->options;
    options.block = 0;
    thole_status status = tz_run_open(context, network, barcode->windows, &options, also, &run, error);
    if (status == THOLE_OK && carriers == NULL)
        status = tb_refused(memory, error, "the carriers of bars");
    if (status == THOLE_OK && (int)dim < run.dims)
        status = find_classes(&run, (uint32_t)position, (int)dim, &classes, error);
    if (status == THOLE_OK)
        status = tz_run_position(&run, (uint32_t)position, &block, NULL, error);
    if (status == THOLE_OK) {
        carriers->memory = memory;
        scene s = {.context = context, .arena = &run.workers[0].arena, .block = &block, .out = carriers};
        tz_work work = {.context = context, .arena = s.arena, .error = error};
        uint32_t *older;
        status = tz_order_make(&work, &block, TZ_ADDITION, &s.order);
        if (status == THOLE_OK && block.top >= 1)
            status = tz_pair_links(&work, &s.order, &older);
        if (status == THOLE_OK && !(lay_out(&s) && root_forest(&s)))
            status = tb_refused(memory, error, "the carriers of bars");
        if (status == THOLE_OK)
            status = write_carriers(&s, barcode, &classes, (uint32_t)position, dim, error);
    }
    tz_classes_clear(&classes);
    tz_run_clear(&run);
    if (status == THOLE_OK) {
        *out = carriers;
    } else if (carriers != NULL) {
        carriers->memory = memory;
        thole_carriers_release(carriers);
    }
    return status;
}
