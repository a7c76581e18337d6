/* The proxy through which Lua sees the links of a network, one after another. */
#include <string.h>

#include "bind/bind.h"

/* Numbers of the fields that are no attributes; attribute c is c. */
enum { FROM = -5, TO, START, FINISH, DURATION, OWN_FIELDS = 5 };
static const char *const OWN[OWN_FIELDS] = {"from", "to", "start", "finish", "duration"};

void tl_link_over(tl_link *link) {
    thole_network *held = link->network;
    link->network = NULL;
    thole_network_release(held);
}

/* Its user value is the table of fields: name -> number. */
tl_link *tl_push_link(lua_State *L, int network_index, const char *of) {
    thole_network *net = tl_check_network(L, network_index, of);
    tl_link *link = lua_newuserdatauv(L, sizeof *link, 1);
    *link = (tl_link){NULL, 0};
    luaL_setmetatable(L, TL_LINK);
    uint32_t n = thole_network_columns(net);
    lua_createtable(L, 0, (int)n + OWN_FIELDS);
    for (uint32_t c = 0; c < n; c++) {
        lua_pushinteger(L, c);
        lua_setfield(L, -2, thole_network_column_name(net, c));
    }
    for (int i = 0; i < OWN_FIELDS; i++) {
        lua_pushinteger(L, FROM + i);
        lua_setfield(L, -2, OWN[i]);
    }
    lua_setiuservalue(L, -2, 1);
    link->network = thole_network_retain(net);
    return link;
}

static void push_node(lua_State *L, const thole_network *net, uint32_t node) {
    size_t length;
    const char *name = thole_network_node_name(net, node, &length);
    lua_pushlstring(L, name, length);
}

static void push_attribute(lua_State *L, const thole_network *net, uint32_t c, size_t at) {
    thole_value value = thole_network_value(net, c, at);
    if (!value.present)
        lua_pushnil(L);
    else if (value.type == THOLE_INTEGER)
        lua_pushinteger(L, value.integer);
    else if (value.type == THOLE_REAL)
        lua_pushnumber(L, value.real);
    else
        lua_pushlstring(L, value.text, value.length);
}

/* The one hot function: a field of the link that the loop is at. */
static int field(lua_State *L) {
    tl_link *link = lua_touserdata(L, 1);
    lua_settop(L, 2);
    lua_getiuservalue(L, 1, 1);
    lua_pushvalue(L, 2);
    if (lua_rawget(L, 3) == LUA_TNIL) {
        lua_pop(L, 1);
        return tl_no_field(L, "a link", 3, 0, NULL);
    }
    if (link->network == NULL)
        return tl_fail(
            L, "the loop that this link belongs to is over: take the fields that you need inside of it");
    lua_Integer which = lua_tointeger(L, -1);
    const thole_network *net = link->network;
    if (which >= 0) {
        push_attribute(L, net, (uint32_t)which, link->at);
        return 1;
    }
    thole_event event = thole_network_event(net, link->at);
    if (which == FROM)
        push_node(L, net, event.from);
    else if (which == TO)
        push_node(L, net, event.to);
    else if (which == START)
        tl_push_time(L, thole_network_clock(net), event.start, 0);
    else if (which == FINISH)
        tl_push_time(L, thole_network_clock(net), event.finish, 0);
    else
        tl_push_amount(L, (uint64_t)event.finish - (uint64_t)event.start, 0, false);
    return 1;
}

static int set_field(lua_State *L) {
    return tl_fail(L, "the fields of a link cannot be set: make a new network with thole.network");
}

static int text(lua_State *L) {
    tl_link *link = luaL_checkudata(L, 1, TL_LINK);
    if (link->network == NULL) {
        lua_pushliteral(L, "link of a loop that is over");
        return 1;
    }
    thole_event event = thole_network_event(link->network, link->at);
    const thole_clock *clock = thole_network_clock(link->network);
    char start[THOLE_TIME_SIZE], finish[THOLE_TIME_SIZE];
    thole_format_time(clock, event.start, 0, start);
    thole_format_time(clock, event.finish, 0, finish);
    lua_pushfstring(L, "link from %s to %s, %s to %s",
                    thole_network_node_name(link->network, event.from, NULL),
                    thole_network_node_name(link->network, event.to, NULL), start, finish);
    return 1;
}

static int collect(lua_State *L) {
    tl_link_over(luaL_checkudata(L, 1, TL_LINK));
    return 0;
}

/* Upvalues: the proxy, the links passed. */
static int next_link(lua_State *L) {
    tl_link *link = lua_touserdata(L, lua_upvalueindex(1));
    size_t at = (size_t)lua_tointeger(L, lua_upvalueindex(2));
    if (link->network == NULL || at >= thole_network_count(link->network)) {
        tl_link_over(link);
        return 0;
    }
    link->at = at;
    lua_pushinteger(L, (lua_Integer)at + 1);
    lua_replace(L, lua_upvalueindex(2));
    lua_pushvalue(L, lua_upvalueindex(1));
    return 1;
}

/* each(net) -> iterator of the links, through one proxy. */
static int each(lua_State *L) {
    lua_settop(L, 1);
    tl_push_link(L, 1, "net:each");
    lua_pushinteger(L, 0);
    lua_pushcclosure(L, next_link, 2);
    return 1;
}

void tl_open_link(lua_State *L) {
    static const luaL_Reg special[] = {
        {"__gc", collect}, {"__index", field}, {"__newindex", set_field}, {"__tostring", text}, {NULL, NULL}};
    static const luaL_Reg methods[] = {{"each", each}, {NULL, NULL}};
    luaL_newmetatable(L, TL_LINK);
    luaL_setfuncs(L, special, 0);
    lua_pushboolean(L, 0); /* __index takes its first argument for a proxy without looking */
    lua_setfield(L, -2, "__metatable");
    lua_pop(L, 1);
    tl_add_methods(L, "network", methods);
    tl_add_fields(L, "link", OWN_FIELDS, OWN);
}
