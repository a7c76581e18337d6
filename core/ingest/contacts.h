/* Thole contacts: link events from delimited text.
 *
 * Text is UTF-8, a row a line; fields are parted by comma, semicolon or tab
 * (found from the header unless told), quoted as RFC 4180 has it; a byte-order mark and
 * CR LF are accepted; gzip, zstd and xz are unpacked. Blank lines, and lines before the header (or the first
 * row) that begin with "#", are passed over; blank ones after it are counted as a remark. A field holds at
 * most 1 MiB, a row 16 MiB.
 *
 * Columns that no option names become attributes: integer where every value is written as an integer is ("7",
 * not "007"), else real, else text. One whose name is empty, a link's own (from, to, start, finish, duration)
 * or taken by an earlier column is called column5 by its number, as all are without a header; a remark says
 * so.
 */
#ifndef THOLE_CONTACTS_H
#define THOLE_CONTACTS_H

#include "network/network.h"

/* A column by its header's name, or by number from 1 (when name is NULL); both
 * empty: not given. */
typedef struct thole_column_ref {
    const char *name;
    uint32_t number;
} thole_column_ref;

typedef enum thole_time_form {
    THOLE_TIME_FOUND, /* from the zone and the first data row: ISO 8601, else epoch seconds when a zone is
                         given, else plain; eight digits (20310504) are a number */
    THOLE_TIME_ISO,
    THOLE_TIME_EPOCH, /* seconds since 1970-01-01T00:00:00Z, decimals allowed */
    THOLE_TIME_PLAIN
} thole_time_form;

/* Zero-initialise, then set what is wanted.
 * from, to, start: required. finish or duration (a duration as in
 *   thole_parse_duration; bare numbers in the clock's unit), or neither: contacts.
 * finish_may_miss: a finish column that the header does not name is as if not given.
 * linger: ticks added to the finish of contacts (start = finish); 0 leaves them instants.
 * separator: ',', ';', '\t', or 0 to find it.
 * headless: there is no header line; columns by number only.
 * zone: IANA zone of times without offset, and of display; NULL: UTC when times are ISO 8601. A local time
 * that occurs twice is taken as the first, a finish that is then before its start as the second; one that
 * never occurs moves on with the clock; remarks count them. unit: unit name of a plain clock; NULL is "s".
 * skip_faulty: count faulty rows by reason instead of stopping at the first.
 * take: names of extra columns to keep as attributes (take_count = SIZE_MAX, the default with take NULL and
 * 0: all). */
typedef struct thole_contacts_options {
    thole_column_ref from, to, start, finish, duration;
    bool finish_may_miss;
    int64_t linger;
    char separator;
    bool headless;
    thole_time_form form;
    const char *zone;
    const char *unit;
    bool skip_faulty;
    const char *const *take;
    size_t take_count;
} thole_contacts_options;

/* Read a file, or standard input for "-". Errors name file:line:column, the value and what was
 * expected. Streams: memory follows the network, not the file. */
THOLE_API thole_status thole_read_contacts(thole_context *context, const char *path,
                                           const thole_contacts_options *options, thole_network **out,
                                           thole_error *error);

/* The same from memory, `name` standing for the file in messages (fuzzing, tests). */
THOLE_API thole_status thole_read_contacts_text(thole_context *context, const char *name, const char *text,
                                                size_t length, const thole_contacts_options *options,
                                                thole_network **out, thole_error *error);

#endif
