/* Filters: a tree of tests compiled to masks over blocks of rows.
 *
 * Each test writes a byte a row for a block; inner nodes combine their children's bytes. Loops over bytes
 * without branches are what the compiler turns into vector code. */
#include "network/filter.h"

#include <math.h>

#include "base/nearest.h"
#include "base/parallel.h"
#include "network/store.h"

enum { BLOCK = 4096 };

/* Where a test's field comes from. */
typedef enum field_kind { FIELD_FROM, FIELD_TO, FIELD_START, FIELD_FINISH, FIELD_DURATION, FIELD_INTEGER, FIELD_REAL, FIELD_TEXT } field_kind;

/* One compiled node; children follow each other in `node`. */
typedef struct node {
    thole_test_kind kind;
    field_kind field;
    const tn_column *column;
    uint32_t child, child_count;   /* into the program's nodes */
    size_t value, value_count;     /* EQUAL: into integers, or ids for names */
    int64_t low, high;             /* RANGE over integers, inclusive */
    double real_low, real_high;    /* RANGE over reals, inclusive */
    bool never;                    /* no row can pass */
} node;

typedef struct program {
    thole_context *context;
    const thole_network *network;
    thole_error *error;
    TB_VEC(node) nodes;
    TB_VEC(int64_t) integers; /* values of integers, and ids of names */
    TB_VEC(double) reals;
    uint8_t *scratch; /* BLOCK bytes a level of nesting */
    size_t depth;
    uint32_t rows[BLOCK];
} program;

/* ---- compiling -------------------------------------------------------------------- */

static thole_status refused(program *p) { return tb_refused(p->context->memory, p->error, "a filter"); }

static const char *const own_fields[] = {"from", "to", "start", "finish", "duration"};
enum { OWN_FIELDS = sizeof own_fields / sizeof *own_fields };

static const char *field_name(const void *network, size_t i) {
    return i < OWN_FIELDS ? own_fields[i] : thole_network_column_name(network, (uint32_t)(i - OWN_FIELDS));
}

static thole_status unknown_field(program *p, const char *name) {
    size_t fields = OWN_FIELDS + thole_network_columns(p->network), best = tb_nearest(name, fields, field_name, p->network);
    if (best < fields)
        return thole_fail(p->error, THOLE_ARGUMENT, "links have no field \"%s\": did you mean \"%s\"?", name,
                          field_name(p->network, best));
    return thole_fail(p->error, THOLE_ARGUMENT,
                      "links have no field \"%s\": they have from, to, start, finish, duration and the columns that were read",
                      name);
}

static thole_status find_field(program *p, const char *name, node *out) {
    for (uint32_t i = 0; i < OWN_FIELDS; i++)
        if (strcmp(name, own_fields[i]) == 0) {
            out->field = (field_kind)i;
            return THOLE_OK;
        }
    uint32_t column;
    if (!thole_network_find_column(p->network, name, &column))
        return unknown_field(p, name);
    out->column = &p->network->store->columns.at[column];
    static const field_kind of_type[] = {[THOLE_INTEGER] = FIELD_INTEGER, [THOLE_REAL] = FIELD_REAL, [THOLE_TEXT] = FIELD_TEXT};
    out->field = of_type[out->column->type];
    return THOLE_OK;
}

static bool is_text(field_kind field) { return field == FIELD_FROM || field == FIELD_TO || field == FIELD_TEXT; }

static thole_status wrong_type(program *p, const char *name, bool text) {
    return thole_fail(p->error, THOLE_ARGUMENT, "\"%s\" holds %s: compare it with %s", name, text ? "text" : "numbers",
                      text ? "text" : "a number");
}

/* A value of the other number type becomes one of this field's that only equals equals; false: nothing can equal it. */
static bool as_integer(const thole_value *v, int64_t *out) {
    if (v->type == THOLE_INTEGER) {
        *out = v->integer;
        return v->integer != TN_NO_INTEGER;
    }
    if (!(v->real >= -9223372036854775808.0 && v->real < 9223372036854775808.0) || floor(v->real) != v->real)
        return false;
    *out = (int64_t)v->real;
    return *out != TN_NO_INTEGER;
}
static bool as_real(const thole_value *v, double *out) {
    *out = v->type == THOLE_REAL ? v->real : (double)v->integer;
    /* An integer that no double is: nothing real equals it. 2^63 as a double does not go back. */
    return v->type == THOLE_REAL ? !isnan(v->real)
                                 : *out < 9223372036854775808.0 && (int64_t)*out == v->integer;
}

static thole_status compile_equal(program *p, const thole_test *test, node *n) {
    thole_memory *memory = p->context->memory;
    n->value = n->field == FIELD_REAL ? p->reals.n : p->integers.n;
    for (size_t i = 0; i < test->value_count; i++) {
        const thole_value *v = &test->values[i];
        if ((v->type == THOLE_TEXT) != is_text(n->field))
            return wrong_type(p, test->field, is_text(n->field));
        bool fine = true;
        if (v->type == THOLE_TEXT) {
            const tb_names *names = n->field == FIELD_TEXT ? &p->network->store->texts : &p->network->store->nodes;
            uint32_t id = tb_names_find(names, v->text, v->length);
            fine = id == TB_NO_NAME || TB_VEC_PUSH(memory, &p->integers, (int64_t)id);
        } else if (n->field == FIELD_REAL) {
            double real;
            fine = !as_real(v, &real) || TB_VEC_PUSH(memory, &p->reals, real);
        } else {
            int64_t integer;
            fine = !as_integer(v, &integer) || TB_VEC_PUSH(memory, &p->integers, integer);
        }
        if (!fine)
            return refused(p);
    }
    n->value_count = (n->field == FIELD_REAL ? p->reals.n : p->integers.n) - n->value;
    n->never = n->value_count == 0;
    return THOLE_OK;
}

/* The least integer >= a bound (up) or the greatest <= it. False: no integer is. */
static bool integer_bound(const thole_value *v, bool up, int64_t *out) {
    if (v->type == THOLE_INTEGER) {
        *out = v->integer;
        return true;
    }
    double r = up ? ceil(v->real) : floor(v->real);
    if (isnan(r) || (up ? r >= 9223372036854775808.0 : r < -9223372036854775808.0))
        return false;
    *out = r < -9223372036854775808.0 ? INT64_MIN : r >= 9223372036854775808.0 ? INT64_MAX : (int64_t)r;
    return true;
}

/* The same for reals: an integer bound that no double is lies between two. */
static double real_bound(const thole_value *v, bool up) {
    if (v->type == THOLE_REAL)
        return v->real;
    double r = (double)v->integer;
    int64_t back = r >= 9223372036854775808.0 ? INT64_MAX : (int64_t)r;
    bool above = r >= 9223372036854775808.0 || back > v->integer, below = !above && back < v->integer;
    if (up && below)
        return nextafter(r, (double)INFINITY);
    return !up && above ? nextafter(r, -(double)INFINITY) : r;
}

static thole_status compile_range(program *p, const thole_test *test, node *n) {
    if (is_text(n->field) || (test->min.present && test->min.type == THOLE_TEXT) || (test->max.present && test->max.type == THOLE_TEXT))
        return thole_fail(p->error, THOLE_ARGUMENT, "\"%s\" has a range, which is for numbers and times: %s", test->field,
                          is_text(n->field) ? "that field holds text; list the values instead" : "give min and max as numbers");
    n->low = INT64_MIN + 1; /* INT64_MIN stands for missing */
    n->high = INT64_MAX;
    n->real_low = -(double)INFINITY;
    n->real_high = (double)INFINITY;
    if (n->field == FIELD_REAL) {
        if (test->min.present)
            n->real_low = real_bound(&test->min, true);
        if (test->max.present)
            n->real_high = real_bound(&test->max, false);
        return THOLE_OK;
    }
    if (test->min.present)
        n->never = !integer_bound(&test->min, true, &n->low);
    if (n->low == INT64_MIN)
        n->low++;
    if (test->max.present && !n->never)
        n->never = !integer_bound(&test->max, false, &n->high);
    return THOLE_OK;
}

static thole_status compile(program *p, const thole_test *test, uint32_t at, size_t depth);

static thole_status compile_children(program *p, const thole_test *test, uint32_t at, size_t depth) {
    uint32_t first = (uint32_t)p->nodes.n;
    for (size_t i = 0; i < test->child_count; i++)
        if (!TB_VEC_PUSH(p->context->memory, &p->nodes, (node){0}))
            return refused(p);
    p->nodes.at[at].child = first;
    p->nodes.at[at].child_count = (uint32_t)test->child_count;
    thole_status status = THOLE_OK;
    for (size_t i = 0; status == THOLE_OK && i < test->child_count; i++)
        status = compile(p, &test->children[i], first + (uint32_t)i, depth + 1);
    return status;
}

static thole_status compile(program *p, const thole_test *test, uint32_t at, size_t depth) {
    if (depth > 64)
        return thole_fail(p->error, THOLE_LIMIT, "a filter is nested more than 64 deep: make it flatter");
    p->depth = depth + 1 > p->depth ? depth + 1 : p->depth;
    p->nodes.at[at].kind = test->kind;
    if (test->kind == THOLE_TEST_ALL || test->kind == THOLE_TEST_ANY || test->kind == THOLE_TEST_NOT) {
        if (test->kind == THOLE_TEST_NOT && test->child_count != 1)
            return thole_fail(p->error, THOLE_ARGUMENT, "a negation needs one condition");
        return compile_children(p, test, at, depth);
    }
    node n = {.kind = test->kind};
    thole_status status = find_field(p, test->field, &n);
    if (status == THOLE_OK && test->kind == THOLE_TEST_EQUAL)
        status = compile_equal(p, test, &n);
    if (status == THOLE_OK && test->kind == THOLE_TEST_RANGE)
        status = compile_range(p, test, &n);
    p->nodes.at[at] = n;
    return status;
}

/* ---- running ---------------------------------------------------------------------- */

/* A field of the block's rows, gathered so that the tests run over plain arrays. */
static void load_integers(const program *p, const node *n, size_t count, int64_t *out) {
    const thole_event *events = p->network->store->events.at;
    const uint32_t *rows = p->rows;
    switch (n->field) {
    case FIELD_FROM:
        for (size_t i = 0; i < count; i++)
            out[i] = events[rows[i]].from;
        break;
    case FIELD_TO:
        for (size_t i = 0; i < count; i++)
            out[i] = events[rows[i]].to;
        break;
    case FIELD_START:
        for (size_t i = 0; i < count; i++)
            out[i] = events[rows[i]].start;
        break;
    case FIELD_FINISH:
        for (size_t i = 0; i < count; i++)
            out[i] = events[rows[i]].finish;
        break;
    case FIELD_DURATION:
        for (size_t i = 0; i < count; i++) { /* beyond what a tick count holds: the most it holds */
            uint64_t d = (uint64_t)events[rows[i]].finish - (uint64_t)events[rows[i]].start;
            out[i] = d > (uint64_t)INT64_MAX ? INT64_MAX : (int64_t)d;
        }
        break;
    case FIELD_INTEGER:
        for (size_t i = 0; i < count; i++)
            out[i] = n->column->integer[rows[i]];
        break;
    case FIELD_TEXT:
        for (size_t i = 0; i < count; i++)
            out[i] = n->column->text[rows[i]];
        break;
    case FIELD_REAL: break; /* loaded as reals */
    }
}

static void test_integers(const program *p, const node *n, size_t count, uint8_t *out) {
    int64_t x[BLOCK];
    load_integers(p, n, count, x);
    if (n->kind == THOLE_TEST_RANGE) {
        for (size_t i = 0; i < count; i++)
            out[i] = (uint8_t)((x[i] >= n->low) & (x[i] <= n->high));
        return;
    }
    if (n->kind == THOLE_TEST_PRESENT) {
        int64_t missing = n->field == FIELD_TEXT ? (int64_t)TB_NO_NAME : TN_NO_INTEGER;
        bool always = n->field != FIELD_TEXT && n->field != FIELD_INTEGER;
        for (size_t i = 0; i < count; i++)
            out[i] = (uint8_t)(always | (x[i] != missing));
        return;
    }
    memset(out, 0, count);
    for (size_t k = 0; k < n->value_count; k++) {
        int64_t value = p->integers.at[n->value + k];
        for (size_t i = 0; i < count; i++)
            out[i] = (uint8_t)(out[i] | (x[i] == value));
    }
}

static void test_reals(const program *p, const node *n, size_t count, uint8_t *out) {
    double x[BLOCK];
    for (size_t i = 0; i < count; i++)
        x[i] = n->column->real[p->rows[i]];
    if (n->kind == THOLE_TEST_RANGE) {
        for (size_t i = 0; i < count; i++)
            out[i] = (uint8_t)((x[i] >= n->real_low) & (x[i] <= n->real_high));
        return;
    }
    if (n->kind == THOLE_TEST_PRESENT) {
        for (size_t i = 0; i < count; i++)
            out[i] = (uint8_t)!isnan(x[i]);
        return;
    }
    memset(out, 0, count);
    for (size_t k = 0; k < n->value_count; k++) {
        double value = p->reals.at[n->value + k];
        for (size_t i = 0; i < count; i++)
            out[i] = (uint8_t)(out[i] | !(x[i] < value || x[i] > value || isnan(x[i])));
    }
}

/* Test the block's rows; out is a row of scratch, deeper levels use those after it. */
static void run(const program *p, uint32_t at, size_t count, uint8_t *out) {
    const node *n = &p->nodes.at[at];
    switch (n->kind) {
    case THOLE_TEST_ALL:
    case THOLE_TEST_ANY: {
        bool all = n->kind == THOLE_TEST_ALL;
        memset(out, all, count);
        uint8_t *next = out + BLOCK;
        for (uint32_t c = 0; c < n->child_count; c++) {
            run(p, n->child + c, count, next);
            if (all)
                for (size_t i = 0; i < count; i++)
                    out[i] &= next[i];
            else
                for (size_t i = 0; i < count; i++)
                    out[i] |= next[i];
        }
        break;
    }
    case THOLE_TEST_NOT:
        run(p, n->child, count, out);
        for (size_t i = 0; i < count; i++)
            out[i] ^= 1;
        break;
    default:
        if (n->never)
            memset(out, 0, count);
        else if (n->field == FIELD_REAL)
            test_reals(p, n, count, out);
        else
            test_integers(p, n, count, out);
    }
}

static thole_status choose(program *p, bool drop, uint32_t *chosen, size_t *n) {
    size_t total = p->network->count;
    *n = 0;
    for (size_t from = 0; from < total; from += BLOCK) {
        size_t count = total - from < BLOCK ? total - from : BLOCK;
        if (from % (BLOCK * 64) == 0) {
            thole_status status = tb_tick(p->context, "filtering", (double)from / (double)total, p->error);
            if (status != THOLE_OK)
                return status;
        }
        for (size_t i = 0; i < count; i++)
            p->rows[i] = tn_row(p->network, from + i);
        run(p, 0, count, p->scratch);
        for (size_t i = 0; i < count; i++) { /* without a branch: what is not kept is written over */
            chosen[*n] = (uint32_t)(from + i);
            *n += (size_t)(p->scratch[i] ^ (uint8_t)drop);
        }
    }
    return THOLE_OK;
}

thole_status thole_network_keep(thole_context *context, thole_network *network, const thole_test *test, bool drop,
                                thole_network **out, thole_error *error) {
    thole_memory *memory = context->memory;
    program *p = tb_new(memory, 1, sizeof *p);
    uint32_t *chosen = tb_resize(memory, NULL, 0, network->count + 1, sizeof *chosen);
    thole_status status = THOLE_OK;
    if (p == NULL || chosen == NULL)
        status = tb_refused(memory, error, "a filter");
    size_t n = 0;
    if (status == THOLE_OK) {
        p->context = context;
        p->network = network;
        p->error = error;
        status = TB_VEC_PUSH(memory, &p->nodes, (node){0}) ? compile(p, test, 0, 0) : refused(p);
        if (status == THOLE_OK && (p->scratch = tb_resize(memory, NULL, 0, p->depth + 1, BLOCK)) == NULL)
            status = refused(p);
        if (status == THOLE_OK)
            status = choose(p, drop, chosen, &n);
        if (status == THOLE_OK)
            status = thole_network_select(context, network, chosen, n, out, error);
        tb_free(memory, p->scratch, p->depth + 1, BLOCK);
        TB_VEC_CLEAR(memory, &p->nodes);
        TB_VEC_CLEAR(memory, &p->integers);
        TB_VEC_CLEAR(memory, &p->reals);
    }
    tb_free(memory, chosen, network->count + 1, sizeof *chosen);
    tb_free(memory, p, 1, sizeof *p);
    return status;
}
