/* The module: the state that everything hangs off, the types, and the Lua half. */
#include <stdlib.h>
#include <string.h>

#include "bind/bind.h"
#include "bind/lua_half.h"

/* The registry's key for the state is this address. */
static const char STATE = 0;

/* Lives as long as the Lua state: it has no finaliser, so that those of other objects still find it. */
typedef struct state {
    thole_memory memory;
    thole_context context;
    lua_State *main;
    lua_Hook hook; /* what was set when the core was called */
} state;

static state *find_state(lua_State *L) {
    lua_rawgetp(L, LUA_REGISTRYINDEX, &STATE);
    state *s = lua_touserdata(L, -1);
    lua_pop(L, 1);
    return s;
}

thole_context *tl_context(lua_State *L) {
    state *s = find_state(L);
    return s == NULL ? NULL : &s->context;
}

/* Lua's own interpreter answers Ctrl-C by setting a hook, which runs once Lua code does: make that soon. */
static bool hook_was_set(void *user, const char *phase, double done) {
    (void)phase;
    (void)done;
    state *s = user;
    return lua_gethook(s->main) != s->hook;
}

size_t tl_usual_ceiling(void) {
    size_t machine = thole_machine_memory();
    return machine / 5 * 4;
}

static void make_state(lua_State *L) {
    state *s = lua_newuserdatauv(L, sizeof *s, 0);
    memset(s, 0, sizeof *s);
    s->memory.ceiling = tl_usual_ceiling();
    lua_rawgeti(L, LUA_REGISTRYINDEX, LUA_RIDX_MAINTHREAD);
    s->main = lua_tothread(L, -1);
    lua_pop(L, 1);
    s->context = (thole_context){.memory = &s->memory, .threads = 1, .tick = hook_was_set, .tick_user = s};
    lua_rawsetp(L, LUA_REGISTRYINDEX, &STATE);
}

thole_context *tl_begin(lua_State *L) {
    state *s = find_state(L);
    s->hook = lua_gethook(s->main);
    atomic_store(&s->memory.hit_ceiling, false);
    return &s->context;
}

void tl_burden(lua_State *L, size_t bytes) {
    if (lua_gc(L, LUA_GCISRUNNING) == 1)
        lua_gc(L, LUA_GCSTEP, (int)(bytes / 1024 < 1 << 30 ? bytes / 1024 + 1 : 1 << 30));
}

/* ---- paths --------------------------------------------------------------------------------------- */

const char *tl_gate(lua_State *L, int index, const char *mode, const char *of) {
    size_t length;
    index = lua_absindex(L, index);
    if (lua_type(L, index) != LUA_TSTRING)
        tl_fail(L, "the path for %s is a text, not a %s", of, luaL_typename(L, index));
    const char *path = lua_tolstring(L, index, &length);
    if (strlen(path) != length)
        tl_fail(L, "the path for %s has a NUL byte in it", of);
    if (length == 0)
        tl_fail(L, "the path for %s is empty: name a file", of);
    if (lua_getfield(L, LUA_REGISTRYINDEX, "thole.gate") == LUA_TNIL) {
        lua_pop(L, 1);
        lua_pushvalue(L, index);
        return path;
    }
    lua_pushvalue(L, index);
    lua_pushstring(L, mode);
    lua_call(L, 2, 2);
    if (lua_type(L, -2) == LUA_TSTRING) {
        lua_pop(L, 1);
        return lua_tostring(L, -1);
    }
    if (!lua_toboolean(L, -2))
        tl_fail(L, "%s",
                lua_type(L, -1) == LUA_TSTRING ? lua_tostring(L, -1) : "this path is not for recipes");
    lua_pop(L, 2);
    lua_pushvalue(L, index);
    return path;
}

/* ---- types --------------------------------------------------------------------------------------- */

/* Push methods[type], made when missing, of the native functions on the top. */
static void push_methods(lua_State *L, const char *type) {
    luaL_getsubtable(L, -1, "methods");
    luaL_getsubtable(L, -1, type);
    lua_remove(L, -2);
}

void tl_add_methods(lua_State *L, const char *type, const luaL_Reg *methods) {
    push_methods(L, type);
    luaL_setfuncs(L, methods, 0);
    lua_pop(L, 1);
}

void tl_new_type(lua_State *L, const char *name, const luaL_Reg *special, const luaL_Reg *methods,
                 lua_CFunction index) {
    lua_pushlstring(L, name + strlen("thole."), strcspn(name, "@") - strlen("thole."));
    lua_insert(L, -2);
    push_methods(L, lua_tostring(L, -2));
    lua_remove(L, -3);
    luaL_setfuncs(L, methods, 0);
    if (index != NULL)
        lua_pushcclosure(L, index, 1);
    luaL_newmetatable(L, name);
    luaL_setfuncs(L, special, 0);
    lua_insert(L, -2);
    lua_setfield(L, -2, "__index");
    lua_pop(L, 1);
}

void tl_add_fields(lua_State *L, const char *type, size_t n, const char *const *names) {
    luaL_getsubtable(L, -1, "fields");
    lua_createtable(L, (int)n, 0);
    for (size_t i = 0; i < n; i++) {
        lua_pushstring(L, names[i]);
        lua_rawseti(L, -2, (lua_Integer)i + 1);
    }
    lua_setfield(L, -2, type);
    lua_pop(L, 1);
}

void tl_new_owner(lua_State *L, const char *name, lua_CFunction collect) {
    luaL_newmetatable(L, name);
    lua_pushcfunction(L, collect);
    lua_setfield(L, -2, "__gc");
    lua_pop(L, 1);
}

bool tl_find_method(lua_State *L) {
    lua_pushvalue(L, 2);
    if (lua_rawget(L, lua_upvalueindex(1)) != LUA_TNIL)
        return true;
    lua_pop(L, 1);
    return false;
}

int tl_no_field(lua_State *L, const char *what, int table, size_t n, const char *const *more) {
    if (lua_type(L, 2) != LUA_TSTRING)
        return tl_fail(L, "%s has no field with a %s for its name", what, luaL_typename(L, 2));
    size_t known = n;
    lua_pushnil(L);
    for (; lua_next(L, table) != 0; lua_pop(L, 1))
        known++;
    const char **names = lua_newuserdatauv(L, (known + 1) * sizeof *names, 0);
    if (n > 0)
        memcpy(names, more, n * sizeof *names);
    lua_pushnil(L);
    while (lua_next(L, table) != 0) {
        lua_pop(L, 1);
        const char *name = lua_tostring(L, -1);
        size_t i = n++;
        for (; i > 0 && strcmp(names[i - 1], name) > 0;
             i--) /* the order of lua_next changes from run to run */
            names[i] = names[i - 1];
        names[i] = name;
    }
    tl_push_hint(L, lua_tostring(L, 2), known, names);
    return tl_fail(L, "%s has no field \"%s\": %s", what, lua_tostring(L, 2), lua_tostring(L, -1));
}

/* ---- native functions that belong to no type ----------------------------------------------------- */

/* threads([n]) -> worker threads in use from now on. */
static int threads(lua_State *L) {
    thole_context *context = tl_context(L);
    if (!lua_isnoneornil(L, 1)) {
        int whole = 0;
        lua_Integer n = lua_type(L, 1) == LUA_TNUMBER ? lua_tointegerx(L, 1, &whole) : 0;
        if (!whole || n < 1 || n > 256)
            return tl_fail(L, "thole.threads takes a whole number from 1 to 256, not %s",
                           luaL_tolstring(L, 1, NULL));
        context->threads = (int)n;
    }
    lua_pushinteger(L, context->threads);
    return 1;
}

/* memory() -> bytes of the core in use now, and the most that ever were. */
static int memory(lua_State *L) {
    const thole_memory *m = tl_context(L)->memory;
    lua_pushinteger(L, (lua_Integer)atomic_load(&m->used));
    lua_pushinteger(L, (lua_Integer)atomic_load(&m->peak));
    return 2;
}

/* fail(text): raise it at the recipe's line. */
static int fail(lua_State *L) { return tl_fail(L, "%s", luaL_checkstring(L, 1)); }

/* readable(path, of) -> the path to open. */
static int readable(lua_State *L) {
    tl_gate(L, 1, "read", luaL_checkstring(L, 2));
    return 1;
}

static void push_native(lua_State *L) {
    static const luaL_Reg functions[] = {
        {"fail", fail}, {"memory", memory}, {"readable", readable}, {"threads", threads}, {NULL, NULL}};
    luaL_newlib(L, functions);
    lua_pushstring(L, thole_version());
    lua_setfield(L, -2, "version");
    tl_open_block(L);
    tl_open_times(L);
    tl_open_network(L);
    tl_open_build(L);
    tl_open_contacts(L);
    tl_open_link(L);
    tl_open_keep(L);
    tl_open_windows(L);
    tl_open_barcode(L);
    tl_open_carriers(L);
    tl_open_zigzag(L);
    tl_open_output(L);
}

/* ---- the Lua half -------------------------------------------------------------------------------- */

/* Run a file of the Lua half; its number is the upvalue, its arguments are require's. */
static int load_file(lua_State *L) {
    const tl_file *file = &tl_lua_half[lua_tointeger(L, lua_upvalueindex(1))];
    lua_settop(L, 1);
    lua_pushfstring(L, "@%s", file->name);
    if (luaL_loadbufferx(L, (const char *)file->bytes, file->length, lua_tostring(L, -1), "t") != LUA_OK)
        return lua_error(L);
    lua_pushvalue(L, 1);
    lua_call(L, 1, 1);
    return 1;
}

/* Push the name that require knows a file by: "thole/report/init.lua" is thole.report. */
static void push_module_name(lua_State *L, const char *file) {
    size_t length = strlen(file) - strlen(".lua");
    if (length > 5 && strncmp(file + length - 5, "/init", 5) == 0)
        length -= 5;
    lua_pushlstring(L, file, length);
    luaL_gsub(L, lua_tostring(L, -1), "/", ".");
    lua_remove(L, -2);
}

static void preload(lua_State *L) {
    luaL_getsubtable(L, LUA_REGISTRYINDEX, LUA_PRELOAD_TABLE);
    for (size_t i = 0; i < tl_lua_half_count; i++) {
        push_module_name(L, tl_lua_half[i].name);
        lua_pushinteger(L, (lua_Integer)i);
        lua_pushcclosure(L, load_file, 1);
        if (strcmp(lua_tostring(L, -2), "thole") == 0) { /* this is it */
            lua_pushvalue(L, -1);
            lua_insert(L, 1);
        }
        lua_rawset(L, -3);
    }
    lua_pop(L, 1);
}

int luaopen_thole(lua_State *L) {
    luaL_checkversion(L);
    lua_settop(L, 0);
    if (find_state(L) == NULL)
        make_state(L);
    luaL_getsubtable(L, LUA_REGISTRYINDEX, LUA_LOADED_TABLE);
    push_native(L);
    lua_setfield(L, -2, "thole.native");
    lua_settop(L, 0);
    preload(L); /* leaves thole/init.lua at 1 */
    lua_pushliteral(L, "thole");
    lua_call(L, 1, 1);
    return 1;
}
