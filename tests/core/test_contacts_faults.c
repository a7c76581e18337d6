/* Broken input: the exact message where reading stops, the count where it skips. */
#include "core/reading.h"

#define HEADER "from,to,start,finish\n"
#define GOOD "a,b,1,2\n"

typedef struct broken {
    const char *text, *message;
    const char *reason; /* in skip mode; NULL: it stops there too */
    thole_contacts_options options;
} broken;

static const broken TABLE[] = {
    /* too few and too many columns */
    {HEADER GOOD "c,d,3\n",
     "3:5: field \"3\" is the last of 3 columns: expected 4, parted by \",\"",
     "too few columns",
     {ROLES}},
    {HEADER "c\n" GOOD,
     "2:1: field \"c\" is the last of 1 columns: expected 4, parted by \",\"",
     "too few columns",
     {ROLES}},
    {HEADER "\"\"\n" GOOD,
     "2:1: field \"\" is the last of 1 columns: expected 4, parted by \",\"",
     "too few columns",
     {ROLES}},
    {"from;to;start;finish\na,b,1,2\na;b;1;2\n",
     "2:1: field \"a,b,1,2\" is the last of 1 columns: expected 4, parted by \";\"",
     "too few columns",
     {ROLES}},
    {HEADER "c,d,3,4,5\n" GOOD,
     "2:9: field \"5\" is one column too many: expected 4, put a field that holds the separator in quotes",
     "too many columns",
     {ROLES}},
    {HEADER "c,d,3,4,\n" GOOD,
     "2:9: field \"\" is one column too many: expected 4, put a field that holds the separator in quotes",
     "too many columns",
     {ROLES}},
    {HEADER "\xC3\x89"
            "a,\"d\ne\",3,4,x\n" GOOD,
     "3:8: field \"x\" is one column too many: expected 4, put a field that holds the separator in quotes",
     "too many columns",
     {ROLES}},
    /* empty fields */
    {HEADER ",d,3,4\n" GOOD, "2:1: from is empty: expected the name of a node", "from is empty", {ROLES}},
    {HEADER "c,,3,4\n" GOOD, "2:3: to is empty: expected the name of a node", "to is empty", {ROLES}},
    {HEADER "c,d,,4\n" GOOD, "2:5: start is empty: expected a time", "start is empty", {ROLES}},
    {HEADER "c,d,3,\n" GOOD, "2:7: finish is empty: expected a time", "finish is empty", {ROLES}},
    {HEADER "c,d,3,\"\"\n" GOOD, "2:7: finish is empty: expected a time", "finish is empty", {ROLES}},
    {HEADER GOOD "c,d,3,\r\n", "3:7: finish is empty: expected a time", "finish is empty", {ROLES}},
    /* plain times */
    {HEADER "c,d,x,4\n" GOOD,
     "2:5: start \"x\" is not a time: expected ISO 8601 like 2031-05-04T06:20, or a number like 1260",
     "start is not a time",
     {ROLES}},
    {HEADER GOOD "c,d,3,08:61\n",
     "3:7: finish \"08:61\" is not a time: expected a number like 1260 or 12.5",
     "finish is not a time",
     {ROLES}},
    {HEADER GOOD "c,d, 3,4\n",
     "3:5: start \" 3\" is not a time: expected a number like 1260 or 12.5",
     "start is not a time",
     {ROLES}},
    {HEADER GOOD "c,d,3,1e10\n",
     "3:7: finish \"1e10\" is out of range: expected a number between -9223372036 and 9223372036",
     "finish is out of range",
     {ROLES}},
    {HEADER GOOD "c,d,0.0000000001,4\n",
     "3:5: start \"0.0000000001\" has digits finer than 0.000000001: round it",
     "start has digits finer than a tick",
     {ROLES}},
    {HEADER GOOD "c,d,3,4.0000000005\n",
     "3:7: finish \"4.0000000005\" has digits finer than 0.000000001: round it",
     "finish has digits finer than a tick",
     {ROLES}},
    {HEADER GOOD "c,d,9,3\n",
     "3:7: finish \"3\" is before start \"9\": correct one of them",
     "finish before start",
     {ROLES}},
    {HEADER GOOD "c,d,9223372036,9223372036\n",
     "3:5: start \"9223372036\" is out of range with linger added: lower linger",
     "start is out of range",
     {ROLES, .linger = 900000000}},
    /* calendar times */
    {HEADER "c,d,2031-05-04T06:20,08:61\nc,d,2031-05-04,2031-05-05\n",
     "2:22: finish \"08:61\" is not a time: expected ISO 8601 like 2031-05-04T06:20 or "
     "2031-05-04T06:20:00-01:00",
     "finish is not a time",
     {ROLES}},
    {HEADER "c,d,2031-05-04T06:20,1\nc,d,2031-05-04,2031-05-05\n",
     "2:22: finish \"1\" is not a time: expected ISO 8601 like 2031-05-04T06:20 or 2031-05-04T06:20:00-01:00",
     "finish is not a time",
     {ROLES}},
    {HEADER "c,d,2031-02-29,2031-03-01\nc,d,2031-05-04,2031-05-05\n",
     "2:5: start \"2031-02-29\" is out of range: expected a date and time that exist, from 1678 to 2261",
     "start is out of range",
     {ROLES}},
    {HEADER "c,d,2031-05-04,9999-12-31\nc,d,2031-05-04,2031-05-05\n",
     "2:16: finish \"9999-12-31\" is out of range: expected a date and time that exist, from 1678 to 2261",
     "finish is out of range",
     {ROLES}},
    {HEADER "c,d,2031-05-04T06:20:00,2031-05-04T06:20:60.1234567891\nc,d,2031-05-04,2031-05-05\n",
     "2:25: finish \"2031-05-04T06:20:60.1234567891\" has digits finer than 0.000000001: round it",
     "finish has digits finer than a tick",
     {ROLES}},
    {HEADER "c,d,2031-05-04T06:20Z,2031-05-04T07:20+02:00\nc,d,2031-05-04,2031-05-05\n",
     "2:23: finish \"2031-05-04T07:20+02:00\" is before start \"2031-05-04T06:20Z\": correct one of them",
     "finish before start",
     {ROLES}},
    {HEADER "c,d,2031-05-04,2031-05-05\nc,d,1935645600,1935645601\n",
     "3:5: start \"1935645600\" is not a time: expected ISO 8601 like 2031-05-04T06:20 or "
     "2031-05-04T06:20:00-01:00",
     "start is not a time",
     {ROLES}},
    {HEADER "c,d,1935645600,x\n" GOOD,
     "2:16: finish \"x\" is not a time: expected seconds since 1970 like 1935645600",
     "finish is not a time",
     {ROLES, .zone = "Atlantic/Azores"}},
    {HEADER "c,d,2031-05-04,x\n" GOOD,
     "2:5: start \"2031-05-04\" is not a time: expected a number like 1260 or 12.5",
     "start is not a time",
     {ROLES, .form = THOLE_TIME_PLAIN}},
/* durations */
#define WITH_DURATION .from = {"from", 0}, .to = {"to", 0}, .start = {"start", 0}, .duration = {"finish", 0}
    {HEADER GOOD "c,d,1,-5\n",
     "3:7: duration \"-5\" is negative: expected 0 or more",
     "duration is negative",
     {WITH_DURATION}},
    {HEADER GOOD "c,d,1,-20 min\n",
     "3:7: duration \"-20 min\" is negative: expected 0 or more",
     "duration is negative",
     {WITH_DURATION}},
    {HEADER GOOD "c,d,1,20 minits\n",
     "3:7: duration \"20 minits\" is not a duration: expected one like 90, 20 min, 1 h 30 min or PT20M",
     "duration is not a duration",
     {WITH_DURATION}},
    {HEADER GOOD "c,d,1,20 min\n",
     "3:7: duration \"20 min\" is not a duration: expected a number in the clock's unit, like 12.5",
     "duration is not a duration",
     {WITH_DURATION, .unit = "km"}},
    {HEADER GOOD "c,d,1,\n", "3:7: duration is empty: expected a time", "duration is empty", {WITH_DURATION}},
    {HEADER GOOD "c,d,1,9223372036\n",
     "3:7: duration \"9223372036\" is out of range: start and finish must lie within 292 years of 0",
     "duration is out of range",
     {WITH_DURATION}},
    {HEADER GOOD "c,d,1,0.5 ns\n",
     "3:7: duration \"0.5 ns\" has digits finer than 0.000000001: round it",
     "duration has digits finer than a tick",
     {WITH_DURATION}},
    /* bytes and quotes */
    {HEADER "caf\xE9,d,3,4\n" GOOD,
     "2:1: field \"caf\\xE9\" is not UTF-8: save the file as UTF-8",
     "not UTF-8",
     {ROLES}},
    {HEADER "c,\"\xC3\xA9\xED\xA0\x80\",3,4\n" GOOD,
     "2:3: field \"\xC3\xA9\\xED\\xA0\\x80\" is not UTF-8: save the file as UTF-8",
     "not UTF-8",
     {ROLES}},
    {HEADER "c,d,3,4\xC0\x80\n" GOOD,
     "2:7: field \"4\\xC0\\x80\" is not UTF-8: save the file as UTF-8",
     "not UTF-8",
     {ROLES}},
    {HEADER "\"c\"x,d,3,4\n" GOOD,
     "2:1: field \"\\\"c\\\"\" goes on after its closing quote: double the quotes inside a quoted field",
     "text after a closing quote",
     {ROLES}},
    {HEADER "c,\"d\" ,3,4\n" GOOD,
     "2:3: field \"\\\"d\\\"\" goes on after its closing quote: double the quotes inside a quoted field",
     "text after a closing quote",
     {ROLES}},
    {HEADER "c,\"d\"\r,3,4\n" GOOD,
     "2:3: field \"\\\"d\\\"\" goes on after its closing quote: double the quotes inside a quoted field",
     "text after a closing quote",
     {ROLES}},
    {HEADER "c,\"d,3,4\n" GOOD,
     "2:3: field \"\\\"d,3,4\\na,b,1,2\\n\" opens a quote that is never closed: close it, or double a quote "
     "that is meant as such",
     "quote not closed",
     {ROLES}},
    /* the header */
    {"", ": the file is empty: expected a header line with the names of the columns", NULL, {ROLES}},
    {"\n# only this\n\r\n",
     ": the file is empty: expected a header line with the names of the columns",
     NULL,
     {ROLES}},
    {"",
     ": the file is empty: expected rows",
     NULL,
     {.from = {NULL, 1}, .to = {NULL, 2}, .start = {NULL, 3}, .headless = true}},
    {"from,to,departs,finish\n" GOOD,
     "1: no column \"start\" for start: the columns are \"from\", \"to\", \"departs\", \"finish\"",
     NULL,
     {ROLES}},
    {"# x\nfrom,to,Strat,finish\n" GOOD,
     "2: no column \"start\" for start: perhaps \"Strat\", the columns are \"from\", \"to\", \"Strat\", "
     "\"finish\"",
     NULL,
     {ROLES}},
    {"from,to,start\n",
     "1: no column \"finish\" for finish: the columns are \"from\", \"to\", \"start\"",
     NULL,
     {ROLES}},
    {"from,to,start,finish,to\n",
     "1: columns 2 and 5 are both called \"to\": give the column for to by number",
     NULL,
     {ROLES}},
    {HEADER GOOD,
     "1: no column 5 for to: there are 4 columns",
     NULL,
     {.from = {"from", 0}, .to = {NULL, 5}, .start = {"start", 0}}},
    {"from,\"to\nstart,finish\n",
     "1:6: field \"\\\"to\\nstart,finish\\n\" opens a quote that is never closed: close it, or double a "
     "quote that is meant as such",
     NULL,
     {ROLES}},
    {"from,t\xF6,start,finish\n",
     "1:6: field \"t\\xF6\" is not UTF-8: save the file as UTF-8",
     NULL,
     {ROLES}},
    {"\xFF\xFE"
     "f",
     ": the file is UTF-16: save it as UTF-8",
     NULL,
     {ROLES}},
    {"PK\x03\x04",
     ": the file is a zip archive: unpack it first (gzip, zstd and xz are unpacked here)",
     NULL,
     {ROLES}},
    {"BZh9",
     ": the file is packed by bzip2: unpack it first (gzip, zstd and xz are unpacked here)",
     NULL,
     {ROLES}},
    {"\x1F\x8B\x08",
     ": the gzip data is damaged or cut short (the data ends too early): fetch or pack it again",
     NULL,
     {ROLES}},
    {"1,2,3\n1,2\n4,5,6\n",
     "2:3: field \"2\" is the last of 2 columns: expected 3, parted by \",\"",
     "too few columns",
     {.from = {NULL, 1}, .to = {NULL, 2}, .start = {NULL, 3}, .headless = true}},
};
enum { TABLE_SIZE = sizeof TABLE / sizeof *TABLE };

static void test_messages(void **state) {
    (void)state;
    assert_true(TABLE_SIZE >= 40);
    for (size_t i = 0; i < TABLE_SIZE; i++) {
        thole_network *network = NULL;
        thole_error error;
        char wanted[1100];
        thole_status status = thole_read_contacts_text(
            &context, "log.csv", TABLE[i].text, strlen(TABLE[i].text), &TABLE[i].options, &network, &error);
        snprintf(wanted, sizeof wanted, "log.csv%s%s", TABLE[i].message[0] == ':' ? "" : ":",
                 TABLE[i].message);
        if (status != THOLE_INPUT)
            fail_msg("%s: status %d", wanted, (int)status);
        assert_null(network);
        assert_string_equal(error.text, wanted);
    }
}

/* The line that a message begins with. */
static unsigned long line_of(const char *message) { return strtoul(message, NULL, 10); }

/* With faulty rows skipped, the fault is counted, its row's line kept, and every other row is read. */
static void test_skipping(void **state) {
    (void)state;
    for (size_t i = 0; i < TABLE_SIZE; i++) {
        thole_contacts_options options = TABLE[i].options;
        thole_network *network = NULL;
        thole_error error;
        options.skip_faulty = true;
        thole_status status = thole_read_contacts_text(&context, "log.csv", TABLE[i].text,
                                                       strlen(TABLE[i].text), &options, &network, &error);
        if (TABLE[i].reason == NULL) {
            assert_int_equal(status, THOLE_INPUT);
            continue;
        }
        if (status != THOLE_OK)
            fail_msg("%s", error.text);
        const thole_account *account = thole_network_account(network);
        if (account->skipped != 1 || account->reason_count != 1 ||
            strcmp(account->reasons[0].what, TABLE[i].reason) != 0)
            fail_msg("%s: skipped %llu, first for \"%s\"", TABLE[i].message,
                     (unsigned long long)account->skipped,
                     account->reason_count > 0 ? account->reasons[0].what : "");
        /* the message may name a later line of a row with line feeds in it */
        assert_true(account->reasons[0].first_line <= line_of(TABLE[i].message));
        assert_true(account->reasons[0].first_line >= 2);
        assert_true(account->events >= 1 && account->rows == account->events + 1);
        thole_network_release(network);
    }
}

/* Many faults in one file, around rows that are good; every line is accounted for. */
static void test_many_faults(void **state) {
    (void)state;
    thole_contacts_options options = USUAL;
    options.skip_faulty = true;
    expect("from,to,start,finish,mode\n"
           "a,b,?,2,x\n" /* before the form of times is known */
           "a,b\n"
           "a,b,1,2,first\n"
           "a,b,c,2,x\n"
           "\n"
           "a,b,2,1,x\n"
           "\"a,b,3,4,x\n"       /* opens a quote that the next line closes */
           "a\"b,b,3,4,second\n" /* and is read by itself */
           "a,a,5,6,x\n"
           "a,b,5,6,7,8\n"
           "\"a\nb\",c,5,6,third,x\n" /* two lines, one column too many */
           "\"a\nb\",c,5,,third\n"    /* two lines, one fault */
           "\xFF,b,5,6,x\n"
           "a,b,7,8,fourth\n"
           "a,b,9,10,\"x\n",
           &options,
           "a>b 1 2 mode='first'\n"
           "a\"b>b 3 4 mode='second'\n"
           "a>b 7 8 mode='fourth'\n"
           "mode: text\n"
           "skipped: start is not a time, 2 from line 2\n"
           "skipped: too few columns, 1 from line 3\n"
           "skipped: finish before start, 1 from line 7\n"
           "skipped: text after a closing quote, 1 from line 8\n"
           "skipped: too many columns, 2 from line 11\n"
           "skipped: finish is empty, 1 from line 14\n"
           "skipped: not UTF-8, 1 from line 16\n"
           "skipped: quote not closed, 1 from line 18\n"
           "remark: blank line, 1 from line 6\n");
    thole_network *network = read_text("from,to,start,finish\na,a,1,2\nx\na,b,1,2\nb,a,1,2\n", &options);
    const thole_account *account = thole_network_account(network);
    assert_int_equal(account->rows, 4);
    assert_int_equal(account->events, 2);
    assert_int_equal(account->self_loops, 1);
    assert_int_equal(account->skipped, 1);
    assert_int_equal(account->repeats, 1);
    assert_string_equal(account->source, "log.csv");
    thole_network_release(network);
    /* nothing but faults: an empty network that says so */
    expect("from,to,start,finish\na,b,x,y\n", &options, "skipped: start is not a time, 1 from line 2\n");
    thole_contacts_options headless = {
        .from = {NULL, 1}, .to = {NULL, 2}, .start = {NULL, 3}, .headless = true, .skip_faulty = true};
    expect("\"a\n\xFF,1,2\n", &headless,
           "skipped: quote not closed, 1 from line 1\nskipped: not UTF-8, 1 from line 2\n");
}

static void expect_fault(const char *text, size_t length, const thole_contacts_options *options,
                         const char *wanted) {
    thole_network *network = NULL;
    thole_error error;
    assert_int_equal(thole_read_contacts_text(&context, "log.csv", text, length, options, &network, &error),
                     THOLE_INPUT);
    assert_string_equal(error.text, wanted);
}

static void test_nul(void **state) {
    (void)state;
    static const char TEXT[] = HEADER "c,d\0,3,4\n" GOOD, FIRST[] = "\0" HEADER,
                      QUOTED[] = HEADER "\"c\0\n\",d,3,4\n" GOOD;
    expect_fault(TEXT, sizeof TEXT - 1, &USUAL,
                 "log.csv:2:3: field \"d\\x00\" holds a NUL byte: give delimited text in UTF-8");
    expect_fault(FIRST, sizeof FIRST - 1, &USUAL,
                 "log.csv:1:1: field \"\\x00"
                 "from\" holds a NUL byte: give delimited text in UTF-8");
    expect_fault(QUOTED, sizeof QUOTED - 1, &USUAL,
                 "log.csv:2:1: field \"c\\x00\\n\" holds a NUL byte: give delimited text in UTF-8");
    thole_contacts_options skip = USUAL;
    skip.skip_faulty = true;
    static pad p;
    thole_network *network = read_bytes(TEXT, sizeof TEXT - 1, &skip);
    assert_string_equal(describe(network, &p), "a>b 1 2\nskipped: NUL byte, 1 from line 2\n");
    thole_network_release(network);
}

/* Long fields and rows are refused before they are held in memory. */
static void test_too_long(void **state) {
    (void)state;
    enum { LONG = 10 << 20, MEGABYTE = 1 << 20 };
    char *text = malloc(2 * LONG);
    assert_non_null(text);
    thole_contacts_options skip = USUAL;
    skip.skip_faulty = true;
    for (int quoted = 0; quoted < 2; quoted++) {
        size_t n = (size_t)sprintf(text, HEADER "c,%s", quoted ? "\"" : "");
        memset(text + n, 'x', LONG);
        n += LONG;
        n += (size_t)sprintf(text + n, "%s,3,4\n" GOOD, quoted ? "\"" : "");
        char wanted[300], shown[61];
        memset(shown, 'x', 60);
        shown[60] = '\0';
        snprintf(wanted, sizeof wanted,
                 "log.csv:2:3: field \"%s%.*s\"...\" is longer than 1 MiB: look for a quote that is not "
                 "closed, or a wrong separator",
                 quoted ? "\\\"" : "", quoted ? 59 : 60, shown);
        char *tail = strstr(wanted, "\"...\"");
        memmove(tail, tail + 1, strlen(tail)); /* the quote comes after the dots */
        atomic_store(&memory.peak, 0);
        expect_fault(text, n, &USUAL, wanted);
        assert_true(atomic_load(&memory.peak) < 5 * MEGABYTE);
        static pad p;
        thole_network *network = read_bytes(text, n, &skip);
        assert_string_equal(describe(network, &p),
                            "a>b 1 2\nskipped: field longer than 1 MiB, 1 from line 2\n");
        thole_network_release(network);
    }
    /* a field of exactly 1 MiB is read, of one byte more it is not */
    for (int more = 0; more < 2; more++) {
        size_t n = (size_t)sprintf(text, HEADER);
        memset(text + n, 'x', (size_t)(MEGABYTE + more));
        n += (size_t)(MEGABYTE + more);
        n += (size_t)sprintf(text + n, ",b,3,4\n" GOOD);
        thole_network *network = read_bytes(text, n, &skip);
        assert_int_equal(thole_network_account(network)->skipped, more);
        assert_int_equal(thole_network_count(network), 2 - more);
        thole_network_release(network);
    }
    /* fields of no more than that, but too many of them in a row */
    size_t n = (size_t)sprintf(text, HEADER);
    for (int i = 0; i < 5; i++) {
        memset(text + n, 'x', 1000000);
        n += 1000000;
        text[n++] = ',';
    }
    n += (size_t)sprintf(text + n, "\n" GOOD);
    thole_network *network = read_bytes(text, n, &skip);
    assert_string_equal(thole_network_account(network)->reasons[0].what, "too many columns");
    assert_int_equal(thole_network_count(network), 1);
    thole_network_release(network);
    free(text);
}

static void test_options(void **state) {
    (void)state;
    static const struct {
        const char *message;
        thole_contacts_options options;
    } BAD[] = {
        {"no column for from: name one, or give its number", {.to = {"to", 0}, .start = {"start", 0}}},
        {"no column for to: name one, or give its number", {.from = {"from", 0}, .start = {"start", 0}}},
        {"no column for start: name one, or give its number", {.from = {"from", 0}, .to = {"to", 0}}},
        {"columns for both finish and duration: give one of them", {ROLES, .duration = {"x", 0}}},
        {"column \"from\" for from, but there is no header: give its number", {ROLES, .headless = true}},
        {"separator is not a comma, a semicolon or a tab: leave it out to have it found",
         {ROLES, .separator = '|'}},
        {"linger is negative: give a duration", {ROLES, .linger = -1}},
        {"zone \"UTC\" with plain times: leave one of them out",
         {ROLES, .zone = "UTC", .form = THOLE_TIME_PLAIN}},
        {"unit \"\" is not a name of 1 to 15 bytes without digits, spaces and signs: give one like km",
         {ROLES, .unit = ""}},
        {"unit \"2 km\" is not a name of 1 to 15 bytes without digits, spaces and signs: give one like km",
         {ROLES, .unit = "2 km"}},
        {"unit \"km\" with calendar times, which are in seconds: leave it out",
         {ROLES, .unit = "km", .form = THOLE_TIME_ISO}},
        {"log.csv:2: unit \"km\" with calendar times, which are in seconds: leave it out",
         {ROLES, .unit = "km"}},
        {"column 3 is both start and finish: give each its own",
         {.from = {"from", 0}, .to = {"to", 0}, .start = {"start", 0}, .finish = {NULL, 3}}},
        {"\"no zone\" is not the name of a time zone: name one like Atlantic/Azores",
         {ROLES, .zone = "no zone"}},
    };
    static const char TEXT[] = "from,to,start,finish\na,b,2031-05-04,2031-05-05\n";
    for (size_t i = 0; i < sizeof BAD / sizeof *BAD; i++) {
        thole_network *network = NULL;
        thole_error error;
        thole_status status = thole_read_contacts_text(&context, "log.csv", TEXT, sizeof TEXT - 1,
                                                       &BAD[i].options, &network, &error);
        assert_int_equal(status, THOLE_ARGUMENT);
        assert_string_equal(error.text, BAD[i].message);
    }
}

int main(void) {
    const struct CMUnitTest tests[] = {
        cmocka_unit_test_teardown(test_messages, check_memory),
        cmocka_unit_test_teardown(test_skipping, check_memory),
        cmocka_unit_test_teardown(test_many_faults, check_memory),
        cmocka_unit_test_teardown(test_nul, check_memory),
        cmocka_unit_test_teardown(test_too_long, check_memory),
        cmocka_unit_test_teardown(test_options, check_memory),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
