/* Inside the core: the names of columns, and which column an option means. */
#ifndef TI_HEADER_H
#define TI_HEADER_H

#include "ingest/contacts.h"
#include "ingest/rows.h"

/* Columns in the order of the file. */
typedef struct ti_header {
    tb_arena arena;
    const char **name; /* NULL when the file has no header */
    size_t n;
    uint64_t line;
} ti_header;

/* Copy the row read last as the header, or only count its columns when it is none. Clear with
 * ti_header_clear, after a failure too. */
thole_status ti_header_take(ti_header *header, thole_memory *memory, const ti_rows *rows, bool headless,
                            thole_error *error);
void ti_header_clear(ti_header *header);

/* The column (from 0) that `ref` means. `role` is what it is for ("start"), `name` the file's. THOLE_INPUT
 * names what there is. */
thole_status ti_header_find(const ti_header *header, const char *name, const char *role, thole_column_ref ref,
                            size_t *column, thole_error *error);

/* Whether there is a column of that name (not NULL). */
bool ti_header_has(const ti_header *header, const char *name);

/* The separator among comma, semicolon and tab that a line outside quotes has most of; a comma when it has
 * none. */
char ti_separator_of(const char *line, size_t length);

/* `text` in quotes for a message: cut after 60 characters, quotes, control characters and what is not UTF-8
 * written with a backslash. */
enum { TI_QUOTED_SIZE = 280 };
void ti_quote(const char *text, size_t length, char out[TI_QUOTED_SIZE]);

#endif
