/* What a person sees: one progress line, text on standard output, errors and warnings. */
#include "host/host.h"

#include <errno.h>
#include <stdio.h>
#include <string.h>
#include <time.h>
#include <unistd.h>

enum { WIDEST = 78, FIRST_AFTER_MS = 1000, BETWEEN_MS = 100 };

static struct {
    bool on;
    int width; /* columns on the screen now */
    int64_t start, drawn;
} progress;

static int64_t now_ms(void) {
    struct timespec t;
    if (clock_gettime(CLOCK_MONOTONIC, &t) != 0)
        return 0;
    return (int64_t)t.tv_sec * 1000 + t.tv_nsec / 1000000;
}

void th_progress_on(void) {
    progress.on = isatty(STDERR_FILENO) == 1;
    progress.start = now_ms();
    progress.drawn = progress.start;
}

void th_progress_clear(void) {
    if (progress.width > 0) {
        fprintf(stderr, "\r%*s\r", progress.width, "");
        fflush(stderr);
        progress.width = 0;
    }
}

/* "reading week.csv 43 %"; without a share where it is not known. Columns are bytes here, which only makes a
 * line that is not ASCII shorter than it could be. */
static void draw(const char *phase, double done) {
    char line[WIDEST + 1];
    int length = 0; /* of the phase, cut at a character */
    while (length < WIDEST - 8 && phase[length] != '\0')
        length++;
    while (length > 0 && ((unsigned char)phase[length] & 0xc0) == 0x80)
        length--;
    int n = done >= 0 && done <= 1
                ? snprintf(line, sizeof line, "%.*s %d %%", length, phase, (int)(done * 100))
                : snprintf(line, sizeof line, "%.*s", length, phase);
    if (n <= 0)
        return;
    for (char *at = line; *at != '\0'; at++)
        if ((unsigned char)*at < ' ' || *at == 127)
            *at = '?';
    int blank = progress.width > n ? progress.width - n : 0;
    fprintf(stderr, "\r%s%*s", line, blank, "");
    fflush(stderr);
    progress.width = n + blank;
}

bool th_progress_tick(void *user, const char *phase, double done) {
    (void)user;
    if (th_stopping())
        return true;
    if (progress.on) {
        int64_t now = now_ms();
        if (now - progress.start >= FIRST_AFTER_MS && now - progress.drawn >= BETWEEN_MS) {
            progress.drawn = now;
            draw(phase, done);
        }
    }
    return false;
}

void th_say(const char *text, size_t length) {
    th_progress_clear();
    fflush(stdout); /* what came before stays before where both go to one place */
    fwrite(text, 1, length, stderr);
    fputc('\n', stderr);
    fflush(stderr);
}

/* As the standard print, but a write that fails is an error. */
static int print_call(lua_State *L) {
    int n = lua_gettop(L);
    th_progress_clear();
    for (int i = 1; i <= n + 1; i++) {
        size_t length = 1;
        const char *text = i <= n ? luaL_tolstring(L, i, &length) : "\n";
        if ((i > 1 && i <= n && fputc('\t', stdout) == EOF) || fwrite(text, 1, length, stdout) != length)
            return luaL_error(L, "cannot write to standard output: %s", strerror(errno));
        if (i <= n)
            lua_pop(L, 1);
    }
    return 0;
}

/* The upvalue after the progress line is off the screen. */
static int cleared_call(lua_State *L) {
    th_progress_clear();
    lua_pushvalue(L, lua_upvalueindex(1));
    lua_insert(L, 1);
    lua_call(L, lua_gettop(L) - 1, LUA_MULTRET);
    return lua_gettop(L);
}

static void clear_before(lua_State *L, const char *name) {
    lua_getfield(L, -1, name);
    lua_pushcclosure(L, cleared_call, 1);
    lua_setfield(L, -2, name);
}

/* Lua's warnings, those of failing finalisers among them. A message comes in pieces; "@on" and "@off" are for
 * switching warnings, and they stay on. */
static void warn(void *user, const char *text, int more) {
    bool *inside = user;
    if (!*inside) {
        if (!more && text[0] == '@')
            return;
        th_progress_clear();
        fputs("thole: warning: ", stderr);
    }
    fputs(text, stderr);
    if (!more)
        fputc('\n', stderr);
    *inside = more != 0;
}

void th_terminal_open(lua_State *L) {
    static bool inside_warning; /* as long-lived as the state; Lua has no place for it */
    lua_setwarnf(L, warn, &inside_warning);
    lua_pushcfunction(L, print_call);
    lua_setglobal(L, "print");
    lua_getglobal(L, LUA_IOLIBNAME);
    clear_before(L, "write");
    lua_pop(L, 1);
    luaL_getmetatable(L, LUA_FILEHANDLE);
    lua_getfield(L, -1, "__index");
    clear_before(L, "write");
    lua_pop(L, 2);
}
