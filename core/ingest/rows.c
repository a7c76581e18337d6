/* The cursor over delimited text. */
#include "ingest/rows.h"

#include <string.h>

#include "base/memory.h"
#include "base/parallel.h"
#include "ingest/utf8.h"
#include "ingest/words.h"

/* MARGIN bytes beyond the data are line feeds: a search for one always ends, eight bytes at a time. */
enum { MARGIN = TI_MARGIN };

/* ---- the block ----------------------------------------------------------- */

static thole_status refused(ti_rows *rows, thole_error *error) {
    return tb_refused(rows->context->memory, error, "reading rows");
}

/* Read on, keeping what is from rows->begin on; the block grows when that fills more than half of it. */
static thole_status refill(ti_rows *rows, thole_error *error) {
    thole_memory *memory = rows->context->memory;
    thole_status status =
        tb_tick(rows->context, ti_source_phase(rows->source), ti_source_share(rows->source), error);
    if (status != THOLE_OK)
        return status;
    size_t kept = rows->end - rows->begin;
    if (rows->begin > 0 && kept > 0)
        memmove(rows->block, rows->block + rows->begin, kept);
    rows->passed += rows->begin;
    rows->begin = 0;
    rows->end = kept;
    if (kept > rows->cap / 2 || rows->cap == 0) {
        size_t cap = rows->cap == 0 ? rows->first_cap : rows->cap * 2;
        char *fresh =
            tb_resize(memory, rows->block, rows->cap == 0 ? 0 : rows->cap + MARGIN, cap + MARGIN, 1);
        if (fresh == NULL)
            return refused(rows, error);
        rows->block = fresh;
        rows->cap = cap;
    }
    size_t n = 0;
    status = ti_source_read(rows->source, rows->block + kept, rows->cap - kept, &n, error);
    if (status != THOLE_OK)
        return status;
    rows->ended = n == 0;
    rows->end += n;
    memset(rows->block + rows->end, '\n', MARGIN);
    return THOLE_OK;
}

thole_status ti_rows_open(ti_rows *rows, thole_context *context, ti_source *source, size_t block,
                          thole_error *error) {
    *rows = (ti_rows){
        .context = context, .source = source, .separator = ',', .most = TI_MOST_COLUMNS, .next_line = 1};
    rows->first_cap = block > 0 ? block : 1;
    rows->arena.memory = context->memory;
    thole_status status = THOLE_OK;
    while (status == THOLE_OK && rows->end < 3 && !rows->ended)
        status = refill(rows, error);
    if (status != THOLE_OK)
        return status;
    if (rows->end >= 3 && memcmp(rows->block, "\xEF\xBB\xBF", 3) == 0)
        rows->begin = 3;
    else if (rows->end >= 2 &&
             (memcmp(rows->block, "\xFF\xFE", 2) == 0 || memcmp(rows->block, "\xFE\xFF", 2) == 0))
        return thole_fail(error, THOLE_INPUT, "%s: the file is UTF-16: save it as UTF-8",
                          ti_source_name(source));
    return THOLE_OK;
}

void ti_rows_close(ti_rows *rows) {
    if (rows->context == NULL)
        return;
    thole_memory *memory = rows->context->memory;
    if (rows->cap > 0)
        tb_free(memory, rows->block, rows->cap + MARGIN, 1);
    tb_free(memory, rows->field, rows->field_cap, sizeof *rows->field);
    tb_arena_clear(&rows->arena);
    *rows = (ti_rows){0};
}

/* ---- lines --------------------------------------------------------------- */

/* Pass over the rest of a line, however long. */
static thole_status skip_line(ti_rows *rows, thole_error *error) {
    while (rows->skip) {
        const char *begin = rows->block + rows->begin;
        const char *stop = memchr(begin, '\n', rows->end - rows->begin);
        rows->begin = stop != NULL ? (size_t)(stop - rows->block) + 1 : rows->end;
        rows->skip = stop == NULL && !rows->ended;
        if (rows->skip) {
            thole_status status = refill(rows, error);
            if (status != THOLE_OK)
                return status;
        }
    }
    return THOLE_OK;
}

thole_status ti_rows_peek(ti_rows *rows, const char **text, size_t *length, thole_error *error) {
    thole_status status = skip_line(rows, error);
    for (size_t looked = 0; status == THOLE_OK;) {
        const char *begin = rows->block + rows->begin;
        size_t here = rows->end - rows->begin;
        const char *stop = memchr(begin + looked, '\n', here - looked);
        if (stop != NULL || rows->ended || here >= TI_MOST_FIELD) {
            size_t n = stop != NULL ? (size_t)(stop - begin) : here;
            *text = stop == NULL && n == 0 ? NULL : begin;
            *length = n > 0 && begin[n - 1] == '\r' ? n - 1 : n;
            break;
        }
        looked = here;
        status = refill(rows, error);
    }
    return status;
}

void ti_rows_drop(ti_rows *rows) {
    rows->skip = true;
    rows->next_line++;
}

static uint64_t count_lines(const char *from, const char *to) {
    uint64_t n = 0;
    while (from < to && (from = memchr(from, '\n', (size_t)(to - from))) != NULL)
        n++, from++;
    return n;
}

void ti_rows_place(const ti_rows *rows, size_t from, uint64_t *line, uint64_t *column) {
    const char *stop = rows->row + from, *start = rows->row;
    *line = rows->line + count_lines(start, stop);
    for (const char *p = start; p < stop; p++)
        if (*p == '\n')
            start = p + 1;
    *column = 1;
    for (const char *p = start; p < stop; p++) /* continuation bytes are no characters of their own */
        *column += ((unsigned char)*p & 0xC0u) != 0x80u;
}

/* ---- a row --------------------------------------------------------------- */

typedef enum outcome { DONE, MORE, NO_ROOM } outcome;

/* A scan in progress. */
typedef struct scan {
    const char *at, *end;
    uint64_t odd;   /* high bits: a byte beyond ASCII, or perhaps a NUL, was met */
    uint64_t lines; /* line feeds inside quoted fields */
} scan;

static bool grow_fields(ti_rows *rows) {
    return tb_reserve(rows->context->memory, (void **)&rows->field, &rows->field_cap, rows->n + 1,
                      sizeof *rows->field);
}

static inline bool put_field(ti_rows *rows, const char *at, size_t length, const char *from) {
    if (rows->n == rows->field_cap && !grow_fields(rows))
        return false;
    rows->field[rows->n++] =
        (ti_field){.at = at, .length = (uint32_t)length, .from = (uint32_t)(from - rows->row)};
    return true;
}

/* End the row at a flaw in the field from `from` on, with what there is of its text; go on after `resume`. */
static outcome flawed(ti_rows *rows, ti_flaw flaw, const char *from, const char *to, const char *resume) {
    if (!put_field(rows, from, (size_t)(to - from) < TI_MOST_FIELD ? (size_t)(to - from) : TI_MOST_FIELD,
                   from))
        return NO_ROOM;
    rows->flaw = flaw;
    rows->skip = true;
    rows->begin = (size_t)(resume - rows->block);
    rows->next_line = rows->line + count_lines(rows->row, resume) + 1;
    return DONE;
}

/* The quoted field without its quotes, doubled ones made single. */
static const char *without_doubles(ti_rows *rows, const char *from, const char *to, size_t *length) {
    char *text = tb_arena_take(&rows->arena, (size_t)(to - from) + MARGIN, 1), *at = text;
    if (text == NULL)
        return NULL;
    memset(text + (to - from), 0, MARGIN);
    while (from < to) {
        bool quote = *from == '"';
        *at++ = *from++;
        from += quote;
    }
    *length = (size_t)(at - text);
    return text;
}

/* The next quote from `p` on, or the end; notes on the way what else is met, and a little beyond. */
static const char *find_quote(const char *p, scan *s, uint64_t *feeds) {
    for (;; p += 8) {
        uint64_t word = ti_load(p), marks = ti_zeros(word ^ TI_ONES * (unsigned char)'"');
        s->odd |= word | (word - TI_ONES);
        *feeds |= ti_zeros(word ^ TI_ONES * (unsigned char)'\n');
        if (marks != 0)
            return p + ti_first_byte(marks) < s->end ? p + ti_first_byte(marks) : s->end;
        if (s->end - p <= 8)
            return s->end;
    }
}

/* A field that begins with a quote; s->at is left at the separator or line feed after it. */
static outcome scan_quoted(ti_rows *rows, scan *s) {
    const char *from = s->at, *p = from + 1;
    uint64_t feeds = 0;
    bool doubled = false;
    for (;; p += 2, doubled = true) {
        p = p < s->end ? find_quote(p, s, &feeds) : s->end;
        if (p - from > TI_MOST_FIELD)
            return flawed(rows, TI_LONG_FIELD, from, p, rows->row);
        if (p + 1 >= s->end && !rows->ended)
            return MORE; /* no quote, or perhaps one of two */
        if (p == s->end)
            return flawed(rows, TI_UNCLOSED, from, s->end, rows->row);
        if (p[1] != '"' || p + 1 == s->end)
            break;
    }
    const char *text = from + 1, *after = p + 1;
    size_t length = (size_t)(p - text);
    if (after + 1 >= s->end && !rows->ended)
        return MORE; /* a carriage return may be half of the line's end */
    if (*after == '\r' && after[1] == '\n' && after < s->end)
        after++;
    if (*after != rows->separator && *after != '\n')
        return flawed(rows, TI_AFTER_QUOTE, from, after, rows->row);
    if (doubled && (text = without_doubles(rows, text, p, &length)) == NULL)
        return NO_ROOM;
    if (feeds != 0)
        s->lines += count_lines(from, p);
    s->at = after;
    rows->quoted = true;
    return put_field(rows, text, length, from) ? DONE : NO_ROOM;
}

/* Fields without quotes, up to the line's end or a field that is not one of them. The marks of a word serve
 * all fields that end in it. */
static outcome scan_bare(ti_rows *rows, scan *s) {
    const uint64_t separators = TI_ONES * (unsigned char)rows->separator,
                   feeds = TI_ONES * (unsigned char)'\n';
    const char *from = s->at, *base = from, *end = s->end;
    uint64_t word = ti_load(base), marks = ti_zeros(word ^ separators) | ti_zeros(word ^ feeds),
             odd = s->odd | word | (word - TI_ONES);
    for (;;) {
        while (marks == 0) { /* at the latest the margin has some */
            word = ti_load(base += 8);
            marks = ti_zeros(word ^ separators) | ti_zeros(word ^ feeds);
            odd |= word | (word - TI_ONES); /* the second sets the high bit of every NUL */
        }
        const char *p = base + ti_first_byte(marks);
        marks &= marks - 1;
        if (p >= end) {
            p = end;
            if (p - from <= TI_MOST_FIELD && !rows->ended)
                return MORE;
        }
        if (p - from > TI_MOST_FIELD)
            return flawed(rows, TI_LONG_FIELD, from, p, p);
        size_t length = (size_t)(p - from);
        bool last = *p == '\n';
        if (last && length > 0 && p[-1] == '\r')
            length--;
        if (!put_field(rows, from, length, from))
            return NO_ROOM;
        from = p + 1;
        if (last || *from == '"' || rows->n == rows->most) {
            s->at = p;
            s->odd = odd;
            return DONE;
        }
    }
}

/* Find the fields from rows->begin to the line's end. MORE: the block ends first. */
static outcome scan_row(ti_rows *rows, scan *s) {
    for (;;) {
        if (rows->n == rows->most && rows->n > 0) {
            const char *stop = s->at; /* show what the extra field begins with */
            while (stop < s->end && stop - s->at < 100 && *stop != rows->separator && *stop != '\n')
                stop++;
            if (stop == s->end && !rows->ended)
                return MORE;
            return flawed(rows, TI_MANY, s->at, stop, s->at);
        }
        outcome found = *s->at == '"' && s->at < s->end ? scan_quoted(rows, s) : scan_bare(rows, s);
        if (found != DONE || rows->flaw != TI_SOUND)
            return found;
        if (*s->at == '\n')
            return DONE;
        s->at++;
    }
}

/* Look closer at a row with bytes beyond ASCII or perhaps NULs. */
static void check_bytes(ti_rows *rows, const char *end) {
    size_t all = (size_t)(end - rows->row);
    const char *nul = memchr(rows->row, '\0', all);
    size_t sound = ti_utf8_sound(rows->row, all);
    if (nul == NULL && sound == all)
        return;
    /* the first of the two, and the field it is in */
    bool by_nul = nul != NULL && (size_t)(nul - rows->row) < sound;
    size_t at = by_nul ? (size_t)(nul - rows->row) : sound, i = rows->n - 1;
    while (i > 0 && rows->field[i].from > at)
        i--;
    rows->flaw = by_nul ? TI_NUL : TI_NOT_UTF8;
    rows->n = i + 1;
}

thole_status ti_rows_next(ti_rows *rows, bool *got, thole_error *error) {
    thole_status status = skip_line(rows, error);
    if (status != THOLE_OK)
        return status;
    if (rows->quoted)
        tb_arena_reset(&rows->arena);
    for (;;) {
        rows->row = rows->block + rows->begin;
        rows->n = 0;
        rows->flaw = TI_SOUND;
        rows->quoted = false;
        rows->line = rows->next_line;
        scan s = {.at = rows->row, .end = rows->block + rows->end};
        outcome found = rows->begin < rows->end ? scan_row(rows, &s) : rows->ended ? DONE : MORE;
        if (found == NO_ROOM)
            return refused(rows, error);
        if (found == DONE) {
            *got = rows->n > 0;
            if (*got && rows->flaw == TI_SOUND) {
                if ((s.odd & TI_HIGHS) != 0)
                    check_bytes(rows, s.at);
                rows->next_line = rows->line + s.lines + 1;
                rows->begin = s.at < s.end ? (size_t)(s.at - rows->block) + 1 : rows->end;
            }
            return THOLE_OK;
        }
        if (rows->end - rows->begin > TI_MOST_ROW) {
            if (flawed(rows, TI_LONG_ROW, rows->row, s.end, s.end) == NO_ROOM)
                return refused(rows, error);
            *got = true;
            return THOLE_OK;
        }
        tb_arena_reset(&rows->arena);
        if ((status = refill(rows, error)) != THOLE_OK)
            return status;
    }
}
