/* Numbers, times and durations as text: known answers, edges of the range, and round trips. */
#include <math.h>
#include <setjmp.h>
#include <stdarg.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

#include <cmocka.h>

#include "clock/decimal.h"

static uint64_t seed = UINT64_C(0x2545F4914F6CDD1D);

static uint64_t next_random(void) {
    seed ^= seed << 13;
    seed ^= seed >> 7;
    return seed ^= seed << 17;
}

static const thole_clock PLAIN = {.kind = THOLE_PLAIN, .unit = "s"};
static const thole_clock METRES = {.kind = THOLE_PLAIN, .unit = "m"};
static const thole_clock UTC = {.kind = THOLE_CALENDAR, .unit = "s"};

enum { UNTOUCHED = 777 };

typedef struct known {
    const char *text;
    thole_parse parse;
    int64_t ticks;
} known;

typedef thole_parse reader(const char *text, size_t length, int64_t *ticks);

/* Outputs stay as they were when the text is refused. */
static void check_table(const known *table, size_t n, reader *read) {
    for (size_t i = 0; i < n; i++) {
        int64_t ticks = UNTOUCHED;
        thole_parse parse = read(table[i].text, strlen(table[i].text), &ticks);
        int64_t wanted = table[i].parse == THOLE_PARSED ? table[i].ticks : UNTOUCHED;
        if (parse != table[i].parse || ticks != wanted)
            fail_msg("\"%s\": %d with %lld, wanted %d with %lld", table[i].text, (int)parse, (long long)ticks,
                     (int)table[i].parse, (long long)wanted);
    }
}

#define S THOLE_PARSE_SYNTAX
#define R THOLE_PARSE_RANGE
#define D THOLE_PARSE_DIGITS

static void test_decimal(void **state) {
    (void)state;
    static const known TABLE[] = {
        {"0", 0, 0},
        {"-0", 0, 0},
        {"+0", 0, 0},
        {"1", 0, 1000000000},
        {"-1", 0, -1000000000},
        {"+12.5", 0, 12500000000},
        {".5", 0, 500000000},
        {"5.", 0, 5000000000},
        {"007", 0, 7000000000},
        {"0.000000001", 0, 1},
        {"-0.000000001", 0, -1},
        {"0.0000000010000", 0, 1},
        {"0.0000000001", D, 0},
        {"0.9999999999", D, 0},
        {"1.0000000005", D, 0},
        {"3e2", 0, 300000000000},
        {"3E+2", 0, 300000000000},
        {"25e-1", 0, 2500000000},
        {"1e-9", 0, 1},
        {"1e-10", D, 0},
        {"10e-10", 0, 1},
        {"1000000000000e-21", 0, 1},
        {"0.000000000000000000000001e15", 0, 1},
        {"0.0000000000000000000000010e15", 0, 1},
        {"0e999999999999999999999999", 0, 0},
        {"0e-999999999999999999999999", 0, 0},
        {"0.000e99999", 0, 0},
        {"1e999999999999999999999999", R, 0},
        {"1e-999999999999999999999999", D, 0},
        {"9223372036", 0, 9223372036000000000},
        {"9223372036.854775807", 0, INT64_MAX},
        {"9223372036.854775808", R, 0},
        {"-9223372036.854775808", 0, INT64_MIN},
        {"-9223372036.854775809", R, 0},
        {"9223372036.8547758070000", 0, INT64_MAX},
        {"9223372036.8547758071", D, 0},
        {"9223372037", R, 0},
        {"-9223372037", R, 0},
        {"9223372036854775807e-9", 0, INT64_MAX},
        {"9223372036854775808e-9", R, 0},
        {"-9223372036854775808e-9", 0, INT64_MIN},
        {"0.9223372036854775807e10", 0, INT64_MAX},
        {"92233720368547758070e-10", 0, INT64_MAX},
        {"92233720368547758079e-10", D, 0},
        {"1e10", R, 0},
        {"18446744073709551616", R, 0},
        {"18446744073.709551617", R, 0},
        {"99999999999.0000000001", R, 0},
        {"123456789", 0, 123456789000000000},
        {"1234567890", 0, 1234567890000000000},
        {"000000000000000000000000000000000001", 0, 1000000000},
        {"", S, 0},
        {"-", S, 0},
        {"+", S, 0},
        {".", S, 0},
        {"-.", S, 0},
        {"e5", S, 0},
        {".e5", S, 0},
        {"1e", S, 0},
        {"1e+", S, 0},
        {"1e5.5", S, 0},
        {"1.2.3", S, 0},
        {"--1", S, 0},
        {"+-1", S, 0},
        {" 1", S, 0},
        {"1 ", S, 0},
        {"1,5", S, 0},
        {"0x10", S, 0},
        {"inf", S, 0},
        {"nan", S, 0},
        {"1_000", S, 0},
        {"12:30", S, 0},
        {"\xD9\xA1", S, 0},
        {"1d", S, 0},
        {"12345678x", S, 0},
    };
    check_table(TABLE, sizeof TABLE / sizeof *TABLE, thole_parse_decimal);
}

static void test_decimal_stops_at_its_length(void **state) {
    (void)state;
    int64_t ticks;
    assert_int_equal(thole_parse_decimal("12345", 3, &ticks), THOLE_PARSED);
    assert_true(ticks == 123 * THOLE_TICKS_A_UNIT);
    assert_int_equal(thole_parse_decimal("1\0", 2, &ticks), THOLE_PARSE_SYNTAX);
}

/* The same integer written with its point and exponent anywhere must come back, one more digit must be
 * refused. */
static void test_decimal_shifted(void **state) {
    (void)state;
    for (int i = 0; i < 20000; i++) {
        int64_t wanted = (int64_t)(next_random() >> (1 + next_random() % 62));
        if (wanted == 0)
            continue;
        char digits[64], text[200];
        int n = snprintf(digits, sizeof digits, "%lld", (long long)wanted);
        int zeros = (int)(next_random() % 30), cut = (int)(next_random() % (unsigned)(n + 1));
        int shift = n - cut - 9; /* wanted = digits * 10^-9, with the point after `cut` digits */
        snprintf(text, sizeof text, "%s%.*s.%s%0*de%d", next_random() % 2 ? "-" : "", cut, digits,
                 digits + cut, zeros + 1, 0, shift);
        int64_t ticks = 0;
        assert_int_equal(thole_parse_decimal(text, strlen(text), &ticks), THOLE_PARSED);
        assert_true(ticks == (text[0] == '-' ? -wanted : wanted));
        snprintf(text, sizeof text, "%.*s.%s%0*d7e%d", cut, digits, digits + cut, zeros + 1, 0, shift);
        assert_int_equal(thole_parse_decimal(text, strlen(text), &ticks), THOLE_PARSE_DIGITS);
    }
}

/* The C library is the judge of correct rounding (IEEE 754; its strtod is exact in glibc). */
static void check_real(const char *text) {
    tk_number number;
    assert_int_equal(tk_number_scan(text, strlen(text), &number), strlen(text));
    double mine = tk_number_real(&number), wanted = strtod(text, NULL);
    if (memcmp(&mine, &wanted, sizeof mine) != 0)
        fail_msg("%s: %a, wanted %a", text, mine, wanted);
}

static void test_real(void **state) {
    (void)state;
    static const char *const KNOWN[] = {
        "0",
        "-0",
        "0.1",
        "1e22",
        "1e23",
        "9007199254740993",
        "9007199254740992.5",
        "9007199254740993.0000001",
        "1.7976931348623157e308",
        "1.7976931348623158e308",
        "1.7976931348623159e308",
        "1e309",
        "1e999999999999",
        "1e-400",
        "4.9406564584124654e-324",
        "2.4703282292062327e-324",
        "2.4703282292062328e-324",
        "2.2250738585072011e-308",
        "2.2250738585072014e-308",
        "123456789012345678901234567890",
        "0.000000000000000000000000000000000001234",
        "-35.6210",
        "8.5e-5",
        "1.00000000000000011102230246251565404236316680908203125",
        "1.00000000000000011102230246251565404236316680908203124",
        "1.00000000000000011102230246251565404236316680908203126",
    };
    for (size_t i = 0; i < sizeof KNOWN / sizeof *KNOWN; i++)
        check_real(KNOWN[i]);
    for (int i = 0; i < 20000; i++) {
        char text[1200];
        uint64_t bits = next_random() & INT64_MAX;
        if (i % 4 == 0)
            bits >>= 11 + next_random() % 52; /* subnormal */
        double value;
        memcpy(&value, &bits, sizeof value);
        if (!isfinite(value))
            continue;
        int n = snprintf(text, sizeof text, "%.*e", i % 10 == 0 ? 800 : (int)(next_random() % 30), value);
        assert_true(n > 0 && (size_t)n < sizeof text);
        check_real(text);
    }
    /* halfway between two neighbours, and a hair beside it */
    for (int i = 0; i < 2000; i++) {
        uint64_t bits = next_random() % (UINT64_C(0x7FE) << 52);
        double low, high;
        char text[1300];
        memcpy(&low, &bits, sizeof low);
        bits++;
        memcpy(&high, &bits, sizeof high);
        long double middle = (long double)low + ((long double)high - (long double)low) / 2;
        int n = snprintf(text, sizeof text, "%.1150Le", middle);
        assert_true(n > 0 && (size_t)n < sizeof text);
        check_real(text);
        char *last = strchr(text, 'e') - 1;
        *last = '1';
        check_real(text);
    }
}

static thole_parse read_utc(const char *text, size_t length, int64_t *ticks) {
    return thole_parse_iso8601(text, length, NULL, ticks, NULL);
}

#define NS(seconds) ((seconds)*INT64_C(1000000000))

static void test_iso8601(void **state) {
    (void)state;
    /* Seconds since 1970 from GNU date -u -d TEXT +%s. */
    static const known TABLE[] = {
        {"1970-01-01", 0, 0},
        {"2031-05-04T06:20:00-01:00", 0, NS(1935645600)},
        {"2031-05-04T06:20-01:00", 0, NS(1935645600)},
        {"2031-05-04 06:20:00-0100", 0, NS(1935645600)},
        {"20310504T062000-01", 0, NS(1935645600)},
        {"20310504T0620-01", 0, NS(1935645600)},
        {"2031-05-04T07:20:00Z", 0, NS(1935645600)},
        {"2031-05-04T07:20", 0, NS(1935645600)},
        {"20310504", 0, NS(1935619200)},
        {"20310504T072000.5", 0, NS(1935645600) + 500000000},
        {"2031-05-04T07:20:00.000000001", 0, NS(1935645600) + 1},
        {"2031-05-04T07:20:00.0000000010000Z", 0, NS(1935645600) + 1},
        {"2031-05-04T07:20:00.0000000001", D, 0},
        {"2031-05-04T24:00:00", 0, NS(1935705600)},
        {"2031-05-04T24:00", 0, NS(1935705600)},
        {"2031-05-04T24:00:00.000", 0, NS(1935705600)},
        {"2031-05-04T24:00:01", R, 0},
        {"2031-05-04T24:01", R, 0},
        {"2031-05-04T24:00:00.1", R, 0},
        {"2031-05-04T25:00", R, 0},
        {"2031-05-04T23:60", R, 0},
        {"2016-12-31T23:59:60Z", 0, NS(1483228800)},
        {"2016-12-31T23:59:61Z", R, 0},
        {"2016-12-31T23:59:60.25Z", 0, NS(1483228800) + 250000000},
        {"2024-02-29", 0, NS(1709164800)},
        {"2023-02-29", R, 0},
        {"1900-02-29", R, 0},
        {"2000-02-29", 0, NS(951782400)},
        {"2100-02-29", R, 0},
        {"2023-00-01", R, 0},
        {"2023-13-01", R, 0},
        {"2023-01-00", R, 0},
        {"2023-04-31", R, 0},
        {"1969-12-31T23:59:59.999999999", 0, -1},
        {"1969-12-31T23:59:59", 0, NS(-1)},
        {"2262-04-11T23:47:16.854775807Z", 0, INT64_MAX},
        {"2262-04-11T23:47:16.854775808Z", R, 0},
        {"1677-09-21T00:12:43.145224192Z", 0, INT64_MIN},
        {"1677-09-21T00:12:43.145224191Z", R, 0},
        {"2262-04-12T00:47:16.854775807+01:00", 0, INT64_MAX},
        {"9999-12-31", R, 0},
        {"0000-01-01", R, 0},
        {"2031-05-04T06:20:00+23:59", 0, NS(1935642000) - NS(86340)},
        {"2031-05-04T06:20:00+24:00", R, 0},
        {"2031-05-04T06:20:00-00:60", R, 0},
        {"2031-05-04T06:20:00-01:42:40", 0, NS(1935642000) + NS(6160)},
        {"", S, 0},
        {"2031", S, 0},
        {"2031-05", S, 0},
        {"2031-05-4", S, 0},
        {"2031-0504", S, 0},
        {"203105-04", S, 0},
        {"2031-05-04T", S, 0},
        {"2031-05-04T06", S, 0},
        {"2031-05-04T0620", S, 0},
        {"20310504T06:20", S, 0},
        {"2031-05-04T06:2", S, 0},
        {"2031-05-04T06:20:", S, 0},
        {"2031-05-04T06:20:0", S, 0},
        {"2031-05-04T06:20:00.", S, 0},
        {"2031-05-04T06:20.5", S, 0},
        {"2031-05-04T06:20:00,5", S, 0},
        {"2031-05-04T06:20:00 Z", S, 0},
        {"2031-05-04T06:20:00z", S, 0},
        {"2031-05-04t06:20", S, 0},
        {"2031-05-04Z", S, 0},
        {"2031-05-04+01:00", S, 0},
        {"2031-05-04T06:20:00+1", S, 0},
        {"2031-05-04T06:20:00+01:", S, 0},
        {"2031-05-04T06:20:00+01:0", S, 0},
        {"2031-05-04T06:20:00+010", S, 0},
        {"2031-05-04T06:20:00+01:00x", S, 0},
        {"2031-05-04  06:20", S, 0},
        {" 2031-05-04", S, 0},
        {"2031-05-04 ", S, 0},
        {"12031-05-04", S, 0},
        {"-2031-05-04", S, 0},
        {"2031/05/04", S, 0},
        {"04.05.2031", S, 0},
        {"08:61", S, 0},
        {"2031-05-04T-6:20", S, 0},
        {"2031-W18-7", S, 0},
        {"2031-124", S, 0},
        {"2031-13-45Tnonsense", S, 0},
    };
    check_table(TABLE, sizeof TABLE / sizeof *TABLE, read_utc);
}

/* Every day of 800 years against a calendar counted up day by day. */
static void test_dates(void **state) {
    (void)state;
    static const int LENGTH[] = {31, 28, 31, 30, 31, 30, 31, 31, 30, 31, 30, 31};
    int64_t year = 1600;
    int month = 1, day = 1;
    for (int64_t days = -135140; year < 2400;
         days++) { /* 370 years of 365 days and 90 leap days before 1970 */
        int64_t y;
        int m, d;
        thole_date_from_days(days, &y, &m, &d);
        if (y != year || m != month || d != day || thole_days_from_date(year, month, day) != days)
            fail_msg("day %lld: %lld-%d-%d", (long long)days, (long long)y, m, d);
        bool leap = (year % 4 == 0 && year % 100 != 0) || year % 400 == 0;
        if (++day > LENGTH[month - 1] + (month == 2 && leap)) {
            day = 1;
            if (++month > 12) {
                month = 1;
                year++;
            }
        }
    }
    for (int64_t days = -800000000; days <= 800000000; days += 7654321) {
        int64_t y;
        int m, d;
        thole_date_from_days(days, &y, &m, &d);
        assert_true(thole_days_from_date(y, m, d) == days);
        assert_true(m >= 1 && m <= 12 && d >= 1 && d <= 31);
    }
}

static thole_parse read_duration(const char *text, size_t length, int64_t *ticks) {
    return thole_parse_duration(text, length, &PLAIN, ticks);
}

static thole_parse read_metres(const char *text, size_t length, int64_t *ticks) {
    return thole_parse_duration(text, length, &METRES, ticks);
}

static void test_duration(void **state) {
    (void)state;
    static const known TABLE[] = {
        {"20 min", 0, NS(1200)},
        {"20min", 0, NS(1200)},
        {"1 h 30 min", 0, NS(5400)},
        {"1h30min", 0, NS(5400)},
        {"1 h   30min", 0, NS(5400)},
        {"2 d", 0, NS(172800)},
        {"1.5 h", 0, NS(5400)},
        {"1 week", 0, NS(604800)},
        {"3 weeks", 0, NS(1814400)},
        {"1 w 1 d 1 h 1 min 1 s 1 ms 1 us 1 ns", 0, NS(694861) + 1001001},
        {"1 second", 0, NS(1)},
        {"2 seconds", 0, NS(2)},
        {"2 sec", 0, NS(2)},
        {"1 minute", 0, NS(60)},
        {"2 minutes", 0, NS(120)},
        {"1 hour", 0, NS(3600)},
        {"2 hours", 0, NS(7200)},
        {"1 day", 0, NS(86400)},
        {"2 days", 0, NS(172800)},
        {"30 min 1 h", 0, NS(5400)},
        {"1 h 1 h", 0, NS(7200)},
        {"90", 0, NS(90)},
        {"1.25", 0, 1250000000},
        {"1e3", 0, NS(1000)},
        {"1e3 s", 0, NS(1000)},
        {"0", 0, 0},
        {"-0", 0, 0},
        {"0 s", 0, 0},
        {"0.1 min", 0, NS(6)},
        {"0.0000000001 h", 0, 360},
        {"0.00000000001 min", D, 0},
        {"0.5 ns", D, 0},
        {"1.5 us", 0, 1500},
        {"0.333333333333 h", D, 0},
        {"0.33333333333 h", 0, 1199999999988},
        {"PT20M", 0, NS(1200)},
        {"P1DT2H", 0, NS(93600)},
        {"P2W", 0, NS(1209600)},
        {"PT1H30M15.5S", 0, NS(5415) + 500000000},
        {"P1W2DT3H4M5S", 0, NS(604800 + 172800 + 10800 + 240 + 5)},
        {"PT0S", 0, 0},
        {"PT1.5H", 0, NS(5400)},
        {"-20 min", R, 0},
        {"-PT20M", R, 0},
        {"-5", R, 0},
        {"-0.5 s", R, 0},
        {"-P0D", 0, 0},
        {"106751 d 23 h 47 min 16.854775807 s", 0, INT64_MAX},
        {"106751 d 23 h 47 min 16.854775808 s", R, 0},
        {"106752 d", R, 0},
        {"15251 w", R, 0},
        {"99999999999999999999 ns", R, 0},
        {"9223372036854775807 ns", 0, INT64_MAX},
        {"9223372036854775808 ns", R, 0},
        {"1e400 h", R, 0},
        {"PT9223372037S", R, 0},
        {"P106751DT86400S", R, 0},
        {"", S, 0},
        {"-", S, 0},
        {"min", S, 0},
        {"20 mins", S, 0},
        {"20 Min", S, 0},
        {"20 m", S, 0},
        {"1 h 30", S, 0},
        {"20 min ", S, 0},
        {" 20 min", S, 0},
        {"20, min", S, 0},
        {"1 h -30 min", S, 0},
        {"1 h + 30 min", S, 0},
        {"P", S, 0},
        {"PT", S, 0},
        {"P1DT", S, 0},
        {"P1Y", S, 0},
        {"P1M", S, 0},
        {"PT1D", S, 0},
        {"P1H", S, 0},
        {"PT1M1H", S, 0},
        {"P1D1W", S, 0},
        {"P-1D", S, 0},
        {"PT1S1S", S, 0},
        {"P1", S, 0},
        {"PTT1S", S, 0},
        {"P1D2", S, 0},
        {"1 month", S, 0},
        {"1 year", S, 0},
        {"20 \xC2\xB5s", S, 0},
        {"0:20", S, 0},
        {"20 min.", S, 0},
    };
    check_table(TABLE, sizeof TABLE / sizeof *TABLE, read_duration);
    static const known OTHER[] = {
        {"12", 0, NS(12)},     {"12 m", 0, NS(12)}, {"12m", 0, NS(12)}, {"1.5 m", 0, 1500000000},
        {"1 m 2 m", 0, NS(3)}, {"12 min", S, 0},    {"12 s", S, 0},     {"PT20M", S, 0},
        {"12 mm", S, 0},       {"12 ", S, 0},       {"-3 m", R, 0},
    };
    check_table(OTHER, sizeof OTHER / sizeof *OTHER, read_metres);
}

static void check_written(size_t length, const char *text, const char *wanted) {
    assert_string_equal(text, wanted);
    assert_int_equal(length, strlen(wanted));
}

static void test_format(void **state) {
    (void)state;
    char out[THOLE_TIME_SIZE];
    static const struct {
        int64_t ticks;
        int quarters;
        const char *plain, *utc, *duration;
    } TABLE[] = {
        {0, 0, "0", "1970-01-01T00:00:00Z", "0 s"},
        {1, 0, "0.000000001", "1970-01-01T00:00:00.000000001Z", "0.000000001 s"},
        {0, 1, "0.00000000025", "1970-01-01T00:00:00Z", "0 s"},
        {-1, 0, "-0.000000001", "1969-12-31T23:59:59.999999999Z", "-0.000000001 s"},
        {-1, 1, "-0.00000000075", "1969-12-31T23:59:59.999999999Z", "-0.000000001 s"},
        {-1, 2, "-0.0000000005", "1969-12-31T23:59:59.999999999Z", "-0.000000001 s"},
        {-2, 3, "-0.00000000125", "1969-12-31T23:59:59.999999998Z", "-0.000000002 s"},
        {7, 3, "0.00000000775", "1970-01-01T00:00:00.000000007Z", "0.000000007 s"},
        {NS(1260), 0, "1260", "1970-01-01T00:21:00Z", "21 min"},
        {NS(1260) + 500000000, 2, "1260.5000000005", "1970-01-01T00:21:00.5Z", "21 min 0.5 s"},
        {NS(93600), 0, "93600", "1970-01-02T02:00:00Z", "1 d 2 h"},
        {NS(5400), 0, "5400", "1970-01-01T01:30:00Z", "1 h 30 min"},
        {INT64_MAX, 3, "9223372036.85477580775", "2262-04-11T23:47:16.854775807Z",
         "106751 d 23 h 47 min 16.854775807 s"},
        {INT64_MIN, 0, "-9223372036.854775808", "1677-09-21T00:12:43.145224192Z",
         "-106751 d 23 h 47 min 16.854775808 s"},
        {INT64_MIN, 1, "-9223372036.85477580775", "1677-09-21T00:12:43.145224192Z",
         "-106751 d 23 h 47 min 16.854775808 s"},
    };
    for (size_t i = 0; i < sizeof TABLE / sizeof *TABLE; i++) {
        check_written(thole_format_time(&PLAIN, TABLE[i].ticks, TABLE[i].quarters, out), out, TABLE[i].plain);
        check_written(thole_format_time(&UTC, TABLE[i].ticks, TABLE[i].quarters, out), out, TABLE[i].utc);
        check_written(thole_format_duration(&PLAIN, TABLE[i].ticks, out), out, TABLE[i].duration);
        check_written(thole_format_duration(&UTC, TABLE[i].ticks, out), out, TABLE[i].duration);
    }
    thole_clock longest = {.kind = THOLE_PLAIN, .unit = "fifteen letters"};
    check_written(thole_format_duration(&longest, INT64_MIN, out), out,
                  "-9223372036.854775808 fifteen letters");
    check_written(thole_format_duration(&METRES, 1500000000, out), out, "1.5 m");
}

static void test_round_trips(void **state) {
    (void)state;
    for (int i = 0; i < 50000; i++) {
        int64_t wanted = (int64_t)next_random() >> (next_random() % 63), ticks = 0;
        if (i % 3 == 0)
            wanted -= wanted % THOLE_TICKS_A_UNIT;
        char out[THOLE_TIME_SIZE];
        size_t n = thole_format_time(&PLAIN, wanted, 0, out);
        assert_int_equal(thole_parse_decimal(out, n, &ticks), THOLE_PARSED);
        assert_true(ticks == wanted);
        n = thole_format_time(&UTC, wanted, 0, out);
        assert_int_equal(thole_parse_iso8601(out, n, NULL, &ticks, NULL), THOLE_PARSED);
        assert_true(ticks == wanted);
        if (wanted >= 0) {
            n = thole_format_duration(&PLAIN, wanted, out);
            assert_int_equal(thole_parse_duration(out, n, &UTC, &ticks), THOLE_PARSED);
            assert_true(ticks == wanted);
            n = thole_format_duration(&METRES, wanted, out);
            assert_int_equal(thole_parse_duration(out, n, &METRES, &ticks), THOLE_PARSED);
            assert_true(ticks == wanted);
        }
    }
}

int main(void) {
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_decimal),         cmocka_unit_test(test_decimal_stops_at_its_length),
        cmocka_unit_test(test_decimal_shifted), cmocka_unit_test(test_real),
        cmocka_unit_test(test_iso8601),         cmocka_unit_test(test_dates),
        cmocka_unit_test(test_duration),        cmocka_unit_test(test_format),
        cmocka_unit_test(test_round_trips),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
