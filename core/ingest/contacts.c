/* Delimited text to a network: the options, the header, and then row by row. */
#include "ingest/contacts.h"

#include <stdio.h>
#include <string.h>

#include "base/names.h"
#include "ingest/attributes.h"
#include "ingest/row_faults.h"
#include "ingest/recent.h"
#include "ingest/times.h"
#include "network/expect.h"

enum { FROM, TO, START, FINISH, DURATION, ROLES };
static const char *const ROLE[ROLES] = {"from", "to", "start", "finish", "duration"};
static const size_t ABSENT = SIZE_MAX;
enum { MANY_EVENTS = 1000 };

typedef struct reader {
    thole_context *context;
    const thole_contacts_options *options;
    thole_error *error;
    ti_source *source;
    ti_rows rows;
    ti_header header;
    ti_faults faults;
    size_t column[ROLES]; /* of the file, from 0, or ABSENT */
    thole_clock clock;
    ti_times times;         /* its form is THOLE_TIME_FOUND until the first row that tells */
    thole_builder *builder; /* once the form is known */
    ti_attribute *attributes;
    size_t attribute_n, attribute_cap;
    tb_names names; /* of the attributes */
    uint64_t blank_n, blank_line;
    ti_recent *recent; /* after some events */
    uint64_t stored;   /* events */
} reader;

/* ---- options ------------------------------------------------------------- */

static bool is_given(thole_column_ref ref) { return ref.name != NULL || ref.number != 0; }

static thole_column_ref role_ref(const thole_contacts_options *o, int role) {
    const thole_column_ref refs[ROLES] = {o->from, o->to, o->start, o->finish, o->duration};
    return refs[role];
}

/* A unit must be told from the number before it. */
static bool is_unit(const char *unit) {
    size_t n = strlen(unit);
    if (n == 0 || n >= sizeof((thole_clock *)0)->unit)
        return false;
    for (size_t i = 0; i < n; i++) {
        unsigned char c = (unsigned char)unit[i];
        if (c <= ' ' || c == 0x7F || c == '.' || c == '-' || c == '+' || c == ',' || c == '"' ||
            (c >= '0' && c <= '9'))
            return false;
    }
    return true;
}

static thole_status check_options(const thole_contacts_options *o, thole_error *error) {
    for (int role = FROM; role <= START; role++)
        if (!is_given(role_ref(o, role)))
            return thole_fail(error, THOLE_ARGUMENT, "no column for %s: name one, or give its number",
                              ROLE[role]);
    if (is_given(o->finish) && is_given(o->duration))
        return thole_fail(error, THOLE_ARGUMENT, "columns for both finish and duration: give one of them");
    for (int role = FROM; role < ROLES && o->headless; role++)
        if (role_ref(o, role).name != NULL)
            return thole_fail(error, THOLE_ARGUMENT,
                              "column \"%.60s\" for %s, but there is no header: give its number",
                              role_ref(o, role).name, ROLE[role]);
    if (o->separator != 0 && o->separator != ',' && o->separator != ';' && o->separator != '\t')
        return thole_fail(error, THOLE_ARGUMENT,
                          "separator is not a comma, a semicolon or a tab: leave it out to have it found");
    if (o->linger < 0)
        return thole_fail(error, THOLE_ARGUMENT, "linger is negative: give a duration");
    if (o->form > THOLE_TIME_PLAIN)
        return thole_fail(error, THOLE_ARGUMENT, "unknown form of time: iso, epoch or plain");
    if (o->zone != NULL && o->form == THOLE_TIME_PLAIN)
        return thole_fail(error, THOLE_ARGUMENT, "zone \"%.100s\" with plain times: leave one of them out",
                          o->zone);
    if (o->unit != NULL && !is_unit(o->unit))
        return thole_fail(error, THOLE_ARGUMENT,
                          "unit \"%.60s\" is not a name of 1 to 15 bytes without digits, spaces and signs: "
                          "give one like km",
                          o->unit);
    if (o->unit != NULL && strcmp(o->unit, "s") != 0 &&
        (o->zone != NULL || o->form == THOLE_TIME_ISO || o->form == THOLE_TIME_EPOCH))
        return thole_fail(error, THOLE_ARGUMENT,
                          "unit \"%s\" with calendar times, which are in seconds: leave it out", o->unit);
    return THOLE_OK;
}

/* ---- columns ------------------------------------------------------------- */

static thole_status find_roles(reader *r) {
    for (int role = FROM; role < ROLES; role++) {
        thole_column_ref ref = role_ref(r->options, role);
        r->column[role] = ABSENT;
        if (!is_given(ref) ||
            (role == FINISH && r->options->finish_may_miss && !ti_header_has(&r->header, ref.name)))
            continue;
        thole_status status =
            ti_header_find(&r->header, r->faults.name, ROLE[role], ref, &r->column[role], r->error);
        if (status != THOLE_OK)
            return status;
        for (int other = FROM; other < role; other++)
            if (r->column[other] == r->column[role])
                return thole_fail(r->error, THOLE_ARGUMENT, "column %zu is both %s and %s: give each its own",
                                  r->column[role] + 1, ROLE[other], ROLE[role]);
    }
    return THOLE_OK;
}

static bool is_role(const reader *r, size_t field) {
    for (int role = FROM; role < ROLES; role++)
        if (r->column[role] == field)
            return true;
    return false;
}

/* Columns are told apart by name: one that has none, a link's own word, or a name of an earlier column, is
 * called by its number. */
static thole_status name_attribute(reader *r, size_t field, const char **name) {
    static const char *const OWN[] = {"", "from", "to", "start", "finish", "duration"};
    enum { NUMBERED = 48 };
    char *numbered = NULL;
    *name = r->header.name != NULL ? r->header.name[field] : "";
    for (size_t marks = 0;; marks++) {
        bool own = false;
        for (size_t i = 0; i < sizeof OWN / sizeof *OWN; i++)
            own = own || strcmp(*name, OWN[i]) == 0;
        uint32_t id, before = (uint32_t)r->names.start.n;
        if (!own && !tb_names_put(r->context->memory, &r->names, *name, strlen(*name), &id))
            break;
        if (!own && id == before)
            return THOLE_OK;
        if (numbered == NULL && (numbered = tb_arena_take(&r->header.arena, NUMBERED, 1)) == NULL)
            break;
        snprintf(numbered, NUMBERED, "column%zu%.*s", field + 1, marks < 8 ? (int)marks : 8, "________");
        *name = numbered;
    }
    return tb_refused(r->context->memory, r->error, "the header");
}

static thole_status add_attribute(reader *r, size_t field) {
    const char *name;
    thole_status status = name_attribute(r, field, &name);
    if (status != THOLE_OK)
        return status;
    if (!tb_reserve(r->context->memory, (void **)&r->attributes, &r->attribute_cap, r->attribute_n + 1,
                    sizeof *r->attributes))
        return tb_refused(r->context->memory, r->error, "the header");
    r->attributes[r->attribute_n++] = (ti_attribute){.name = name, .field = field, .type = THOLE_INTEGER};
    return THOLE_OK;
}

static bool is_taken(const reader *r, size_t field) {
    for (size_t i = 0; i < r->attribute_n; i++)
        if (r->attributes[i].field == field)
            return true;
    return is_role(r, field);
}

static thole_status find_attributes(reader *r) {
    const thole_contacts_options *o = r->options;
    bool all = o->take_count == SIZE_MAX || (o->take == NULL && o->take_count == 0);
    thole_status status = THOLE_OK;
    for (size_t field = 0; all && field < r->header.n && status == THOLE_OK; field++)
        if (!is_role(r, field))
            status = add_attribute(r, field);
    for (size_t i = 0; !all && i < o->take_count && status == THOLE_OK; i++) {
        size_t field = 0;
        status = ti_header_find(&r->header, r->faults.name, "an attribute",
                                (thole_column_ref){.name = o->take[i]}, &field, r->error);
        if (status == THOLE_OK && !is_taken(r, field))
            status = add_attribute(r, field);
    }
    return status;
}

/* ---- the clock, and with it the builder ---------------------------------- */

static thole_status declare_attributes(reader *r) {
    for (size_t i = 0; i < r->attribute_n; i++) {
        ti_attribute *a = &r->attributes[i];
        thole_status status = thole_builder_column(r->builder, a->name, a->type, &a->column, r->error);
        const char *written = r->header.name != NULL ? r->header.name[a->field] : a->name;
        if (status == THOLE_OK && written[0] != '\0' && strcmp(written, a->name) != 0) {
            char what[sizeof((thole_tally *)0)->what];
            snprintf(what, sizeof what,
                     "attribute \"%s\" goes by its number, as the name of column %zu is taken", a->name,
                     a->field + 1);
            status = thole_builder_remark(r->builder, what, r->header.line, r->error);
        }
        if (status != THOLE_OK)
            return status;
    }
    return THOLE_OK;
}

/* Settle what times are: `form` is that of the first one, THOLE_TIME_FOUND when there is none. */
static thole_status settle_form(reader *r, thole_time_form form) {
    const char *unit = r->options->unit != NULL ? r->options->unit : "s";
    if (form != THOLE_TIME_ISO && form != THOLE_TIME_EPOCH)
        form = r->clock.zone != NULL ? THOLE_TIME_EPOCH : THOLE_TIME_PLAIN;
    r->clock.kind = form == THOLE_TIME_PLAIN ? THOLE_PLAIN : THOLE_CALENDAR;
    if (r->clock.kind == THOLE_CALENDAR && strcmp(unit, "s") != 0)
        return thole_fail(r->error, THOLE_ARGUMENT,
                          "%s:%llu: unit \"%s\" with calendar times, which are in seconds: leave it out",
                          r->faults.name, (unsigned long long)r->rows.line, unit);
    memcpy(r->clock.unit, unit, strlen(unit) + 1);
    r->times.form = form;
    r->times.zone = r->clock.zone;
    thole_status status = thole_builder_open(r->context, &r->clock, &r->builder, r->error);
    if (status != THOLE_OK)
        return status;
    thole_builder_source(r->builder, r->faults.name);
    status = declare_attributes(r);
    return status == THOLE_OK ? ti_faults_attach(&r->faults, r->builder, r->error) : status;
}

/* ---- fields -------------------------------------------------------------- */

static const ti_field *field_of(const reader *r, int role) { return &r->rows.field[r->column[role]]; }

/* A fault of the field in a role; reason and message both begin with the role. */
static thole_status role_fault(reader *r, int role, const char *reason, bool with_value, const char *after) {
    char what[64], before[32];
    const ti_field *field = field_of(r, role);
    snprintf(what, sizeof what, "%s %s", ROLE[role], reason);
    snprintf(before, sizeof before, "%s ", ROLE[role]);
    return ti_fault(&r->faults, field->from, what, before, with_value ? field : NULL, after, r->error);
}

static thole_status time_fault(reader *r, int role, thole_parse parse) {
    bool iso = r->times.form == THOLE_TIME_ISO;
    if (parse == THOLE_PARSE_DIGITS)
        return role_fault(r, role, "has digits finer than a tick", true,
                          " has digits finer than 0.000000001: round it");
    if (parse == THOLE_PARSE_RANGE)
        return role_fault(r, role, "is out of range", true,
                          iso ? " is out of range: expected a date and time that exist, from 1678 to 2261"
                              : " is out of range: expected a number between -9223372036 and 9223372036");
    const char *after =
        iso ? " is not a time: expected ISO 8601 like 2031-05-04T06:20 or 2031-05-04T06:20:00-01:00"
        : r->times.form == THOLE_TIME_EPOCH ? " is not a time: expected seconds since 1970 like 1935645600"
        : r->times.form == THOLE_TIME_PLAIN
            ? " is not a time: expected a number like 1260 or 12.5"
            : " is not a time: expected ISO 8601 like 2031-05-04T06:20, or a number like 1260";
    return role_fault(r, role, "is not a time", true, after);
}

static thole_status duration_fault(reader *r, thole_parse parse) {
    const ti_field *field = field_of(r, DURATION);
    if (parse == THOLE_PARSE_DIGITS)
        return role_fault(r, DURATION, "has digits finer than a tick", true,
                          " has digits finer than 0.000000001: round it");
    if (parse == THOLE_PARSE_RANGE && field->at[0] == '-')
        return role_fault(r, DURATION, "is negative", true, " is negative: expected 0 or more");
    if (parse == THOLE_PARSE_RANGE)
        return role_fault(r, DURATION, "is out of range", true,
                          " is out of range: start and finish must lie within 292 years of 0");
    return role_fault(r, DURATION, "is not a duration", true,
                      r->clock.kind == THOLE_CALENDAR || strcmp(r->clock.unit, "s") == 0
                          ? " is not a duration: expected one like 90, 20 min, 1 h 30 min or PT20M"
                          : " is not a duration: expected a number in the clock's unit, like 12.5");
}

/* Whether all fields that an event needs hold something; *sound is false after a fault was counted. */
static thole_status check_filled(reader *r, bool *sound) {
    for (int role = FROM; role < ROLES; role++)
        if (r->column[role] != ABSENT && field_of(r, role)->length == 0) {
            *sound = false;
            return role_fault(r, role, "is empty", false,
                              role <= TO ? "is empty: expected the name of a node"
                                         : "is empty: expected a time");
        }
    return THOLE_OK;
}

/* Local times that are not what they seem. */
static thole_status remark_local(reader *r, int role, thole_local local, bool second) {
    char what[96];
    snprintf(what, sizeof what, "%s %s", ROLE[role],
             local == THOLE_LOCAL_NEVER ? "never occurs as the clock jumps over it: moved on with the clock"
             : second                   ? "occurs twice: the second is taken, as the first is before start"
                                        : "occurs twice as the clock is set back: the first is taken");
    return thole_builder_remark(r->builder, what, r->rows.line, r->error);
}

/* finish of an event whose start is known. */
static thole_status read_finish(reader *r, thole_event *event, ti_time *finish, bool *second, bool *sound) {
    *finish = (ti_time){.ticks = event->start, .second = event->start, .local = THOLE_LOCAL_ONCE};
    thole_parse parse = THOLE_PARSED;
    if (r->column[FINISH] != ABSENT) {
        const ti_field *field = field_of(r, FINISH);
        parse = ti_times_read(&r->times, field->at, field->length, finish);
        if (parse != THOLE_PARSED) {
            *sound = false;
            return time_fault(r, FINISH, parse);
        }
        *second = finish->ticks < event->start && finish->second >= event->start;
        if (*second)
            finish->ticks = finish->second;
    } else if (r->column[DURATION] != ABSENT) {
        const ti_field *field = field_of(r, DURATION);
        int64_t duration = 0;
        parse = thole_parse_duration(field->at, field->length, &r->clock, &duration);
        if (parse == THOLE_PARSED && event->start > INT64_MAX - duration)
            parse = THOLE_PARSE_RANGE;
        if (parse != THOLE_PARSED) {
            *sound = false;
            return duration_fault(r, parse);
        }
        finish->ticks = event->start + duration;
    }
    if (finish->ticks < event->start) {
        char start[TI_QUOTED_SIZE], after[TI_QUOTED_SIZE + 64];
        ti_quote(field_of(r, START)->at, field_of(r, START)->length, start);
        snprintf(after, sizeof after, " is before start %s: correct one of them", start);
        *sound = false;
        return role_fault(r, FINISH, "before start", true, after);
    }
    event->finish = finish->ticks;
    if (event->start == event->finish && r->options->linger > 0) {
        if (event->start > INT64_MAX - r->options->linger) {
            *sound = false;
            return role_fault(r, START, "is out of range", true,
                              " is out of range with linger added: lower linger");
        }
        event->finish += r->options->linger;
    }
    return THOLE_OK;
}

/* ---- rows ---------------------------------------------------------------- */

/* After some events: what makes many of them fast. The file so far tells how many there will be. */
static thole_status expect_more(reader *r) {
    r->recent = tb_new(r->context->memory, 1, sizeof *r->recent);
    if (r->recent == NULL)
        return tb_refused(r->context->memory, r->error, "the names of nodes");
    double share = ti_source_share(r->source), come = (double)(r->rows.passed + r->rows.end);
    double taken = (double)(r->rows.passed + r->rows.begin), rows = come / share / taken * MANY_EVENTS * 1.02;
    if (share > 0.0 && rows < 4e9)
        tn_builder_expect(r->builder, (size_t)rows);
    return THOLE_OK;
}

static thole_status store(reader *r, thole_event event) {
    const ti_field *from = field_of(r, FROM), *to = field_of(r, TO);
    bool kept = false;
    thole_status status =
        ti_recent_node(r->recent, r->builder, from->at, from->length, &event.from, r->error);
    if (status == THOLE_OK)
        status = ti_recent_node(r->recent, r->builder, to->at, to->length, &event.to, r->error);
    if (status == THOLE_OK)
        status = thole_builder_event(r->builder, event, &kept, r->error);
    r->stored += kept;
    if (kept && r->stored == MANY_EVENTS && status == THOLE_OK)
        status = expect_more(r);
    for (size_t i = 0; i < r->attribute_n && kept && status == THOLE_OK; i++) {
        ti_attribute *a = &r->attributes[i];
        const ti_field *field = &r->rows.field[a->field];
        status = ti_attribute_set(a, r->builder, field->at, field->length, r->rows.line, r->error);
    }
    return status;
}

/* A row with the right number of fields. */
static thole_status take_fields(reader *r) {
    bool sound = true, second = false;
    thole_status status = check_filled(r, &sound);
    if (status != THOLE_OK || !sound)
        return status;
    const ti_field *field = field_of(r, START);
    if (r->builder == NULL) {
        thole_time_form form = ti_time_form_of(field->at, field->length);
        if (form == THOLE_TIME_FOUND)
            return time_fault(r, START, THOLE_PARSE_SYNTAX);
        if ((status = settle_form(r, form)) != THOLE_OK)
            return status;
    }
    ti_time start, finish;
    thole_parse parse = ti_times_read(&r->times, field->at, field->length, &start);
    if (parse != THOLE_PARSED)
        return time_fault(r, START, parse);
    thole_event event = {.start = start.ticks};
    status = read_finish(r, &event, &finish, &second, &sound);
    if (status != THOLE_OK || !sound)
        return status;
    if (start.local != THOLE_LOCAL_ONCE)
        status = remark_local(r, START, start.local, false);
    if (status == THOLE_OK && finish.local != THOLE_LOCAL_ONCE)
        status = remark_local(r, FINISH, finish.local, second);
    return status == THOLE_OK ? store(r, event) : status;
}

static thole_status take_row(reader *r) {
    const ti_rows *rows = &r->rows;
    if (rows->flaw != TI_SOUND)
        return ti_fault_flaw(&r->faults, r->header.n, r->error);
    if (rows->n == r->header.n)
        return take_fields(r);
    if (rows->n == 1 && rows->field[0].length == 0 && !rows->quoted) {
        if (r->blank_n++ == 0)
            r->blank_line = rows->line;
        return THOLE_OK;
    }
    const ti_field *last = &rows->field[rows->n - 1];
    char text[160];
    snprintf(text, sizeof text, " is the last of %zu columns: expected %zu, parted by %s", rows->n,
             r->header.n,
             rows->separator == ','   ? "\",\""
             : rows->separator == ';' ? "\";\""
                                      : "tabs");
    return ti_fault(&r->faults, last->from, "too few columns", "field ", last, text, r->error);
}

/* ---- the file ------------------------------------------------------------ */

/* Pass over blank lines and comments at the top, and find the separator from the line after them. */
static thole_status read_top(reader *r) {
    for (;;) {
        const char *text = NULL;
        size_t length = 0;
        thole_status status = ti_rows_peek(&r->rows, &text, &length, r->error);
        if (status != THOLE_OK)
            return status;
        if (text == NULL)
            return thole_fail(r->error, THOLE_INPUT, "%s: the file is empty: expected %s", r->faults.name,
                              r->options->headless ? "rows" : "a header line with the names of the columns");
        if (length > 0 && text[0] != '#') {
            r->rows.separator =
                r->options->separator != 0 ? r->options->separator : ti_separator_of(text, length);
            return THOLE_OK;
        }
        ti_rows_drop(&r->rows);
    }
}

/* The header, or the first row that is sound enough to count its columns. */
static thole_status read_header(reader *r, bool *got) {
    thole_status status;
    do {
        status = ti_rows_next(&r->rows, got, r->error);
        if (status != THOLE_OK || !*got)
            return status;
        if (r->rows.flaw != TI_SOUND) {
            r->faults.skip = r->options->headless && r->options->skip_faulty;
            status = ti_fault_flaw(&r->faults, TI_MOST_COLUMNS, r->error);
        }
    } while (status == THOLE_OK && r->rows.flaw != TI_SOUND);
    if (status == THOLE_OK)
        status = ti_header_take(&r->header, r->context->memory, &r->rows, r->options->headless, r->error);
    if (status == THOLE_OK)
        status = find_roles(r);
    if (status == THOLE_OK)
        status = find_attributes(r);
    r->rows.most = r->header.n;
    r->faults.skip = r->options->skip_faulty;
    return status;
}

static thole_status read_rows(reader *r) {
    bool got = true;
    thole_status status = read_top(r);
    if (status == THOLE_OK)
        status = read_header(r, &got);
    if (status == THOLE_OK && r->options->form != THOLE_TIME_FOUND)
        status = settle_form(r, r->options->form);
    if (status == THOLE_OK && got && r->options->headless)
        status = take_row(r);
    while (status == THOLE_OK && got) {
        status = ti_rows_next(&r->rows, &got, r->error);
        if (status == THOLE_OK && got)
            status = take_row(r);
    }
    if (status == THOLE_OK && r->builder == NULL)
        status = settle_form(r, THOLE_TIME_FOUND);
    for (; status == THOLE_OK && r->blank_n > 0; r->blank_n--)
        status = thole_builder_remark(r->builder, "blank line", r->blank_line, r->error);
    return status;
}

/* Read from an open source, which is closed in any case. */
static thole_status read_source(reader *r, thole_network **out) {
    r->faults.name = ti_source_name(r->source);
    r->faults.rows = &r->rows;
    size_t left = ti_source_left(r->source); /* and a byte more, to see the end */
    thole_status status =
        ti_rows_open(&r->rows, r->context, r->source, left < TI_BLOCK ? left + 1 : TI_BLOCK, r->error);
    if (status == THOLE_OK)
        status = read_rows(r);
    if (status == THOLE_OK) {
        thole_builder *builder = r->builder;
        r->builder = NULL;
        ti_rows_close(&r->rows); /* its block is not needed while the events are sorted */
        status = thole_builder_finish(builder, out, r->error);
    }
    thole_builder_release(r->builder);
    tb_free(r->context->memory, r->attributes, r->attribute_cap, sizeof *r->attributes);
    tb_names_clear(r->context->memory, &r->names);
    tb_free(r->context->memory, r->recent, 1, sizeof *r->recent);
    ti_header_clear(&r->header);
    ti_rows_close(&r->rows);
    ti_source_close(r->source);
    return status;
}

static thole_status begin(reader *r, thole_context *context, const thole_contacts_options *options,
                          thole_error *error) {
    *r = (reader){.context = context, .options = options, .error = error};
    thole_status status = check_options(options, error);
    if (status == THOLE_OK && options->zone != NULL)
        status = thole_zone_open(context, options->zone, &r->clock.zone, error);
    return status;
}

thole_status thole_read_contacts(thole_context *context, const char *path,
                                 const thole_contacts_options *options, thole_network **out,
                                 thole_error *error) {
    reader r;
    thole_status status = begin(&r, context, options, error);
    if (status == THOLE_OK)
        status = ti_source_open(context, path, &r.source, error);
    if (status == THOLE_OK)
        status = read_source(&r, out);
    thole_zone_release(r.clock.zone);
    return status;
}

thole_status thole_read_contacts_text(thole_context *context, const char *name, const char *text,
                                      size_t length, const thole_contacts_options *options,
                                      thole_network **out, thole_error *error) {
    reader r;
    thole_status status = begin(&r, context, options, error);
    if (status == THOLE_OK)
        status = ti_source_text(context, name, text, length, &r.source, error);
    if (status == THOLE_OK)
        status = read_source(&r, out);
    thole_zone_release(r.clock.zone);
    return status;
}
