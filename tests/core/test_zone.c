/* Time zones: against the C library over the same files, malformed files, and the rule for gaps and repeats.
 */
#define _DEFAULT_SOURCE /* tm_gmtoff, tm_zone: what the C library says, to compare with */
#include <setjmp.h>
#include <stdarg.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <sys/stat.h>
#include <time.h>
#include <unistd.h>

#include <cmocka.h>

#include "clock/zone.h"

static uint64_t seed = UINT64_C(0x9E3779B97F4A7C15);

static uint64_t next_random(void) {
    seed ^= seed << 13;
    seed ^= seed >> 7;
    return seed ^= seed << 17;
}

static thole_memory memory;
static thole_context context = {.memory = &memory, .threads = 1};

/* Half-hour and midnight changes, far east, changes of sign, no saving, negative saving, rules that changed
 * often, a skipped day, a southern zone. */
static const char *const ZONES[] = {
    "Australia/Lord_Howe",  "America/Asuncion",
    "Africa/Cairo",         "Pacific/Kiritimati",
    "Atlantic/Azores",      "America/New_York",
    "Asia/Kathmandu",       "Europe/Dublin",
    "Africa/Casablanca",    "Pacific/Apia",
    "America/Santiago",     "Asia/Gaza",
    "America/Scoresbysund", "UTC",
};
enum { ZONE_COUNT = sizeof ZONES / sizeof *ZONES };

static thole_zone *open_zone(const char *name) {
    thole_zone *zone = NULL;
    thole_error error;
    if (thole_zone_open(&context, name, &zone, &error) != THOLE_OK)
        fail_msg("%s (Debian package tzdata)", error.text);
    setenv("TZ", name, 1);
    tzset();
    return zone;
}

static int32_t library_offset(int64_t seconds) {
    time_t t = (time_t)seconds;
    struct tm tm;
    assert_non_null(localtime_r(&t, &tm));
    return (int32_t)tm.tm_gmtoff;
}

static void check_offset(const thole_zone *zone, int64_t seconds) {
    time_t t = (time_t)seconds;
    struct tm tm;
    const char *letters = NULL;
    assert_non_null(localtime_r(&t, &tm));
    int32_t offset = thole_zone_offset(zone, seconds, &letters);
    if (offset != tm.tm_gmtoff || strcmp(letters, tm.tm_zone) != 0)
        fail_msg("%s at %lld: %d %s, the C library has %ld %s", thole_zone_name(zone), (long long)seconds,
                 (int)offset, letters, tm.tm_gmtoff, tm.tm_zone);
}

static const int64_t YEAR = 31556952;

/* 3,000 instants of 1800 to 2400, 500 up to the year 9000, by the footer's rule. */
static void test_offsets(void **state) {
    (void)state;
    for (size_t z = 0; z < ZONE_COUNT; z++) {
        thole_zone *zone = open_zone(ZONES[z]);
        for (int i = 0; i < 3000; i++)
            check_offset(zone, (int64_t)(next_random() % (uint64_t)(600 * YEAR)) - 170 * YEAR);
        for (int i = 0; i < 500; i++)
            check_offset(zone, (int64_t)(next_random() % (uint64_t)(7000 * YEAR)));
        thole_zone_release(zone);
    }
}

/* Local time -> instants by brute force over the C library's offsets around. */
static void check_local(const thole_zone *zone, int64_t local) {
    int64_t found[8], jumped = 0;
    int n = 0;
    enum { STEP = 1800, REACH = 2 * 86400 };
    int32_t seen[8];
    int offsets = 0;
    for (int64_t t = local - REACH; t <= local + REACH; t += STEP) {
        int32_t offset = library_offset(t);
        int i = 0;
        while (i < offsets && seen[i] != offset)
            i++;
        if (i == offsets && offsets < 8)
            seen[offsets++] = offset;
    }
    for (int i = 0; i < offsets; i++)
        if (library_offset(local - seen[i]) == seen[i])
            found[n++] = local - seen[i];
    for (int i = 1; i < n; i++)
        if (found[i] < found[0]) {
            int64_t t = found[0];
            found[0] = found[i];
            found[i] = t;
        }
    if (n == 0) { /* find the jump: local time is below before it and above after it */
        int64_t low = local - REACH, high = local + REACH;
        while (high - low > 1) {
            int64_t middle = low + (high - low) / 2;
            if (middle + library_offset(middle) < local)
                low = middle;
            else
                high = middle;
        }
        jumped = local - library_offset(low);
    }
    int64_t instant = 0;
    thole_local occurs = thole_zone_instant(zone, local, &instant);
    thole_local wanted = n == 0 ? THOLE_LOCAL_NEVER : n == 1 ? THOLE_LOCAL_ONCE : THOLE_LOCAL_TWICE;
    if (occurs != wanted || instant != (n == 0 ? jumped : found[0]))
        fail_msg("%s local %lld: %d at %lld, wanted %d at %lld", thole_zone_name(zone), (long long)local,
                 (int)occurs, (long long)instant, (int)wanted, (long long)(n == 0 ? jumped : found[0]));
    if (n == 1) { /* the C library's own way back */
        time_t t = (time_t)local;
        struct tm tm;
        assert_non_null(gmtime_r(&t, &tm));
        tm.tm_isdst = -1;
        assert_true((int64_t)mktime(&tm) == instant);
    }
    int64_t first = 0, second = 0;
    assert_int_equal(tk_zone_instants(zone, local, &first, &second), occurs);
    assert_true(first == instant);
    assert_true(n < 2 ? second == first : second > first && second + library_offset(second) == local);
}

/* Around every change of 1970 to 2060, found by bisecting the C library's offsets. */
static void test_changes(void **state) {
    (void)state;
    int changes = 0;
    for (size_t z = 0; z < ZONE_COUNT; z++) {
        thole_zone *zone = open_zone(ZONES[z]);
        for (int64_t t = 0; t < 90 * YEAR; t += 7 * 86400) {
            int64_t low = t, high = t + 7 * 86400;
            int32_t before = library_offset(low);
            if (before == library_offset(high))
                continue;
            while (high - low > 1) {
                int64_t middle = low + (high - low) / 2;
                if (library_offset(middle) == before)
                    low = middle;
                else
                    high = middle;
            }
            changes++;
            int32_t after = library_offset(high);
            static const int NEAR[] = {-3600, -1, 0, 1, 900};
            for (size_t i = 0; i < 5; i++) {
                check_offset(zone, high + NEAR[i]);
                check_local(zone, high + before + NEAR[i]);
                check_local(zone, high + after + NEAR[i]);
            }
            check_local(zone, high + (before + after) / 2);
        }
        thole_zone_release(zone);
    }
    assert_true(changes > 1000);
}

static void test_known_days(void **state) {
    (void)state;
    static const struct {
        const char *zone, *local;
        thole_local occurs;
        const char *written;
    } TABLE[] = {
        /* US saving time, Energy Policy Act of 2005: second Sunday of March, first Sunday of November, 02:00
         */
        {"America/New_York", "2026-03-08T02:30", THOLE_LOCAL_NEVER, "2026-03-08T03:30:00-04:00"},
        {"America/New_York", "2026-11-01T01:30", THOLE_LOCAL_TWICE, "2026-11-01T01:30:00-04:00"},
        {"America/New_York", "2026-11-01T00:59:59", THOLE_LOCAL_ONCE, "2026-11-01T00:59:59-04:00"},
        {"America/New_York", "2026-11-01T02:00", THOLE_LOCAL_ONCE, "2026-11-01T02:00:00-05:00"},
        /* EU Directive 2000/84/EC: last Sundays of March and October at 01:00 UTC */
        {"Atlantic/Azores", "2031-03-30T00:15", THOLE_LOCAL_NEVER, "2031-03-30T01:15:00Z"},
        {"Atlantic/Azores", "2031-10-26T00:15", THOLE_LOCAL_TWICE, "2031-10-26T00:15:00Z"},
        {"Atlantic/Azores", "2261-10-27T00:15", THOLE_LOCAL_TWICE, "2261-10-27T00:15:00Z"},
        /* half an hour, tz database */
        {"Australia/Lord_Howe", "2026-04-05T01:45", THOLE_LOCAL_TWICE, "2026-04-05T01:45:00+11:00"},
        {"Australia/Lord_Howe", "2026-10-04T02:15", THOLE_LOCAL_NEVER, "2026-10-04T02:45:00+11:00"},
        /* a change at midnight: the day begins at 01:00, tz database */
        {"Africa/Cairo", "2026-04-24", THOLE_LOCAL_NEVER, "2026-04-24T01:00:00+03:00"},
        /* the day that Samoa left out, tz database */
        {"Pacific/Apia", "2011-12-30T12:00", THOLE_LOCAL_NEVER, "2011-12-31T12:00:00+14:00"},
        {"Asia/Kathmandu", "2031-05-04T06:20", THOLE_LOCAL_ONCE, "2031-05-04T06:20:00+05:45"},
        {"Pacific/Kiritimati", "2031-05-04T06:20", THOLE_LOCAL_ONCE, "2031-05-04T06:20:00+14:00"},
    };
    for (size_t i = 0; i < sizeof TABLE / sizeof *TABLE; i++) {
        thole_clock clock = {.kind = THOLE_CALENDAR, .unit = "s", .zone = open_zone(TABLE[i].zone)};
        int64_t ticks = 0;
        thole_local occurs = THOLE_LOCAL_ONCE;
        assert_int_equal(
            thole_parse_iso8601(TABLE[i].local, strlen(TABLE[i].local), clock.zone, &ticks, &occurs),
            THOLE_PARSED);
        assert_int_equal(occurs, TABLE[i].occurs);
        char out[THOLE_TIME_SIZE], wanted[THOLE_TIME_SIZE];
        thole_format_time(&clock, ticks, 0, out);
        snprintf(wanted, sizeof wanted, "%s", TABLE[i].written);
        if (wanted[strlen(wanted) - 1] == 'Z')
            snprintf(wanted + strlen(wanted) - 1, 8, "+00:00");
        assert_string_equal(out, wanted);
        thole_zone_release(clock.zone);
    }
}

/* Offsets with seconds (local mean time) too: what is written is read back. */
static void test_written_times_come_back(void **state) {
    (void)state;
    for (size_t z = 0; z < ZONE_COUNT; z++) {
        thole_clock clock = {.kind = THOLE_CALENDAR, .unit = "s", .zone = open_zone(ZONES[z])};
        for (int i = 0; i < 2000; i++) {
            int64_t wanted = (int64_t)next_random() >> (i % 3 ? 0 : 1), ticks = 0;
            char out[THOLE_TIME_SIZE];
            size_t n = thole_format_time(&clock, wanted, 0, out);
            assert_int_equal(thole_parse_iso8601(out, n, clock.zone, &ticks, NULL), THOLE_PARSED);
            assert_true(ticks == wanted);
        }
        thole_zone_release(clock.zone);
    }
}

/* Every local time in a steady range occurs once, with its offset. */
static void test_steady(void **state) {
    (void)state;
    for (size_t z = 0; z < ZONE_COUNT; z++) {
        thole_zone *zone = open_zone(ZONES[z]);
        int wide = 0;
        for (int i = 0; i < 300; i++) {
            int64_t instant = (int64_t)(next_random() % (uint64_t)(300 * YEAR)) - 100 * YEAR, low, high;
            int32_t offset;
            tk_zone_steady(zone, instant, &low, &high, &offset);
            assert_int_equal(offset, library_offset(instant));
            wide += low < high;
            for (int j = 0; j < 6 && low < high; j++) {
                int64_t from = low == INT64_MIN ? -200 * YEAR : low,
                        to = high == INT64_MAX ? 300 * YEAR : high;
                int64_t local = j == 0   ? from
                                : j == 1 ? to - 1
                                         : from + (int64_t)(next_random() % (uint64_t)(to - from));
                int64_t t = 0;
                assert_int_equal(thole_zone_instant(zone, local, &t), THOLE_LOCAL_ONCE);
                assert_true(local - t == offset);
            }
        }
        assert_true(wide > 200);
        thole_zone_release(zone);
    }
}

static int check_memory(void **state) {
    (void)state;
    return atomic_load(&memory.used) == 0 ? 0 : -1;
}

int main(void) {
    unsetenv("TZDIR");
    const struct CMUnitTest tests[] = {
        cmocka_unit_test_teardown(test_offsets, check_memory),
        cmocka_unit_test_teardown(test_changes, check_memory),
        cmocka_unit_test_teardown(test_known_days, check_memory),
        cmocka_unit_test_teardown(test_written_times_come_back, check_memory),
        cmocka_unit_test_teardown(test_steady, check_memory),
    };
    return cmocka_run_group_tests(tests, NULL, check_memory);
}
