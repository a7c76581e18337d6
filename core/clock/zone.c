/* Time zones: opening them by name, and what the clock on the wall shows. */
#include <errno.h>
#include <fcntl.h>
#include <stdlib.h>
#include <sys/stat.h>
#include <unistd.h>

#include "clock/zone.h"

enum { MOST_FILE = 1 << 20, PATH_SIZE = 1024 };

/* Times beyond this (73 thousand million years) are looked up as if they were this. */
static const int64_t FAR = INT64_C(1) << 61;

/* ---- opening ------------------------------------------------------------ */

static bool is_name(const char *name) {
    size_t n = 0;
    for (; name[n] != '\0'; n++) {
        char c = name[n];
        bool letter = (c >= 'A' && c <= 'Z') || (c >= 'a' && c <= 'z') || (c >= '0' && c <= '9') ||
                      c == '_' || c == '+' || c == '-';
        bool parts = c == '/' && n > 0 && name[n - 1] != '/' && name[n + 1] != '\0';
        if (n + 1 >= TK_NAME_SIZE || (!letter && !parts))
            return false;
    }
    return n > 0;
}

static void clear(thole_zone *zone) {
    thole_memory *memory = zone->memory;
    TB_VEC_CLEAR(memory, &zone->at);
    TB_VEC_CLEAR(memory, &zone->to);
    TB_VEC_CLEAR(memory, &zone->type);
    TB_VEC_CLEAR(memory, &zone->letters);
    tb_free(memory, zone, 1, sizeof *zone);
}

/* Read all of an open file that is `size` bytes long; false when it turns out shorter. */
static bool read_all(int file, unsigned char *bytes, size_t size) {
    for (size_t done = 0; done < size;) {
        ssize_t n = read(file, bytes + done, size - done);
        if (n == 0 || (n < 0 && errno != EINTR))
            return false;
        done += n > 0 ? (size_t)n : 0;
    }
    return true;
}

static thole_status load(thole_zone *zone, int file, thole_error *error) {
    struct stat about;
    const char *wrong = NULL;
    bool refused = false;
    if (fstat(file, &about) != 0 || !S_ISREG(about.st_mode))
        wrong = "is not a file";
    else if (about.st_size <= 0 || about.st_size > MOST_FILE)
        wrong = "is empty or larger than a zone can be";
    if (wrong == NULL) {
        size_t size = (size_t)about.st_size;
        unsigned char *bytes = tb_new(zone->memory, size, 1);
        refused = bytes == NULL;
        if (!refused)
            wrong =
                read_all(file, bytes, size) ? tk_tzif_read(bytes, size, zone, &refused) : "could not be read";
        tb_free(zone->memory, bytes, size, 1);
    }
    if (refused)
        return tb_refused(zone->memory, error, "a time zone");
    if (wrong != NULL)
        return thole_fail(error, THOLE_ARGUMENT,
                          "the file of time zone \"%s\" %s: name a zone like Atlantic/Azores", zone->name,
                          wrong);
    return THOLE_OK;
}

static int open_file(const char *folder, const char *name) {
    char path[PATH_SIZE];
    size_t a = strlen(folder), b = strlen(name);
    if (a + b + 2 > sizeof path)
        return -1;
    memcpy(path, folder, a);
    path[a] = '/';
    memcpy(path + a + 1, name, b + 1);
    return open(path, O_RDONLY | O_CLOEXEC | O_NONBLOCK);
}

thole_status thole_zone_open(thole_context *context, const char *name, thole_zone **out, thole_error *error) {
    const char *folder = getenv("TZDIR");
    if (folder == NULL || folder[0] == '\0')
        folder = "/usr/share/zoneinfo";
    if (!is_name(name))
        return thole_fail(error, THOLE_ARGUMENT,
                          "\"%.100s\" is not the name of a time zone: name one like Atlantic/Azores", name);
    int file = open_file(folder, name);
    if (file < 0) {
        struct stat about;
        if (stat(folder, &about) != 0)
            return thole_fail(error, THOLE_ARGUMENT,
                              "no time zone files in \"%.300s\": install the system's package tzdata",
                              folder);
        return thole_fail(error, THOLE_ARGUMENT,
                          "unknown time zone \"%s\": take a name from \"%.300s\", like Atlantic/Azores", name,
                          folder);
    }
    thole_status status;
    thole_zone *zone = tb_new(context->memory, 1, sizeof *zone);
    if (zone == NULL) {
        status = tb_refused(context->memory, error, "a time zone");
    } else {
        zone->memory = context->memory;
        atomic_init(&zone->refs, 1);
        memcpy(zone->name, name, strlen(name) + 1);
        status = load(zone, file, error);
    }
    close(file);
    if (status == THOLE_OK)
        *out = zone;
    else if (zone != NULL)
        clear(zone);
    return status;
}

thole_zone *thole_zone_retain(thole_zone *zone) {
    if (zone != NULL)
        tb_ref(&zone->refs);
    return zone;
}

void thole_zone_release(thole_zone *zone) {
    if (zone != NULL && tb_unref(&zone->refs))
        clear(zone);
}

const char *thole_zone_name(const thole_zone *zone) { return zone != NULL ? zone->name : "UTC"; }

/* ---- asking ------------------------------------------------------------- */

static tk_stretch of_type(const thole_zone *zone, unsigned type, int64_t from, int64_t to) {
    const tk_type *t = &zone->type.at[type];
    return (tk_stretch){
        .from = from, .to = to, .offset = t->offset, .letters = zone->letters.at + t->letters};
}

tk_stretch tk_zone_stretch(const thole_zone *zone, int64_t seconds) {
    if (zone == NULL)
        return (tk_stretch){.from = INT64_MIN, .to = INT64_MAX, .offset = 0, .letters = "UTC"};
    seconds = seconds > FAR ? FAR : seconds < -FAR ? -FAR : seconds;
    size_t low = 0, high = zone->at.n; /* the first change after `seconds` */
    while (low < high) {
        size_t middle = low + (high - low) / 2;
        if (zone->at.at[middle] <= seconds)
            low = middle + 1;
        else
            high = middle;
    }
    int64_t from = low > 0 ? zone->at.at[low - 1] : INT64_MIN;
    if (low == zone->at.n && zone->has_rule) {
        tk_stretch s = tk_rule_stretch(&zone->rule, seconds);
        if (s.from < from)
            s.from = from;
        return s;
    }
    return of_type(zone, low > 0 ? zone->to.at[low - 1] : 0, from,
                   low < zone->at.n ? zone->at.at[low] : INT64_MAX);
}

int32_t thole_zone_offset(const thole_zone *zone, int64_t seconds, const char **abbreviation) {
    tk_stretch s = tk_zone_stretch(zone, seconds);
    if (abbreviation != NULL)
        *abbreviation = s.letters;
    return s.offset;
}

thole_local tk_zone_instants(const thole_zone *zone, int64_t local, int64_t *first, int64_t *second) {
    local = local > FAR ? FAR : local < -FAR ? -FAR : local;
    int64_t found[2] = {0, 0}, jumped = local;
    int n = 0;
    bool jump = false;
    /* Go through every stretch that an instant with this local time can be in. */
    tk_stretch s = tk_zone_stretch(zone, local - TK_EAST);
    for (;;) {
        int64_t t = local - s.offset;
        if (t >= s.from && t < s.to) {
            found[n > 0] = t;
            n++;
        }
        if (s.to == INT64_MAX || s.to > local - TK_WEST)
            break;
        tk_stretch next = tk_zone_stretch(zone, s.to);
        if (!jump && local >= s.to + s.offset && local < s.to + next.offset) {
            jump = true;
            jumped = t;
        }
        s = next;
    }
    if (n == 0) { /* local time only ever skips at a change, so the loop has met it */
        *first = *second = jumped;
        return THOLE_LOCAL_NEVER;
    }
    *first = found[0];
    *second = n > 1 ? found[1] : found[0];
    return n > 1 ? THOLE_LOCAL_TWICE : THOLE_LOCAL_ONCE;
}

thole_local thole_zone_instant(const thole_zone *zone, int64_t local_seconds, int64_t *seconds) {
    int64_t second;
    return tk_zone_instants(zone, local_seconds, seconds, &second);
}

void tk_zone_steady(const thole_zone *zone, int64_t instant, int64_t *low, int64_t *high, int32_t *offset) {
    /* No instant outside the stretch can show a local time that is further from its ends than this. */
    enum { MARGIN = TK_EAST - TK_WEST + 1 };
    tk_stretch s = tk_zone_stretch(zone, instant);
    *offset = s.offset;
    *low = s.from == INT64_MIN ? INT64_MIN : tk_add(s.from, s.offset + MARGIN);
    *high = s.to == INT64_MAX ? INT64_MAX : tk_add(s.to, s.offset - MARGIN);
    if (*high < *low)
        *high = *low;
}
