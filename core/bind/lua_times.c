/* Times and durations between ticks and what recipes write. All ways are exact. */
#include <math.h>
#include <stdio.h>
#include <string.h>

#include "bind/bind.h"

/* Digits that always tell doubles apart. */
enum { MOST_DIGITS = 17 };

/* The decimal text of a finite number, with a point whatever the locale. */
static int write_number(double x, int digits, char out[static 40]) {
    int n = snprintf(out, 40, "%.*g", digits, x);
    for (int i = 0; i < n; i++)
        if (strchr("+-0123456789e", out[i]) == NULL)
            out[i] = '.';
    return n;
}

/* Whether a text reads as x; takes one place on the stack. */
static bool reads_as(lua_State *L, const char *text, double x) {
    bool same = lua_stringtonumber(L, text) != 0 && lua_tonumber(L, -1) == x;
    lua_pop(L, 1);
    return same;
}

/* A float stands for the shortest decimal that reads back as it. Sums like 0.1 + 0.2 are a hair beside the
 * number that is meant: where the shortest decimal is finer than a tick, what print shows (14 digits) is
 * taken. */
static thole_parse float_to_ticks(lua_State *L, double x, int64_t *ticks) {
    char text[40];
    int n = 0;
    for (int digits = 1; digits <= MOST_DIGITS; digits = digits == 1 ? 6 : digits < 14 ? 14 : digits + 1) {
        n = write_number(x, digits, text);
        if (reads_as(L, text, x))
            break;
    }
    thole_parse how = thole_parse_decimal(text, (size_t)n, ticks);
    if (how == THOLE_PARSE_DIGITS) {
        n = write_number(x, 14, text);
        how = thole_parse_decimal(text, (size_t)n, ticks);
    }
    return how;
}

static bool number_failed(lua_State *L, int index, thole_parse how, const char *what) {
    lua_pushvalue(L, index);
    const char *text = lua_tostring(L, -1);
    lua_pushfstring(L,
                    how == THOLE_PARSE_DIGITS ? "%s %s is finer than 10^-9 of the unit: round it"
                                              : "%s %s is out of range",
                    what, text);
    lua_remove(L, -2);
    return false;
}

static bool number_to_ticks(lua_State *L, int index, int64_t *ticks, const char *what) {
    thole_parse how = THOLE_PARSE_RANGE;
    if (lua_isinteger(L, index)) {
        lua_Integer whole = lua_tointeger(L, index);
        if (whole >= INT64_MIN / THOLE_TICKS_A_UNIT && whole <= INT64_MAX / THOLE_TICKS_A_UNIT) {
            *ticks = whole * THOLE_TICKS_A_UNIT;
            return true;
        }
    } else if (isfinite(lua_tonumber(L, index))) {
        how = float_to_ticks(L, lua_tonumber(L, index), ticks);
    }
    return how == THOLE_PARSED || number_failed(L, index, how, what);
}

bool tl_number_to_ticks(lua_State *L, int index, int64_t *ticks) {
    return number_to_ticks(L, lua_absindex(L, index), ticks, "number");
}

static bool text_failed(lua_State *L, const char *text, thole_parse how, const char *what, const char *cure) {
    if (how == THOLE_PARSE_DIGITS)
        lua_pushfstring(L, "%s \"%s\" is finer than 10^-9 of the unit: round it", what, text);
    else if (how == THOLE_PARSE_RANGE)
        lua_pushfstring(L, "%s \"%s\" is out of range", what, text);
    else
        lua_pushfstring(L, "\"%s\" is not a %s: %s", text, what, cure);
    return false;
}

bool tl_to_time(lua_State *L, int index, const thole_clock *clock, int64_t *ticks) {
    index = lua_absindex(L, index);
    int type = lua_type(L, index);
    if (type == LUA_TNUMBER)
        return number_to_ticks(L, index, ticks, "time");
    if (type != LUA_TSTRING) {
        lua_pushfstring(L, "a time is a text or a number, not a %s", lua_typename(L, type));
        return false;
    }
    size_t length;
    const char *text = lua_tolstring(L, index, &length);
    if (clock->kind == THOLE_PLAIN) {
        thole_parse how = thole_parse_decimal(text, length, ticks);
        return how == THOLE_PARSED ||
               text_failed(L, text, how, "time",
                           "the network's times are plain numbers, write for example 12.5");
    }
    thole_parse how = thole_parse_iso8601(text, length, clock->zone, ticks, NULL);
    return how == THOLE_PARSED ||
           text_failed(
               L, text, how, "time",
               "write for example \"2031-05-04T06:20\", or seconds since 1970-01-01T00:00:00Z as a number");
}

bool tl_to_duration(lua_State *L, int index, const thole_clock *clock, int64_t *ticks) {
    index = lua_absindex(L, index);
    int type = lua_type(L, index);
    if (type == LUA_TNUMBER) {
        int64_t found;
        if (!number_to_ticks(L, index, &found, "duration"))
            return false;
        if (found < 0)
            return number_failed(L, index, THOLE_PARSE_RANGE, "duration");
        *ticks = found;
        return true;
    }
    if (type != LUA_TSTRING) {
        lua_pushfstring(L, "a duration is a text or a number, not a %s", lua_typename(L, type));
        return false;
    }
    size_t length;
    const char *text = lua_tolstring(L, index, &length);
    thole_parse how = thole_parse_duration(text, length, clock, ticks);
    if (how == THOLE_PARSED)
        return true;
    if (clock->kind == THOLE_CALENDAR || strcmp(clock->unit, "s") == 0)
        return text_failed(L, text, how, "duration", "write for example \"20 min\" or \"1 h 30 min\"");
    lua_pushfstring(L, "write a number of %s", clock->unit);
    text_failed(L, text, how, "duration", lua_tostring(L, -1));
    lua_remove(L, -2);
    return false;
}

void tl_push_amount(lua_State *L, uint64_t ticks, int quarters, bool negative) {
    const uint64_t unit = (uint64_t)THOLE_TICKS_A_UNIT;
    if (quarters == 0 && ticks % unit == 0) {
        lua_Integer whole = (lua_Integer)(ticks / unit);
        lua_pushinteger(L, negative ? -whole : whole);
        return;
    }
    if (ticks < UINT64_C(1) << 51) { /* both operands are exact, so the quotient is the nearest double */
        double value = (double)(ticks * 4 + (uint64_t)quarters) / 4e9;
        lua_pushnumber(L, negative ? -value : value);
        return;
    }
    static const char *const quarter[] = {"00", "25", "50", "75"};
    char text[48];
    snprintf(text, sizeof text, "%s%llu.%09llu%s", negative ? "-" : "", (unsigned long long)(ticks / unit),
             (unsigned long long)(ticks % unit), quarter[quarters]);
    lua_stringtonumber(L, text);
}

void tl_push_time(lua_State *L, const thole_clock *clock, int64_t ticks, int quarters) {
    if (clock->kind == THOLE_CALENDAR) {
        char text[THOLE_TIME_SIZE];
        size_t length = thole_format_time(clock, ticks, quarters, text);
        lua_pushlstring(L, text, length);
    } else if (ticks >= 0) {
        tl_push_amount(L, (uint64_t)ticks, quarters, false);
    } else {
        /* -ticks - quarters / 4, as whole ticks and quarters again */
        uint64_t whole = 0 - (uint64_t)ticks;
        tl_push_amount(L, quarters == 0 ? whole : whole - 1, (4 - quarters) % 4, true);
    }
}

/* ---- for the Lua half: whole ticks in, whole ticks out ------------------------------------------- */

static int either(lua_State *L, bool fine, int64_t ticks) {
    if (fine) {
        lua_pushinteger(L, ticks);
        return 1;
    }
    lua_pushnil(L);
    lua_insert(L, -2);
    return 2;
}

/* ticks(net, time) -> ticks, or nil and why. */
static int ticks_of_time(lua_State *L) {
    int64_t ticks = 0;
    const thole_clock *clock = thole_network_clock(tl_check_network(L, 1, "a window rule"));
    lua_settop(L, 2);
    bool fine = tl_to_time(L, 2, clock, &ticks);
    return either(L, fine, ticks);
}

/* duration_ticks(net, duration) -> ticks, or nil and why. */
static int ticks_of_duration(lua_State *L) {
    int64_t ticks = 0;
    const thole_clock *clock = thole_network_clock(tl_check_network(L, 1, "a window rule"));
    lua_settop(L, 2);
    bool fine = tl_to_duration(L, 2, clock, &ticks);
    return either(L, fine, ticks);
}

/* number_ticks(number) -> ticks, or nil and why. */
static int ticks_of_number(lua_State *L) {
    int64_t ticks = 0;
    luaL_checktype(L, 1, LUA_TNUMBER);
    bool fine = tl_number_to_ticks(L, 1, &ticks);
    return either(L, fine, ticks);
}

void tl_open_times(lua_State *L) {
    static const luaL_Reg functions[] = {{"ticks", ticks_of_time},
                                         {"duration_ticks", ticks_of_duration},
                                         {"number_ticks", ticks_of_number},
                                         {NULL, NULL}};
    luaL_setfuncs(L, functions, 0);
}
