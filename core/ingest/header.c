/* Columns by name. */
#include "ingest/header.h"

#include <stdio.h>
#include <string.h>

#include "base/nearest.h"
#include "ingest/utf8.h"

char ti_separator_of(const char *line, size_t length) {
    static const char SEPARATORS[] = {',', ';', '\t'};
    size_t count[3] = {0}, best = 0;
    bool quoted = false;
    for (size_t i = 0; i < length; i++) {
        quoted = quoted != (line[i] == '"');
        for (size_t j = 0; j < 3; j++)
            count[j] += !quoted && line[i] == SEPARATORS[j];
    }
    for (size_t j = 1; j < 3; j++)
        if (count[j] > count[best])
            best = j;
    return SEPARATORS[best];
}

void ti_quote(const char *text, size_t length, char out[TI_QUOTED_SIZE]) {
    enum { MOST_CHARACTERS = 60 };
    char *to = out;
    size_t at = 0;
    *to++ = '"';
    for (int n = 0; at < length && n < MOST_CHARACTERS; n++) {
        unsigned char c = (unsigned char)text[at];
        size_t bytes = c < 0x80 ? 1 : c < 0xE0 ? 2 : c < 0xF0 ? 3 : 4;
        if (bytes > length - at || ti_utf8_sound(text + at, bytes) != bytes || c < 0x20 || c == 0x7F) {
            to += c == '\n' || c == '\t' || c == '\r' ? snprintf(to, 5, "\\%c",
                                                                 c == '\n'   ? 'n'
                                                                 : c == '\t' ? 't'
                                                                             : 'r')
                                                      : snprintf(to, 5, "\\x%02X", c);
            at++;
        } else {
            if (c == '"')
                *to++ = '\\';
            memcpy(to, text + at, bytes);
            to += bytes;
            at += bytes;
        }
    }
    memcpy(to, "\"", 2);
    if (at < length)
        memcpy(to, "...\"", 5);
}

thole_status ti_header_take(ti_header *header, thole_memory *memory, const ti_rows *rows, bool headless,
                            thole_error *error) {
    *header = (ti_header){.n = rows->n, .line = rows->line};
    header->arena.memory = memory;
    if (headless)
        return THOLE_OK;
    header->name = TB_TAKE(&header->arena, const char *, rows->n);
    if (header->name == NULL)
        return tb_refused(memory, error, "the header");
    for (size_t i = 0; i < rows->n; i++) {
        char *copy = tb_arena_take(&header->arena, rows->field[i].length + 1u, 1);
        if (copy == NULL)
            return tb_refused(memory, error, "the header");
        memcpy(copy, rows->field[i].at, rows->field[i].length);
        copy[rows->field[i].length] = '\0';
        header->name[i] = copy;
    }
    return THOLE_OK;
}

void ti_header_clear(ti_header *header) {
    if (header->arena.memory != NULL)
        tb_arena_clear(&header->arena);
    *header = (ti_header){0};
}

static const char *name_at(const void *words, size_t i) { return ((const char *const *)words)[i]; }

/* "from", "to", "departs" ... as many as fit. */
static void list_names(const ti_header *header, char *out, size_t size) {
    size_t used = 0;
    for (size_t i = 0; i < header->n; i++) {
        char quoted[TI_QUOTED_SIZE];
        ti_quote(header->name[i], strlen(header->name[i]), quoted);
        size_t n = strlen(quoted);
        enum { ROOM_FOR_MORE = 32 };
        if (used + n + 2 + ROOM_FOR_MORE > size) {
            snprintf(out + used, size - used, " and %zu more", header->n - i);
            return;
        }
        used += (size_t)snprintf(out + used, size - used, "%s%s", i > 0 ? ", " : "", quoted);
    }
}

/* N of "columnN", which stands for a name where there is no header; 0 when it is not that. */
static size_t number_of(const char *name) {
    static const char PREFIX[] = "column";
    size_t n = 0, at = sizeof PREFIX - 1;
    if (strncmp(name, PREFIX, at) != 0 || name[at] == '0')
        return 0;
    for (; name[at] >= '0' && name[at] <= '9' && n < TI_MOST_COLUMNS; at++)
        n = n * 10 + (size_t)(name[at] - '0');
    return name[at] == '\0' ? n : 0;
}

static thole_status no_such_name(const ti_header *header, const char *name, const char *role,
                                 const char *wanted, thole_error *error) {
    char quoted[TI_QUOTED_SIZE], nearest[TI_QUOTED_SIZE] = "", list[400];
    ti_quote(wanted, strlen(wanted), quoted);
    list_names(header, list, sizeof list);
    size_t i = tb_nearest(wanted, header->n, name_at, header->name);
    if (i < header->n)
        ti_quote(header->name[i], strlen(header->name[i]), nearest);
    return thole_fail(error, THOLE_INPUT, "%s:%llu: no column %s for %s: %s%s%sthe columns are %s", name,
                      (unsigned long long)header->line, quoted, role, nearest[0] != '\0' ? "perhaps " : "",
                      nearest, nearest[0] != '\0' ? ", " : "", list);
}

bool ti_header_has(const ti_header *header, const char *name) {
    for (size_t i = 0; header->name != NULL && i < header->n; i++)
        if (strcmp(header->name[i], name) == 0)
            return true;
    return false;
}

thole_status ti_header_find(const ti_header *header, const char *name, const char *role, thole_column_ref ref,
                            size_t *column, thole_error *error) {
    char quoted[TI_QUOTED_SIZE];
    size_t found = header->n;
    if (ref.name != NULL && header->name == NULL) {
        size_t number = number_of(ref.name);
        if (number == 0 || number > header->n)
            return thole_fail(
                error, THOLE_INPUT,
                "%s: no column \"%.60s\" for %s: without a header they are column1 to column%zu", name,
                ref.name, role, header->n);
        *column = number - 1;
        return THOLE_OK;
    }
    if (ref.name == NULL) {
        if (ref.number > header->n)
            return thole_fail(error, THOLE_INPUT, "%s:%llu: no column %u for %s: there are %zu columns", name,
                              (unsigned long long)header->line, (unsigned)ref.number, role, header->n);
        *column = ref.number - 1;
        return THOLE_OK;
    }
    for (size_t i = 0; i < header->n; i++) {
        if (strcmp(header->name[i], ref.name) != 0)
            continue;
        if (found < header->n) {
            ti_quote(ref.name, strlen(ref.name), quoted);
            return thole_fail(
                error, THOLE_INPUT,
                "%s:%llu: columns %zu and %zu are both called %s: give the column for %s by number", name,
                (unsigned long long)header->line, found + 1, i + 1, quoted, role);
        }
        found = i;
    }
    if (found == header->n)
        return no_such_name(header, name, role, ref.name, error);
    *column = found;
    return THOLE_OK;
}
