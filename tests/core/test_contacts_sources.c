/* Where contacts come from: files, standard input, packed data whole and damaged; memory, refusals and stops.
 */
#include "core/reading.h"

#include <archive.h>
#include <archive_entry.h>
#include <errno.h>
#include <fcntl.h>
#include <sys/stat.h>
#include <unistd.h>

typedef struct packed {
    unsigned char bytes[1 << 17];
    size_t n;
} packed;

typedef enum packing { GZIP, ZSTD, XZ, PACKINGS } packing;
static const char *const PACKING[] = {"gzip", "zstd", "xz"};

/* Pack by libarchive, after what is there already. */
static void pack(packed *p, packing how, const char *text, size_t length) {
    struct archive *archive = archive_write_new();
    struct archive_entry *entry = archive_entry_new();
    size_t used = 0;
    assert_int_equal(archive_write_set_format_raw(archive), ARCHIVE_OK);
    assert_int_equal(how == GZIP   ? archive_write_add_filter_gzip(archive)
                     : how == ZSTD ? archive_write_add_filter_zstd(archive)
                                   : archive_write_add_filter_xz(archive),
                     ARCHIVE_OK);
    archive_write_set_bytes_per_block(archive, 0);
    assert_int_equal(archive_write_open_memory(archive, p->bytes + p->n, sizeof p->bytes - p->n, &used),
                     ARCHIVE_OK);
    archive_entry_set_filetype(entry, AE_IFREG);
    assert_int_equal(archive_write_header(archive, entry), ARCHIVE_OK);
    assert_int_equal(archive_write_data(archive, text, length), length);
    assert_int_equal(archive_write_close(archive), ARCHIVE_OK);
    archive_entry_free(entry);
    archive_write_free(archive);
    p->n += used;
}

/* A log of some rows, the same on every run. */
static const char *make_log(void) {
    static pad p;
    uint32_t seed = 99;
    p.n = 0;
    put(&p, "from,to,start,finish,mode\n");
    for (int i = 0; i < 150; i++) {
        unsigned r = (seed = seed * 1664525u + 1013904223u) >> 8;
        put(&p, "\"Quay %u\",Pier %u,%d,%u,%s\n", r % 30, r / 32 % 30, i * 10, (unsigned)i * 10 + r % 999,
            r % 3 ? "ferry" : "bus");
    }
    return p.text;
}

static const char *describe_log(void) {
    static pad p;
    thole_network *network = read_text(make_log(), &USUAL);
    assert_int_equal(thole_network_count(network), 150);
    describe(network, &p);
    thole_network_release(network);
    return p.text;
}

/* ---- packed ---------------------------------------------------------------- */

static void test_packed(void **state) {
    (void)state;
    static packed p;
    static pad found;
    const char *log = make_log(), *wanted = describe_log();
    size_t n = strlen(log), cut = n / 3;
    for (int how = 0; how < PACKINGS; how++) {
        for (int members = 1; members <= 3;
             members++) { /* in one piece, in two, and with a piece that is empty */
            p.n = 0;
            if (members == 1)
                pack(&p, (packing)how, log, n);
            if (members == 3)
                pack(&p, (packing)how, "", 0);
            if (members >= 2) {
                pack(&p, (packing)how, log, cut);
                pack(&p, (packing)how, log + cut, n - cut);
            }
            thole_network *network = read_bytes((char *)p.bytes, p.n, &USUAL);
            assert_string_equal(describe(network, &found), wanted);
            thole_network_release(network);
        }
        thole_network *network = NULL;
        thole_error error;
        p.n = 0;
        pack(&p, (packing)how, "", 0);
        assert_int_equal(
            thole_read_contacts_text(&context, "log.csv", (char *)p.bytes, p.n, &USUAL, &network, &error),
            THOLE_INPUT);
        assert_string_equal(
            error.text, "log.csv: the file is empty: expected a header line with the names of the columns");
    }
}

static void expect_damaged(const packed *p, size_t n, packing how) {
    thole_network *network = NULL;
    thole_error error;
    char begin[80];
    thole_status status =
        thole_read_contacts_text(&context, "log.csv.x", (const char *)p->bytes, n, &USUAL, &network, &error);
    snprintf(begin, sizeof begin, "log.csv.x: the %s data is damaged or cut short (", PACKING[how]);
    if (status != THOLE_INPUT || strncmp(error.text, begin, strlen(begin)) != 0)
        fail_msg("%s: status %d, \"%s\"", begin, (int)status, status == THOLE_OK ? "" : error.text);
    assert_null(network);
}

/* Cut anywhere, or with something behind the end: never taken for whole. */
static void test_cut_short(void **state) {
    (void)state;
    static packed p;
    const char *log = make_log();
    for (int how = 0; how < PACKINGS; how++) {
        p.n = 0;
        pack(&p, (packing)how, log, strlen(log));
        for (size_t n = 6; n < p.n; n += n < 40 || p.n - n < 40 ? 1 : 37)
            expect_damaged(&p, n, (packing)how);
        memcpy(p.bytes + p.n, "more of it", 10);
        expect_damaged(&p, p.n + 10, (packing)how);
    }
}

/* One bit turned anywhere: an error, or (in a time stamp or the like) the same network; never another one. */
static void expect_guarded(packed *p, const char *wanted) {
    static pad found;
    size_t same = 0;
    for (size_t at = 4; at<p->n; at += p->n> 500 ? 5 : 1) {
        thole_network *network = NULL;
        thole_error error;
        unsigned char bit = (unsigned char)(1u << at % 8);
        p->bytes[at] ^= bit;
        thole_status status =
            thole_read_contacts_text(&context, "log", (char *)p->bytes, p->n, &USUAL, &network, &error);
        p->bytes[at] ^= bit;
        if (status == THOLE_OK) {
            assert_string_equal(describe(network, &found), wanted);
            same++;
        } else {
            assert_int_equal(status, THOLE_INPUT);
        }
        thole_network_release(network);
    }
    assert_true(same < 8);
}

static void test_damaged(void **state) {
    (void)state;
    static packed p;
    const char *log = make_log(), *wanted = describe_log();
    p.n = 0;
    pack(&p, GZIP, log, strlen(log));
    expect_guarded(&p, wanted);
    p.n = 0;
    pack(&p, XZ, log, strlen(log));
    expect_guarded(&p, wanted);
    /* libarchive writes zstd without a checksum, so that nothing could tell: this was written by the zstd
     * command */
    static const unsigned char ZSTD_FRAME[] = {
        0x28, 0xb5, 0x2f, 0xfd, 0x04, 0x68, 0x45, 0x02, 0x00, 0xd2, 0x03, 0x0d, 0x11, 0xa0, 0x2f, 0x06, 0xa0,
        0x99, 0x37, 0x3b, 0x91, 0x40, 0xa4, 0xdc, 0x02, 0x8b, 0xf6, 0xbf, 0x5d, 0x1e, 0xe0, 0xc6, 0x3f, 0xf1,
        0x2f, 0xfc, 0x1b, 0x17, 0x40, 0x3c, 0xbc, 0x9e, 0x3c, 0x40, 0x38, 0xf8, 0x2a, 0x9b, 0x3c, 0x97, 0x43,
        0xa0, 0x51, 0x17, 0x1d, 0x73, 0x9d, 0xaa, 0x52, 0xcb, 0x6a, 0x28, 0x27, 0x0b, 0x06, 0x00, 0x52, 0x71,
        0x04, 0x2a, 0x8e, 0x38, 0xc5, 0x44, 0x54, 0x03, 0x40, 0xce, 0x78, 0x95, 0x27, 0x80, 0x2f, 0x6b, 0xfd};
    memcpy(p.bytes, ZSTD_FRAME, p.n = sizeof ZSTD_FRAME);
    expect_guarded(
        &p,
        "Pier>Quay 1 2\nQuay>Mole 3 4\nMole>Pier 5 60\nPier>Quay 10 20\nQuay>Mole 30 40\nMole>Pier 50 60\n");
}

/* ---- files and standard input ------------------------------------------------ */

static char path[256];

static void put_file(const void *bytes, size_t n) {
    const char *where = getenv("TMPDIR");
    snprintf(path, sizeof path, "%.200s/contacts-XXXXXX", where != NULL && where[0] != '\0' ? where : "/tmp");
    int file = mkstemp(path);
    assert_true(file >= 0);
    assert_int_equal(write(file, bytes, n), n);
    assert_int_equal(close(file), 0);
}

static void test_file(void **state) {
    (void)state;
    static packed p;
    static pad found;
    const char *log = make_log(), *wanted = describe_log();
    for (int how = -1; how < PACKINGS; how++) {
        p.n = 0;
        if (how >= 0)
            pack(&p, (packing)how, log, strlen(log));
        else
            memcpy(p.bytes, log, p.n = strlen(log));
        put_file(p.bytes, p.n);
        thole_network *network = NULL;
        thole_error error;
        if (thole_read_contacts(&context, path, &USUAL, &network, &error) != THOLE_OK)
            fail_msg("%s", error.text);
        assert_string_equal(describe(network, &found), wanted);
        assert_string_equal(thole_network_account(network)->source, path);
        thole_network_release(network);
        /* and as standard input */
        int kept = dup(STDIN_FILENO), file = open(path, O_RDONLY);
        assert_true(kept >= 0 && file >= 0 && dup2(file, STDIN_FILENO) >= 0);
        network = NULL;
        assert_int_equal(thole_read_contacts(&context, "-", &USUAL, &network, &error), THOLE_OK);
        assert_true(dup2(kept, STDIN_FILENO) >= 0);
        close(kept);
        close(file);
        assert_string_equal(describe(network, &found), wanted);
        assert_string_equal(thole_network_account(network)->source, "standard input");
        thole_network_release(network);
        unlink(path);
    }
}

static void test_no_file(void **state) {
    (void)state;
    static const struct {
        const char *path, *message;
    } BAD[] = {
        {"no-such-file.csv",
         "cannot open \"no-such-file.csv\": there is no such file: check its name and folder"},
        {"", "cannot open \"\": there is no such file: check its name and folder"},
        {"/", "cannot read \"/\": it is a folder: name a file in it"},
        {"/dev/null/x", "cannot open \"/dev/null/x\": its path leads nowhere: check it"},
    };
    for (size_t i = 0; i < sizeof BAD / sizeof *BAD; i++) {
        thole_network *network = NULL;
        thole_error error;
        assert_int_equal(thole_read_contacts(&context, BAD[i].path, &USUAL, &network, &error), THOLE_FILE);
        assert_string_equal(error.text, BAD[i].message);
        assert_null(network);
    }
    /* a closed standard input fails as a read does */
    int kept = dup(STDIN_FILENO);
    thole_network *network = NULL;
    thole_error error;
    close(STDIN_FILENO);
    thole_status status = thole_read_contacts(&context, "-", &USUAL, &network, &error);
    dup2(kept, STDIN_FILENO);
    close(kept);
    assert_int_equal(status, THOLE_FILE);
    assert_string_equal(error.text,
                        "standard input: reading failed (bad file descriptor): check the file and its disk");
}

/* A very long path leaves room for the rest of the message. */
static void test_long_name(void **state) {
    (void)state;
    static char name[3000];
    thole_network *network = NULL;
    thole_error error;
    for (size_t i = 0; i + 2 < sizeof name; i += 2)
        memcpy(name + i, "\xC3\xA9", 2);
    name[sizeof name - 2] = '\0';
    assert_int_equal(thole_read_contacts_text(&context, name, "x\n", 2, &USUAL, &network, &error),
                     THOLE_INPUT);
    assert_true(strncmp(error.text, "...\xC3\xA9", 5) == 0);
    assert_non_null(strstr(error.text, ":1: no column \"from\" for from: the columns are \"x\""));
}

/* ---- memory ------------------------------------------------------------------ */

/* Memory follows the network: a long file of one link between nodes over and over holds only events; of
 * nothing but self-loops, nothing. */
static void test_streams(void **state) {
    (void)state;
    enum { ROWS = 300000, MEGABYTE = 1 << 20 };
    static const char ROW[] = "here,here,1,2\n";
    char *text = malloc(ROWS * (sizeof ROW - 1) + 100);
    assert_non_null(text);
    size_t n = (size_t)sprintf(text, "from,to,start,finish\n");
    for (int i = 0; i < ROWS; i++, n += sizeof ROW - 1)
        memcpy(text + n, ROW, sizeof ROW - 1);
    n += (size_t)sprintf(text + n, "here,there,1,2\n");
    put_file(text, n);
    free(text);
    atomic_store(&memory.peak, 0);
    thole_network *network = NULL;
    assert_int_equal(thole_read_contacts(&context, path, &USUAL, &network, NULL), THOLE_OK);
    unlink(path);
    assert_int_equal(thole_network_account(network)->self_loops, ROWS);
    assert_int_equal(thole_network_count(network), 1);
    assert_true(atomic_load(&memory.peak) < MEGABYTE);
    thole_network_release(network);
}

/* Refuses allocation number `until`, once or from then on. */
static long until;
static bool for_ever;

static void *refusing(void *user, void *block, size_t old_bytes, size_t new_bytes) {
    (void)user;
    if (new_bytes == 0) {
        free(block);
        return NULL;
    }
    if (new_bytes > old_bytes && (until-- == 0 || (for_ever && until < 0)))
        return NULL;
    return realloc(block, new_bytes);
}

/* Doubled quotes, many names, attributes that change their type, odd names, blank lines, faults, remarks. */
static const char *make_rich(void) {
    static pad p;
    p.n = 0;
    put(&p, "from,to,start,finish,start,mode,seats,wait\n\nx\n");
    for (int i = 0; i < 150; i++)
        put(&p, "\"Quay \"\"%d\"\"\",Pier %d,2031-03-%02dT00:%02d,2031-10-26T00:%02d:00,%d,%s,%s,%d\n",
            i % 20, 150 - i, 1 + i % 31, i % 60, i % 60, i, i % 2 ? "ferry" : "bus", i == 100 ? "2.5" : "40",
            i);
    put(&p, "a,b,2031-05-04,2031-05-05,x,y,full,1\n");
    return p.text;
}

static void test_refused_memory(void **state) {
    (void)state;
    static packed p;
    thole_contacts_options options = USUAL;
    options.start = (thole_column_ref){NULL, 3};
    options.zone = "Atlantic/Azores";
    options.skip_faulty = true;
    p.n = 0;
    pack(&p, GZIP, make_rich(), strlen(make_rich()));
    for (int pass = 0; pass < 2; pass++) {
        thole_memory small = {.resize = refusing};
        thole_context poor = {.memory = &small, .threads = 1};
        long n = 0;
        for_ever = pass == 1;
        /* until a run asks for fewer; a single refusal need not end it, where a smaller growth will do */
        for (until = -1; until < 0; n++) {
            thole_network *network = NULL;
            thole_error error = {.text = ""};
            until = n;
            thole_status status =
                thole_read_contacts_text(&poor, "log", (char *)p.bytes, p.n, &options, &network, &error);
            if (status != THOLE_OK) {
                assert_true(until < 0);
                assert_int_equal(status, THOLE_NO_MEMORY);
                assert_true(strncmp(error.text, "out of memory for ", 18) == 0);
                assert_null(network);
            } else {
                assert_int_equal(thole_network_count(network), 151);
                assert_int_equal(thole_network_columns(network), 4);
                assert_int_equal(thole_network_account(network)->skipped, 1);
            }
            thole_network_release(network);
            assert_int_equal(atomic_load(&small.used), 0);
        }
        assert_true(n > 60);
    }
}

static void test_ceiling(void **state) {
    (void)state;
    thole_memory small = {.ceiling = 100000};
    thole_context poor = {.memory = &small, .threads = 1};
    thole_network *network = NULL;
    thole_error error;
    static pad p;
    p.n = 0;
    put(&p, "from,to,start,finish\n");
    for (int i = 0; i < 3000; i++)
        put(&p, "a%d,b,%d,9999\n", i, i);
    assert_int_equal(thole_read_contacts_text(&poor, "log", p.text, p.n, &USUAL, &network, &error),
                     THOLE_LIMIT);
    assert_non_null(strstr(error.text, "memory ceiling"));
    assert_int_equal(atomic_load(&small.used), 0);
}

/* ---- stopping ------------------------------------------------------------------ */

typedef struct ticks {
    int n, stop_at;
    double last;
    char phase[100];
} ticks;

static bool count_tick(void *user, const char *phase, double done) {
    ticks *t = user;
    assert_true(done >= t->last && done <= 1.0);
    t->last = done;
    snprintf(t->phase, sizeof t->phase, "%s", phase);
    return ++t->n == t->stop_at;
}

static void test_progress_and_stop(void **state) {
    (void)state;
    enum { SIZE = 3 << 20 };
    char *text = malloc(SIZE + 100);
    assert_non_null(text);
    size_t n = (size_t)sprintf(text, "from,to,start,finish\n");
    while (n < SIZE)
        n += (size_t)sprintf(text + n, "a,b,1,2\n");
    ticks t = {.stop_at = -1};
    _Atomic bool cancel = false;
    thole_context ticking = {
        .memory = &memory, .threads = 1, .tick = count_tick, .tick_user = &t, .cancel = &cancel};
    thole_network *network = NULL;
    assert_int_equal(thole_read_contacts_text(&ticking, "folder/log.csv", text, n, &USUAL, &network, NULL),
                     THOLE_OK);
    thole_network_release(network);
    assert_string_equal(t.phase, "reading log.csv");
    assert_true(t.n >= 10 && t.last == 1.0);
    int all = t.n;
    for (int stop = 1; stop <= all; stop += 3) {
        thole_error error;
        t = (ticks){.stop_at = stop};
        network = NULL;
        assert_int_equal(
            thole_read_contacts_text(&ticking, "folder/log.csv", text, n, &USUAL, &network, &error),
            THOLE_CANCELLED);
        assert_null(network);
        assert_string_equal(error.text, "stopped while reading log.csv");
    }
    cancel = true;
    t = (ticks){.stop_at = -1};
    assert_int_equal(thole_read_contacts_text(&ticking, "log.csv", text, n, &USUAL, &network, NULL),
                     THOLE_CANCELLED);
    free(text);
}

int main(void) {
    const struct CMUnitTest tests[] = {
        cmocka_unit_test_teardown(test_packed, check_memory),
        cmocka_unit_test_teardown(test_cut_short, check_memory),
        cmocka_unit_test_teardown(test_damaged, check_memory),
        cmocka_unit_test_teardown(test_file, check_memory),
        cmocka_unit_test_teardown(test_no_file, check_memory),
        cmocka_unit_test_teardown(test_long_name, check_memory),
        cmocka_unit_test_teardown(test_streams, check_memory),
        cmocka_unit_test_teardown(test_refused_memory, check_memory),
        cmocka_unit_test_teardown(test_ceiling, check_memory),
        cmocka_unit_test_teardown(test_progress_and_stop, check_memory),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
