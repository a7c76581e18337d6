/* The functions that the Lua half of the command works with. */
#define _XOPEN_SOURCE 700 /* realpath */

#include "host/host.h"

#include <errno.h>
#include <limits.h>
#include <stdlib.h>
#include <string.h>
#include <sys/stat.h>
#include <unistd.h>

#include "bind/bind.h"

#ifndef PATH_MAX
#define PATH_MAX 4096
#endif

/* Chunks of the Lua half are named "@thole/FILE.lua"; people are shown lines of their own files. */
#define OWN_CHUNKS "@thole/"

static const char *const WHERE = "thole.where", *const TRACE = "thole.trace", *const ENDING = "thole.ending";

/* ---- running the recipe ----------------------------------------------------------------------- */

/* Message handler: note the recipe's line that runs, and a traceback; the error stays what it is. The
 * upvalue tells whether a traceback is wanted. */
static int note_place(lua_State *L) {
    lua_Debug frame;
    for (int level = 1; lua_getstack(L, level, &frame); level++) {
        lua_getinfo(L, "Sl", &frame);
        if (frame.currentline > 0 && frame.source[0] == '@' &&
            strncmp(frame.source, OWN_CHUNKS, sizeof OWN_CHUNKS - 1) != 0) {
            lua_pushfstring(L, "%s:%d", frame.short_src, frame.currentline);
            lua_setfield(L, LUA_REGISTRYINDEX, WHERE);
            break;
        }
    }
    if (lua_toboolean(L, lua_upvalueindex(1))) {
        luaL_traceback(L, L, NULL, 1);
        lua_setfield(L, LUA_REGISTRYINDEX, TRACE);
    }
    return 1;
}

static int text_of(lua_State *L) {
    luaL_tolstring(L, 1, NULL);
    return 1;
}

/* Push the text of the error on the top: tables may have a __tostring, which may fail itself. */
static void push_error_text(lua_State *L) {
    int type = lua_type(L, -1);
    if (type == LUA_TNIL) {
        lua_pushliteral(L, "an error without a message (nil)");
    } else if (type == LUA_TSTRING || luaL_getmetafield(L, -1, "__tostring") == LUA_TNIL) {
        if (type == LUA_TSTRING || type == LUA_TNUMBER || type == LUA_TBOOLEAN)
            luaL_tolstring(L, -1, NULL);
        else
            lua_pushfstring(L, "an error that is a %s, not a text", luaL_typename(L, -1));
    } else {
        lua_pop(L, 1);
        lua_pushcfunction(L, text_of);
        lua_pushvalue(L, -2);
        if (lua_pcall(L, 1, 1, 0) != LUA_OK) {
            lua_pop(L, 1);
            lua_pushfstring(L, "an error that is a %s, whose __tostring fails",
                            type == LUA_TTABLE ? "table" : "userdata");
        }
    }
}

static void drop_field(lua_State *L, const char *name) {
    lua_pushnil(L);
    lua_setfield(L, LUA_REGISTRYINDEX, name);
}

/* call(f, trace) -> true, or false, text, place or nil, traceback or nil. */
static int call(lua_State *L) {
    luaL_checktype(L, 1, LUA_TFUNCTION);
    lua_settop(L, 2);
    drop_field(L, WHERE);
    drop_field(L, TRACE);
    lua_pushcclosure(L, note_place, 1);
    lua_insert(L, 1);
    int status = lua_pcall(L, 0, 0, 1);
    if (status == LUA_OK) {
        th_stop_disarm(L);
        lua_pushboolean(L, 1);
        return 1;
    }
    lua_pushboolean(L, 0);
    lua_insert(L, -2);
    push_error_text(L); /* still stoppable: __tostring is the recipe's */
    th_stop_disarm(L);
    lua_remove(L, -2);
    lua_getfield(L, LUA_REGISTRYINDEX, WHERE);
    lua_getfield(L, LUA_REGISTRYINDEX, TRACE);
    return 4;
}

/* finish(code, text or nil): end the recipe from inside. */
static int finish(lua_State *L) {
    luaL_checkinteger(L, 1);
    lua_settop(L, 2);
    lua_createtable(L, 2, 0);
    lua_insert(L, 1);
    lua_seti(L, 1, 2);
    lua_seti(L, 1, 1);
    lua_setfield(L, LUA_REGISTRYINDEX, ENDING);
    return th_stop_end(L);
}

int th_calls_ending(lua_State *L) {
    if (lua_getfield(L, LUA_REGISTRYINDEX, ENDING) == LUA_TNIL) {
        lua_pop(L, 1);
        return -1;
    }
    lua_geti(L, -1, 1);
    lua_Integer code = lua_tointeger(L, -1);
    lua_pop(L, 1);
    lua_geti(L, -1, 2);
    lua_remove(L, -2);
    return (int)(code & 0xff);
}

/* ending() -> nil, or code and text. */
static int ending(lua_State *L) {
    int code = th_calls_ending(L);
    if (code < 0)
        return 0;
    lua_pushinteger(L, code);
    lua_insert(L, -2);
    return 2;
}

/* load(path [, environment]) -> function, or nil and what is wrong. Text only. An environment of nil is one:
 * only its absence means the globals. */
static int load(lua_State *L) {
    const char *path = luaL_checkstring(L, 1);
    bool has_environment = lua_gettop(L) >= 2;
    lua_settop(L, 2);
    if (luaL_loadfilex(L, path, "t") != LUA_OK) {
        lua_pushnil(L);
        lua_insert(L, -2);
        return 2;
    }
    if (has_environment) {
        lua_pushvalue(L, 2);
        lua_setupvalue(L, -2, 1);
    }
    return 1;
}

/* ---- files ------------------------------------------------------------------------------------- */

static int failed(lua_State *L, int number) {
    lua_pushnil(L);
    lua_pushstring(L, strerror(number));
    return 2;
}

/* A path for the system: NUL bytes would cut it. */
static const char *checked_path(lua_State *L) {
    size_t length;
    const char *path = luaL_checklstring(L, 1, &length);
    luaL_argcheck(L, strlen(path) == length, 1, "a path has no NUL bytes");
    return path;
}

/* real(path) -> absolute path without links and dots, or nil and why. */
static int real(lua_State *L) {
    char resolved[PATH_MAX];
    if (realpath(checked_path(L), resolved) == NULL)
        return failed(L, errno);
    lua_pushstring(L, resolved);
    return 1;
}

/* kind(path, "link" or nil) -> "file", "folder", "other"; with "link" also "link"; or nil and why. */
static int kind(lua_State *L) {
    struct stat status;
    const char *path = checked_path(L);
    if ((lua_isnoneornil(L, 2) ? stat(path, &status) : lstat(path, &status)) != 0)
        return failed(L, errno);
    lua_pushstring(L, S_ISREG(status.st_mode)   ? "file"
                      : S_ISDIR(status.st_mode) ? "folder"
                      : S_ISLNK(status.st_mode) ? "link"
                                                : "other");
    return 1;
}

/* make_folder(path) -> true, or nil and why. */
static int make_folder(lua_State *L) {
    if (mkdir(checked_path(L), 0777) != 0)
        return failed(L, errno);
    lua_pushboolean(L, 1);
    return 1;
}

/* ---- settings ---------------------------------------------------------------------------------- */

/* gate(f): every path that the bindings open passes f(path, "read" or "write"). */
static int gate(lua_State *L) {
    luaL_checktype(L, 1, LUA_TFUNCTION);
    lua_settop(L, 1);
    lua_setfield(L, LUA_REGISTRYINDEX, "thole.gate");
    return 0;
}

/* threads(n): worker threads, 1 to 256. */
static int threads(lua_State *L) {
    tl_context(L)->threads = (int)luaL_checkinteger(L, 1);
    return 0;
}

/* processors() -> how many this machine has, 1 to 256. */
static int processors(lua_State *L) {
    long n = sysconf(_SC_NPROCESSORS_ONLN);
    lua_pushinteger(L, n < 1 ? 1 : n > 256 ? 256 : n);
    return 1;
}

static int show_progress(lua_State *L) {
    (void)L;
    th_progress_on();
    return 0;
}

/* say(text): a line on standard error. */
static int say(lua_State *L) {
    size_t length;
    const char *text = luaL_checklstring(L, 1, &length);
    th_say(text, length);
    return 0;
}

/* stopped() -> true once a signal asked to stop. */
static int stopped(lua_State *L) {
    lua_pushboolean(L, th_stop_signal() != 0);
    return 1;
}

void th_calls_push(lua_State *L) {
    static const luaL_Reg functions[] = {
        {"call", call},
        {"ending", ending},
        {"finish", finish},
        {"gate", gate},
        {"kind", kind},
        {"load", load},
        {"make_folder", make_folder},
        {"processors", processors},
        {"real", real},
        {"say", say},
        {"show_progress", show_progress},
        {"stopped", stopped},
        {"threads", threads},
        {NULL, NULL},
    };
    luaL_newlib(L, functions);
}
