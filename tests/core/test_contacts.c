/* Contacts from delimited text: known answers in every form that is read. */
#include "core/reading.h"

static void test_plain(void **state) {
    (void)state;
    expect("from,to,start,finish\n237,102,0,1260\n33,29,0,480\n102,33,0.5,1e3\n33,102,0.500000001,1000\n",
           &USUAL, "33>29 0 480\n237>102 0 1260\n102>33 0.5 1000\n33>102 0.500000001 1000\n");
    /* other columns first, other names, by number too */
    thole_contacts_options options = {
        .from = {"a", 0}, .to = {NULL, 4}, .start = {"departs", 0}, .finish = {NULL, 1}};
    expect("arrives,departs,a,b\n7,5,x,y\n", &options, "x>y 5 7\n");
    expect("from,to,start,finish\n", &USUAL, "");
    expect("from,to,start,finish", &USUAL, "");
}

/* The same rows dressed in every way that is understood. */
static void test_dress(void **state) {
    (void)state;
    static const char *const SAME[] = {
        "from,to,start,finish\nPier,Quay,1,2\nQuay,Mole,3,4\n",
        "from,to,start,finish\nPier,Quay,1,2\nQuay,Mole,3,4",
        "from,to,start,finish\r\nPier,Quay,1,2\r\nQuay,Mole,3,4\r\n",
        "from,to,start,finish\r\nPier,Quay,1,2\nQuay,Mole,3,4\r",
        "from;to;start;finish\nPier;Quay;1;2\nQuay;Mole;3;4\n",
        "from\tto\tstart\tfinish\nPier\tQuay\t1\t2\nQuay\tMole\t3\t4\n",
        "\xEF\xBB\xBF"
        "from,to,start,finish\nPier,Quay,1,2\nQuay,Mole,3,4\n",
        "\xEF\xBB\xBF"
        "\"from\",\"to\",\"start\",\"finish\"\r\n\"Pier\",\"Quay\",\"1\",\"2\"\r\n\"Quay\",\"Mole\",3,\"4\"",
        "# made by hand\n\n#\nfrom,to,start,finish\nPier,Quay,1,2\nQuay,Mole,3,4\n",
        "finish,start,to,from\n2,1,Quay,Pier\n4,3,Mole,Quay\n",
        "from,to,start,finish\nQuay,Mole,3.000,4e0\nPier,Quay,01,+2\n",
    };
    for (size_t i = 0; i < sizeof SAME / sizeof *SAME; i++)
        expect(SAME[i], &USUAL, "Pier>Quay 1 2\nQuay>Mole 3 4\n");
    /* a separator that is given is not looked for */
    thole_contacts_options options = USUAL;
    options.separator = ';';
    expect("from;to;start;finish;a,b,c,d,e\nPier;Quay;1;2;,,,,\n", &options,
           "Pier>Quay 1 2 a,b,c,d,e=',,,,'\na,b,c,d,e: text\n");
    /* separators inside quotes do not count */
    expect("from;to;start;finish;\"a,b,c,d,e,f\"\nPier;Quay;1;2;3\n", &USUAL,
           "Pier>Quay 1 2 a,b,c,d,e,f=3\na,b,c,d,e,f: integer\n");
}

static void test_quotes(void **state) {
    (void)state;
    expect("from,to,start,finish,note\n"
           "\"Pier, old\",\"Quay \"\"North\"\"\",1,2,\"\"\"\"\n"
           "\"two\nlines\",b,3,4,\"\"\n"
           "\"two\r\nlines\",5\" pipe,5,6,\"a\"\"\"\"b\"\n"
           "\"\"\"q\"\"\",x,7,8,plain\n",
           &USUAL,
           "Pier, old>Quay \"North\" 1 2 note='\"'\n"
           "two\nlines>b 3 4\n"
           "two\r\nlines>5\" pipe 5 6 note='a\"\"b'\n"
           "\"q\">x 7 8 note='plain'\n"
           "note: text\n");
}

static void test_calendar(void **state) {
    (void)state;
    thole_contacts_options options = USUAL;
    expect("from,to,start,finish\n"
           "a,b,2031-05-04T06:20:00-01:00,2031-05-04T06:45:00-01:00\n"
           "a,b,2031-05-04T06:20:00-01:00,2031-05-04T08:45+01:00\n"
           "b,c,2031-05-04 08:00,20310504T080000.25\n"
           "b,c,2031-05-04T23:59:60,2031-05-04T24:00\n",
           &options,
           "a>b 2031-05-04T07:20:00Z 2031-05-04T07:45:00Z\n"
           "a>b 2031-05-04T07:20:00Z 2031-05-04T07:45:00Z\n"
           "b>c 2031-05-04T08:00:00Z 2031-05-04T08:00:00.25Z\n"
           "b>c 2031-05-05T00:00:00Z 2031-05-05T00:00:00Z\n");
    /* the zone is that of times without offset, and of display; clocks change on 2031-03-30 and 2031-10-26 */
    options.zone = "Atlantic/Azores";
    expect("from,to,start,finish\n"
           "a,b,2031-03-29T23:30:00,2031-03-30T00:30:00\n"
           "a,b,2031-03-30T00:15:00,2031-03-30T01:20:00\n"
           "a,b,2031-10-26T00:15:00,2031-10-26T00:45:00\n"
           "a,b,2031-10-26T00:50:00,2031-10-26T00:20:00\n"
           "a,c,2031-10-26T00:50:00Z,2031-10-26T00:20:00\n"
           "a,b,2031-10-26T03:00:00,2031-10-26T04:00:00Z\n",
           &options,
           "a>b 2031-03-29T23:30:00-01:00 2031-03-30T01:30:00+00:00\n"
           "a>b 2031-03-30T01:15:00+00:00 2031-03-30T01:20:00+00:00\n"
           "a>b 2031-10-26T00:15:00+00:00 2031-10-26T00:45:00+00:00\n"
           "a>b 2031-10-26T00:50:00+00:00 2031-10-26T00:20:00-01:00\n"
           "a>c 2031-10-26T00:50:00+00:00 2031-10-26T00:20:00-01:00\n"
           "a>b 2031-10-26T03:00:00-01:00 2031-10-26T03:00:00-01:00\n"
           "remark: finish never occurs as the clock jumps over it: moved on with the clock, 1 from line 2\n"
           "remark: start never occurs as the clock jumps over it: moved on with the clock, 1 from line 3\n"
           "remark: start occurs twice as the clock is set back: the first is taken, 2 from line 4\n"
           "remark: finish occurs twice as the clock is set back: the first is taken, 1 from line 4\n"
           "remark: finish occurs twice: the second is taken, as the first is before start, 2 from line 5\n");
}

/* Every row's time against the public parser, over days with and without changes of the clock and fields that
 * share their date or not: what is kept from row to row must not show. */
static void test_times_one_by_one(void **state) {
    (void)state;
    static const char *const OFFSETS[] = {"", "", "Z", "-01:00", "+05:45", "-0330", "+02", "+00:00:01"};
    static char text[1 << 19];
    enum { ROWS = 6000 };
    static int64_t wanted[ROWS];
    thole_contacts_options options = {
        .from = {"from", 0}, .to = {"to", 0}, .start = {"start", 0}, .zone = "Atlantic/Azores"};
    thole_zone *zone = NULL;
    assert_int_equal(thole_zone_open(&context, options.zone, &zone, NULL), THOLE_OK);
    uint32_t seed = 12345;
    size_t n = (size_t)sprintf(text, "from,to,start\n");
    int days[3] = {0, 0, 0};
    for (int i = 0; i < ROWS; i++) {
        char time[64];
        unsigned r = (seed = seed * 1664525u + 1013904223u) >> 8;
        if (i % 7 == 0) /* mostly around the two changes of 2031 */
            days[i / 7 % 3] = i % 3 == 0   ? 22362 + (int)(r % 5)
                              : i % 3 == 1 ? 22571 + (int)(r % 5)
                                           : 20000 + (int)(r % 4000);
        int64_t year;
        int month, day;
        thole_date_from_days(days[r % 3], &year, &month, &day);
        r = (seed = seed * 1664525u + 1013904223u) >> 8;
        int length = sprintf(time, "%04d-%02d-%02d%c%02u:%02u", (int)year, month, day, r % 5 ? 'T' : ' ',
                             r / 5 % 24, r / 128 % 60);
        if (r % 11 != 0)
            length += sprintf(time + length, ":%02u", r / 1024 % 61);
        if (r % 11 == 1)
            length += sprintf(time + length, ".%u", r % 1000);
        length += sprintf(time + length, "%s", OFFSETS[r / 16 % 8]);
        assert_int_equal(thole_parse_iso8601(time, (size_t)length, zone, &wanted[i], NULL), THOLE_PARSED);
        n += (size_t)sprintf(text + n, "n%d,m,%s\n", i, time);
    }
    thole_network *network = read_bytes(text, n, &options);
    assert_int_equal(thole_network_count(network), ROWS);
    for (size_t i = 0; i < ROWS; i++) {
        thole_event e = thole_network_event(network, i);
        size_t row = strtoul(thole_network_node_name(network, e.from, NULL) + 1, NULL, 10);
        assert_true(e.start == wanted[row] && e.finish == wanted[row]);
    }
    thole_network_release(network);
    thole_zone_release(zone);
}

static void test_durations(void **state) {
    (void)state;
    thole_contacts_options options = {
        .from = {"from", 0}, .to = {"to", 0}, .start = {"start", 0}, .duration = {"for", 0}};
    expect(
        "from,to,start,for\na,b,10,5\na,b,11,20 min\na,b,12,PT1H\na,b,13,1 h 30 min\na,b,14,0\na,b,15,0.25\n",
        &options, "a>b 10 15\na>b 11 1211\na>b 12 3612\na>b 13 5413\na>b 14 14\na>b 15 15.25\n");
    options.unit = "km";
    expect("from,to,start,for\na,b,10,5\na,b,11,2 km\n", &options, "a>b 10 15\na>b 11 13\n");
    options.unit = NULL;
    options.zone = "Atlantic/Azores"; /* an hour is an hour, also over a change of the clock */
    expect("from,to,start,for\na,b,2031-03-29T23:30,1 h\n", &options,
           "a>b 2031-03-29T23:30:00-01:00 2031-03-30T01:30:00+00:00\n");
}

static void test_contacts_and_linger(void **state) {
    (void)state;
    thole_contacts_options options = {.from = {"from", 0}, .to = {"to", 0}, .start = {"start", 0}};
    thole_network *network = read_text("from,to,start,finish\na,b,1,9\nb,c,2,8\n", &options);
    assert_int_equal(thole_network_account(network)->contacts, 2);
    assert_int_equal(thole_network_columns(network), 1); /* finish is an attribute, by its number */
    assert_string_equal(thole_network_column_name(network, 0), "column4");
    thole_network_release(network);
    options = USUAL;
    options.linger = THOLE_TICKS_A_UNIT / 2;
    expect("from,to,start,finish\na,b,1,1\nb,c,2,8\n", &options, "a>b 1 1.5\nb>c 2 8\n");
    network = read_text("from,to,start,finish\na,b,1,1\nb,c,2,8\na,a,1,2\nb,a,1,1\n", &USUAL);
    const thole_account *account = thole_network_account(network);
    assert_int_equal(account->rows, 4);
    assert_int_equal(account->events, 3);
    assert_int_equal(account->contacts, 2);
    assert_int_equal(account->self_loops, 1);
    assert_int_equal(account->repeats, 1);
    thole_network_release(network);
}

static void test_headless(void **state) {
    (void)state;
    thole_contacts_options options = {
        .from = {NULL, 2}, .to = {NULL, 1}, .start = {NULL, 4}, .finish = {NULL, 5}, .headless = true};
    expect("# to from - start finish\n\n1 b;2;x;5;6\n2;3;y;7;8\n", &options,
           "2>1 b 5 6 column3='x'\n3>2 7 8 column3='y'\ncolumn3: text\n");
    static const char *const THIRD[] = {"column3"}, *const NONE[] = {"column6"};
    options.take = THIRD;
    options.take_count = 1;
    expect("1,2,x,5,6\n", &options, "2>1 5 6 column3='x'\ncolumn3: text\n");
    options.take = NONE;
    thole_network *network = NULL;
    thole_error error;
    assert_int_equal(
        thole_read_contacts_text(&context, "log.csv", "1,2,x,5,6\n", 10, &options, &network, &error),
        THOLE_INPUT);
    assert_string_equal(
        error.text,
        "log.csv: no column \"column6\" for an attribute: without a header they are column1 to column5");
}

static void test_take(void **state) {
    (void)state;
    static const char *const MODE[] = {"seats", "mode", "mode"}, *const WRONG[] = {"sests"};
    static const char TEXT[] = "mode,from,to,start,finish,seats,note\nferry,a,b,1,2,40,x\n";
    thole_contacts_options options = USUAL;
    expect(TEXT, &options,
           "a>b 1 2 mode='ferry' seats=40 note='x'\nmode: text\nseats: integer\nnote: text\n");
    options.take = MODE;
    options.take_count = 3;
    expect(TEXT, &options, "a>b 1 2 seats=40 mode='ferry'\nseats: integer\nmode: text\n");
    options.take_count = 0; /* none */
    expect(TEXT, &options, "a>b 1 2\n");
    options.take = NULL;
    options.take_count = SIZE_MAX; /* all */
    expect(TEXT, &options,
           "a>b 1 2 mode='ferry' seats=40 note='x'\nmode: text\nseats: integer\nnote: text\n");
    options.take = WRONG;
    options.take_count = 1;
    thole_network *network = NULL;
    thole_error error;
    assert_int_equal(
        thole_read_contacts_text(&context, "log.csv", TEXT, sizeof TEXT - 1, &options, &network, &error),
        THOLE_INPUT);
    assert_string_equal(error.text,
                        "log.csv:1: no column \"sests\" for an attribute: perhaps \"seats\", the columns are "
                        "\"mode\", \"from\", \"to\", \"start\", \"finish\", \"seats\", \"note\"");
}

static void test_names_taken(void **state) {
    (void)state;
    thole_contacts_options options = {
        .from = {"from", 0}, .to = {"to", 0}, .start = {"departs", 0}, .finish = {"arrives", 0}};
    expect(
        "from,to,departs,arrives,start,x,x,,duration,column8\na,b,1,2,5,6,7,8,9,10\n", &options,
        "a>b 1 2 column5=5 x=6 column7=7 column8=8 column9=9 column10=10\n"
        "column5: integer\nx: integer\ncolumn7: integer\ncolumn8: integer\ncolumn9: integer\ncolumn10: "
        "integer\n"
        "remark: attribute \"column5\" goes by its number, as the name of column 5 is taken, 1 from line 1\n"
        "remark: attribute \"column7\" goes by its number, as the name of column 7 is taken, 1 from line 1\n"
        "remark: attribute \"column9\" goes by its number, as the name of column 9 is taken, 1 from line 1\n"
        "remark: attribute \"column10\" goes by its number, as the name of column 10 is taken, 1 from line "
        "1\n");
}

static void test_types(void **state) {
    (void)state;
    /* one column a case: values of three rows, what they become */
    static const struct {
        const char *values[3], *type, *become[3], *remark;
    } CASES[] = {
        {{"1", "-20", "0"}, "integer", {"1", "-20", "0"}, NULL},
        {{"", "", ""}, "integer", {NULL, NULL, NULL}, NULL},
        {{"", "7", ""}, "integer", {NULL, "7", NULL}, NULL},
        {{"9223372036854775807", "-9223372036854775807", "5"},
         "integer",
         {"9223372036854775807", "-9223372036854775807", "5"},
         NULL},
        {{"1.5", "2e3", "-0.25"}, "real", {"1.5", "2000", "-0.25"}, NULL},
        {{"1.5", "2", "3"}, "real", {"1.5", "2", "3"}, NULL},
        {{"2", "1.50", ""},
         "real",
         {"2", "1.5", NULL},
         "integers of column \"v\" became decimals, 1 from line 3"},
        {{"", "1.50", "4"}, "real", {NULL, "1.5", "4"}, NULL},
        {{"007", "8", "9"}, "text", {"'007'", "'8'", "'9'"}, NULL},
        {{"8", "007", "9"},
         "text",
         {"'8'", "'007'", "'9'"},
         "numbers of column \"v\" became text, 1 from line 3"},
        {{"1.50", "x", "2"},
         "text",
         {"'1.5'", "'x'", "'2'"},
         "numbers of column \"v\" became text, 1 from line 3"},
        {{"ferry", "1", ""}, "text", {"'ferry'", "'1'", NULL}, NULL},
        {{"+7", "1", "2"}, "text", {"'+7'", "'1'", "'2'"}, NULL},
        {{" 7", "1", "2"}, "text", {"' 7'", "'1'", "'2'"}, NULL},
        {{"9223372036854775808", "1", "2"}, "text", {"'9223372036854775808'", "'1'", "'2'"}, NULL},
        {{"-9223372036854775808", "1", "2"}, "text", {"'-9223372036854775808'", "'1'", "'2'"}, NULL},
        {{"12345678901234567890123", "1", "2"}, "text", {"'12345678901234567890123'", "'1'", "'2'"}, NULL},
        {{"-0", "1", "2"}, "text", {"'-0'", "'1'", "'2'"}, NULL},
        {{"1e999", "1", "2"}, "text", {"'1e999'", "'1'", "'2'"}, NULL},
        {{"1.", ".5", "nan"}, "text", {"'1.'", "'.5'", "'nan'"}, NULL},
        {{"0x10", "inf", "1,5"}, "text", {"'0x10'", "'inf'", "'1,5'"}, NULL},
        {{"01.5", "1", "2"}, "text", {"'01.5'", "'1'", "'2'"}, NULL},
        /* no real holds this integer: it must not be changed */
        {{"9007199254740993", "1.5", "2"},
         "text",
         {"'9007199254740993'", "'1.5'", "'2'"},
         "numbers of column \"v\" became text, 1 from line 3"},
        {{"1.5", "9007199254740993", "2"},
         "text",
         {"'1.5'", "'9007199254740993'", "'2'"},
         "numbers of column \"v\" became text, 1 from line 3"},
        {{"9007199254740992", "1.5", "2"},
         "real",
         {"9007199254740992", "1.5", "2"},
         "integers of column \"v\" became decimals, 1 from line 3"},
        {{"0.1", "1e22", "123456789.123456789"},
         "real",
         {"0.10000000000000001", "1e+22", "123456789.12345679"},
         NULL},
    };
    for (size_t i = 0; i < sizeof CASES / sizeof *CASES; i++) {
        static pad text, wanted;
        text.n = wanted.n = 0;
        put(&text, "from,to,start,finish,v\n");
        for (int row = 0; row < 3; row++) {
            put(&text, "a,b,%d,9,\"%s\"\n", row, CASES[i].values[row]);
            put(&wanted, "a>b %d 9%s%s\n", row, CASES[i].become[row] != NULL ? " v=" : "",
                CASES[i].become[row] != NULL ? CASES[i].become[row] : "");
        }
        put(&wanted, "v: %s\n", CASES[i].type);
        if (CASES[i].remark != NULL)
            put(&wanted, "remark: %s\n", CASES[i].remark);
        expect(text.text, &USUAL, wanted.text);
    }
}

static void test_forms_of_time(void **state) {
    (void)state;
    static const char EPOCH[] = "from,to,start,finish\na,b,1935645600,1935645660.5\n";
    thole_contacts_options options = USUAL;
    expect(EPOCH, &options, "a>b 1935645600 1935645660.5\n"); /* no zone: plain */
    options.zone = "Atlantic/Azores";
    expect(EPOCH, &options, "a>b 2031-05-04T07:20:00+00:00 2031-05-04T07:21:00.5+00:00\n");
    options.zone = NULL;
    options.form = THOLE_TIME_EPOCH;
    expect(EPOCH, &options, "a>b 2031-05-04T07:20:00Z 2031-05-04T07:21:00.5Z\n");
    /* eight digits are a number, unless they are said to be a date */
    options.form = THOLE_TIME_FOUND;
    expect("from,to,start,finish\na,b,20310504,20310505\n", &options, "a>b 20310504 20310505\n");
    options.form = THOLE_TIME_ISO;
    expect("from,to,start,finish\na,b,20310504,20310505\n", &options,
           "a>b 2031-05-04T00:00:00Z 2031-05-05T00:00:00Z\n");
    options.form = THOLE_TIME_FOUND;
    expect("from,to,start,finish\na,b,20310504T01,20310505\n",
           &(thole_contacts_options){ROLES, .skip_faulty = true},
           "skipped: start is not a time, 1 from line 2\n");
    options.unit = "km";
    thole_network *network = read_text(EPOCH, &options);
    assert_string_equal(thole_network_clock(network)->unit, "km");
    assert_int_equal(thole_network_clock(network)->kind, THOLE_PLAIN);
    thole_network_release(network);
    options = USUAL;
    options.zone = "Atlantic/Azores"; /* without rows the zone tells */
    network = read_text("from,to,start,finish\n", &options);
    assert_int_equal(thole_network_clock(network)->kind, THOLE_CALENDAR);
    assert_string_equal(thole_zone_name(thole_network_clock(network)->zone), "Atlantic/Azores");
    thole_network_release(network);
}

static void test_blank_lines(void **state) {
    (void)state;
    expect("\n\nfrom,to,start,finish\n\na,b,1,2\r\n\r\n# a,b,3,4\nc,d,5,6\n\n",
           &USUAL, /* "# a" is a node by now */
           "a>b 1 2\n# a>b 3 4\nc>d 5 6\nremark: blank line, 3 from line 4\n");
}

int main(void) {
    const struct CMUnitTest tests[] = {
        cmocka_unit_test_teardown(test_plain, check_memory),
        cmocka_unit_test_teardown(test_dress, check_memory),
        cmocka_unit_test_teardown(test_quotes, check_memory),
        cmocka_unit_test_teardown(test_calendar, check_memory),
        cmocka_unit_test_teardown(test_times_one_by_one, check_memory),
        cmocka_unit_test_teardown(test_durations, check_memory),
        cmocka_unit_test_teardown(test_contacts_and_linger, check_memory),
        cmocka_unit_test_teardown(test_headless, check_memory),
        cmocka_unit_test_teardown(test_take, check_memory),
        cmocka_unit_test_teardown(test_names_taken, check_memory),
        cmocka_unit_test_teardown(test_types, check_memory),
        cmocka_unit_test_teardown(test_forms_of_time, check_memory),
        cmocka_unit_test_teardown(test_blank_lines, check_memory),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
