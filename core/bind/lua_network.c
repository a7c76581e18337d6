/* The Lua type of networks. */
#include <string.h>

#include "bind/bind.h"

typedef struct network {
    thole_network *network;
} network;

thole_network **tl_push_network(lua_State *L) {
    network *n = lua_newuserdatauv(L, sizeof *n, 0);
    n->network = NULL;
    luaL_setmetatable(L, TL_NETWORK);
    return &n->network;
}

void tl_network_made(lua_State *L, size_t bytes) { tl_burden(L, bytes); }

thole_network *tl_check_network(lua_State *L, int index, const char *of) {
    network *n = luaL_testudata(L, index, TL_NETWORK);
    if (n == NULL) {
        tl_fail(L, "%s takes a network, not a %s%s", of, luaL_typename(L, index),
                strncmp(of, "net:", 4) == 0 ? ": call it with a colon, as in net:summary()" : "");
        return NULL;
    }
    if (n->network == NULL)
        tl_fail(L, "this network is closed: %s comes too late", of);
    return n->network;
}

static int close_network(lua_State *L) {
    network *n = luaL_checkudata(L, 1, TL_NETWORK);
    thole_network *held = n->network;
    n->network = NULL;
    thole_network_release(held);
    return 0;
}

static int count(lua_State *L) {
    lua_pushinteger(L, (lua_Integer)thole_network_count(tl_check_network(L, 1, "#")));
    return 1;
}

static int text(lua_State *L) {
    network *n = luaL_checkudata(L, 1, TL_NETWORK);
    if (n->network == NULL)
        lua_pushliteral(L, "closed network");
    else
        lua_pushfstring(L, "network of %I links", (LUAI_UACINT)thole_network_count(n->network));
    return 1;
}

/* ---- fields -------------------------------------------------------------------------------------- */

static void push_columns(lua_State *L, const thole_network *net) {
    uint32_t n = thole_network_columns(net);
    lua_createtable(L, (int)n, 0);
    for (uint32_t i = 0; i < n; i++) {
        lua_pushstring(L, thole_network_column_name(net, i));
        lua_rawseti(L, -2, (lua_Integer)i + 1);
    }
}

static void push_zone(lua_State *L, const thole_clock *clock) {
    if (clock->kind == THOLE_CALENDAR)
        lua_pushstring(L, thole_zone_name(clock->zone));
    else
        lua_pushnil(L);
}

static const char *const FIELDS[] = {"columns", "unit", "zone"};
enum { FIELD_COUNT = sizeof FIELDS / sizeof *FIELDS };

static int field(lua_State *L) {
    if (tl_find_method(L))
        return 1;
    const char *key = lua_type(L, 2) == LUA_TSTRING ? lua_tostring(L, 2) : "";
    if (strcmp(key, "columns") == 0) {
        push_columns(L, tl_check_network(L, 1, "columns"));
    } else if (strcmp(key, "unit") == 0) {
        lua_pushstring(L, thole_network_clock(tl_check_network(L, 1, "unit"))->unit);
    } else if (strcmp(key, "zone") == 0) {
        push_zone(L, thole_network_clock(tl_check_network(L, 1, "zone")));
    } else {
        return tl_no_field(L, "a network", lua_upvalueindex(1), FIELD_COUNT, FIELDS);
    }
    return 1;
}

/* ---- what is in it ------------------------------------------------------------------------------- */

static thole_summary summarise(lua_State *L, const thole_network *net) {
    thole_summary summary;
    thole_error error;
    if (thole_network_summarise(tl_begin(L), net, &summary, &error) != THOLE_OK)
        tl_raise(L, &error, NULL);
    return summary;
}

static void set_count(lua_State *L, const char *name, uint64_t n) {
    lua_pushinteger(L, (lua_Integer)n);
    lua_setfield(L, -2, name);
}

static void set_tallies(lua_State *L, const char *name, const thole_tally *tallies, size_t n) {
    lua_createtable(L, (int)n, 0);
    for (size_t i = 0; i < n; i++) {
        lua_createtable(L, 0, 3);
        lua_pushstring(L, tallies[i].what);
        lua_setfield(L, -2, "what");
        set_count(L, "count", tallies[i].count);
        set_count(L, "first_line", tallies[i].first_line);
        lua_rawseti(L, -2, (lua_Integer)i + 1);
    }
    lua_setfield(L, -2, name);
}

/* summary(net) -> table; the Lua half makes it print well. */
static int summary(lua_State *L) {
    thole_network *net = tl_check_network(L, 1, "net:summary");
    thole_summary s = summarise(L, net);
    const thole_account *account = thole_network_account(net);
    const thole_clock *clock = thole_network_clock(net);
    size_t view_bytes = 0, bytes = thole_network_bytes(net, &view_bytes);
    lua_createtable(L, 0, 20);
    set_count(L, "events", s.events);
    set_count(L, "contacts", s.contacts);
    set_count(L, "nodes", s.nodes);
    set_count(L, "links", s.links);
    set_count(L, "rows", account->rows);
    set_count(L, "read", account->events);
    set_count(L, "self_loops", account->self_loops);
    set_count(L, "repeats", account->repeats);
    set_count(L, "skipped", account->skipped);
    set_count(L, "bytes", bytes + view_bytes);
    set_tallies(L, "reasons", account->reasons, account->reason_count);
    set_tallies(L, "remarks", account->remarks, account->remark_count);
    if (s.any) {
        tl_push_time(L, clock, s.first_start, 0);
        lua_setfield(L, -2, "first");
        tl_push_time(L, clock, s.last_finish, 0);
        lua_setfield(L, -2, "last");
    }
    lua_pushstring(L, account->source);
    lua_setfield(L, -2, "source");
    lua_pushstring(L, clock->unit);
    lua_setfield(L, -2, "unit");
    push_zone(L, clock);
    lua_setfield(L, -2, "zone");
    return 1;
}

/* span(net) -> first, last; nothing when there are no links. */
static int span(lua_State *L) {
    thole_network *net = tl_check_network(L, 1, "net:span");
    thole_summary s = summarise(L, net);
    if (!s.any)
        return 0;
    tl_push_time(L, thole_network_clock(net), s.first_start, 0);
    tl_push_time(L, thole_network_clock(net), s.last_finish, 0);
    return 2;
}

/* span_ticks(net, of) -> the same in ticks. */
static int span_ticks(lua_State *L) {
    thole_summary s = summarise(L, tl_check_network(L, 1, luaL_checkstring(L, 2)));
    if (!s.any)
        return 0;
    lua_pushinteger(L, s.first_start);
    lua_pushinteger(L, s.last_finish);
    return 2;
}

/* contact_at(net, ticks) -> whether there is a contact at that instant. */
static int contact_at(lua_State *L) {
    thole_network *net = tl_check_network(L, 1, "a window rule");
    int64_t ticks = luaL_checkinteger(L, 2);
    bool found = false;
    /* events are by start: the ones that start latest are last */
    for (size_t i = thole_network_count(net); i > 0 && !found; i--) {
        thole_event event = thole_network_event(net, i - 1);
        if (event.start < ticks)
            break;
        found = event.start == ticks && event.finish == ticks;
    }
    lua_pushboolean(L, found);
    return 1;
}

/* nodes(net) -> names of the nodes in view, in the order in which they were read. */
static int nodes(lua_State *L) {
    thole_network *net = tl_check_network(L, 1, "net:nodes");
    uint32_t n = thole_network_nodes(net);
    unsigned char *seen = tl_push_block(L, (size_t)n + 1, 1, "the nodes");
    memset(seen, 0, (size_t)n + 1);
    for (size_t i = 0; i < thole_network_count(net); i++) {
        thole_event event = thole_network_event(net, i);
        seen[event.from] = seen[event.to] = 1;
    }
    lua_newtable(L);
    lua_Integer at = 0;
    for (uint32_t i = 0; i < n; i++) {
        if (seen[i] == 0)
            continue;
        size_t length;
        const char *name = thole_network_node_name(net, i, &length);
        lua_pushlstring(L, name, length);
        lua_rawseti(L, -2, ++at);
    }
    tl_free_block(L, -2);
    return 1;
}

/* ---- choosing ------------------------------------------------------------------------------------ */

/* between(net, start, finish) -> network of the events active in [start, finish). */
static int between(lua_State *L) {
    thole_network *net = tl_check_network(L, 1, "net:between");
    int64_t ticks[2];
    lua_settop(L, 3);
    for (int i = 0; i < 2; i++)
        if (!tl_to_time(L, 2 + i, thole_network_clock(net), &ticks[i]))
            return tl_fail(L, "%s of net:between: %s", i == 0 ? "start" : "finish", lua_tostring(L, -1));
    thole_network **out = tl_push_network(L);
    thole_error error;
    if (thole_network_between(tl_begin(L), net, ticks[0], ticks[1], out, &error) != THOLE_OK)
        return tl_raise(L, &error, NULL);
    size_t view_bytes = 0;
    thole_network_bytes(*out, &view_bytes);
    tl_network_made(L, view_bytes);
    return 1;
}

void tl_open_network(lua_State *L) {
    static const luaL_Reg special[] = {{"__gc", close_network},
                                       {"__close", close_network},
                                       {"__len", count},
                                       {"__tostring", text},
                                       {NULL, NULL}};
    static const luaL_Reg methods[] = {{"between", between}, {"close", close_network}, {"nodes", nodes},
                                       {"span", span},       {"summary", summary},     {NULL, NULL}};
    static const luaL_Reg functions[] = {
        {"contact_at", contact_at}, {"span_ticks", span_ticks}, {NULL, NULL}};
    tl_new_type(L, TL_NETWORK, special, methods, field);
    tl_add_fields(L, "network", FIELD_COUNT, FIELDS);
    luaL_setfuncs(L, functions, 0);
}
