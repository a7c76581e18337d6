/* Zone files: TZif, RFC 8536.
 *
 * The reader is our own because those of the C library and of common time libraries keep the zone in global
 * state, as tzset does, or end the process when memory runs out; the format is a small open standard. */
#include "clock/zone.h"

enum { HEADER = 44, MOST_CHANGES = 100000 };

/* The counts of a header, and where its data block's parts begin. */
typedef struct block {
    uint32_t utc_flags, standard_flags, leaps, changes, types, letters;
    unsigned version, time_size; /* bytes of a time */
    const unsigned char *at, *to, *type, *text;
    size_t length; /* of header and data */
} block;

static uint32_t be32(const unsigned char *p) {
    return (uint32_t)p[0] << 24 | (uint32_t)p[1] << 16 | (uint32_t)p[2] << 8 | (uint32_t)p[3];
}

static int64_t be_time(const unsigned char *p, unsigned size) {
    if (size == 4)
        return (int32_t)be32(p);
    return (int64_t)((uint64_t)be32(p) << 32 | be32(p + 4));
}

static const char *read_block(const unsigned char *bytes, size_t length, unsigned time_size, block *out) {
    if (length < HEADER || memcmp(bytes, "TZif", 4) != 0)
        return "does not begin like a TZif file";
    block b = {.version = bytes[4] == 0 ? 1 : (unsigned)(bytes[4] - '0'), .time_size = time_size};
    uint32_t *count[] = {&b.utc_flags, &b.standard_flags, &b.leaps, &b.changes, &b.types, &b.letters};
    for (size_t i = 0; i < 6; i++)
        if ((*count[i] = be32(bytes + 20 + 4 * i)) > MOST_CHANGES)
            return "claims more entries than a zone can have";
    if (b.types == 0 || b.types > 256 || b.letters == 0)
        return "has no types of local time";
    b.at = bytes + HEADER;
    b.to = b.at + (size_t)b.changes * time_size;
    b.type = b.to + b.changes;
    b.text = b.type + (size_t)b.types * 6;
    b.length = (size_t)(b.text - bytes) + b.letters + (size_t)b.leaps * (time_size + 4) + b.standard_flags +
               b.utc_flags;
    if (b.length > length)
        return "is cut short";
    *out = b;
    return NULL;
}

static const char *fill_types(const block *b, thole_zone *zone) {
    if (b->text[b->letters - 1] != '\0')
        return "has an abbreviation without an end";
    memcpy(zone->letters.at, b->text, b->letters);
    zone->letters.n = b->letters;
    for (uint32_t i = 0; i < b->types; i++) {
        const unsigned char *p = b->type + (size_t)i * 6;
        int64_t offset = (int32_t)be32(p);
        if (offset < TK_WEST || offset > TK_EAST)
            return "has an offset of more than a day";
        if (p[5] >= b->letters)
            return "has a type whose abbreviation is outside the file";
        zone->type.at[zone->type.n++] = (tk_type){.offset = (int32_t)offset, .letters = p[5]};
    }
    return NULL;
}

static const char *fill_changes(const block *b, thole_zone *zone) {
    for (uint32_t i = 0; i < b->changes; i++) {
        int64_t at = be_time(b->at + (size_t)i * b->time_size, b->time_size);
        if (i > 0 && at <= zone->at.at[i - 1])
            return "has changes out of order";
        if (b->to[i] >= b->types)
            return "has a change to a type that is not there";
        zone->at.at[zone->at.n++] = at;
        zone->to.at[zone->to.n++] = b->to[i];
    }
    return NULL;
}

static const char *fill_rule(const unsigned char *footer, size_t length, thole_zone *zone) {
    const unsigned char *end = length > 0 ? memchr(footer + 1, '\n', length - 1) : NULL;
    if (end == NULL || footer[0] != '\n')
        return "has no footer line";
    size_t n = (size_t)(end - footer) - 1;
    if (n == 0)
        return NULL; /* nothing is known of the time after the last change: it stays */
    if (!tk_rule_parse((const char *)footer + 1, n, &zone->rule))
        return "has a footer that is not a rule of POSIX";
    zone->has_rule = true;
    return NULL;
}

const char *tk_tzif_read(const unsigned char *bytes, size_t length, thole_zone *zone, bool *refused) {
    block b;
    const char *wrong = read_block(bytes, length, 4, &b);
    if (wrong != NULL)
        return wrong;
    const unsigned char *from = bytes;
    if (b.version >= 2) { /* the first block is for readers of version 1; the second has all, in 64 bits */
        from += b.length;
        wrong = read_block(from, length - b.length, 8, &b);
        if (wrong != NULL)
            return wrong;
    }
    if (b.leaps != 0)
        return "counts leap seconds, which POSIX time does not: take the zone without \"right/\"";
    *refused = !TB_VEC_RESERVE(zone->memory, &zone->letters, b.letters) ||
               !TB_VEC_RESERVE(zone->memory, &zone->type, b.types) ||
               !TB_VEC_RESERVE(zone->memory, &zone->at, b.changes) ||
               !TB_VEC_RESERVE(zone->memory, &zone->to, b.changes);
    if (*refused)
        return NULL;
    if ((wrong = fill_types(&b, zone)) != NULL || (wrong = fill_changes(&b, zone)) != NULL)
        return wrong;
    if (b.version < 2)
        return NULL;
    from += b.length;
    return fill_rule(from, length - (size_t)(from - bytes), zone);
}
