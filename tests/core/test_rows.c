/* The cursor over delimited text: against libcsv on random quoted text, and against itself with other blocks.
 */
#include <setjmp.h>
#include <stdarg.h>
#include <stdio.h>
#include <string.h>

#include <cmocka.h>
#include <csv.h>

#include "ingest/rows.h"
#include "ingest/utf8.h"
#include "ingest/words.h"
#include "support/dice.h"

static uint64_t seed = UINT64_C(0xD1B54A32D192ED03);

static uint64_t next_random(void) {
    seed ^= seed << 13;
    seed ^= seed >> 7;
    return seed ^= seed << 17;
}

static thole_memory memory;
static thole_context context = {.memory = &memory, .threads = 1};

/* Rows as text: fields between <>, a row a line; what libcsv finds and what the cursor finds. */
typedef struct found {
    char text[1 << 18];
    size_t n;
} found;

static void put_bytes(found *f, const void *bytes, size_t n) {
    assert_true(f->n + n < sizeof f->text);
    if (n > 0)
        memcpy(f->text + f->n, bytes, n);
    f->n += n;
}

static void csv_field(void *text, size_t n, void *user) {
    put_bytes(user, "<", 1);
    put_bytes(user, text, n);
    put_bytes(user, ">", 1);
}

static void csv_row(int end, void *user) {
    (void)end;
    put_bytes(user, "\n", 1);
}

/* libcsv takes spaces and tabs around fields away; RFC 4180 has them belong to the field. */
static int no_space(unsigned char c) {
    (void)c;
    return 0;
}

static void by_libcsv(const char *text, size_t n, char separator, found *f) {
    struct csv_parser parser;
    f->n = 0;
    assert_int_equal(csv_init(&parser, 0), 0);
    csv_set_delim(&parser, (unsigned char)separator);
    csv_set_space_func(&parser, no_space);
    assert_int_equal(csv_parse(&parser, text, n, csv_field, csv_row, f), n);
    csv_fini(&parser, csv_field, csv_row, f);
    csv_free(&parser);
}

/* With blocks of `block` bytes at first. The flaw of the row that is no good ends the reading. */
static ti_flaw by_cursor(const char *text, size_t n, char separator, size_t block, found *f) {
    ti_source *source = NULL;
    ti_rows rows;
    bool got = true;
    ti_flaw flaw = TI_SOUND;
    f->n = 0;
    assert_int_equal(ti_source_text(&context, "text", text, n, &source, NULL), THOLE_OK);
    assert_int_equal(ti_rows_open(&rows, &context, source, block, NULL), THOLE_OK);
    rows.separator = separator;
    for (;;) {
        assert_int_equal(ti_rows_next(&rows, &got, NULL), THOLE_OK);
        if (!got || (flaw = rows.flaw) != TI_SOUND)
            break;
        if (rows.n == 1 && rows.field[0].length == 0 && !rows.quoted)
            continue; /* a blank line, which libcsv passes over by itself */
        for (size_t i = 0; i < rows.n; i++)
            csv_field((void *)(uintptr_t)rows.field[i].at, rows.field[i].length, f);
        csv_row(0, f);
    }
    ti_rows_close(&rows);
    ti_source_close(source);
    return flaw;
}

/* Well-formed text: what every reader of RFC 4180 must agree on. */
static size_t random_text(char *text, char separator) {
    static const char *const PIECES[] = {"a",
                                         "Quay",
                                         "12",
                                         "\xC3\xA9",
                                         "-",
                                         " ",
                                         "2031-05-04T06:20:00",
                                         "\x01",
                                         "+",
                                         "longer than eight bytes"};
    size_t n = 0;
    int rows = 1 + (int)(next_random() % 12), dense = (int)(next_random() % 3);
    for (int row = 0; row < rows; row++) {
        int fields = 1 + (int)(next_random() % 6);
        for (int field = 0; field < fields; field++) {
            bool quoted = next_random() % 3 == 0;
            int pieces = (int)(next_random() % (dense == 0 ? 2 : 4));
            if (field > 0)
                text[n++] = separator;
            if (quoted)
                text[n++] = '"';
            for (int piece = 0; piece < pieces; piece++) {
                const char *what = PIECES[next_random() % 10];
                uint64_t special = quoted ? next_random() % 6 : 9;
                if (special == 0)
                    what = "\"\"";
                else if (special == 1)
                    what = "\n";
                else if (special == 2)
                    what = separator == ',' ? "," : ";";
                else if (special == 3)
                    what = "\r\n";
                memcpy(text + n, what, strlen(what));
                n += strlen(what);
            }
            if (quoted)
                text[n++] = '"';
        }
        if (row + 1 == rows && next_random() % 2)
            break;
        if (next_random() % 3 == 0)
            text[n++] = '\r';
        text[n++] = '\n';
        while (next_random() % 8 == 0)
            text[n++] = '\n';
    }
    return n;
}

static void test_against_libcsv(void **state) {
    (void)state;
    static found wanted, mine;
    static const size_t BLOCKS[] = {1, 3, 8, 17, 64, 300, 100000};
    long many = (long)dice_cases(6000);
    for (long i = 0; i < many; i++) {
        static char text[8192];
        char separator = i % 2 ? ',' : ';';
        size_t n = random_text(text, separator);
        by_libcsv(text, n, separator, &wanted);
        ti_flaw flaw = by_cursor(text, n, separator, BLOCKS[i % 7], &mine);
        if (flaw != TI_SOUND || wanted.n != mine.n || memcmp(wanted.text, mine.text, mine.n) != 0)
            fail_msg("case %ld, flaw %d of\n%.*s\nlibcsv:\n%.*s\ncursor:\n%.*s", i, (int)flaw, (int)n, text,
                     (int)wanted.n, wanted.text, (int)mine.n, mine.text);
    }
}

/* Any text, mostly broken: where blocks end must not show, flaws included. */
static void test_blocks(void **state) {
    (void)state;
    static found whole, cut;
    static const char SOUP[] = "\"\"\",,,\n\n\r\nab1 \xC3\xA9\xFF;";
    for (int i = 0; i < 6000; i++) {
        char text[200];
        size_t n = next_random() % sizeof text;
        for (size_t k = 0; k < n; k++)
            text[k] = SOUP[next_random() % (sizeof SOUP - 1 + (i % 40 == 0))];
        ti_flaw wanted = by_cursor(text, n, ',', 1000, &whole);
        for (size_t block = 1; block < 20; block += 6) {
            ti_flaw flaw = by_cursor(text, n, ',', block, &cut);
            if (flaw != wanted || cut.n != whole.n || memcmp(cut.text, whole.text, cut.n) != 0)
                fail_msg("block %zu of %.*s", block, (int)n, text);
        }
    }
}

/* Where a field stands: counted by going through the text from its start, character by character. */
static void test_places(void **state) {
    (void)state;
    for (int i = 0; i < 2000; i++) {
        static char text[8192];
        size_t n = random_text(text, ',');
        ti_source *source = NULL;
        ti_rows rows;
        bool got = true;
        assert_int_equal(ti_source_text(&context, "text", text, n, &source, NULL), THOLE_OK);
        assert_int_equal(ti_rows_open(&rows, &context, source, 64, NULL), THOLE_OK);
        while (ti_rows_next(&rows, &got, NULL) == THOLE_OK && got) {
            for (size_t k = 0; k < rows.n; k++) {
                uint64_t line = 1, column = 1, found_line, found_column;
                /* from the end of what is read back to the row, and on to the field */
                size_t read = n - ti_source_left(source), behind = rows.end - (size_t)(rows.row - rows.block);
                const char *stop = text + (read - behind) + rows.field[k].from;
                for (const char *p = text; p < stop; p++) {
                    if (*p == '\n')
                        line++, column = 1;
                    else if (((unsigned char)*p & 0xC0) != 0x80)
                        column++;
                }
                ti_rows_place(&rows, rows.field[k].from, &found_line, &found_column);
                assert_int_equal(found_line, line);
                assert_int_equal(found_column, column);
            }
        }
        ti_rows_close(&rows);
        ti_source_close(source);
    }
}

/* Every code point and its neighbours in bits, against the definition of RFC 3629, section 4, decoded the
 * plain way. */
static bool plainly_sound(const unsigned char *p, size_t n) {
    size_t more = n == 0                  ? 9
                  : p[0] < 0x80           ? 0
                  : (p[0] & 0xE0) == 0xC0 ? 1
                  : (p[0] & 0xF0) == 0xE0 ? 2
                  : (p[0] & 0xF8) == 0xF0 ? 3
                                          : 9;
    static const uint32_t LEAST[] = {0, 0x80, 0x800, 0x10000};
    if (more > 3 || n != more + 1)
        return false;
    uint32_t code = more == 0 ? p[0] : p[0] & (0x3Fu >> more);
    for (size_t i = 1; i <= more; i++) {
        if ((p[i] & 0xC0) != 0x80)
            return false;
        code = code << 6 | (p[i] & 0x3Fu);
    }
    return code >= LEAST[more] && code <= 0x10FFFF && (code < 0xD800 || code > 0xDFFF);
}

static void test_utf8(void **state) {
    (void)state;
    unsigned char p[4];
    size_t sound = 0;
    for (unsigned a = 0; a < 256; a++)
        for (unsigned b = 0; b < 256; b++) {
            p[0] = (unsigned char)a, p[1] = (unsigned char)b;
            assert_int_equal(ti_utf8_sound((char *)p, 1) == 1, plainly_sound(p, 1));
            if (a >= 0xC0)
                assert_int_equal(ti_utf8_sound((char *)p, 2) == 2, plainly_sound(p, 2));
            for (unsigned c = a < 0xE0 ? 256 : 0x7E; c < 0xC2 && a >= 0xE0; c++) {
                p[2] = (unsigned char)c;
                assert_int_equal(ti_utf8_sound((char *)p, 3) == 3, plainly_sound(p, 3));
                for (unsigned d = a < 0xF0 ? 256 : 0x7F; d < 0xC1; d++) {
                    p[3] = (unsigned char)d;
                    bool whole = ti_utf8_sound((char *)p, 4) == 4;
                    sound += whole;
                    if (whole != plainly_sound(p, 4))
                        fail_msg("%02x %02x %02x %02x", a, b, c, d);
                }
            }
        }
    assert_int_equal(sound, 0x100000); /* all code points beyond the basic plane, each once */
    /* where it ends, behind words of ASCII */
    static const char MIXED[] = "sixteen letters. \xC3\xA9 and on \xE2\x82";
    assert_int_equal(ti_utf8_sound(MIXED, sizeof MIXED - 1), sizeof MIXED - 3);
    assert_int_equal(ti_utf8_sound("", 0), 0);
}

/* Against digits put together one by one; whatever stands behind the number. */
static void test_short_numbers(void **state) {
    (void)state;
    for (int i = 0; i < 200000; i++) {
        char text[16];
        size_t length = 1 + next_random() % 8;
        int64_t wanted = 0;
        for (size_t k = 0; k < sizeof text; k++)
            text[k] = k < length ? (char)('0' + next_random() % 10) : (char)next_random();
        if (i % 3 == 0)
            text[next_random() % length] = (char)next_random();
        for (size_t k = 0; k < length && wanted >= 0; k++)
            wanted = text[k] < '0' || text[k] > '9' ? -1 : wanted * 10 + (text[k] - '0');
        assert_int_equal(ti_short_number(text, length), wanted);
    }
}

static int check_memory(void **state) {
    (void)state;
    return atomic_load(&memory.used) == 0 ? 0 : -1;
}

int main(void) {
    const struct CMUnitTest tests[] = {
        cmocka_unit_test_teardown(test_against_libcsv, check_memory),
        cmocka_unit_test_teardown(test_blocks, check_memory),
        cmocka_unit_test_teardown(test_places, check_memory),
        cmocka_unit_test(test_utf8),
        cmocka_unit_test(test_short_numbers),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
