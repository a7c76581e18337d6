/* thole.read_contacts: links from delimited text. */
#include <string.h>

#include "bind/bind.h"

static const char OF[] = "thole.read_contacts";

/* A column by name or by number from 1; `missing` when it is not given. */
static thole_column_ref column(lua_State *L, const tl_options *options, const char *name,
                               const char *missing) {
    thole_column_ref ref = {missing, 0};
    int type = tl_option(L, options, name);
    lua_pop(L, 1);
    if (type == LUA_TNUMBER)
        ref = (thole_column_ref){NULL, (uint32_t)tl_option_integer(L, options, name, 1, 1000000, 0)};
    else if (type == LUA_TSTRING)
        ref.name = tl_option_text(L, options, name, missing);
    else if (type != LUA_TNIL)
        tl_option_fail(L, options, name, " is the name of a column or its number, not a %s",
                       lua_typename(L, type));
    return ref;
}

static char separator(lua_State *L, const tl_options *options) {
    const char *text = tl_option_text(L, options, "separator", NULL);
    if (text == NULL)
        return 0;
    if (text[0] == '\0' || text[1] != '\0' || strchr(",;\t", text[0]) == NULL)
        tl_option_fail(L, options, "separator", " is \",\", \";\" or \"\\t\", not \"%s\"", text);
    return text[0];
}

/* Names of attributes to take, in a block that is pushed (nil when all are). */
static void take(lua_State *L, const tl_options *options, thole_contacts_options *out) {
    int type = tl_option(L, options, "columns");
    if (type == LUA_TNIL)
        return;
    if (type != LUA_TTABLE)
        tl_option_fail(L, options, "columns", " is a list of names, not a %s", lua_typename(L, type));
    int list = lua_absindex(L, -1);
    size_t n = lua_rawlen(L, list);
    const char **names = lua_newuserdatauv(L, (n + 1) * sizeof *names, 0);
    for (size_t i = 0; i < n; i++) {
        size_t length;
        if (lua_rawgeti(L, list, (lua_Integer)i + 1) != LUA_TSTRING)
            tl_option_fail(L, options, "columns", " has a %s in it: give names", luaL_typename(L, -1));
        names[i] = lua_tolstring(L, -1, &length);
        if (strlen(names[i]) != length)
            tl_option_fail(L, options, "columns", " has a name with a NUL byte in it");
        lua_pop(L, 1);
    }
    out->take = names;
    out->take_count = n;
}

static int64_t linger(lua_State *L, const tl_options *options, const char *unit) {
    thole_clock clock = {.kind = THOLE_PLAIN};
    int64_t ticks = 0;
    size_t length = strlen(unit);
    memcpy(clock.unit, unit, length < sizeof clock.unit ? length : sizeof clock.unit - 1);
    if (tl_option(L, options, "linger") != LUA_TNIL && !tl_to_duration(L, -1, &clock, &ticks))
        tl_option_fail(L, options, "linger", ": %s", lua_tostring(L, -1));
    return ticks;
}

/* The columns of links; without a header there are no names to go by. */
static void columns(lua_State *L, const tl_options *options, thole_contacts_options *out) {
    out->headless = !tl_option_boolean(L, options, "header", true);
    out->from = column(L, options, "from", out->headless ? NULL : "from");
    out->to = column(L, options, "to", out->headless ? NULL : "to");
    out->start = column(L, options, "start", out->headless ? NULL : "start");
    out->duration = column(L, options, "duration", NULL);
    out->finish = column(L, options, "finish", NULL);
    bool has_end = out->duration.name != NULL || out->duration.number != 0 || out->finish.name != NULL ||
                   out->finish.number != 0;
    if (!has_end && !out->headless) {
        out->finish.name = "finish";
        out->finish_may_miss = true;
    }
}

static int read_contacts(lua_State *L) {
    static const char *const names[] = {"columns", "duration", "faulty",    "finish", "from",
                                        "header",  "linger",   "separator", "start",  "time",
                                        "to",      "unit",     "zone"};
    static const char *const forms[] = {"iso", "epoch", "plain"}; /* in the order of thole_time_form */
    static const char *const faults[] = {"stop", "skip"};
    lua_settop(L, 2);
    tl_options options = tl_options_at(L, 2, OF, sizeof names / sizeof *names, names);
    thole_contacts_options read = {.separator = separator(L, &options)};
    columns(L, &options, &read);
    read.form = (thole_time_form)(1 + tl_option_choice(L, &options, "time", 3, forms, -1));
    read.skip_faulty = tl_option_choice(L, &options, "faulty", 2, faults, 0) == 1;
    read.zone = tl_option_text(L, &options, "zone", NULL);
    read.unit = tl_option_text(L, &options, "unit", NULL);
    read.linger = linger(L, &options, read.unit != NULL ? read.unit : "s");
    take(L, &options, &read);
    const char *path = tl_gate(L, 1, "read", OF);
    thole_network **out = tl_push_network(L);
    thole_error error;
    if (thole_read_contacts(tl_begin(L), path, &read, out, &error) != THOLE_OK)
        return tl_raise(L, &error, NULL);
    tl_network_made(L, thole_network_bytes(*out, NULL));
    return 1;
}

void tl_open_contacts(lua_State *L) {
    lua_pushcfunction(L, read_contacts);
    lua_setfield(L, -2, "read_contacts");
}
