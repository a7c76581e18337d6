/* Inside the core: delimited text as rows of fields, by a cursor over large blocks.
 *
 * Nothing is copied: a field is a stretch of the block, until the next call. Only a field with doubled quotes
 * is written out anew. A row that does not fit the block moves to its front, and the block grows with the
 * longest row, up to TI_MOST_ROW, never with the file. */
#ifndef TI_ROWS_H
#define TI_ROWS_H

#include "base/arena.h"
#include "ingest/source.h"

enum {
    TI_MOST_FIELD = 1 << 20, /* bytes of a field, quotes included */
    TI_MOST_ROW = 16 << 20,
    TI_MOST_COLUMNS = 65536,
    TI_BLOCK = 1 << 18,
    TI_MARGIN = 16 /* bytes behind every field that may be read too, whatever they are */
};

/* Why a row is no good. */
typedef enum ti_flaw {
    TI_SOUND,
    TI_NUL,         /* the field holds a NUL byte */
    TI_NOT_UTF8,    /* the field is not UTF-8 */
    TI_UNCLOSED,    /* the field's quote is open at the end of the file */
    TI_AFTER_QUOTE, /* something stands between the field's closing quote and the separator */
    TI_LONG_FIELD,
    TI_LONG_ROW,
    TI_MANY /* the field is one more than rows->most */
} ti_flaw;

typedef struct ti_field {
    const char *at; /* what it holds, without quotes */
    uint32_t length;
    uint32_t from; /* where it begins in the row, its quote included */
} ti_field;

typedef struct ti_rows {
    thole_context *context;
    ti_source *source;
    char separator;
    size_t most; /* fields that a row may have, at most TI_MOST_COLUMNS */
    /* the row read last */
    ti_field *field; /* [0 .. n - 1]; after a flaw the last one is what it is about */
    size_t n;
    ti_flaw flaw;
    uint64_t line; /* that it begins in, from 1 */
    bool quoted;   /* some field of it is quoted */
    const char *row;
    /* inner */
    char *block; /* cap bytes, and then a margin for reading ahead */
    size_t first_cap, cap, begin, end;
    uint64_t passed; /* bytes before the block */
    size_t field_cap;
    uint64_t next_line;
    bool ended;     /* the source is at its end */
    bool skip;      /* begin is inside a faulty line, the rest of which is to be passed over */
    tb_arena arena; /* fields with doubled quotes */
} ti_rows;

/* Begin reading, with blocks of `block` bytes at first (TI_BLOCK; less where the source is known to be
 * smaller, or to test). A byte-order mark is passed over, UTF-16 refused. The source stays the caller's.
 * Clear with ti_rows_close, after a failure too. */
thole_status ti_rows_open(ti_rows *rows, thole_context *context, ti_source *source, size_t block,
                          thole_error *error);
void ti_rows_close(ti_rows *rows);

/* The line that comes next, without its end and without taking it; cut at 1 MiB. *text is NULL at the end. */
thole_status ti_rows_peek(ti_rows *rows, const char **text, size_t *length, thole_error *error);
void ti_rows_drop(ti_rows *rows); /* pass over the line peeked at */

/* Read a row. A flaw is not a failure: the next call goes on at the next line (after an unclosed quote or
 * text after one: the line after that in which the row began). *got is false at the end. Ticks as blocks are
 * read. */
thole_status ti_rows_next(ti_rows *rows, bool *got, thole_error *error);

/* Where byte `from` of the row read last stands: its line, and its character there, both from 1. */
void ti_rows_place(const ti_rows *rows, size_t from, uint64_t *line, uint64_t *column);

#endif
