/* net:keep and net:drop, by a table that the core runs or by a function that Lua runs. */
#include "base/parallel.h"
#include "bind/bind.h"

/* Links that one protected call asks about. */
enum { BLOCK = 8192 };

typedef struct question {
    tl_link *link;
    size_t first, end;
    uint32_t *rows; /* links kept so far */
    size_t kept;
    bool drop;
} question;

/* (question, function, proxy): ask about the links of one block. */
static int ask(lua_State *L) {
    question *q = lua_touserdata(L, 1);
    for (size_t i = q->first; i < q->end; i++) {
        q->link->at = i;
        lua_pushvalue(L, 2);
        lua_pushvalue(L, 3);
        lua_call(L, 1, 1);
        if ((lua_toboolean(L, -1) != 0) != q->drop)
            q->rows[q->kept++] = (uint32_t)i;
        lua_settop(L, 3);
    }
    return 0;
}

/* Stack: network, function. */
static int by_function(lua_State *L, const char *of, bool drop) {
    thole_network *net = tl_check_network(L, 1, of);
    size_t n = thole_network_count(net);
    uint32_t *rows = tl_push_block(L, n, sizeof *rows, "the links kept");
    tl_link *link = tl_push_link(L, 1, of);
    question q = {.link = link, .rows = rows, .drop = drop};
    thole_context *context = tl_begin(L);
    thole_error error;
    for (; q.first < n; q.first = q.end) {
        q.end = n - q.first < BLOCK ? n : q.first + BLOCK;
        if (tb_tick(context, "choosing links", (double)q.first / (double)n, &error) != THOLE_OK)
            return tl_raise(L, &error, NULL);
        lua_pushcfunction(L, ask);
        lua_pushlightuserdata(L, &q);
        lua_pushvalue(L, 2);
        lua_pushvalue(L, 4);
        if (lua_pcall(L, 3, 0, 0) != LUA_OK) {
            tl_link_over(link);
            tl_free_block(L, 3);
            return lua_error(L); /* its own error, whatever it is */
        }
    }
    /* `link` holds the network even if the function closed it. */
    thole_network **out = tl_push_network(L);
    if (thole_network_select(tl_begin(L), link->network, rows, q.kept, out, &error) != THOLE_OK)
        return tl_raise(L, &error, NULL);
    tl_link_over(link);
    tl_free_block(L, 3);
    return 1;
}

/* Stack: network, table. */
static int by_table(lua_State *L, const char *of, bool drop) {
    thole_network *net = tl_check_network(L, 1, of);
    const thole_test *test = tl_push_test(L, 2, thole_network_clock(net), of);
    thole_network **out = tl_push_network(L);
    thole_error error;
    if (thole_network_keep(tl_begin(L), net, test, drop, out, &error) != THOLE_OK)
        return tl_raise(L, &error, NULL);
    return 1;
}

static int choose(lua_State *L, const char *of, bool drop) {
    lua_settop(L, 2);
    tl_check_network(L, 1, of);
    int type = lua_type(L, 2);
    if (type != LUA_TTABLE && type != LUA_TFUNCTION)
        return tl_fail(L, "%s takes a table, as in { mode = \"ferry\" }, or a function of a link, not a %s",
                       of, lua_typename(L, type));
    type == LUA_TTABLE ? by_table(L, of, drop) : by_function(L, of, drop);
    size_t view_bytes = 0;
    thole_network_bytes(tl_check_network(L, -1, of), &view_bytes);
    tl_network_made(L, view_bytes);
    return 1;
}

static int keep(lua_State *L) { return choose(L, "net:keep", false); }
static int drop(lua_State *L) { return choose(L, "net:drop", true); }

void tl_open_keep(lua_State *L) {
    static const luaL_Reg methods[] = {{"drop", drop}, {"keep", keep}, {NULL, NULL}};
    tl_add_methods(L, "network", methods);
}
