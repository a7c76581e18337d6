/* Filter tables: { mode = "ferry", seats = { min = 40 } } as a tree of tests for the core. */
#include <limits.h>
#include <string.h>

#include "bind/bind.h"

/* One translation. All memory of the tree, and every text it points to, is kept by the table `keep`. */
typedef struct translation {
    lua_State *L;
    const thole_clock *clock;
    const char *of;
    int keep, depth;
} translation;

enum { MOST_DEPTH = 50 };

static void *take(translation *t, size_t n, size_t item) {
    void *block = lua_newuserdatauv(t->L, (n == 0 ? 1 : n) * item, 0);
    memset(block, 0, (n == 0 ? 1 : n) * item);
    lua_rawseti(t->L, t->keep, (lua_Integer)lua_rawlen(t->L, t->keep) + 1);
    return block;
}

/* The text at the top, kept; without NUL when it is a field's name. */
static const char *keep_text(translation *t, size_t *length) {
    lua_pushvalue(t->L, -1);
    const char *text = lua_tolstring(t->L, -1, length);
    lua_rawseti(t->L, t->keep, (lua_Integer)lua_rawlen(t->L, t->keep) + 1);
    return text;
}

/* ---- values -------------------------------------------------------------------------------------- */

typedef enum field_kind { NODE, TIME, DURATION, ATTRIBUTE } field_kind;

static field_kind kind_of(const char *field) {
    if (strcmp(field, "from") == 0 || strcmp(field, "to") == 0)
        return NODE;
    if (strcmp(field, "start") == 0 || strcmp(field, "finish") == 0)
        return TIME;
    return strcmp(field, "duration") == 0 ? DURATION : ATTRIBUTE;
}

static thole_value ticks_value(translation *t, const char *field, bool fine, int64_t ticks) {
    if (!fine)
        tl_fail(t->L, "filter of %s: field \"%s\": %s", t->of, field, lua_tostring(t->L, -1));
    return (thole_value){.type = THOLE_INTEGER, .present = true, .integer = ticks};
}

/* The value at the top, which stays. */
static thole_value value_of(translation *t, const char *field) {
    lua_State *L = t->L;
    thole_value value = {.present = true};
    field_kind kind = kind_of(field);
    int64_t ticks = 0;
    bool fine;
    if (kind == TIME) {
        fine = tl_to_time(L, -1, t->clock, &ticks);
        return ticks_value(t, field, fine, ticks);
    }
    if (kind == DURATION && lua_type(L, -1) != LUA_TNIL) {
        fine = tl_to_duration(L, -1, t->clock, &ticks);
        return ticks_value(t, field, fine, ticks);
    }
    if (lua_type(L, -1) == LUA_TSTRING) {
        value.type = THOLE_TEXT;
        value.text = keep_text(t, &value.length);
    } else if (kind == NODE && lua_isinteger(L, -1)) { /* places may be called 1, 2, 3 */
        value.type = THOLE_TEXT;
        luaL_tolstring(L, -1, NULL);
        value.text = keep_text(t, &value.length);
        lua_pop(L, 1);
    } else if (lua_isinteger(L, -1)) {
        value.type = THOLE_INTEGER;
        value.integer = lua_tointeger(L, -1);
    } else if (lua_type(L, -1) == LUA_TNUMBER && kind == ATTRIBUTE) {
        value.type = THOLE_REAL;
        value.real = lua_tonumber(L, -1);
    } else {
        tl_fail(L, "filter of %s: field \"%s\" is compared with a %s: give %s", t->of, field,
                luaL_typename(L, -1),
                kind == NODE ? "a name" : "a number, a text, a list, { min =, max = }, true or false");
    }
    return value;
}

/* { min =, max = } at the top. */
static void range_of(translation *t, thole_test *test) {
    lua_State *L = t->L;
    static const char *const names[] = {"min", "max"};
    for (int i = 0; i < 2; i++) {
        lua_pushstring(L, names[i]);
        if (lua_rawget(L, -2) != LUA_TNIL)
            *(i == 0 ? &test->min : &test->max) = value_of(t, test->field);
        lua_pop(L, 1);
    }
    test->kind = THOLE_TEST_RANGE;
}

/* { "A", "B" } at the top. */
static void list_of(translation *t, thole_test *test, size_t n) {
    thole_value *values = take(t, n, sizeof *values);
    for (size_t i = 0; i < n; i++) {
        lua_rawgeti(t->L, -1, (lua_Integer)i + 1);
        values[i] = value_of(t, test->field);
        lua_pop(t->L, 1);
    }
    test->kind = THOLE_TEST_EQUAL;
    test->values = values;
    test->value_count = n;
}

/* Either kind of table at the top: nothing in it may be passed over. */
static void table_of(translation *t, thole_test *test) {
    lua_State *L = t->L;
    size_t n = lua_rawlen(L, -1), listed = 0, bounds = 0;
    lua_pushnil(L);
    for (; lua_next(L, -2) != 0; lua_pop(L, 1)) {
        if (lua_isinteger(L, -2)) {
            listed++;
        } else if (lua_type(L, -2) == LUA_TSTRING &&
                   (strcmp(lua_tostring(L, -2), "min") == 0 || strcmp(lua_tostring(L, -2), "max") == 0)) {
            bounds++;
        } else {
            lua_pushvalue(L, -2);
            tl_fail(L, "filter of %s: field \"%s\" has \"%s\", but knows min, max, or a list of values",
                    t->of, test->field, luaL_tolstring(L, -1, NULL));
        }
    }
    if (listed != n || (listed > 0) == (bounds > 0))
        tl_fail(L,
                "filter of %s: field \"%s\" is compared with %s: give either a list of values or { min =, "
                "max = }",
                t->of, test->field, listed == 0 && bounds == 0 ? "an empty table" : "a mixed table");
    if (listed > 0)
        list_of(t, test, n);
    else
        range_of(t, test);
}

/* ---- the tree ------------------------------------------------------------------------------------ */

static thole_test test_of(translation *t);

/* The filters in the list at the top, or the one filter that it is. */
static thole_test children_of(translation *t, thole_test_kind kind, const char *word) {
    lua_State *L = t->L;
    if (lua_type(L, -1) != LUA_TTABLE)
        tl_fail(L, "filter of %s: \"%s\" takes a list of filters, not a %s", t->of, word,
                luaL_typename(L, -1));
    size_t n = lua_rawlen(L, -1);
    bool list = n > 0;
    if (!list) {
        /* { a = 1, b = 2 } could be read as either of both. */
        if (strcmp(word, "no") != 0)
            tl_fail(
                L,
                "filter of %s: \"%s\" takes a list of filters, as in { { mode = \"ferry\" }, { seats = 4 } }",
                t->of, word);
        n = 1;
    }
    thole_test *children = take(t, n, sizeof *children);
    for (size_t i = 0; i < n; i++) {
        if (list)
            lua_rawgeti(L, -1, (lua_Integer)i + 1);
        else
            lua_pushvalue(L, -1);
        children[i] = test_of(t);
        lua_pop(L, 1);
    }
    if (list) {
        lua_pushnil(L);
        for (size_t keys = 0; lua_next(L, -2) != 0; lua_pop(L, 1))
            if (++keys > n)
                tl_fail(L, "filter of %s: \"%s\" has a list and other keys: give a list of filters", t->of,
                        word);
    }
    return (thole_test){.kind = kind, .children = children, .child_count = n};
}

static thole_test negated(translation *t, thole_test test) {
    thole_test *child = take(t, 1, sizeof *child);
    *child = test;
    return (thole_test){.kind = THOLE_TEST_NOT, .children = child, .child_count = 1};
}

/* The test of key and value at -2 and -1. */
static thole_test condition(translation *t) {
    lua_State *L = t->L;
    thole_test test = {.kind = THOLE_TEST_PRESENT};
    lua_pushvalue(L, -2);
    size_t length;
    test.field = keep_text(t, &length);
    lua_pop(L, 1);
    if (strlen(test.field) != length)
        tl_fail(L, "filter of %s: a field has a NUL byte in its name", t->of);
    if (strcmp(test.field, "all") == 0)
        return children_of(t, THOLE_TEST_ALL, "all");
    if (strcmp(test.field, "any") == 0)
        return children_of(t, THOLE_TEST_ANY, "any");
    if (strcmp(test.field, "no") == 0)
        return negated(t, children_of(t, THOLE_TEST_ANY, "no"));
    int type = lua_type(L, -1);
    if (type == LUA_TBOOLEAN)
        return lua_toboolean(L, -1) ? test : negated(t, test);
    if (type == LUA_TTABLE) {
        table_of(t, &test);
    } else {
        thole_value *value = take(t, 1, sizeof *value);
        *value = value_of(t, test.field);
        test.kind = THOLE_TEST_EQUAL;
        test.values = value;
        test.value_count = 1;
    }
    return test;
}

/* The filter in the table at the top: all of its conditions. */
static thole_test test_of(translation *t) {
    lua_State *L = t->L;
    if (lua_type(L, -1) != LUA_TTABLE)
        tl_fail(L, "filter of %s: a filter is a table, not a %s", t->of, luaL_typename(L, -1));
    if (++t->depth > MOST_DEPTH)
        tl_fail(L, "filter of %s: filters stand in one another more than %d deep", t->of, MOST_DEPTH);
    luaL_checkstack(L, 12, NULL);
    size_t n = 0, at = 0;
    lua_pushnil(L);
    for (; lua_next(L, -2) != 0; lua_pop(L, 1)) {
        if (lua_type(L, -2) != LUA_TSTRING)
            tl_fail(L, "filter of %s: a filter has names of fields, as in { mode = \"ferry\" }, not %s keys",
                    t->of, luaL_typename(L, -2));
        n++;
    }
    if (n == 0)
        tl_fail(L, "filter of %s: a filter is empty: name a field, as in { mode = \"ferry\" }", t->of);
    thole_test *children = take(t, n, sizeof *children);
    lua_pushnil(L);
    for (; lua_next(L, -2) != 0; lua_pop(L, 1))
        children[at++] = condition(t);
    t->depth--;
    return (thole_test){.kind = THOLE_TEST_ALL, .children = children, .child_count = n};
}

const thole_test *tl_push_test(lua_State *L, int index, const thole_clock *clock, const char *of) {
    index = lua_absindex(L, index);
    lua_newtable(L);
    translation t = {.L = L, .clock = clock, .of = of, .keep = lua_gettop(L)};
    thole_test *root = take(&t, 1, sizeof *root);
    lua_pushvalue(L, index);
    *root = test_of(&t);
    lua_pop(L, 1);
    return root;
}
