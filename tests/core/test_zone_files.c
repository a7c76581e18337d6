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

static int32_t library_offset(int64_t seconds) {
    time_t t = (time_t)seconds;
    struct tm tm;
    assert_non_null(localtime_r(&t, &tm));
    return (int32_t)tm.tm_gmtoff;
}

static const int64_t YEAR = 31556952;

/* ---- rules, by a zone file of their own ---------------------------------- */

static char folder[256];

static void put_file(const char *name, const void *bytes, size_t n) {
    char path[320];
    snprintf(path, sizeof path, "%s/%s", folder, name);
    FILE *file = fopen(path, "wb");
    assert_non_null(file);
    assert_int_equal(fwrite(bytes, 1, n, file), n);
    assert_int_equal(fclose(file), 0);
}

static int make_folder(void **state) {
    (void)state;
    const char *where = getenv("TMPDIR");
    int n = snprintf(folder, sizeof folder, "%s/zones-XXXXXX",
                     where != NULL && where[0] != '\0' ? where : "/tmp");
    if (n < 0 || (size_t)n >= sizeof folder || mkdtemp(folder) == NULL)
        return -1;
    return setenv("TZDIR", folder, 1);
}

static int remove_folder(void **state) {
    (void)state;
    char path[320];
    snprintf(path, sizeof path, "%s/Zone", folder);
    (void)unlink(path);
    unsetenv("TZDIR");
    return rmdir(folder);
}

typedef struct content {
    unsigned char at[4096];
    size_t n;
} content;

static void put_be(content *image, uint64_t value, int bytes) {
    for (int i = bytes - 1; i >= 0; i--)
        image->at[image->n++] = (unsigned char)(value >> (8 * i));
}

static void put_header(content *image, char version, uint32_t leaps, uint32_t changes, uint32_t types,
                       uint32_t letters) {
    memcpy(image->at + image->n, "TZif", 4);
    image->at[image->n + 4] = (unsigned char)version;
    memset(image->at + image->n + 5, 0, 15);
    image->n += 20;
    const uint32_t counts[] = {0, 0, leaps, changes, types, letters};
    for (int i = 0; i < 6; i++)
        put_be(image, counts[i], 4);
}

/* A version 2 file with two types (+1 h "AAA", +2 h "BBB"), changes to BBB at 1000 and to AAA at 2000. */
static void make_image(content *image, const char *footer) {
    image->n = 0;
    put_header(image, '2', 0, 0, 1, 4);
    put_be(image, 0, 6);
    put_be(image, 0x41414100, 4);
    put_header(image, '2', 0, 2, 2, 8);
    put_be(image, 1000, 8);
    put_be(image, 2000, 8);
    put_be(image, 1, 1);
    put_be(image, 0, 1);
    put_be(image, 3600, 4);
    put_be(image, 0, 2);
    put_be(image, 7200, 4);
    put_be(image, 0x0104, 2);
    put_be(image, 0x4141410042424200, 8);
    put_be(image, '\n', 1);
    memcpy(image->at + image->n, footer, strlen(footer));
    image->n += strlen(footer);
    put_be(image, '\n', 1);
}

enum { IMAGE_SECOND = 44 + 6 + 4, IMAGE_TIMES = IMAGE_SECOND + 44 };

static void test_small_file(void **state) {
    (void)state;
    content image;
    make_image(&image, "");
    put_file("Zone", image.at, image.n);
    thole_zone *zone = NULL;
    const char *letters;
    assert_int_equal(thole_zone_open(&context, "Zone", &zone, NULL), THOLE_OK);
    assert_int_equal(thole_zone_offset(zone, INT64_MIN, &letters), 3600);
    assert_string_equal(letters, "AAA");
    assert_int_equal(thole_zone_offset(zone, 999, NULL), 3600);
    assert_int_equal(thole_zone_offset(zone, 1000, &letters), 7200);
    assert_string_equal(letters, "BBB");
    assert_int_equal(thole_zone_offset(zone, 1999, NULL), 7200);
    assert_int_equal(thole_zone_offset(zone, 2000, NULL), 3600);
    assert_int_equal(thole_zone_offset(zone, INT64_MAX, NULL), 3600);
    int64_t t = 0;
    assert_int_equal(thole_zone_instant(zone, INT64_MAX, &t), THOLE_LOCAL_ONCE);
    assert_int_equal(thole_zone_instant(zone, INT64_MIN, &t), THOLE_LOCAL_ONCE);
    /* The clock goes 4599, 8200 .. 9199, 5600 and on: 4600 .. 5599 is never, 8200 .. 9199 twice. */
    assert_int_equal(thole_zone_instant(zone, 4600, &t), THOLE_LOCAL_NEVER);
    assert_true(t == 1000);
    assert_int_equal(thole_zone_instant(zone, 5599, &t), THOLE_LOCAL_NEVER);
    assert_true(t == 1999);
    assert_int_equal(thole_zone_instant(zone, 5600, &t), THOLE_LOCAL_ONCE); /* after 2000 only */
    assert_true(t == 2000);
    assert_int_equal(thole_zone_instant(zone, 8200, &t), THOLE_LOCAL_TWICE);
    assert_true(t == 1000);
    thole_zone_release(zone);
}

/* The rule's forms against the C library, which reads the same text from TZ. Changes that fall in another
 * year in UTC are left out: the library looks only at the UTC year's. */
static void test_rules(void **state) {
    (void)state;
    static const char *const RULES[] = {
        "EST5EDT,M3.2.0,M11.1.0",
        "<+1030>-10:30<+11>-11,M10.1.0,M4.1.0",
        "IST-1GMT0,M10.5.0,M3.5.0/1",
        "XXX3YYY,J60,J300",
        "XXX3YYY,59,299",
        "AAA-12BBB,J2/0,J59/23:59:59",
        "AAA12:30:15BBB11,M2.1.1/-5,M11.5.6/30",
        "EET-2EEST,M4.5.5/0,M10.5.4/24",
        "<-02>2<-01>,M3.4.4/50,M10.4.4/50",
        "UTC0",
        "<+0545>-5:45",
        "EET-2EEST,M3.5.0/3,M9.1.0/-1",
    };
    for (size_t i = 0; i < sizeof RULES / sizeof *RULES; i++) {
        tk_rule rule;
        if (!tk_rule_parse(RULES[i], strlen(RULES[i]), &rule))
            fail_msg("%s is refused", RULES[i]);
        setenv("TZ", RULES[i], 1);
        tzset();
        for (int j = 0; j < 3000; j++) {
            int64_t t = 2 * YEAR + (int64_t)(next_random() % (uint64_t)(400 * YEAR));
            tk_stretch s = tk_rule_stretch(&rule, t);
            /* at its ends, unless they are outside what the library computes year by year */
            int64_t at[] = {t, s.from, s.to - 1, s.to};
            for (size_t k = 0; k < (rule.saves ? 4 : 1); k++) {
                tk_stretch here = tk_rule_stretch(&rule, at[k]);
                assert_true(here.from <= at[k] && at[k] < here.to);
                if (here.offset != library_offset(at[k]))
                    fail_msg("%s at %lld: %d, the C library has %d", RULES[i], (long long)at[k],
                             (int)here.offset, (int)library_offset(at[k]));
            }
            assert_true(!rule.saves || tk_rule_stretch(&rule, s.to).from == s.to);
        }
    }
    /* saving all year (RFC 8536, 3.3.1: "XXX3EDT4,0/0,J365/23" and the like) */
    tk_rule all_year;
    assert_true(tk_rule_parse("EST5EDT,0/0,J365/25", 19, &all_year));
    for (int i = 0; i < 2000; i++)
        assert_int_equal(tk_rule_stretch(&all_year, (int64_t)(next_random() % (uint64_t)(400 * YEAR))).offset,
                         -14400);
    tk_rule new_year; /* 2100-01-01T00:00+12:00 is 2099-12-31T12:00Z */
    assert_true(tk_rule_parse("AAA-12BBB,J1/0,J59", 18, &new_year));
    assert_int_equal(tk_rule_stretch(&new_year, 4102401600 - 1).offset, 43200);
    assert_int_equal(tk_rule_stretch(&new_year, 4102401600).offset, 46800);
    assert_true(tk_rule_stretch(&new_year, 4102401600).from == 4102401600);
    static const char *const BAD[] = {
        "",
        "A1",
        "AB1",
        "ABC",
        "ABC25",
        "<AB>1",
        "<ABC1",
        "ABC1DEF",
        "ABC1DEF,",
        "ABC1DEF,J0,J5",
        "ABC1DEF,J366,J5",
        "ABC1DEF,366,5",
        "ABC1DEF,M13.1.0,M1.1.0",
        "ABC1DEF,M0.1.0,M1.1.0",
        "ABC1DEF,M1.6.0,M1.1.0",
        "ABC1DEF,M1.0.0,M1.1.0",
        "ABC1DEF,M1.1.7,M1.1.0",
        "ABC1DEF,M1.1,M1.1.0",
        "ABC1DEF,J1/168,J5",
        "ABC1DEF,J1,J5,",
        "ABC1DEF,J1,J5 ",
        "ABC1:60",
        "ABC1:00:60",
        "ABC1:",
        "ABC+",
        "ABCDEFGHIJKLMNOPQ1",
        ":America/New_York",
        "ABC1DEF,J1",
        "ABC1DEF,99999999999,5",
    };
    for (size_t i = 0; i < sizeof BAD / sizeof *BAD; i++)
        if (tk_rule_parse(BAD[i], strlen(BAD[i]), &all_year))
            fail_msg("\"%s\" is taken for a rule", BAD[i]);
}

static void expect_refused(const content *image, size_t n, const char *part) {
    thole_zone *zone = NULL;
    thole_error error;
    put_file("Zone", image->at, n);
    assert_int_equal(thole_zone_open(&context, "Zone", &zone, &error), THOLE_ARGUMENT);
    assert_null(zone);
    if (strstr(error.text, part) == NULL)
        fail_msg("\"%s\" lacks \"%s\"", error.text, part);
}

static void test_malformed_files(void **state) {
    (void)state;
    content whole, bad;
    make_image(&whole, "CET-1CEST,M3.5.0,M10.5.0/3");
    thole_zone *zone = NULL;
    put_file("Zone", whole.at, whole.n);
    assert_int_equal(thole_zone_open(&context, "Zone", &zone, NULL), THOLE_OK);
    thole_zone_release(zone);
    size_t footer = IMAGE_TIMES + 16 + 2 + 12 + 8;
    for (size_t n = 0; n < whole.n; n++) /* cut short anywhere */
        expect_refused(&whole, n,
                       n == 0                                             ? "is empty"
                       : n < 44 || (n >= IMAGE_SECOND && n < IMAGE_TIMES) ? "does not begin"
                       : n < footer                                       ? "is cut short"
                                                                          : "has no footer line");
    struct {
        size_t at;
        unsigned char value;
        const char *part;
    } const SPOILED[] = {
        {0, 'X', "does not begin like a TZif file"},
        {IMAGE_SECOND, 'X', "does not begin like a TZif file"},
        {IMAGE_SECOND + 20 + 12, 0xFF, "more entries"},
        {IMAGE_SECOND + 20 + 19, 0, "no types"},
        {IMAGE_SECOND + 20 + 23, 0, "no types"},
        {IMAGE_SECOND + 20 + 15, 200, "is cut short"},
        {IMAGE_SECOND + 20 + 11, 1, "counts leap seconds"},
        {IMAGE_TIMES, 0x10, "out of order"},
        {IMAGE_TIMES + 16, 2, "a type that is not there"},
        {IMAGE_TIMES + 18, 0x7F, "more than a day"},
        {IMAGE_TIMES + 18, 0x80, "more than a day"},
        {IMAGE_TIMES + 18 + 5, 8, "abbreviation is outside"},
        {IMAGE_TIMES + 18 + 12 + 7, 'C', "abbreviation without an end"},
        {footer, 'X', "no footer line"},
        {footer + 1, '!', "not a rule of POSIX"},
    };
    for (size_t i = 0; i < sizeof SPOILED / sizeof *SPOILED; i++) {
        bad = whole;
        bad.at[SPOILED[i].at] = SPOILED[i].value;
        if (strstr(SPOILED[i].part, "leap") != NULL) { /* room for the leap second's record */
            memset(bad.at + bad.n, 0, 12);
            bad.n += 12;
        }
        expect_refused(&bad, bad.n, SPOILED[i].part);
    }
    for (int i = 0; i < 20000; i++) { /* noise: refused or not, no crash, and answers within a day */
        bad = whole;
        for (uint64_t k = 0; k < 1 + next_random() % 4; k++)
            bad.at[next_random() % bad.n] = (unsigned char)next_random();
        thole_zone *noisy = tb_new(&memory, 1, sizeof *noisy);
        bool refused = false;
        noisy->memory = &memory;
        atomic_init(&noisy->refs, 1);
        if (tk_tzif_read(bad.at, bad.n - next_random() % 3, noisy, &refused) == NULL) {
            int64_t t = (int64_t)next_random(), instant;
            int32_t offset = thole_zone_offset(noisy, t, NULL);
            assert_true(offset >= TK_WEST && offset <= TK_EAST);
            (void)thole_zone_instant(noisy, t, &instant);
        }
        thole_zone_release(noisy);
    }
}

static void expect_name_refused(const char *name, const char *part) {
    thole_zone *zone = NULL;
    thole_error error;
    assert_int_equal(thole_zone_open(&context, name, &zone, &error), THOLE_ARGUMENT);
    assert_null(zone);
    if (strstr(error.text, part) == NULL)
        fail_msg("\"%s\" lacks \"%s\"", error.text, part);
}

static void test_names(void **state) {
    (void)state;
    char longest[400];
    memset(longest, 'x', sizeof longest - 1);
    longest[sizeof longest - 1] = '\0';
    const char *const BAD[] = {
        "",      "/etc/passwd", "../etc/passwd",          "Europe/../UTC", "Europe//Rome", "Europe/",
        "./UTC", "UTC ",        "Atlantic/A\xC3\xA7ores", "a.b",           longest};
    for (size_t i = 0; i < sizeof BAD / sizeof *BAD; i++)
        expect_name_refused(BAD[i], "is not the name of a time zone");
    expect_name_refused("Atlantic/Azorez", "unknown time zone \"Atlantic/Azorez\"");
    expect_name_refused("Atlantic", "is not a file");
    setenv("TZDIR", "no-such-folder", 1);
    expect_name_refused("UTC", "install the system's package tzdata");
    unsetenv("TZDIR");
    assert_string_equal(thole_zone_name(NULL), "UTC");
    assert_int_equal(thole_zone_offset(NULL, 123, NULL), 0);
    thole_zone_release(NULL);
    assert_null(thole_zone_retain(NULL));
}

/* Every allocation refused once. */
static long until_refusal;

static void *refusing(void *user, void *block, size_t old_bytes, size_t new_bytes) {
    (void)user;
    if (new_bytes == 0) {
        free(block);
        return NULL;
    }
    if (new_bytes > old_bytes && until_refusal-- == 0)
        return NULL;
    return realloc(block, new_bytes);
}

static void test_refused_memory(void **state) {
    (void)state;
    thole_memory small = {.resize = refusing};
    thole_context poor = {.memory = &small, .threads = 1};
    long n = 0;
    for (thole_status status = THOLE_NO_MEMORY; status != THOLE_OK; n++) {
        thole_zone *zone = NULL;
        thole_error error;
        until_refusal = n;
        status = thole_zone_open(&poor, "Atlantic/Azores", &zone, &error);
        if (status != THOLE_OK) {
            assert_int_equal(status, THOLE_NO_MEMORY);
            assert_string_equal(error.text, "out of memory for a time zone");
            assert_null(zone);
        }
        thole_zone_release(zone);
        assert_int_equal(atomic_load(&small.used), 0);
    }
    assert_true(n > 5);
}

static int check_memory(void **state) {
    (void)state;
    return atomic_load(&memory.used) == 0 ? 0 : -1;
}

int main(void) {
    unsetenv("TZDIR");
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_names),
        cmocka_unit_test(test_refused_memory),
        cmocka_unit_test_setup_teardown(test_small_file, make_folder, remove_folder),
        cmocka_unit_test(test_rules),
        cmocka_unit_test_setup_teardown(test_malformed_files, make_folder, remove_folder),
    };
    return cmocka_run_group_tests(tests, NULL, check_memory);
}
