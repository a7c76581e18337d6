/* The rule at the end of a zone file: two offsets and the days of the year that change between them. */
#include "clock/zone.h"

enum { DAY = 86400 };

/* A cursor over the text. */
typedef struct cursor {
    const char *at, *end;
} cursor;

static bool take(cursor *c, char wanted) {
    if (c->at == c->end || *c->at != wanted)
        return false;
    c->at++;
    return true;
}

static bool take_int(cursor *c, int most, int *out) {
    int value = 0;
    const char *first = c->at;
    for (; c->at < c->end && *c->at >= '0' && *c->at <= '9'; c->at++)
        if ((value = value * 10 + (*c->at - '0')) > most)
            return false;
    *out = value;
    return c->at > first;
}

/* [+-]hh[:mm[:ss]] as seconds. */
static bool take_clock(cursor *c, int most_hours, int32_t *out) {
    int hours, minutes = 0, seconds = 0;
    bool negative = take(c, '-');
    if (!negative)
        (void)take(c, '+');
    if (!take_int(c, most_hours, &hours))
        return false;
    if (take(c, ':') && (!take_int(c, 59, &minutes) || (take(c, ':') && !take_int(c, 59, &seconds))))
        return false;
    int32_t value = hours * 3600 + minutes * 60 + seconds;
    *out = negative ? -value : value;
    return true;
}

static bool is_letter(char c) { return (c >= 'A' && c <= 'Z') || (c >= 'a' && c <= 'z'); }

static bool take_letters(cursor *c, char out[TK_LETTERS_SIZE]) {
    bool angled = take(c, '<');
    size_t n = 0;
    for (; c->at < c->end; c->at++) {
        char x = *c->at;
        if (!is_letter(x) && !(angled && ((x >= '0' && x <= '9') || x == '+' || x == '-')))
            break;
        if (n + 1 >= TK_LETTERS_SIZE)
            return false;
        out[n++] = x;
    }
    out[n] = '\0';
    return n >= 3 && (!angled || take(c, '>'));
}

static bool take_change(cursor *c, tk_change *out) {
    *out = (tk_change){.kind = TK_JULIAN, .seconds = 2 * 3600};
    if (take(c, 'J')) {
        out->kind = TK_JULIAN_NO_LEAP;
        if (!take_int(c, 365, &out->day) || out->day < 1)
            return false;
    } else if (take(c, 'M')) {
        out->kind = TK_WEEKDAY;
        if (!take_int(c, 12, &out->month) || out->month < 1 || !take(c, '.') || !take_int(c, 5, &out->week) ||
            out->week < 1 || !take(c, '.') || !take_int(c, 6, &out->day))
            return false;
    } else if (!take_int(c, 365, &out->day)) {
        return false;
    }
    return !take(c, '/') || take_clock(c, 167, &out->seconds);
}

bool tk_rule_parse(const char *text, size_t length, tk_rule *out) {
    cursor c = {.at = text, .end = text + length};
    tk_rule rule = {.saves = false};
    int32_t west;
    if (!take_letters(&c, rule.letters[0]) || !take_clock(&c, 24, &west))
        return false;
    rule.offset[0] = -west;
    if (c.at < c.end) {
        rule.saves = true;
        rule.offset[1] = rule.offset[0] + 3600;
        if (!take_letters(&c, rule.letters[1]))
            return false;
        if (c.at < c.end && *c.at != ',') {
            if (!take_clock(&c, 24, &west))
                return false;
            rule.offset[1] = -west;
        }
        /* POSIX leaves it open when saving begins if the rule does not say; a zone file always says. */
        if (!take(&c, ',') || !take_change(&c, &rule.start) || !take(&c, ',') || !take_change(&c, &rule.end))
            return false;
    }
    if (c.at != c.end)
        return false;
    *out = rule;
    return true;
}

static bool is_leap(int64_t year) { return year % 4 == 0 && (year % 100 != 0 || year % 400 == 0); }

/* Local seconds since 1970-01-01T00:00 local at which `change` happens in `year`. */
static int64_t change_local(const tk_change *change, int64_t year) {
    int64_t day = thole_days_from_date(year, 1, 1);
    if (change->kind == TK_JULIAN) {
        day += change->day;
    } else if (change->kind == TK_JULIAN_NO_LEAP) { /* day 60 is always 1 March */
        day += change->day - 1 + (change->day >= 60 && is_leap(year));
    } else {
        day = thole_days_from_date(year, change->month, 1);
        int64_t weekday = ((day + 4) % 7 + 7) % 7; /* 1970-01-01 was a Thursday */
        day += (change->day - weekday + 7) % 7 + 7 * (change->week - 1);
        int64_t next = change->month == 12 ? thole_days_from_date(year + 1, 1, 1)
                                           : thole_days_from_date(year, change->month + 1, 1);
        while (day >= next)
            day -= 7;
    }
    return day * DAY + change->seconds;
}

tk_stretch tk_rule_stretch(const tk_rule *rule, int64_t seconds) {
    tk_stretch s = {
        .from = INT64_MIN, .to = INT64_MAX, .offset = rule->offset[0], .letters = rule->letters[0]};
    if (!rule->saves)
        return s;
    int64_t year;
    int month, day;
    thole_date_from_days(seconds / DAY, &year, &month, &day);
    /* The changes of the years around, in order: an end before a start at the same instant, so that saving
     * all year (an end that is the next year's start) has no gap. Changes reach at most a week into the
     * neighbouring year. */
    struct {
        int64_t at;
        int to;
    } change[10];
    int n = 0;
    for (int64_t y = year - 2; y <= year + 2; y++) {
        for (int to = 0; to < 2; to++) {
            int64_t at = change_local(to ? &rule->start : &rule->end, y) - rule->offset[1 - to];
            int i = n++;
            for (; i > 0 && (change[i - 1].at > at || (change[i - 1].at == at && change[i - 1].to > to)); i--)
                change[i] = change[i - 1];
            change[i].at = at;
            change[i].to = to;
        }
    }
    for (int i = 0; i < n; i++) {
        if (change[i].at <= seconds) {
            s.from = change[i].at;
            s.offset = rule->offset[change[i].to];
            s.letters = rule->letters[change[i].to];
        } else if (s.to == INT64_MAX) {
            s.to = change[i].at;
        }
    }
    return s;
}
