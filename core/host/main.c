/* The `thole` command: one Lua state, one protected call, one exit code. */
#include "host/host.h"

#include <errno.h>
#include <signal.h>
#include <stdio.h>
#include <string.h>

#include "bind/bind.h"

static void open_thole(lua_State *L) {
    luaL_requiref(L, "thole", luaopen_thole, 0);
    lua_pop(L, 1);
    thole_context *context = tl_context(L);
    context->tick = th_progress_tick;
    context->tick_user = NULL;
    context->cancel = th_stop_flag();
}

/* (argc, argv) -> exit code. Everything that can raise is here. */
static int protected_main(lua_State *L) {
    int argc = (int)lua_tointeger(L, 1);
    char **argv = lua_touserdata(L, 2);
    luaL_checkversion(L);
    luaL_openlibs(L);
    th_terminal_open(L);
    th_coroutines_open(L);
    open_thole(L);
    lua_getglobal(L, "require");
    lua_pushliteral(L, "thole.command");
    lua_call(L, 1, 1);
    th_calls_push(L);
    lua_createtable(L, argc, 0);
    for (int i = 1; i < argc; i++) {
        lua_pushstring(L, argv[i]);
        lua_seti(L, -2, i);
    }
    lua_call(L, 2, 1);
    return 1;
}

static int say_failed(lua_State *L, int status) {
    const char *text = lua_tostring(L, -1);
    if (status == LUA_ERRMEM || text == NULL)
        text = "not enough memory";
    if (th_stop_signal() == 0) {
        th_progress_clear();
        fprintf(stderr, "thole: %s\n", text);
    }
    return TH_FAILED;
}

int main(int argc, char **argv) {
    lua_State *L = luaL_newstate();
    if (L == NULL) {
        fputs("thole: not enough memory\n", stderr);
        return TH_FAILED;
    }
    th_stop_install(L);
    lua_pushcfunction(L, protected_main);
    lua_pushinteger(L, argc);
    lua_pushlightuserdata(L, argv);
    int status = lua_pcall(L, 2, 1, 0);
    int code = status == LUA_OK ? (int)lua_tointeger(L, -1) : say_failed(L, status);
    th_progress_clear();
    th_stop_forget();
    lua_close(L); /* throws away what is written in part */
    if ((fflush(stdout) != 0 || ferror(stdout)) && code == TH_DONE) {
        fprintf(stderr, "thole: cannot write to standard output: %s\n", strerror(errno));
        code = TH_FAILED;
    }
    if (th_stop_signal() != 0) {
        fputs(th_stop_signal() == SIGINT ? "thole: interrupted\n" : "thole: ended by a signal\n", stderr);
        code = TH_SIGNAL + th_stop_signal();
    }
    return code;
}
