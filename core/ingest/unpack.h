/* Inside the core: packed bytes to plain ones. */
#ifndef TI_UNPACK_H
#define TI_UNPACK_H

#include "base/base.h"

typedef enum ti_packing { TI_PLAIN, TI_GZIP, TI_ZSTD, TI_XZ } ti_packing;

enum { TI_MAGIC_SIZE = 6 };

/* How data that begins with these bytes is packed. *foreign, when not NULL at return, names a form that is
 * not read
 * ("a zip archive"). */
ti_packing ti_packing_of(const unsigned char *head, size_t n, const char **foreign);

/* Where the packed bytes come from: *at gets a block, which stays until the next call, *n its bytes; 0 at the
 * end. */
typedef thole_status ti_packed(void *user, const unsigned char **at, size_t *n, thole_error *error);

typedef struct ti_unpacker ti_unpacker;

thole_status ti_unpacker_open(thole_context *context, const char *name, ti_packing packing, ti_packed *next,
                              void *user, ti_unpacker **out, thole_error *error);
/* As ti_source_read. Truncated and damaged data is THOLE_INPUT. */
thole_status ti_unpacker_read(ti_unpacker *unpacker, char *into, size_t room, size_t *n, thole_error *error);
void ti_unpacker_close(ti_unpacker *unpacker);

#endif
