/* Files, standard input and memory as one stream of plain bytes. */
#include "ingest/source.h"

#include <errno.h>
#include <fcntl.h>
#include <stdio.h>
#include <string.h>
#include <sys/stat.h>
#include <unistd.h>

#include "base/memory.h"
#include "base/parallel.h"
#include "ingest/unpack.h"

enum { PACKED_BLOCK = 1 << 17, PHASE_SIZE = 200, MOST_NAME = 400 };

struct ti_source {
    thole_context *context;
    char name[MOST_NAME + 4];
    char phase[PHASE_SIZE];
    int file; /* -1 when the bytes are in memory */
    bool close_file;
    const char *text; /* what is left of the bytes in memory */
    size_t length;
    uint64_t size, taken; /* bytes in all (0: not known), and read so far; packed where they are packed */
    unsigned char head[TI_MAGIC_SIZE]; /* read to tell the packing, not handed on yet */
    size_t head_from, head_n;
    unsigned char *packed; /* a block of packed bytes, PACKED_BLOCK */
    ti_unpacker *unpacker;
};

/* Bytes as they lie in the file; 0 at its end. */
static thole_status read_raw(ti_source *s, void *into, size_t room, size_t *n, thole_error *error) {
    if (s->head_from < s->head_n) {
        *n = s->head_n - s->head_from < room ? s->head_n - s->head_from : room;
        memcpy(into, s->head + s->head_from, *n);
        s->head_from += *n;
        return THOLE_OK;
    }
    if (s->file < 0) {
        *n = s->length < room ? s->length : room;
        if (*n > 0)
            memcpy(into, s->text, *n);
        s->text += *n;
        s->length -= *n;
        s->taken += *n;
        return THOLE_OK;
    }
    for (;;) {
        ssize_t got = read(s->file, into, room);
        if (got >= 0) {
            *n = (size_t)got;
            s->taken += *n;
            return THOLE_OK;
        }
        if (errno != EINTR)
            break;
        thole_status status = tb_tick(s->context, s->phase, ti_source_share(s), error); /* perhaps Ctrl-C */
        if (status != THOLE_OK)
            return status;
    }
    char why[128];
    if (strerror_r(errno, why, sizeof why) != 0)
        snprintf(why, sizeof why, "error %d", errno);
    if (why[0] >= 'A' && why[0] <= 'Z')
        why[0] = (char)(why[0] - 'A' + 'a');
    return thole_fail(error, THOLE_FILE, "%s: reading failed (%s): check the file and its disk", s->name,
                      why);
}

static thole_status next_packed(void *user, const unsigned char **at, size_t *n, thole_error *error) {
    ti_source *s = user;
    *at = s->packed;
    return read_raw(s, s->packed, PACKED_BLOCK, n, error);
}

/* Look at the first bytes, and put an unpacker in between where they ask for one. */
static thole_status tell_packing(ti_source *s, thole_error *error) {
    unsigned char head[TI_MAGIC_SIZE];
    size_t have = 0;
    while (have < sizeof head) {
        size_t n = 0;
        thole_status status = read_raw(s, head + have, sizeof head - have, &n, error);
        if (status != THOLE_OK)
            return status;
        if (n == 0)
            break;
        have += n;
    }
    memcpy(s->head, head, have);
    s->head_n = have;
    const char *foreign;
    ti_packing packing = ti_packing_of(head, have, &foreign);
    if (foreign != NULL)
        return thole_fail(error, THOLE_INPUT,
                          "%s: the file is %s: unpack it first (gzip, zstd and xz are unpacked here)",
                          s->name, foreign);
    if (packing == TI_PLAIN)
        return THOLE_OK;
    s->packed = tb_resize(s->context->memory, NULL, 0, PACKED_BLOCK, 1);
    if (s->packed == NULL)
        return tb_refused(s->context->memory, error, "unpacking");
    return ti_unpacker_open(s->context, s->name, packing, next_packed, s, &s->unpacker, error);
}

static ti_source *make(thole_context *context, const char *name) {
    ti_source *s = tb_new(context->memory, 1, sizeof *s);
    if (s == NULL)
        return NULL;
    s->context = context;
    s->file = -1;
    /* A message must have room for more than the name. */
    size_t all = strlen(name), from = all > MOST_NAME ? all - MOST_NAME : 0;
    while (from > 0 && ((unsigned char)name[from] & 0xC0u) == 0x80u)
        from++;
    snprintf(s->name, sizeof s->name, "%s%s", from > 0 ? "..." : "", name + from);
    const char *last = strrchr(name, '/');
    last = last != NULL && last[1] != '\0' ? last + 1 : name;
    size_t n = strlen(last), most = sizeof s->phase - sizeof "reading ";
    for (n = n < most ? n : most; n > 0 && last[n] != '\0' && ((unsigned char)last[n] & 0xC0u) == 0x80u;
         n--) {
    } /* not inside a character */
    snprintf(s->phase, sizeof s->phase, "reading %.*s", (int)n, last);
    return s;
}

static thole_status open_file(ti_source *s, const char *path, thole_error *error) {
    struct stat about;
    if (strcmp(path, "-") == 0) {
        s->file = STDIN_FILENO;
    } else {
        s->file = open(path, O_RDONLY | O_CLOEXEC);
        s->close_file = s->file >= 0;
    }
    if (s->file < 0) {
        const char *why = errno == ENOENT   ? "there is no such file: check its name and folder"
                          : errno == EACCES ? "it may not be read: check its permissions"
                          : errno == ENOTDIR || errno == ENAMETOOLONG || errno == ELOOP
                              ? "its path leads nowhere: check it"
                              : "opening failed: check the file";
        return thole_fail(error, THOLE_FILE, "cannot open \"%s\": %s", s->name, why);
    }
    if (fstat(s->file, &about) == 0) {
        if (S_ISDIR(about.st_mode))
            return thole_fail(error, THOLE_FILE, "cannot read \"%s\": it is a folder: name a file in it",
                              s->name);
        if (S_ISREG(about.st_mode) && about.st_size > 0)
            s->size = (uint64_t)about.st_size;
    }
    return THOLE_OK;
}

thole_status ti_source_open(thole_context *context, const char *path, ti_source **out, thole_error *error) {
    ti_source *s = make(context, strcmp(path, "-") == 0 ? "standard input" : path);
    if (s == NULL)
        return tb_refused(context->memory, error, "reading a file");
    thole_status status = open_file(s, path, error);
    if (status == THOLE_OK)
        status = tell_packing(s, error);
    if (status == THOLE_OK)
        *out = s;
    else
        ti_source_close(s);
    return status;
}

thole_status ti_source_text(thole_context *context, const char *name, const char *text, size_t length,
                            ti_source **out, thole_error *error) {
    ti_source *s = make(context, name);
    if (s == NULL)
        return tb_refused(context->memory, error, "reading a text");
    s->text = text;
    s->length = length;
    s->size = length;
    thole_status status = tell_packing(s, error);
    if (status == THOLE_OK)
        *out = s;
    else
        ti_source_close(s);
    return status;
}

void ti_source_close(ti_source *s) {
    if (s == NULL)
        return;
    thole_memory *memory = s->context->memory;
    ti_unpacker_close(s->unpacker);
    tb_free(memory, s->packed, PACKED_BLOCK, 1);
    if (s->close_file)
        close(s->file);
    tb_free(memory, s, 1, sizeof *s);
}

thole_status ti_source_read(ti_source *s, char *into, size_t room, size_t *n, thole_error *error) {
    if (s->unpacker != NULL)
        return ti_unpacker_read(s->unpacker, into, room, n, error);
    return read_raw(s, into, room, n, error);
}

size_t ti_source_left(const ti_source *s) {
    if (s->unpacker != NULL || s->size == 0 || s->size < s->taken)
        return SIZE_MAX;
    return (size_t)(s->size - s->taken) + (s->head_n - s->head_from);
}

const char *ti_source_name(const ti_source *s) { return s->name; }

const char *ti_source_phase(const ti_source *s) { return s->phase; }

double ti_source_share(const ti_source *s) {
    return s->size == 0 ? -1.0 : s->taken >= s->size ? 1.0 : (double)s->taken / (double)s->size;
}
