/* thole.network: links from Lua tables. */
#include <math.h>
#include <string.h>

#include "bind/bind.h"

static const char OF[] = "thole.network";

/* ---- the builder belongs to the stack ------------------------------------------------------------ */

static int drop_builder(lua_State *L) {
    thole_builder **builder = lua_touserdata(L, 1), *held = *builder;
    *builder = NULL;
    thole_builder_release(held);
    return 0;
}

static thole_builder **push_builder(lua_State *L) {
    thole_builder **builder = lua_newuserdatauv(L, sizeof *builder, 0);
    *builder = NULL;
    luaL_setmetatable(L, TL_BUILD);
    return builder;
}

/* ---- what the list holds ------------------------------------------------------------------------- */

/* Number of one of the four fields that every link has (its place in the list form), or 0. */
static lua_Integer main_field(lua_State *L, int index) {
    static const char *const names[] = {"from", "to", "start", "finish"};
    if (lua_isinteger(L, index)) {
        lua_Integer i = lua_tointeger(L, index);
        return i >= 1 && i <= 4 ? i : 0;
    }
    if (lua_type(L, index) == LUA_TSTRING)
        for (int i = 0; i < 4; i++)
            if (strcmp(lua_tostring(L, index), names[i]) == 0)
                return i + 1;
    return 0;
}

/* The type of the attribute at the top of the stack, or -1. */
static int attribute_type(lua_State *L) {
    if (lua_isinteger(L, -1))
        return THOLE_INTEGER;
    int type = lua_type(L, -1);
    return type == LUA_TNUMBER ? THOLE_REAL : type == LUA_TSTRING ? THOLE_TEXT : -1;
}

/* Note key and value, at -2 and -1, of event i in the table of types at 3: name -> type. */
static void note_attribute(lua_State *L, lua_Integer i) {
    size_t length;
    if (lua_type(L, -2) != LUA_TSTRING)
        tl_fail(L, "event %I has a key that is %s: attributes have names", (LUAI_UACINT)i,
                lua_isinteger(L, -2) ? "a number beyond 4" : luaL_typename(L, -2));
    const char *name = lua_tolstring(L, -2, &length);
    int type = attribute_type(L);
    if (strlen(name) != length)
        tl_fail(L, "event %I has an attribute with a NUL byte in its name", (LUAI_UACINT)i);
    if (strcmp(name, "duration") == 0)
        tl_fail(L, "attribute \"duration\" of event %I: a link has this word already, give another name",
                (LUAI_UACINT)i);
    if (type < 0)
        tl_fail(L, "attribute \"%s\" of event %I is a %s: give a number or a text", name, (LUAI_UACINT)i,
                luaL_typename(L, -1));
    lua_pushvalue(L, -2);
    if (lua_rawget(L, 3) != LUA_TNIL) {
        int before = (int)lua_tointeger(L, -1);
        if ((before == THOLE_TEXT) != (type == THOLE_TEXT))
            tl_fail(L, "attribute \"%s\" of event %I is a %s, before it was a %s: give it one type", name,
                    (LUAI_UACINT)i, type == THOLE_TEXT ? "text" : "number",
                    type == THOLE_TEXT ? "number" : "text");
        if (before > type)
            type = before;
    }
    lua_pop(L, 1);
    lua_pushvalue(L, -2);
    lua_pushinteger(L, type);
    lua_rawset(L, 3);
}

static void note_types(lua_State *L) {
    lua_Integer n = (lua_Integer)lua_rawlen(L, 1);
    for (lua_Integer i = 1; i <= n; i++) {
        if (lua_rawgeti(L, 1, i) != LUA_TTABLE)
            tl_fail(L, "event %I is a %s: give a table { from, to, start, finish }", (LUAI_UACINT)i,
                    luaL_typename(L, -1));
        lua_pushnil(L);
        for (; lua_next(L, -2) != 0; lua_pop(L, 1))
            if (main_field(L, -2) == 0)
                note_attribute(L, i);
        lua_pop(L, 1);
    }
}

/* Add a column for each name in the table of types, by name, since tables have no order; the table maps names
 * to columns and types afterwards (column * 4 + type). */
static void add_columns(lua_State *L, thole_builder *builder) {
    size_t n = 0, known = 0;
    lua_pushnil(L);
    for (; lua_next(L, 3) != 0; lua_pop(L, 1))
        known++;
    const char **names = lua_newuserdatauv(L, (known + 1) * sizeof *names, 0);
    lua_pushnil(L);
    while (lua_next(L, 3) != 0) {
        lua_pop(L, 1);
        const char *name = lua_tostring(L, -1);
        size_t i = n++;
        for (; i > 0 && strcmp(names[i - 1], name) > 0; i--)
            names[i] = names[i - 1];
        names[i] = name;
    }
    for (size_t i = 0; i < n; i++) {
        thole_error error;
        uint32_t column;
        lua_getfield(L, 3, names[i]);
        lua_Integer type = lua_tointeger(L, -1);
        if (thole_builder_column(builder, names[i], (thole_type)type, &column, &error) != THOLE_OK)
            tl_raise(L, &error, NULL);
        lua_pushinteger(L, (lua_Integer)column * 4 + type);
        lua_setfield(L, 3, names[i]);
        lua_pop(L, 1);
    }
    lua_pop(L, 1);
}

/* ---- events -------------------------------------------------------------------------------------- */

/* Push field `at` of the event on the top, by place or by name; raises when both are there. */
static int main_value(lua_State *L, lua_Integer i, lua_Integer at, const char *name) {
    int event = lua_gettop(L);
    if (lua_rawgeti(L, event, at) == LUA_TNIL) {
        lua_pop(L, 1);
        lua_pushstring(L, name);
        return lua_rawget(L, event);
    }
    lua_pushstring(L, name);
    if (lua_rawget(L, event) != LUA_TNIL)
        tl_fail(L, "event %I gives %s twice, by its place and by its name", (LUAI_UACINT)i, name);
    lua_pop(L, 1);
    return lua_type(L, -1);
}

static uint32_t node_of(lua_State *L, thole_builder *builder, lua_Integer i, lua_Integer at,
                        const char *name) {
    int type = main_value(L, i, at, name);
    if (type != LUA_TSTRING && !lua_isinteger(L, -1))
        tl_fail(L, "event %I: %s is the name of a node, not %s", (LUAI_UACINT)i, name,
                type == LUA_TNIL ? "missing" : luaL_typename(L, -1));
    size_t length;
    const char *text = lua_tolstring(L, -1, &length); /* a copy, so a number may become text */
    uint32_t node = 0;
    thole_error error;
    if (thole_builder_node(builder, text, length, &node, &error) != THOLE_OK) {
        lua_pushfstring(L, "event %I: ", (LUAI_UACINT)i);
        tl_raise(L, &error, lua_tostring(L, -1));
    }
    lua_pop(L, 1);
    return node;
}

static int64_t time_of(lua_State *L, const thole_clock *clock, lua_Integer i, lua_Integer at,
                       const char *name, int64_t missing) {
    int64_t ticks = missing;
    int type = main_value(L, i, at, name);
    if (type == LUA_TNIL && at == 3)
        tl_fail(L, "event %I: start is missing", (LUAI_UACINT)i);
    if (type != LUA_TNIL && !tl_to_time(L, -1, clock, &ticks))
        tl_fail(L, "event %I: %s: %s", (LUAI_UACINT)i, name, lua_tostring(L, -1));
    lua_pop(L, 1);
    return ticks;
}

/* The value at the top as a column's type has it. */
static thole_value value_of(lua_State *L, thole_type type, lua_Integer i, const char *name) {
    thole_value value = {.type = type, .present = true};
    if (type == THOLE_TEXT) {
        value.text = lua_tolstring(L, -1, &value.length);
    } else if (type == THOLE_INTEGER) {
        value.integer = lua_tointeger(L, -1);
        if (value.integer == INT64_MIN)
            tl_fail(L, "attribute \"%s\" of event %I is out of range", name, (LUAI_UACINT)i);
    } else {
        value.real = lua_tonumber(L, -1);
        if (isnan(value.real))
            tl_fail(L, "attribute \"%s\" of event %I is not a number (nan): leave it out", name,
                    (LUAI_UACINT)i);
        if (lua_isinteger(L, -1) && (value.real >= 0x1p63 || (lua_Integer)value.real != lua_tointeger(L, -1)))
            tl_fail(L,
                    "attribute \"%s\" of event %I cannot be kept exactly beside fractions: give it as a text",
                    name, (LUAI_UACINT)i);
    }
    return value;
}

static void set_attributes(lua_State *L, thole_builder *builder, lua_Integer i) {
    lua_pushnil(L);
    for (; lua_next(L, -2) != 0; lua_pop(L, 1)) {
        if (main_field(L, -2) != 0)
            continue;
        lua_pushvalue(L, -2);
        lua_rawget(L, 3);
        lua_Integer code = lua_tointeger(L, -1);
        lua_pop(L, 1);
        thole_value value = value_of(L, (thole_type)(code % 4), i, lua_tostring(L, -2));
        thole_error error;
        if (thole_builder_set(builder, (uint32_t)(code / 4), &value, &error) != THOLE_OK) {
            lua_pushfstring(L, "event %I: ", (LUAI_UACINT)i);
            tl_raise(L, &error, lua_tostring(L, -1));
        }
    }
}

static void add_event(lua_State *L, thole_builder *builder, const thole_clock *clock, lua_Integer i) {
    lua_rawgeti(L, 1, i);
    thole_event event;
    event.from = node_of(L, builder, i, 1, "from");
    event.to = node_of(L, builder, i, 2, "to");
    event.start = time_of(L, clock, i, 3, "start", 0);
    event.finish = time_of(L, clock, i, 4, "finish", event.start);
    bool kept = false;
    thole_error error;
    if (thole_builder_event(builder, event, &kept, &error) != THOLE_OK) {
        lua_pushfstring(L, "event %I: ", (LUAI_UACINT)i);
        tl_raise(L, &error, lua_tostring(L, -1));
    }
    if (kept)
        set_attributes(L, builder, i);
    lua_pop(L, 1);
}

/* ---- the clock ----------------------------------------------------------------------------------- */

static int drop_zone(lua_State *L) {
    thole_zone **zone = lua_touserdata(L, 1), *held = *zone;
    *zone = NULL;
    thole_zone_release(held);
    return 0;
}

/* Push the owner of a zone. */
static thole_zone **push_zone(lua_State *L) {
    thole_zone **zone = lua_newuserdatauv(L, sizeof *zone, 0);
    *zone = NULL;
    luaL_setmetatable(L, TL_ZONE);
    return zone;
}

/* Is the first start a calendar time, where neither zone nor unit tell? */
static bool starts_as_calendar(lua_State *L) {
    bool calendar = false;
    if (lua_rawgeti(L, 1, 1) == LUA_TTABLE && main_value(L, 1, 3, "start") == LUA_TSTRING) {
        size_t length;
        int64_t ticks;
        const char *text = lua_tolstring(L, -1, &length);
        calendar = thole_parse_decimal(text, length, &ticks) == THOLE_PARSE_SYNTAX &&
                   thole_parse_iso8601(text, length, NULL, &ticks, NULL) != THOLE_PARSE_SYNTAX;
    }
    lua_settop(L, 3);
    return calendar;
}

/* Fill the clock; pushes the owner of its zone. */
static void choose_clock(lua_State *L, thole_clock *clock) {
    static const char *const names[] = {"unit", "zone"};
    tl_options options = tl_options_at(L, 2, OF, 2, names);
    const char *zone = tl_option_text(L, &options, "zone", NULL),
               *unit = tl_option_text(L, &options, "unit", NULL);
    *clock = (thole_clock){.kind = THOLE_PLAIN, .unit = "s"};
    if (zone != NULL && unit != NULL)
        tl_option_fail(L, &options, "unit",
                       " is for plain numbers, but a zone is given: leave out one of them");
    if (zone != NULL || (unit == NULL && starts_as_calendar(L)))
        clock->kind = THOLE_CALENDAR;
    if (unit != NULL) {
        if (unit[0] == '\0' || strlen(unit) >= sizeof clock->unit)
            tl_option_fail(L, &options, "unit", " \"%s\" has not 1 to 15 bytes", unit);
        memcpy(clock->unit, unit, strlen(unit) + 1);
    }
    thole_zone **held = push_zone(L);
    thole_error error;
    if (zone != NULL && thole_zone_open(tl_begin(L), zone, held, &error) != THOLE_OK)
        tl_raise(L, &error, NULL);
    clock->zone = *held;
}

/* network(events, options) -> network. Stack: events, options, types, zone, builder, result. */
static int network(lua_State *L) {
    thole_clock clock;
    thole_error error;
    if (lua_type(L, 1) != LUA_TTABLE)
        return tl_fail(L, "%s takes a list of events, each { from, to, start, finish }, not a %s", OF,
                       luaL_typename(L, 1));
    lua_settop(L, 2);
    lua_newtable(L);
    choose_clock(L, &clock);
    note_types(L);
    thole_builder **builder = push_builder(L);
    if (thole_builder_open(tl_begin(L), &clock, builder, &error) != THOLE_OK)
        return tl_raise(L, &error, NULL);
    thole_builder_source(*builder, OF);
    add_columns(L, *builder);
    lua_Integer n = (lua_Integer)lua_rawlen(L, 1);
    for (lua_Integer i = 1; i <= n; i++)
        add_event(L, *builder, &clock, i);
    thole_network **out = tl_push_network(L);
    thole_builder *finished = *builder;
    *builder = NULL; /* the core frees it, on failure too */
    if (thole_builder_finish(finished, out, &error) != THOLE_OK)
        return tl_raise(L, &error, NULL);
    tl_network_made(L, thole_network_bytes(*out, NULL));
    return 1;
}

void tl_open_build(lua_State *L) {
    tl_new_owner(L, TL_BUILD, drop_builder);
    tl_new_owner(L, TL_ZONE, drop_zone);
    lua_pushcfunction(L, network);
    lua_setfield(L, -2, "network");
}
