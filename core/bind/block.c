/* Blocks of the core's memory that belong to the Lua stack. */
#include "base/memory.h"
#include "bind/bind.h"

typedef struct block {
    void *at;
    size_t n, item;
} block;

static int collect_block(lua_State *L) {
    block *b = lua_touserdata(L, 1);
    void *at = b->at;
    b->at = NULL;
    tb_free(tl_context(L)->memory, at, b->n, b->item);
    return 0;
}

void *tl_push_block(lua_State *L, size_t n, size_t item, const char *what) {
    block *b = lua_newuserdatauv(L, sizeof *b, 0);
    *b = (block){NULL, n, item};
    luaL_setmetatable(L, TL_BLOCK);
    if (n == 0)
        return NULL;
    thole_context *context = tl_begin(L);
    b->at = tb_resize(context->memory, NULL, 0, n, item);
    if (b->at == NULL) {
        thole_error error;
        tb_refused(context->memory, &error, what);
        tl_raise(L, &error, NULL);
    }
    tl_burden(L, n * item);
    return b->at;
}

void tl_free_block(lua_State *L, int index) {
    block *b = lua_touserdata(L, index);
    void *at = b->at;
    b->at = NULL;
    tb_free(tl_context(L)->memory, at, b->n, b->item);
}

void tl_open_block(lua_State *L) { tl_new_owner(L, TL_BLOCK, collect_block); }
