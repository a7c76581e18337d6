/* The Lua type of barcodes, and bars as Lua tables. */
#include <stdio.h>
#include <string.h>

#include "bind/bind.h"

typedef struct barcode {
    thole_barcode *barcode;
} barcode;

/* Its user value is the Lua object of its windows, once somebody asked for it. */
thole_barcode **tl_push_barcode(lua_State *L) {
    barcode *b = lua_newuserdatauv(L, sizeof *b, 1);
    b->barcode = NULL;
    luaL_setmetatable(L, TL_BARCODE);
    return &b->barcode;
}

thole_barcode *tl_check_barcode(lua_State *L, int index, const char *of) {
    barcode *b = luaL_testudata(L, index, TL_BARCODE);
    if (b == NULL) {
        tl_fail(L, "%s takes a barcode, not a %s: call it with a colon, as in bars:each()", of,
                luaL_typename(L, index));
        return NULL;
    }
    if (b->barcode == NULL)
        tl_fail(L, "this barcode is closed: %s comes too late", of);
    return b->barcode;
}

static int close_barcode(lua_State *L) {
    barcode *b = luaL_checkudata(L, 1, TL_BARCODE);
    thole_barcode *held = b->barcode;
    b->barcode = NULL;
    thole_barcode_release(held);
    return 0;
}

static int length(lua_State *L) {
    lua_pushinteger(L, (lua_Integer)thole_barcode_count(tl_check_barcode(L, 1, "#")));
    return 1;
}

static int text(lua_State *L) {
    barcode *b = luaL_checkudata(L, 1, TL_BARCODE);
    if (b->barcode == NULL)
        lua_pushliteral(L, "closed barcode");
    else
        lua_pushfstring(L, "barcode of %I bars", (LUAI_UACINT)thole_barcode_count(b->barcode));
    return 1;
}

/* ---- bars ---------------------------------------------------------------------------------------- */

typedef struct moment {
    int64_t ticks;
    int quarters;
} moment;

typedef enum bar_time { BIRTH, DEATH, OPENS, CLOSES } bar_time;

/* A bar touches the windows of its positions; a join touches two. */
static moment moment_of(const thole_barcode *b, thole_bar bar, bar_time which) {
    const thole_windows *windows = thole_barcode_windows(b);
    moment m = {0, 0};
    switch (which) {
    case BIRTH: m.ticks = thole_windows_centre(windows, bar.first, &m.quarters); break;
    case DEATH: m.ticks = thole_windows_centre(windows, bar.last, &m.quarters); break;
    case OPENS: m.ticks = thole_windows_start(windows, bar.first / 2); break;
    case CLOSES: m.ticks = thole_windows_finish(windows, bar.last / 2 + bar.last % 2); break;
    }
    return m;
}

static void set_moment(lua_State *L, const thole_barcode *b, thole_bar bar, bar_time which,
                       const char *name) {
    moment m = moment_of(b, bar, which);
    tl_push_time(L, thole_barcode_clock(b), m.ticks, m.quarters);
    lua_setfield(L, -2, name);
}

/* Position p as people see it: 1, 1.5, 2 … */
static void set_position(lua_State *L, uint32_t p, const char *name) {
    if (p % 2 == 0)
        lua_pushinteger(L, (lua_Integer)p / 2 + 1);
    else
        lua_pushnumber(L, 1 + (double)p / 2);
    lua_setfield(L, -2, name);
}

/* Push bar i, from 0, as a table. */
static void push_bar(lua_State *L, const thole_barcode *b, size_t i) {
    thole_bar bar = thole_barcode_bar(b, i);
    uint64_t ticks;
    int quarters;
    bool negative = thole_barcode_lifespan(b, i, &ticks, &quarters);
    lua_createtable(L, 0, 11);
    lua_pushinteger(L, bar.dim);
    lua_setfield(L, -2, "dim");
    set_position(L, bar.first, "first");
    set_position(L, bar.last, "last");
    lua_pushstring(L, thole_bar_kind_name((thole_bar_kind)bar.kind));
    lua_setfield(L, -2, "kind");
    set_moment(L, b, bar, BIRTH, "birth");
    set_moment(L, b, bar, DEATH, "death");
    set_moment(L, b, bar, OPENS, "opens");
    set_moment(L, b, bar, CLOSES, "closes");
    tl_push_amount(L, ticks, quarters, negative);
    lua_setfield(L, -2, "lifespan");
    lua_pushboolean(L, bar.first == bar.last && bar.first % 2 == 1);
    lua_setfield(L, -2, "join_only");
    lua_pushinteger(L, (lua_Integer)i + 1);
    lua_setfield(L, -2, "index");
}

/* bars:text(index, field) -> the exact text of a field, as files have it. */
static int exact_text(lua_State *L) {
    static const char *const names[] = {"birth", "death", "opens", "closes", "first", "last"};
    thole_barcode *b = tl_check_barcode(L, 1, "bars:text");
    lua_Integer index = luaL_checkinteger(L, 2);
    const char *field = luaL_checkstring(L, 3);
    if (index < 1 || (lua_Unsigned)index > thole_barcode_count(b))
        return tl_fail(L, "there is no bar %I: this barcode has %I", (LUAI_UACINT)index,
                       (LUAI_UACINT)thole_barcode_count(b));
    thole_bar bar = thole_barcode_bar(b, (size_t)index - 1);
    for (int i = 0; i < 6; i++) {
        if (strcmp(field, names[i]) != 0)
            continue;
        char out[THOLE_TIME_SIZE];
        if (i >= 4) {
            uint32_t p = i == 4 ? bar.first : bar.last;
            snprintf(out, sizeof out, "%lu%s", (unsigned long)p / 2 + 1, p % 2 == 1 ? ".5" : "");
        } else {
            moment m = moment_of(b, bar, (bar_time)i);
            thole_format_time(thole_barcode_clock(b), m.ticks, m.quarters, out);
        }
        lua_pushstring(L, out);
        return 1;
    }
    tl_push_hint(L, field, 6, names);
    return tl_fail(L, "bars:text knows no field \"%s\": %s", field, lua_tostring(L, -1));
}

/* ---- choosing ------------------------------------------------------------------------------------ */

/* A window's number, or the half between two, to a position. */
bool tl_option_position(lua_State *L, const tl_options *options, const thole_barcode *b, uint32_t *position) {
    int type = tl_option(L, options, "at");
    size_t windows = thole_windows_count(thole_barcode_windows(b));
    lua_Number at = type == LUA_TNUMBER ? lua_tonumber(L, -1) * 2 - 2 : -1;
    if (type != LUA_TNIL) {
        if (!(at >= 0 && at <= 2 * (lua_Number)(windows - 1)) || at != (lua_Number)(uint32_t)at)
            tl_option_fail(L, options, "at", " is a window from 1 to %I, or the half between two, not %s",
                           (LUAI_UACINT)windows, luaL_tolstring(L, -1, NULL));
        *position = (uint32_t)at;
    }
    lua_pop(L, 1);
    return type != LUA_TNIL;
}

static thole_choice choice_of(lua_State *L, int index, const thole_barcode *b, const char *of) {
    static const char *const names[] = {"at", "dim", "kind", "longest", "shortest_lifespan"};
    static const char *const kinds[] = {"closed-open", "open-closed", "closed-closed", "open-open"};
    tl_options options = tl_options_at(L, index, of, sizeof names / sizeof *names, names);
    thole_choice choice = {0};
    lua_Integer dim = tl_option_integer(L, &options, "dim", 0, THOLE_MOST_DIMENSION, -1);
    if (dim >= 0)
        choice.dims = 1u << dim;
    if (dim >= 0 && (thole_barcode_options(b)->dims >> dim & 1) == 0)
        tl_option_fail(L, &options, "dim", " is %d, which was not computed: ask for it in dims of net:zigzag",
                       (int)dim);
    int kind = tl_option_choice(L, &options, "kind", 4, kinds, -1);
    if (kind >= 0)
        choice.kinds = 1u << kind;
    choice.longest = (size_t)tl_option_integer(L, &options, "longest", 1, LUA_MAXINTEGER, 0);
    int64_t shortest = 0;
    choice.lasting = tl_option(L, &options, "shortest_lifespan") != LUA_TNIL;
    if (choice.lasting && !tl_to_duration(L, -1, thole_barcode_clock(b), &shortest))
        tl_option_fail(L, &options, "shortest_lifespan", ": %s", lua_tostring(L, -1));
    lua_pop(L, 1);
    choice.shortest = (uint64_t)shortest;
    choice.at = tl_option_position(L, &options, b, &choice.position);
    return choice;
}

/* Numbers of chosen bars, owned by Lua. */
typedef struct chosen {
    size_t *bars;
    size_t n;
} chosen;

static int drop_chosen(lua_State *L) {
    chosen *c = lua_touserdata(L, 1);
    size_t *held = c->bars;
    c->bars = NULL;
    if (held != NULL)
        thole_chosen_release(tl_context(L), held, c->n);
    return 0;
}

/* Push the bars that the options at `index` choose. */
static chosen *push_chosen(lua_State *L, const thole_barcode *b, int index, const char *of) {
    thole_choice choice = choice_of(L, index, b, of);
    chosen *c = lua_newuserdatauv(L, sizeof *c, 0);
    *c = (chosen){NULL, 0};
    luaL_setmetatable(L, TL_CHOSEN);
    thole_error error;
    if (thole_barcode_choose(tl_begin(L), b, &choice, &c->bars, &c->n, &error) != THOLE_OK)
        tl_raise(L, &error, NULL);
    tl_burden(L, c->n * sizeof *c->bars);
    return c;
}

/* Upvalues: barcode, bars given so far, the chosen ones or nil for all. */
static int next_bar(lua_State *L) {
    thole_barcode *b = tl_check_barcode(L, lua_upvalueindex(1), "bars:each");
    size_t at = (size_t)lua_tointeger(L, lua_upvalueindex(2));
    const chosen *c = lua_touserdata(L, lua_upvalueindex(3));
    if (at >= (c == NULL ? thole_barcode_count(b) : c->n))
        return 0;
    lua_pushinteger(L, (lua_Integer)at + 1);
    lua_replace(L, lua_upvalueindex(2));
    push_bar(L, b, c == NULL ? at : c->bars[at]);
    return 1;
}

/* bars:each{…} -> iterator of bars */
static int each(lua_State *L) {
    thole_barcode *b = tl_check_barcode(L, 1, "bars:each");
    lua_settop(L, 2);
    lua_pushvalue(L, 1);
    lua_pushinteger(L, 0);
    if (lua_isnil(L, 2))
        lua_pushnil(L);
    else
        push_chosen(L, b, 2, "bars:each");
    lua_pushcclosure(L, next_bar, 3);
    return 1;
}

/* bars:count{…} -> how many */
static int count(lua_State *L) {
    thole_barcode *b = tl_check_barcode(L, 1, "bars:count");
    lua_settop(L, 2);
    size_t n = lua_isnil(L, 2) ? thole_barcode_count(b) : push_chosen(L, b, 2, "bars:count")->n;
    lua_pushinteger(L, (lua_Integer)n);
    return 1;
}

/* bars:betti(dim, { joins = }) -> list */
static int betti(lua_State *L) {
    static const char *const names[] = {"joins"};
    thole_barcode *b = tl_check_barcode(L, 1, "bars:betti");
    lua_settop(L, 3);
    int whole = 0;
    lua_Integer dim = lua_type(L, 2) == LUA_TNUMBER ? lua_tointegerx(L, 2, &whole) : 0;
    if (!whole || dim < 0 || dim > THOLE_MOST_DIMENSION)
        return tl_fail(L, "bars:betti takes a dimension from 0 to %d, not %s", THOLE_MOST_DIMENSION,
                       luaL_tolstring(L, 2, NULL));
    tl_options options = tl_options_at(L, 3, "bars:betti", 1, names);
    bool joins = tl_option_boolean(L, &options, "joins", false);
    size_t positions = 2 * thole_windows_count(thole_barcode_windows(b)) - 1, step = joins ? 1 : 2;
    uint64_t *numbers = tl_push_block(L, positions, sizeof *numbers, "Betti numbers");
    thole_error error;
    if (thole_barcode_betti(tl_begin(L), b, (uint32_t)dim, numbers, &error) != THOLE_OK)
        return tl_raise(L, &error, NULL);
    lua_createtable(L, tl_room(positions / step + 1), 0);
    for (size_t p = 0; p < positions; p += step) {
        lua_pushinteger(L, (lua_Integer)numbers[p]);
        lua_rawseti(L, -2, (lua_Integer)(p / step) + 1);
    }
    tl_free_block(L, -2);
    return 1;
}

/* ---- fields -------------------------------------------------------------------------------------- */

static void push_windows(lua_State *L, thole_barcode *b) {
    if (lua_getiuservalue(L, 1, 1) == LUA_TUSERDATA && ((tl_windows *)lua_touserdata(L, -1))->windows != NULL)
        return;
    tl_windows *w = tl_push_windows(L);
    tl_windows_set_clock(w, thole_barcode_clock(b));
    w->windows = thole_windows_retain(thole_barcode_windows(b));
    lua_pushvalue(L, -1);
    lua_setiuservalue(L, 1, 1);
}

static void push_radius(lua_State *L, const thole_barcode *b) {
    const thole_zigzag_options *o = thole_barcode_options(b);
    if (o->radius_kind == THOLE_RADIUS_GRAPH)
        lua_pushliteral(L, "graph");
    else
        lua_pushinteger(L, o->radius);
}

static void push_dims(lua_State *L, const thole_barcode *b) {
    lua_newtable(L);
    for (int p = 0, n = 0; p <= THOLE_MOST_DIMENSION; p++)
        if ((thole_barcode_options(b)->dims >> p & 1) != 0) {
            lua_pushinteger(L, p);
            lua_rawseti(L, -2, ++n);
        }
}

/* Cells by dimension, from 0. */
static void push_cells(lua_State *L, const thole_barcode *b) {
    const thole_zigzag_counts *counts = thole_barcode_counts(b);
    int last = THOLE_MOST_DIMENSION + 1;
    while (last > 0 && counts->cells[last] == 0)
        last--;
    lua_newtable(L);
    for (int d = 0; d <= last; d++) {
        lua_pushinteger(L, (lua_Integer)counts->cells[d]);
        lua_rawseti(L, -2, d);
    }
}

/* In the order of the cases below. */
static const char *const FIELDS[] = {"cells",  "dims", "join",    "nodes", "peak_bytes",
                                     "radius", "unit", "windows", "zone"};
enum { FIELD_COUNT = sizeof FIELDS / sizeof *FIELDS };

static int field(lua_State *L) {
    if (tl_find_method(L))
        return 1;
    const char *key = lua_type(L, 2) == LUA_TSTRING ? lua_tostring(L, 2) : "";
    size_t which = 0;
    while (which < FIELD_COUNT && strcmp(key, FIELDS[which]) != 0)
        which++;
    if (which == FIELD_COUNT)
        return tl_no_field(L, "a barcode", lua_upvalueindex(1), FIELD_COUNT, FIELDS);
    thole_barcode *b = tl_check_barcode(L, 1, key);
    const thole_clock *clock = thole_barcode_clock(b);
    switch (which) {
    case 0: push_cells(L, b); break;
    case 1: push_dims(L, b); break;
    case 2:
        lua_pushstring(L, thole_barcode_options(b)->join == THOLE_JOIN_UNION ? "union" : "intersection");
        break;
    case 3: lua_pushstring(L, thole_barcode_options(b)->all_nodes ? "all" : "linked"); break;
    case 4: lua_pushinteger(L, (lua_Integer)thole_barcode_counts(b)->peak_bytes); break;
    case 5: push_radius(L, b); break;
    case 6: lua_pushstring(L, clock->unit); break;
    case 7: push_windows(L, b); break;
    default:
        if (clock->kind == THOLE_CALENDAR)
            lua_pushstring(L, thole_zone_name(clock->zone));
        else
            lua_pushnil(L);
    }
    return 1;
}

void tl_open_barcode(lua_State *L) {
    static const luaL_Reg special[] = {{"__gc", close_barcode},
                                       {"__close", close_barcode},
                                       {"__len", length},
                                       {"__tostring", text},
                                       {NULL, NULL}};
    static const luaL_Reg methods[] = {{"betti", betti}, {"close", close_barcode}, {"count", count},
                                       {"each", each},   {"text", exact_text},     {NULL, NULL}};
    tl_new_type(L, TL_BARCODE, special, methods, field);
    tl_new_owner(L, TL_CHOSEN, drop_chosen);
    tl_add_fields(L, "barcode", FIELD_COUNT, FIELDS);
}
