/* Inside the core: bytes from a file, from standard input or from memory, unpacked where they are packed. */
#ifndef TI_SOURCE_H
#define TI_SOURCE_H

#include "base/base.h"

typedef struct ti_source ti_source;

/* Open a file, or standard input for "-"; or take `length` bytes of `text` (the caller's until the source is
 * closed), `name` standing for it in messages. gzip, zstd and xz are told by their first bytes. */
thole_status ti_source_open(thole_context *context, const char *path, ti_source **out, thole_error *error);
thole_status ti_source_text(thole_context *context, const char *name, const char *text, size_t length,
                            ti_source **out, thole_error *error);
void ti_source_close(ti_source *source); /* NULL is accepted */

/* Up to `room` (at least 1) unpacked bytes; *n is 0 only at the end, which is reached only when packed data
 * was whole. Waiting for input stops with THOLE_CANCELLED when asked to. */
thole_status ti_source_read(ti_source *source, char *into, size_t room, size_t *n, thole_error *error);

/* Bytes that are left, when that is known: else SIZE_MAX. */
size_t ti_source_left(const ti_source *source);

/* For messages: the name as given, "standard input" for "-". */
const char *ti_source_name(const ti_source *source);

/* For progress: "reading NAME", and the share of the bytes taken so far, negative when the size is not known.
 */
const char *ti_source_phase(const ti_source *source);
double ti_source_share(const ti_source *source);

#endif
