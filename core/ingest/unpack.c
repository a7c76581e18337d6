/* Unpacking: gzip by zlib, zstd and xz by libarchive.
 *
 * libarchive reads gzip too, but does not check a member's CRC and takes anything after the last member for
 * the end (3.6.2, measured: a file with one byte changed came out shorter, without an error). zlib checks
 * both. */
#define ZLIB_CONST /* input is read only */
#include "ingest/unpack.h"

#include <archive.h>
#include <archive_entry.h>
#include <errno.h>
#include <string.h>
#include <zlib.h>

#include "base/memory.h"

struct ti_unpacker {
    thole_context *context;
    const char *name;
    ti_packing packing;
    ti_packed *next;
    void *user;
    thole_error input; /* what went wrong below, while a library was in between */
    bool ended;        /* the plain data is at its end */
    struct archive *archive;
    z_stream gzip;
    bool gzip_open, in_member;
};

/* ---- telling ------------------------------------------------------------- */

static bool begins(const unsigned char *head, size_t n, const char *with, size_t length) {
    return n >= length && memcmp(head, with, length) == 0;
}

ti_packing ti_packing_of(const unsigned char *head, size_t n, const char **foreign) {
    *foreign = NULL;
    if (begins(head, n, "\x1f\x8b", 2))
        return TI_GZIP;
    if (begins(head, n, "\x28\xb5\x2f\xfd", 4))
        return TI_ZSTD;
    if (begins(head, n,
               "\xfd"
               "7zXZ",
               6)) /* with the NUL that ends the literal */
        return TI_XZ;
    if (begins(head, n, "PK\x03\x04", 4))
        *foreign = "a zip archive";
    else if (begins(head, n, "BZh", 3))
        *foreign = "packed by bzip2";
    else if (begins(head, n, "\x04\x22\x4d\x18", 4))
        *foreign = "packed by lz4";
    else if (begins(head, n, "7z\xbc\xaf\x27\x1c", 6))
        *foreign = "a 7z archive";
    return TI_PLAIN;
}

static const char *packing_name(ti_packing packing) {
    return packing == TI_GZIP ? "gzip" : packing == TI_ZSTD ? "zstd" : "xz";
}

static thole_status damaged(const ti_unpacker *u, const char *why, thole_error *error) {
    while (why != NULL && *why == ' ')
        why++;
    if (why == NULL || *why == '\0')
        why = "the data ends too early";
    return thole_fail(error, THOLE_INPUT,
                      "%s: the %s data is damaged or cut short (%.200s): fetch or pack it again", u->name,
                      packing_name(u->packing), why);
}

/* ---- gzip ---------------------------------------------------------------- */

/* zlib's memory is counted like ours: its size is kept in front of each block. */
typedef union prefix {
    size_t bytes;
    max_align_t align;
} prefix;

static void *gzip_take(void *user, unsigned n, unsigned item) {
    size_t bytes = sizeof(prefix) + (size_t)n * item;
    prefix *block = tb_resize(user, NULL, 0, bytes, 1);
    if (block == NULL)
        return NULL;
    block->bytes = bytes;
    return block + 1;
}

static void gzip_give(void *user, void *block) {
    prefix *at = (prefix *)block - 1;
    tb_free(user, at, at->bytes, 1);
}

static thole_status gzip_refill(ti_unpacker *u, thole_error *error) {
    const unsigned char *at = NULL;
    size_t n = 0;
    thole_status status = u->next(u->user, &at, &n, error);
    if (status != THOLE_OK)
        return status;
    u->gzip.next_in = at;
    u->gzip.avail_in = (uInt)n; /* a block is far below 4 GiB */
    return THOLE_OK;
}

/* Members follow one another; the end of the file is the end only between two. */
static thole_status gzip_read(ti_unpacker *u, char *into, size_t room, size_t *n, thole_error *error) {
    u->gzip.next_out = (Bytef *)into;
    u->gzip.avail_out = room > UINT32_MAX / 2 ? UINT32_MAX / 2 : (uInt)room;
    uInt all = u->gzip.avail_out;
    while (u->gzip.avail_out == all) {
        if (u->gzip.avail_in == 0) {
            thole_status status = gzip_refill(u, error);
            if (status != THOLE_OK)
                return status;
        }
        if (u->gzip.avail_in == 0) {
            if (u->in_member)
                return damaged(u, NULL, error);
            break;
        }
        if (!u->in_member) {
            inflateReset(&u->gzip);
            u->in_member = true;
        }
        int code = inflate(&u->gzip, Z_NO_FLUSH);
        if (code == Z_MEM_ERROR)
            return tb_refused(u->context->memory, error, "unpacking gzip");
        if (code == Z_STREAM_END)
            u->in_member = false;
        else if (code != Z_OK && code != Z_BUF_ERROR)
            return damaged(u, u->gzip.msg != NULL ? u->gzip.msg : "not gzip data", error);
    }
    *n = all - u->gzip.avail_out;
    return THOLE_OK;
}

/* ---- zstd and xz --------------------------------------------------------- */

static la_ssize_t archive_next(struct archive *archive, void *user, const void **block) {
    ti_unpacker *u = user;
    const unsigned char *at = NULL;
    size_t n = 0;
    if (u->next(u->user, &at, &n, &u->input) != THOLE_OK) {
        archive_set_error(archive, EIO, "input failed");
        return -1;
    }
    *block = at;
    return (la_ssize_t)n;
}

/* What a call of libarchive came to. */
static thole_status archive_judged(ti_unpacker *u, la_ssize_t code, thole_error *error) {
    if (code >= 0)
        return THOLE_OK;
    if (u->input.status != THOLE_OK) {
        thole_status status = u->input.status;
        return thole_fail(error, status, "%s", u->input.text);
    }
    if (archive_errno(u->archive) == ENOMEM)
        return tb_refused(u->context->memory, error, "unpacking");
    return damaged(u, archive_error_string(u->archive), error);
}

static thole_status archive_start(ti_unpacker *u, thole_error *error) {
    struct archive_entry *entry;
    u->archive = archive_read_new();
    if (u->archive == NULL)
        return tb_refused(u->context->memory, error, "unpacking");
    int code = u->packing == TI_ZSTD ? archive_read_support_filter_zstd(u->archive)
                                     : archive_read_support_filter_xz(u->archive);
    if (code != ARCHIVE_OK) /* it would start an outside program instead */
        return thole_fail(error, THOLE_FILE, "%s: this libarchive cannot unpack %s: unpack the file first",
                          u->name, packing_name(u->packing));
    archive_read_support_format_raw(u->archive);
    archive_read_support_format_empty(u->archive);
    code = archive_read_open(u->archive, u, NULL, archive_next, NULL);
    if (code == ARCHIVE_OK)
        code = archive_read_next_header(u->archive, &entry);
    if (code == ARCHIVE_EOF) /* packed nothing */
        u->ended = true;
    else if (code == ARCHIVE_WARN)
        code = ARCHIVE_OK;
    return archive_judged(u, code, error);
}

/* ---- both ---------------------------------------------------------------- */

thole_status ti_unpacker_open(thole_context *context, const char *name, ti_packing packing, ti_packed *next,
                              void *user, ti_unpacker **out, thole_error *error) {
    ti_unpacker *u = tb_new(context->memory, 1, sizeof *u);
    if (u == NULL)
        return tb_refused(context->memory, error, "unpacking");
    u->context = context;
    u->name = name;
    u->packing = packing;
    u->next = next;
    u->user = user;
    thole_status status = THOLE_OK;
    if (packing == TI_GZIP) {
        u->gzip.zalloc = gzip_take;
        u->gzip.zfree = gzip_give;
        u->gzip.opaque = context->memory;
        enum { GZIP_ONLY = 16 + MAX_WBITS };
        u->gzip_open = inflateInit2(&u->gzip, GZIP_ONLY) == Z_OK;
        if (!u->gzip_open)
            status = tb_refused(context->memory, error, "unpacking gzip");
    } else {
        status = archive_start(u, error);
    }
    if (status == THOLE_OK)
        *out = u;
    else
        ti_unpacker_close(u);
    return status;
}

thole_status ti_unpacker_read(ti_unpacker *u, char *into, size_t room, size_t *n, thole_error *error) {
    size_t got = 0;
    thole_status status = THOLE_OK;
    if (!u->ended && u->packing == TI_GZIP) {
        status = gzip_read(u, into, room, &got, error);
    } else if (!u->ended) {
        la_ssize_t code = archive_read_data(u->archive, into, room);
        status = archive_judged(u, code, error);
        got = code > 0 ? (size_t)code : 0;
    }
    if (status == THOLE_OK) {
        u->ended = got == 0;
        *n = got;
    }
    return status;
}

void ti_unpacker_close(ti_unpacker *u) {
    if (u == NULL)
        return;
    if (u->gzip_open)
        inflateEnd(&u->gzip);
    if (u->archive != NULL)
        archive_read_free(u->archive);
    tb_free(u->context->memory, u, 1, sizeof *u);
}
