/* Coroutines and protected calls that do not hold up the end of a recipe: resume, wrap, close, pcall and
 * xpcall behave as the standard ones do, but keep th_stop told which thread runs, and pass the error of a
 * recipe that ends on. */
#include "host/host.h"

static lua_State *checked_thread(lua_State *L) {
    lua_State *co = lua_tothread(L, 1);
    luaL_argexpected(L, co != NULL, 1, "coroutine");
    return co;
}

/* Resume with the arguments on the top of L's stack. Leaves the results there and returns their number, or
 * the error and returns -1. */
static int resume(lua_State *L, lua_State *co, int arguments) {
    if (!lua_checkstack(co, arguments)) {
        lua_pushliteral(L, "too many arguments to resume");
        return -1;
    }
    lua_xmove(L, co, arguments);
    int results = 0;
    int status = th_stop_resume(L, co, arguments, &results);
    if (status != LUA_OK && status != LUA_YIELD) {
        lua_xmove(co, L, 1);
        return -1;
    }
    if (!lua_checkstack(L, results + 1)) {
        lua_pop(co, results);
        lua_pushliteral(L, "too many results to resume");
        return -1;
    }
    lua_xmove(co, L, results);
    return results;
}

static int resume_call(lua_State *L) {
    lua_State *co = checked_thread(L);
    int results = resume(L, co, lua_gettop(L) - 1);
    if (results < 0 && th_ending())
        return lua_error(L);
    lua_pushboolean(L, results >= 0);
    lua_insert(L, results >= 0 ? -(results + 1) : -2);
    return results >= 0 ? results + 1 : 2;
}

/* What coroutine.wrap returns; its upvalue is the coroutine. Errors get a position, as they do from the
 * standard one. */
static int wrapped_call(lua_State *L) {
    lua_State *co = lua_tothread(L, lua_upvalueindex(1));
    int results = resume(L, co, lua_gettop(L));
    if (results >= 0)
        return results;
    int status = lua_status(co);
    if (status != LUA_OK && status != LUA_YIELD) {
        lua_State *before = th_stop_running(co); /* closing runs the __close of its variables */
        status = lua_resetthread(co);
        th_stop_running(before);
        lua_xmove(co, L, 1);
    }
    if (status != LUA_ERRMEM && lua_type(L, -1) == LUA_TSTRING) {
        luaL_where(L, 1);
        lua_insert(L, -2);
        lua_concat(L, 2);
    }
    return lua_error(L);
}

static int wrap_call(lua_State *L) {
    luaL_checktype(L, 1, LUA_TFUNCTION);
    lua_State *co = lua_newthread(L);
    lua_pushvalue(L, 1);
    lua_xmove(L, co, 1);
    lua_pushcclosure(L, wrapped_call, 1);
    return 1;
}

/* The upvalue is the standard coroutine.close. */
static int close_call(lua_State *L) {
    lua_State *co = checked_thread(L);
    lua_pushvalue(L, lua_upvalueindex(1));
    lua_insert(L, 1);
    lua_State *before = th_stop_running(co);
    int status = lua_pcall(L, lua_gettop(L) - 1, LUA_MULTRET, 0);
    th_stop_running(before);
    if (status == LUA_OK && th_ending())
        return luaL_error(L, "the run is ending");
    return status == LUA_OK ? lua_gettop(L) : lua_error(L);
}

/* A recipe's message handler, the upvalue. It runs inside the hook, where no other hook runs, when it is the
 * hook that raised: an endless one could not be stopped, and is not asked. */
static int guarded_handler(lua_State *L) {
    if (th_stopping())
        return 1;
    lua_pushvalue(L, lua_upvalueindex(1));
    lua_insert(L, 1);
    lua_call(L, lua_gettop(L) - 1, 1);
    return 1;
}

/* Results after the `kept` lowest values of the stack, or false and the error. */
static int finish_call(lua_State *L, int status, lua_KContext kept) {
    if (status != LUA_OK && status != LUA_YIELD) {
        if (th_ending())
            return lua_error(L);
        lua_pushboolean(L, 0);
        lua_pushvalue(L, -2);
        return 2;
    }
    return lua_gettop(L) - (int)kept;
}

/* pcall(f, ...): stack becomes true, f, arguments. */
static int pcall_call(lua_State *L) {
    luaL_checkany(L, 1);
    lua_pushboolean(L, 1);
    lua_insert(L, 1);
    int status = lua_pcallk(L, lua_gettop(L) - 2, LUA_MULTRET, 0, 0, finish_call);
    return finish_call(L, status, 0);
}

/* xpcall(f, handler, ...): stack becomes f, handler, true, f, arguments. */
static int xpcall_call(lua_State *L) {
    int n = lua_gettop(L);
    luaL_checktype(L, 2, LUA_TFUNCTION);
    lua_pushvalue(L, 2);
    lua_pushcclosure(L, guarded_handler, 1);
    lua_replace(L, 2);
    lua_pushboolean(L, 1);
    lua_pushvalue(L, 1);
    lua_rotate(L, 3, 2);
    int status = lua_pcallk(L, n - 2, LUA_MULTRET, 2, 2, finish_call);
    return finish_call(L, status, 2);
}

void th_coroutines_open(lua_State *L) {
    lua_getglobal(L, LUA_COLIBNAME);
    lua_pushcfunction(L, resume_call);
    lua_setfield(L, -2, "resume");
    lua_pushcfunction(L, wrap_call);
    lua_setfield(L, -2, "wrap");
    lua_getfield(L, -1, "close");
    lua_pushcclosure(L, close_call, 1);
    lua_setfield(L, -2, "close");
    lua_pop(L, 1);
    lua_pushcfunction(L, pcall_call);
    lua_setglobal(L, "pcall");
    lua_pushcfunction(L, xpcall_call);
    lua_setglobal(L, "xpcall");
}
