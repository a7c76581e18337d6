/* Durations as people and ISO 8601 write them. */
#include <string.h>

#include "clock/decimal.h"

typedef struct unit {
    const char *name;
    uint64_t ticks;
} unit;

#define SECOND UINT64_C(1000000000)
#define MINUTE (60 * SECOND)
#define HOUR (3600 * SECOND)
#define DAY (86400 * SECOND)
#define WEEK (7 * DAY)

static const unit UNITS[] = {
    {"ns", 1},          {"us", 1000},        {"ms", 1000000}, {"s", SECOND},      {"sec", SECOND},
    {"second", SECOND}, {"seconds", SECOND}, {"min", MINUTE}, {"minute", MINUTE}, {"minutes", MINUTE},
    {"h", HOUR},        {"hour", HOUR},      {"hours", HOUR}, {"d", DAY},         {"day", DAY},
    {"days", DAY},      {"w", WEEK},         {"week", WEEK},  {"weeks", WEEK},
};

typedef struct cursor {
    const char *at, *end;
} cursor;

static bool add(int64_t *sum, int64_t more) {
    if (more > INT64_MAX - *sum)
        return false;
    *sum += more;
    return true;
}

/* A number that is not negative. */
static bool take_number(cursor *c, tk_number *number) {
    size_t n = tk_number_scan(c->at, (size_t)(c->end - c->at), number);
    if (n == 0 || number->digits != c->at)
        return false;
    c->at += n;
    return true;
}

/* Add number x ticks; a fault of range or digits is kept in *worst while the form is still read on. */
static void add_scaled(const tk_number *number, uint64_t ticks, int64_t *sum, thole_parse *worst) {
    int64_t part;
    thole_parse parse = tk_number_scale(number, ticks, &part);
    if (parse == THOLE_PARSED && !add(sum, part))
        parse = THOLE_PARSE_RANGE;
    if (parse != THOLE_PARSED && *worst == THOLE_PARSED)
        *worst = parse;
}

/* The unit that the cursor is at: letters up to a digit, a space or the end. */
static uint64_t take_unit(cursor *c, const thole_clock *clock, bool seconds) {
    const char *first = c->at;
    while (c->at < c->end && !tk_is_digit(*c->at) && *c->at != ' ' && *c->at != '.')
        c->at++;
    size_t n = (size_t)(c->at - first);
    if (!seconds)
        return n > 0 && strlen(clock->unit) == n && memcmp(clock->unit, first, n) == 0 ? SECOND : 0;
    for (size_t i = 0; i < sizeof UNITS / sizeof *UNITS; i++)
        if (strlen(UNITS[i].name) == n && memcmp(UNITS[i].name, first, n) == 0)
            return UNITS[i].ticks;
    return 0;
}

/* "1 h 30 min": numbers with units, spaces where one likes. */
static thole_parse parse_parts(cursor c, const thole_clock *clock, bool seconds, int64_t *ticks) {
    thole_parse worst = THOLE_PARSED;
    int64_t sum = 0;
    while (c.at < c.end) {
        tk_number number;
        if (!take_number(&c, &number))
            return THOLE_PARSE_SYNTAX;
        while (c.at < c.end && *c.at == ' ')
            c.at++;
        uint64_t unit_ticks = take_unit(&c, clock, seconds);
        if (unit_ticks == 0)
            return THOLE_PARSE_SYNTAX;
        add_scaled(&number, unit_ticks, &sum, &worst);
        if (c.at == c.end)
            break;
        while (c.at < c.end && *c.at == ' ')
            c.at++;
        if (c.at == c.end)
            return THOLE_PARSE_SYNTAX; /* a space at the end */
    }
    if (worst == THOLE_PARSED)
        *ticks = sum;
    return worst;
}

/* P[nW][nD][T[nH][nM][nS]]: what has a fixed length; years and months have none. */
static thole_parse parse_iso(cursor c, int64_t *ticks) {
    static const struct {
        char letter;
        bool after_t;
        uint64_t ticks;
    } PARTS[] = {
        {'W', false, WEEK}, {'D', false, DAY}, {'H', true, HOUR}, {'M', true, MINUTE}, {'S', true, SECOND}};
    thole_parse worst = THOLE_PARSED;
    int64_t sum = 0;
    size_t part = 0;
    bool after_t = false, any = false;
    while (c.at < c.end) {
        if (!after_t && *c.at == 'T') {
            after_t = true;
            any = false;
            c.at++;
            continue;
        }
        tk_number number;
        if (!take_number(&c, &number) || c.at == c.end)
            return THOLE_PARSE_SYNTAX;
        while (part < 5 && (PARTS[part].letter != *c.at || PARTS[part].after_t != after_t))
            part++;
        if (part == 5)
            return THOLE_PARSE_SYNTAX;
        add_scaled(&number, PARTS[part++].ticks, &sum, &worst);
        any = true;
        c.at++;
    }
    if (!any)
        return THOLE_PARSE_SYNTAX; /* nothing after P or T */
    if (worst == THOLE_PARSED)
        *ticks = sum;
    return worst;
}

thole_parse thole_parse_duration(const char *text, size_t length, const thole_clock *clock, int64_t *ticks) {
    cursor c = {.at = text, .end = text + length};
    bool seconds = clock->kind == THOLE_CALENDAR || strcmp(clock->unit, "s") == 0;
    int64_t value = 0;
    thole_parse parse = thole_parse_decimal(text, length, &value);
    if (parse == THOLE_PARSE_SYNTAX) {
        bool negative = length > 0 && text[0] == '-';
        c.at += negative;
        if (c.at == c.end)
            return THOLE_PARSE_SYNTAX;
        parse = seconds && *c.at == 'P' ? parse_iso((cursor){c.at + 1, c.end}, &value)
                                        : parse_parts(c, clock, seconds, &value);
        if (parse == THOLE_PARSED && negative)
            value = -value;
    }
    if (parse == THOLE_PARSED && value < 0)
        return THOLE_PARSE_RANGE;
    if (parse == THOLE_PARSED)
        *ticks = value;
    return parse;
}
