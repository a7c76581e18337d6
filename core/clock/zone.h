/* Inside the core: how a time zone is held, and what the time readers ask of it. */
#ifndef TK_ZONE_H
#define TK_ZONE_H

#include "base/memory.h"
#include "clock/clock.h"

enum {
    TK_NAME_SIZE = 128,   /* of a zone's name */
    TK_LETTERS_SIZE = 16, /* of an abbreviation in a rule, with its NUL */
    TK_WEST = -89999,     /* seconds: offsets further out are refused, after RFC 8536, 3.2 */
    TK_EAST = 93599
};

/* The day of a year on which a rule changes the clock, and when on that day. */
typedef struct tk_change {
    enum { TK_JULIAN_NO_LEAP, TK_JULIAN, TK_WEEKDAY } kind;
    int day;         /* J1..J365, 0..365, or weekday 0 (Sunday) .. 6 */
    int month, week; /* TK_WEEKDAY: 1..12, 1..5 (5: the last) */
    int32_t seconds; /* local seconds after that day's midnight, perhaps negative */
} tk_change;

/* A zone's rule for the times after its table ends (the footer of a TZif file). */
typedef struct tk_rule {
    bool saves;        /* whether there is a second time */
    int32_t offset[2]; /* seconds east: standard, saving */
    char letters[2][TK_LETTERS_SIZE];
    tk_change start, end; /* of saving */
} tk_rule;

typedef struct tk_type {
    int32_t offset;
    uint32_t letters; /* where its abbreviation begins in `letters` */
} tk_type;

struct thole_zone {
    thole_memory *memory;
    tb_refs refs;
    char name[TK_NAME_SIZE];
    TB_VEC(int64_t) at;   /* ascending instants at which the type changes */
    TB_VEC(uint8_t) to;   /* the type from then on */
    TB_VEC(tk_type) type; /* type 0 holds before the first change */
    TB_VEC(char) letters; /* NUL-ended abbreviations */
    bool has_rule;        /* whether `rule` holds after the last change */
    tk_rule rule;
};

/* A stretch of instants from <= t < to with one offset; INT64_MIN and INT64_MAX stand for no end. */
typedef struct tk_stretch {
    int64_t from, to;
    int32_t offset;
    const char *letters;
} tk_stretch;

tk_stretch tk_zone_stretch(const thole_zone *zone, int64_t seconds);

/* As thole_zone_instant, with the second instant too (equal to the first unless it is THOLE_LOCAL_TWICE). */
thole_local tk_zone_instants(const thole_zone *zone, int64_t local_seconds, int64_t *first, int64_t *second);

/* Local times low <= t < high around `instant` that each occur once, all at *offset; an empty range where
 * changes are near. */
void tk_zone_steady(const thole_zone *zone, int64_t instant, int64_t *low, int64_t *high, int32_t *offset);

/* A rule in the form of the environment variable TZ of POSIX.1-2008, chapter 8, with the wider hours and
 * <...> names that RFC 8536, 3.3.1 allows. False when the text is no such rule. */
bool tk_rule_parse(const char *text, size_t length, tk_rule *out);
tk_stretch tk_rule_stretch(const tk_rule *rule, int64_t seconds);

/* Fill at, to, type, letters and the rule from the bytes of a TZif file (RFC 8536). NULL, or what is wrong
 * with them; *refused tells that memory was. The zone is to be cleared by the caller in any case. */
const char *tk_tzif_read(const unsigned char *bytes, size_t length, thole_zone *zone, bool *refused);

/* a + b, held at the ends of the range. */
static inline int64_t tk_add(int64_t a, int64_t b) {
    if (b > 0 ? a > INT64_MAX - b : a < INT64_MIN - b)
        return b > 0 ? INT64_MAX : INT64_MIN;
    return a + b;
}

#endif
