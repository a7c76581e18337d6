/* The Lua type of windows, and the native functions that window rules end in. */
#include <string.h>

#include "bind/bind.h"

tl_windows *tl_push_windows(lua_State *L) {
    tl_windows *w = lua_newuserdatauv(L, sizeof *w, 0);
    memset(w, 0, sizeof *w);
    luaL_setmetatable(L, TL_WINDOWS);
    return w;
}

void tl_windows_set_clock(tl_windows *windows, const thole_clock *clock) {
    windows->clock = *clock;
    if (clock->zone != NULL)
        thole_zone_retain(clock->zone);
}

tl_windows *tl_check_windows(lua_State *L, int index, const char *of) {
    tl_windows *w = luaL_testudata(L, index, TL_WINDOWS);
    if (w == NULL) {
        tl_fail(L, "%s takes windows, not a %s: make them with thole.windows.sliding, list or by", of,
                luaL_typename(L, index));
        return NULL;
    }
    if (w->windows == NULL)
        tl_fail(L, "these windows are closed: %s comes too late", of);
    return w;
}

static int close_windows(lua_State *L) {
    tl_windows *w = luaL_checkudata(L, 1, TL_WINDOWS);
    thole_windows *held = w->windows;
    thole_zone *zone = w->clock.zone;
    w->windows = NULL;
    w->clock.zone = NULL;
    thole_windows_release(held);
    thole_zone_release(zone);
    return 0;
}

static int count(lua_State *L) {
    lua_pushinteger(L, (lua_Integer)thole_windows_count(tl_check_windows(L, 1, "#")->windows));
    return 1;
}

static int text(lua_State *L) {
    tl_windows *w = luaL_checkudata(L, 1, TL_WINDOWS);
    if (w->windows == NULL)
        lua_pushliteral(L, "closed windows");
    else
        lua_pushfstring(L, "%I windows", (LUAI_UACINT)thole_windows_count(w->windows));
    return 1;
}

/* Push { start =, finish =, label =, index = } of window i, from 0. */
static void push_window(lua_State *L, const tl_windows *w, size_t i) {
    lua_createtable(L, 0, 4);
    tl_push_time(L, &w->clock, thole_windows_start(w->windows, i), 0);
    lua_setfield(L, -2, "start");
    tl_push_time(L, &w->clock, thole_windows_finish(w->windows, i), 0);
    lua_setfield(L, -2, "finish");
    lua_pushstring(L, thole_windows_label(w->windows, i));
    lua_setfield(L, -2, "label");
    lua_pushinteger(L, (lua_Integer)i + 1);
    lua_setfield(L, -2, "index");
}

static int field(lua_State *L) {
    if (lua_isinteger(L, 2)) {
        tl_windows *w = tl_check_windows(L, 1, "w[i]");
        lua_Integer i = lua_tointeger(L, 2);
        if (i >= 1 && (lua_Unsigned)i <= thole_windows_count(w->windows))
            push_window(L, w, (size_t)i - 1);
        else
            lua_pushnil(L); /* as a list, so that ipairs ends */
        return 1;
    }
    return tl_find_method(L) ? 1 : tl_no_field(L, "a list of windows", lua_upvalueindex(1), 0, NULL);
}

/* Upvalues: the windows, how many were given. */
static int next_window(lua_State *L) {
    tl_windows *w = tl_check_windows(L, lua_upvalueindex(1), "windows:each");
    size_t i = (size_t)lua_tointeger(L, lua_upvalueindex(2));
    if (i >= thole_windows_count(w->windows))
        return 0;
    lua_pushinteger(L, (lua_Integer)i + 1);
    lua_replace(L, lua_upvalueindex(2));
    push_window(L, w, i);
    return 1;
}

static int each(lua_State *L) {
    tl_check_windows(L, 1, "windows:each");
    lua_settop(L, 1);
    lua_pushinteger(L, 0);
    lua_pushcclosure(L, next_window, 2);
    return 1;
}

/* sliding_windows(net, start, finish, length, step), all in ticks -> windows. */
static int sliding(lua_State *L) {
    static const char of[] = "thole.windows.sliding";
    const thole_clock *clock = thole_network_clock(tl_check_network(L, 1, of));
    int64_t start = luaL_checkinteger(L, 2), finish = luaL_checkinteger(L, 3);
    int64_t length = luaL_checkinteger(L, 4), step = luaL_checkinteger(L, 5);
    tl_windows *out = tl_push_windows(L);
    thole_error error;
    if (thole_windows_sliding(tl_begin(L), start, finish, length, step, &out->windows, &error) != THOLE_OK)
        return tl_raise(L, &error, NULL);
    tl_windows_set_clock(out, clock);
    tl_burden(L, thole_windows_bytes(out->windows));
    return 1;
}

/* list_windows(net, starts, finishes, labels, n): lists of ticks and of texts (or nil) -> windows. */
static int list(lua_State *L) {
    const thole_clock *clock = thole_network_clock(tl_check_network(L, 1, "a window rule"));
    for (int i = 2; i <= 4; i++)
        luaL_checktype(L, i, LUA_TTABLE);
    lua_settop(L, 5);
    size_t n = (size_t)luaL_checkinteger(L, 5);
    int64_t *starts = tl_push_block(L, n, sizeof *starts, "the windows");
    int64_t *finishes = tl_push_block(L, n, sizeof *finishes, "the windows");
    const char **labels = tl_push_block(L, n, sizeof *labels, "the windows");
    for (size_t i = 0; i < n; i++) {
        lua_rawgeti(L, 2, (lua_Integer)i + 1);
        lua_rawgeti(L, 3, (lua_Integer)i + 1);
        lua_rawgeti(L, 4, (lua_Integer)i + 1);
        starts[i] = lua_tointeger(L, -3);
        finishes[i] = lua_tointeger(L, -2);
        labels[i] = lua_type(L, -1) == LUA_TSTRING ? lua_tostring(L, -1) : NULL; /* the list keeps it */
        lua_pop(L, 3);
    }
    tl_windows *out = tl_push_windows(L);
    thole_error error;
    if (thole_windows_list(tl_begin(L), clock, n, starts, finishes, labels, &out->windows, &error) !=
        THOLE_OK)
        return tl_raise(L, &error, NULL);
    tl_windows_set_clock(out, clock);
    for (int i = -4; i <= -2; i++)
        tl_free_block(L, i);
    tl_burden(L, thole_windows_bytes(out->windows));
    return 1;
}

void tl_open_windows(lua_State *L) {
    static const luaL_Reg special[] = {{"__gc", close_windows},
                                       {"__close", close_windows},
                                       {"__len", count},
                                       {"__tostring", text},
                                       {NULL, NULL}};
    static const luaL_Reg methods[] = {{"close", close_windows}, {"each", each}, {NULL, NULL}};
    static const luaL_Reg functions[] = {{"sliding_windows", sliding}, {"list_windows", list}, {NULL, NULL}};
    tl_new_type(L, TL_WINDOWS, special, methods, field);
    luaL_setfuncs(L, functions, 0);
}
