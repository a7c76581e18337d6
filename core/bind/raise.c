/* Errors: where the recipe was, what was wrong, and the nearest name. */
#include <stdio.h>
#include <string.h>

#include "base/nearest.h"
#include "bind/bind.h"

/* Chunks of the Lua half are named "@thole/FILE.lua". */
static bool is_own(const char *source) { return strncmp(source, "@thole/", 7) == 0; }

void tl_where(lua_State *L) {
    lua_Debug frame;
    for (int level = 1; lua_getstack(L, level, &frame); level++) {
        lua_getinfo(L, "Sl", &frame);
        if (frame.currentline > 0 && !is_own(frame.source)) {
            lua_pushfstring(L, "%s:%d: ", frame.short_src, frame.currentline);
            return;
        }
    }
    lua_pushliteral(L, "");
}

int tl_fail(lua_State *L, const char *format, ...) {
    va_list list;
    va_start(list, format);
    tl_where(L);
    lua_pushvfstring(L, format, list);
    va_end(list);
    lua_concat(L, 2);
    return lua_error(L);
}

int tl_raise(lua_State *L, const thole_error *error, const char *before) {
    return tl_fail(L, "%s%s", before != NULL ? before : "", error->text);
}

static const char *word_at(const void *words, size_t i) { return ((const char *const *)words)[i]; }

void tl_push_hint(lua_State *L, const char *wanted, size_t n, const char *const *names) {
    size_t at = tb_nearest(wanted, n, word_at, names);
    if (at < n) {
        lua_pushfstring(L, "did you mean \"%s\"?", names[at]);
        return;
    }
    luaL_Buffer text;
    luaL_buffinit(L, &text);
    for (size_t i = 0; i < n; i++) {
        luaL_addstring(&text, i == 0 ? "known are " : ", ");
        luaL_addstring(&text, names[i]);
    }
    luaL_pushresult(&text);
}
