/* Tables of options: nothing in them is passed over. */
#include <string.h>

#include "bind/bind.h"

int tl_option_fail(lua_State *L, const tl_options *options, const char *name, const char *format, ...) {
    va_list list;
    va_start(list, format);
    lua_pushvfstring(L, format, list);
    va_end(list);
    return tl_fail(L, "option \"%s\" of %s%s", name, options->of, lua_tostring(L, -1));
}

static void refuse_unknown(lua_State *L, const tl_options *options, size_t n, const char *const *names) {
    lua_pushnil(L);
    while (lua_next(L, options->index) != 0) {
        lua_pop(L, 1);
        if (lua_type(L, -1) != LUA_TSTRING)
            tl_fail(L, "options of %s have names, as in { name = value }, not %s keys", options->of,
                    luaL_typename(L, -1));
        const char *key = lua_tostring(L, -1);
        size_t i = 0;
        while (i < n && strcmp(key, names[i]) != 0)
            i++;
        if (i == n) {
            tl_push_hint(L, key, n, names);
            tl_fail(L, "unknown option \"%s\" of %s: %s", key, options->of, lua_tostring(L, -1));
        }
    }
}

tl_options tl_options_at(lua_State *L, int index, const char *of, size_t n, const char *const *names) {
    tl_options options = {.index = 0, .of = of};
    if (lua_isnoneornil(L, index))
        return options;
    if (lua_type(L, index) != LUA_TTABLE)
        tl_fail(L, "options of %s are a table, as in { name = value }, not a %s", of,
                luaL_typename(L, index));
    options.index = lua_absindex(L, index);
    luaL_checkstack(L, 8, NULL);
    refuse_unknown(L, &options, n, names);
    return options;
}

int tl_option(lua_State *L, const tl_options *options, const char *name) {
    if (options->index == 0) {
        lua_pushnil(L);
        return LUA_TNIL;
    }
    lua_pushstring(L, name);
    return lua_rawget(L, options->index);
}

const char *tl_option_text(lua_State *L, const tl_options *options, const char *name, const char *missing) {
    size_t length;
    int type = tl_option(L, options, name);
    if (type == LUA_TNIL) {
        lua_pop(L, 1);
        return missing;
    }
    if (type != LUA_TSTRING)
        tl_option_fail(L, options, name, " is a text, not a %s", lua_typename(L, type));
    const char *text = lua_tolstring(L, -1, &length);
    if (strlen(text) != length)
        tl_option_fail(L, options, name, " has a NUL byte in it");
    lua_pop(L, 1); /* the table keeps it */
    return text;
}

bool tl_option_boolean(lua_State *L, const tl_options *options, const char *name, bool missing) {
    int type = tl_option(L, options, name);
    bool value = lua_toboolean(L, -1) != 0;
    if (type != LUA_TNIL && type != LUA_TBOOLEAN)
        tl_option_fail(L, options, name, " is true or false, not a %s", lua_typename(L, type));
    lua_pop(L, 1);
    return type == LUA_TNIL ? missing : value;
}

lua_Integer tl_option_integer(lua_State *L, const tl_options *options, const char *name, lua_Integer least,
                              lua_Integer most, lua_Integer missing) {
    int type = tl_option(L, options, name), whole = 0;
    if (type == LUA_TNIL) {
        lua_pop(L, 1);
        return missing;
    }
    lua_Integer value = type == LUA_TNUMBER ? lua_tointegerx(L, -1, &whole) : 0;
    if (!whole)
        tl_option_fail(L, options, name, " is a whole number, not %s", luaL_tolstring(L, -1, NULL));
    if (value < least || value > most)
        tl_option_fail(L, options, name, " is %I: give %I to %I", (LUAI_UACINT)value, (LUAI_UACINT)least,
                       (LUAI_UACINT)most);
    lua_pop(L, 1);
    return value;
}

int tl_option_choice(lua_State *L, const tl_options *options, const char *name, size_t n,
                     const char *const *names, int missing) {
    const char *text = tl_option_text(L, options, name, NULL);
    if (text == NULL)
        return missing;
    for (size_t i = 0; i < n; i++)
        if (strcmp(text, names[i]) == 0)
            return (int)i;
    tl_push_hint(L, text, n, names);
    return tl_option_fail(L, options, name, " has no choice \"%s\": %s", text, lua_tostring(L, -1));
}
