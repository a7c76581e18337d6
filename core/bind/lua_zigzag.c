/* net:zigzag: options to the core, a barcode back. */
#include <string.h>

#include "bind/bind.h"

static const char OF[] = "net:zigzag";

static void radius(lua_State *L, const tl_options *options, thole_zigzag_options *out) {
    out->radius_kind = THOLE_RADIUS_HOPS;
    out->radius = 1;
    int type = tl_option(L, options, "radius");
    if (type == LUA_TSTRING && strcmp(lua_tostring(L, -1), "graph") == 0) {
        out->radius_kind = THOLE_RADIUS_GRAPH;
        out->radius = 0;
    } else if (type == LUA_TNUMBER) {
        out->radius = (uint32_t)tl_option_integer(L, options, "radius", 0, UINT32_MAX, 1);
    } else if (type != LUA_TNIL) {
        tl_option_fail(L, options, "radius", " is \"graph\" or a whole number of hops, not %s%s%s",
                       type == LUA_TSTRING ? "\"" : "a ",
                       type == LUA_TSTRING ? lua_tostring(L, -1) : lua_typename(L, type),
                       type == LUA_TSTRING ? "\"" : "");
    }
    lua_pop(L, 1);
}

static uint32_t dims(lua_State *L, const tl_options *options) {
    int type = tl_option(L, options, "dims");
    uint32_t wanted = 0;
    if (type == LUA_TNIL) {
        lua_pop(L, 1);
        return 1u << 0 | 1u << 1;
    }
    if (type != LUA_TTABLE)
        tl_option_fail(L, options, "dims", " is a list of dimensions, as in { 0, 1 }, not a %s",
                       lua_typename(L, type));
    size_t n = lua_rawlen(L, -1);
    for (size_t i = 0; i < n; i++) {
        int whole = 0;
        int item = lua_rawgeti(L, -1, (lua_Integer)i + 1);
        lua_Integer dim = item == LUA_TNUMBER ? lua_tointegerx(L, -1, &whole) : 0;
        if (!whole || dim < 0 || dim > THOLE_MOST_DIMENSION)
            tl_option_fail(L, options, "dims", " has %s in it: give whole numbers from 0 to %d",
                           luaL_tolstring(L, -1, NULL), THOLE_MOST_DIMENSION);
        wanted |= 1u << dim;
        lua_pop(L, 1);
    }
    if (wanted == 0)
        tl_option_fail(L, options, "dims", " is empty: give dimensions, as in { 0, 1 }");
    lua_pop(L, 1);
    return wanted;
}

/* Bytes: a whole number, or a text that the Lua half has turned into one. */
static size_t ceiling(lua_State *L, const tl_options *options) {
    lua_Integer most = tl_option_integer(L, options, "max_memory", 1, LUA_MAXINTEGER, 0);
    return most == 0 ? tl_usual_ceiling() : (size_t)most;
}

static void check_clocks(lua_State *L, const thole_network *net, const tl_windows *w) {
    const thole_clock *clock = thole_network_clock(net);
    if (clock->kind != w->clock.kind ||
        (clock->kind == THOLE_PLAIN && strcmp(clock->unit, w->clock.unit) != 0))
        tl_fail(L, "these windows are in other times than the network: make them from the same network");
}

/* zigzag(net, options) -> barcode */
static int zigzag(lua_State *L) {
    static const char *const names[] = {"block", "dims", "join", "max_memory", "nodes", "radius", "windows"};
    static const char *const joins[] = {"union", "intersection"}; /* in the order of thole_join */
    static const char *const node_sets[] = {"linked", "all"};
    thole_network *net = tl_check_network(L, 1, OF);
    lua_settop(L, 2);
    tl_options options = tl_options_at(L, 2, OF, sizeof names / sizeof *names, names);
    thole_zigzag_options wanted = {.dims = dims(L, &options)};
    radius(L, &options, &wanted);
    wanted.join = (thole_join)tl_option_choice(L, &options, "join", 2, joins, 0);
    wanted.all_nodes = tl_option_choice(L, &options, "nodes", 2, node_sets, 0) == 1;
    wanted.block = (uint32_t)tl_option_integer(L, &options, "block", 1, UINT32_MAX, 0);
    size_t most = ceiling(L, &options);
    if (tl_option(L, &options, "windows") == LUA_TNIL)
        tl_option_fail(L, &options, "windows",
                       " is missing: make windows with thole.windows.sliding, list or by");
    tl_windows *w = tl_check_windows(L, -1, "option \"windows\" of net:zigzag");
    check_clocks(L, net, w);
    thole_barcode **out = tl_push_barcode(L);
    thole_context *context = tl_begin(L);
    size_t before = context->memory->ceiling;
    context->memory->ceiling = most;
    thole_error error;
    thole_status status = thole_zigzag(context, net, w->windows, &wanted, out, &error);
    context->memory->ceiling = before;
    if (status != THOLE_OK)
        return tl_raise(L, &error, NULL);
    tl_burden(L, thole_barcode_bytes(*out));
    return 1;
}

void tl_open_zigzag(lua_State *L) {
    static const luaL_Reg methods[] = {{"zigzag", zigzag}, {NULL, NULL}};
    tl_add_methods(L, "network", methods);
}
