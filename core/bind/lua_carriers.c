/* bars:carriers: the places that bars run through, as lists of names. */
#include "bind/bind.h"

/* Carriers owned by Lua. */
typedef struct holder {
    thole_carriers *carriers;
} holder;

static int drop(lua_State *L) {
    holder *h = lua_touserdata(L, 1);
    thole_carriers *held = h->carriers;
    h->carriers = NULL;
    thole_carriers_release(held);
    return 0;
}

static holder *push_holder(lua_State *L) {
    holder *h = lua_newuserdatauv(L, sizeof *h, 0);
    h->carriers = NULL;
    luaL_setmetatable(L, TL_CARRIERS);
    return h;
}

static void push_part(lua_State *L, const thole_network *net, const uint32_t *nodes, size_t n) {
    lua_createtable(L, (int)n, 0);
    for (size_t i = 0; i < n; i++) {
        size_t length;
        const char *name = thole_network_node_name(net, nodes[i], &length);
        lua_pushlstring(L, name, length);
        lua_rawseti(L, -2, (lua_Integer)i + 1);
    }
}

/* bars:carriers(net, { at =, dim = }) -> list of { bar =, parts = { { names… }, … } } */
static int carriers(lua_State *L) {
    static const char OF[] = "bars:carriers";
    static const char *const names[] = {"at", "dim"};
    thole_barcode *b = tl_check_barcode(L, 1, OF);
    thole_network *net = tl_check_network(L, 2, OF);
    lua_settop(L, 3);
    tl_options options = tl_options_at(L, 3, OF, sizeof names / sizeof *names, names);
    lua_Integer dim = tl_option_integer(L, &options, "dim", 0, 1, 1);
    uint32_t position;
    if (!tl_option_position(L, &options, b, &position))
        tl_option_fail(L, &options, "at", " is missing: give a window's number, or the half between two");
    holder *h = push_holder(L);
    thole_error error;
    if (thole_barcode_carriers(tl_begin(L), b, net, position, (uint32_t)dim, &h->carriers, &error) != THOLE_OK)
        return tl_raise(L, &error, NULL);
    size_t n = thole_carriers_count(h->carriers);
    lua_createtable(L, (int)n, 0);
    for (size_t i = 0; i < n; i++) {
        size_t parts = thole_carriers_parts(h->carriers, i);
        lua_createtable(L, 0, 2);
        lua_pushinteger(L, (lua_Integer)thole_carriers_bar(h->carriers, i) + 1);
        lua_setfield(L, -2, "bar");
        lua_createtable(L, (int)parts, 0);
        for (size_t k = 0; k < parts; k++) {
            size_t count;
            const uint32_t *nodes = thole_carriers_part(h->carriers, i, k, &count);
            push_part(L, net, nodes, count);
            lua_rawseti(L, -2, (lua_Integer)k + 1);
        }
        lua_setfield(L, -2, "parts");
        lua_rawseti(L, -2, (lua_Integer)i + 1);
    }
    return 1;
}

void tl_open_carriers(lua_State *L) {
    static const luaL_Reg methods[] = {{"carriers", carriers}, {NULL, NULL}};
    luaL_newmetatable(L, TL_CARRIERS);
    lua_pushcfunction(L, drop);
    lua_setfield(L, -2, "__gc");
    lua_pop(L, 1);
    tl_add_methods(L, "barcode", methods);
}
