/* Files that appear whole or not at all: written beside their name, renamed into place by commit. */
#define _XOPEN_SOURCE 700 /* realpath */

#include <errno.h>
#include <fcntl.h>
#include <limits.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <sys/stat.h>
#include <unistd.h>

#include "bind/bind.h"

#ifndef PATH_MAX
#define PATH_MAX 4096
#endif

enum { BUFFER = 65536, MOST_NAME = 200, TRIES = 100 };

/* fd is -1 once committed or thrown away. `part` is empty when the target is written directly (a device, a
 * pipe). */
typedef struct output {
    int fd;
    bool keeps_mode;
    mode_t mode;
    size_t n;
    char shown[PATH_MAX]; /* the path as the recipe gave it */
    char target[PATH_MAX], part[PATH_MAX + 32];
    char buffer[BUFFER];
} output;

static void throw_away(output *out) {
    if (out->fd < 0)
        return;
    close(out->fd);
    out->fd = -1;
    if (out->part[0] != '\0')
        unlink(out->part);
}

/* Raise 'cannot write "x": no space left on device', the partial file being gone. */
static int cannot(lua_State *L, output *out, int number) {
    throw_away(out);
    char why[256];
    snprintf(why, sizeof why, "%s", strerror(number));
    if (why[0] >= 'A' && why[0] <= 'Z')
        why[0] = (char)(why[0] - 'A' + 'a');
    return tl_fail(L, "cannot write \"%s\": %s", out->shown, why);
}

/* ---- opening ------------------------------------------------------------------------------------- */

/* What stands at the target now; 0, or why it cannot be written to. A link is followed to what it names. */
static int look_at_target(output *out, bool *direct) {
    struct stat now;
    *direct = false;
    if (lstat(out->target, &now) != 0)
        return errno == ENOENT ? 0 : errno;
    if (S_ISLNK(now.st_mode)) {
        char real[PATH_MAX];
        if (realpath(out->target, real) == NULL || stat(real, &now) != 0)
            return errno;
        memcpy(out->target, real, strlen(real) + 1);
    }
    if (S_ISDIR(now.st_mode))
        return EISDIR;
    if (access(out->target, W_OK) != 0)
        return errno;
    *direct = !S_ISREG(now.st_mode);
    out->keeps_mode = S_ISREG(now.st_mode);
    out->mode = now.st_mode & 07777;
    return 0;
}

/* A name of its own beside the target. */
static int open_part(output *out) {
    const char *slash = strrchr(out->target, '/'), *name = slash == NULL ? out->target : slash + 1;
    int folder = (int)(name - out->target), tries = 0;
    unsigned number = (unsigned)getpid();
    do {
        snprintf(out->part, sizeof out->part, "%.*s.%.*s.part-%04x", folder, out->target, MOST_NAME, name,
                 (number * 7919u + (unsigned)tries * 31u) & 0xffffu);
        out->fd = open(out->part, O_WRONLY | O_CREAT | O_EXCL | O_CLOEXEC, 0666);
    } while (out->fd < 0 && errno == EEXIST && ++tries < TRIES);
    return out->fd < 0 ? errno : 0;
}

/* create(path) -> output */
static int create(lua_State *L) {
    const char *shown = luaL_checkstring(L, 1), *path = tl_gate(L, 1, "write", "thole.write");
    output *out = lua_newuserdatauv(L, sizeof *out, 0);
    out->fd = -1;
    out->keeps_mode = false;
    out->n = 0;
    out->part[0] = '\0';
    snprintf(out->shown, sizeof out->shown, "%s", shown);
    luaL_setmetatable(L, TL_OUTPUT);
    if (strlen(path) >= sizeof out->target)
        return cannot(L, out, ENAMETOOLONG);
    memcpy(out->target, path, strlen(path) + 1);
    bool direct;
    int wrong = look_at_target(out, &direct);
    if (wrong == 0 && direct) {
        out->fd = open(out->target, O_WRONLY | O_CLOEXEC);
        wrong = out->fd < 0 ? errno : 0;
    } else if (wrong == 0) {
        wrong = open_part(out);
    }
    return wrong == 0 ? 1 : cannot(L, out, wrong);
}

/* ---- writing ------------------------------------------------------------------------------------- */

static int put(int fd, const char *bytes, size_t n) {
    while (n > 0) {
        ssize_t done = write(fd, bytes, n);
        if (done < 0 && errno == EINTR)
            continue;
        if (done < 0)
            return errno;
        bytes += done;
        n -= (size_t)done;
    }
    return 0;
}

static int flush(output *out) {
    int wrong = put(out->fd, out->buffer, out->n);
    out->n = 0;
    return wrong;
}

static int add(output *out, const char *bytes, size_t n) {
    int wrong = 0;
    if (n > BUFFER - out->n)
        wrong = flush(out);
    if (wrong == 0 && n > BUFFER)
        return put(out->fd, bytes, n);
    if (wrong == 0) {
        memcpy(out->buffer + out->n, bytes, n);
        out->n += n;
    }
    return wrong;
}

static output *check_output(lua_State *L, const char *of) {
    output *out = luaL_testudata(L, 1, TL_OUTPUT);
    if (out == NULL) {
        tl_fail(L, "%s takes an output, not a %s: call it as out:write(…), with a colon", of,
                luaL_typename(L, 1));
        return NULL;
    }
    if (out->fd < 0)
        tl_fail(L, "this output is closed: %s comes too late", of);
    return out;
}

/* out:write(text or number, …) -> out */
static int write_texts(lua_State *L) {
    output *out = check_output(L, "out:write");
    int n = lua_gettop(L);
    for (int i = 2; i <= n; i++) {
        size_t length;
        if (!lua_isstring(L, i))
            return tl_fail(L, "out:write takes texts and numbers, not a %s", luaL_typename(L, i));
        const char *bytes = lua_tolstring(L, i, &length);
        int wrong = add(out, bytes, length);
        if (wrong != 0)
            return cannot(L, out, wrong);
    }
    lua_settop(L, 1);
    return 1;
}

/* ---- the end ------------------------------------------------------------------------------------- */

/* The rename itself must outlive a power cut; file systems that cannot say so are taken at their word. */
static void sync_folder(const output *out) {
    char folder[PATH_MAX];
    const char *slash = strrchr(out->target, '/');
    size_t length = slash == NULL ? 0 : slash == out->target ? 1 : (size_t)(slash - out->target);
    memcpy(folder, out->target, length);
    folder[length] = '\0';
    int fd = open(length == 0 ? "." : folder, O_RDONLY | O_DIRECTORY | O_CLOEXEC);
    if (fd >= 0) {
        (void)fsync(fd);
        close(fd);
    }
}

static int commit_part(output *out) {
    if (out->keeps_mode && fchmod(out->fd, out->mode) != 0)
        return errno;
    if (fsync(out->fd) != 0)
        return errno;
    int fd = out->fd;
    out->fd = -1;
    int wrong = close(fd) != 0 ? errno : rename(out->part, out->target) != 0 ? errno : 0;
    if (wrong != 0)
        unlink(out->part);
    return wrong;
}

/* out:commit(): the file is whole. */
static int commit(lua_State *L) {
    output *out = check_output(L, "out:commit");
    int wrong = flush(out);
    if (wrong == 0 && out->part[0] != '\0') {
        wrong = commit_part(out);
    } else if (wrong == 0) {
        int fd = out->fd;
        out->fd = -1;
        wrong = close(fd) != 0 ? errno : 0;
    }
    if (wrong != 0)
        return cannot(L, out, wrong);
    if (out->part[0] != '\0')
        sync_folder(out);
    return 0;
}

static int discard(lua_State *L) {
    throw_away(luaL_checkudata(L, 1, TL_OUTPUT));
    return 0;
}

void tl_open_output(lua_State *L) {
    static const luaL_Reg special[] = {{"__gc", discard}, {"__close", discard}, {NULL, NULL}};
    static const luaL_Reg methods[] = {
        {"close", discard}, {"commit", commit}, {"write", write_texts}, {NULL, NULL}};
    tl_new_type(L, TL_OUTPUT, special, methods, NULL);
    lua_pushcfunction(L, create);
    lua_setfield(L, -2, "create");
}
