/* Any bytes, read as contacts: no crash, no leak, and an answer that adds up.
 *
 * With libFuzzer:
 *     clang -std=c11 -D_POSIX_C_SOURCE=200809L -g -O1 -fsanitize=fuzzer,address,undefined
 * -fno-sanitize-recover=all \
 *         -Icore -o build/fuzz_contacts tests/fuzz/fuzz_contacts.c core/base/?*.c core/clock/?*.c
 * core/network/?*.c \ core/ingest/?*.c -larchive -lz -lpthread -lm build/fuzz_contacts -max_total_time=60
 * -max_len=4096 tests/fuzz/corpus_contacts
 *
 * Without it, tests/fuzz/replay.c runs every file of the corpus through the same function once.
 *
 * The first four bytes choose the options, the rest is the file. */
#include <stdlib.h>
#include <string.h>

#include "ingest/rows.h"
#include "ingest/utf8.h"
#include "thole.h"

int LLVMFuzzerTestOneInput(const uint8_t *data, size_t size);

#define CHECK(what)                                                                                          \
    do {                                                                                                     \
        if (!(what))                                                                                         \
            abort();                                                                                         \
    } while (0)

/* Refuses one allocation, the number of which the input gives. */
static void *resize(void *user, void *block, size_t old_bytes, size_t new_bytes) {
    long *until = user;
    if (new_bytes == 0) {
        free(block);
        return NULL;
    }
    if (new_bytes > old_bytes && *until > 0 && --*until == 0)
        return NULL;
    return realloc(block, new_bytes);
}

enum {
    HEADLESS = 1,
    SKIP = 2,
    DURATION = 4,
    CONTACTS = 8,
    NUMBERS = 16,
    LINGER = 32,
    TAKE = 64,
    CLOCK_MINUTES = 128
};

static thole_contacts_options choose(const uint8_t *data) {
    static const char SEPARATORS[] = {0, ',', ';', '\t'};
    static const char *const ZONES[] = {NULL, "Atlantic/Azores", "Australia/Lord_Howe", "UTC"};
    static const char *const TAKEN[] = {"mode"};
    uint8_t flags = data[0];
    bool by_number = (flags & (HEADLESS | NUMBERS)) != 0;
    thole_contacts_options options = {
        .from = {by_number ? NULL : "from", 1},
        .to = {by_number ? NULL : "to", 2},
        .start = {by_number ? NULL : "start", 3},
        .headless = (flags & HEADLESS) != 0,
        .skip_faulty = (flags & SKIP) != 0,
        .linger = flags & LINGER ? 60 * THOLE_TICKS_A_UNIT : 0,
        .separator = SEPARATORS[data[1] & 3],
        .form = (thole_time_form)(data[1] >> 2 & 3),
        .zone = ZONES[data[1] >> 4 & 3],
    };
    thole_column_ref last = {by_number ? NULL : flags & DURATION ? "duration" : "finish", 4};
    if (flags & DURATION)
        options.duration = last;
    else if (!(flags & CONTACTS))
        options.finish = last;
    if (flags & TAKE && !(flags & HEADLESS)) {
        options.take = TAKEN;
        options.take_count = 1;
    }
    if (flags & CLOCK_MINUTES && options.zone == NULL)
        options.unit = "min";
    return options;
}

static void check_network(const thole_network *network, const thole_contacts_options *options) {
    const thole_account *account = thole_network_account(network);
    size_t n = thole_network_count(network);
    CHECK(account->rows == account->events + account->self_loops + account->skipped);
    CHECK(account->events == n);
    CHECK(options->skip_faulty || account->skipped == 0);
    uint64_t skipped = 0;
    for (size_t i = 0; i < account->reason_count; i++)
        skipped += account->reasons[i].count;
    CHECK(skipped == account->skipped);
    for (size_t i = 0; i < n; i++) {
        thole_event event = thole_network_event(network, i);
        CHECK(event.finish >= event.start && event.from != event.to);
        CHECK(i == 0 || thole_network_event(network, i - 1).start <= event.start);
        size_t length;
        const char *name = thole_network_node_name(network, event.from, &length);
        CHECK(length > 0 && ti_utf8_sound(name, length) == length && memchr(name, 0, length) == NULL);
        for (uint32_t c = 0; c < thole_network_columns(network); c++) {
            thole_value value = thole_network_value(network, c, i);
            CHECK(value.type == thole_network_column_type(network, c));
            CHECK(!value.present || value.type != THOLE_TEXT ||
                  (value.length > 0 && ti_utf8_sound(value.text, value.length) == value.length));
        }
    }
}

static void check_error(const thole_error *error, thole_status status) {
    size_t length = strlen(error->text);
    CHECK(error->status == status);
    CHECK(status == THOLE_INPUT || status == THOLE_ARGUMENT || status == THOLE_NO_MEMORY ||
          status == THOLE_LIMIT);
    CHECK(length > 0 && error->text[length - 1] != '.' && strchr(error->text, '\n') == NULL);
    CHECK(ti_utf8_sound(error->text, length) == length);
}

/* Where blocks end must not show: the same rows from blocks that start at a few bytes. */
static void check_blocks(const char *text, size_t size, char separator) {
    thole_memory memory = {0};
    thole_context context = {.memory = &memory, .threads = 1};
    ti_source *source[2] = {NULL, NULL};
    ti_rows rows[2] = {{0}, {0}};
    thole_error error[2];
    thole_status status[2];
    bool got[2] = {true, true};
    for (int k = 0; k < 2; k++) {
        status[k] = ti_source_text(&context, "input.csv", text, size, &source[k], &error[k]);
        if (status[k] == THOLE_OK)
            status[k] = ti_rows_open(&rows[k], &context, source[k], k == 0 ? 7 : size + 1, &error[k]);
        rows[k].separator = separator;
        rows[k].most = 6;
    }
    while (status[0] == THOLE_OK && status[1] == THOLE_OK && got[0]) {
        for (int k = 0; k < 2; k++)
            status[k] = ti_rows_next(&rows[k], &got[k], &error[k]);
        if (status[0] != THOLE_OK || status[1] != THOLE_OK)
            break;
        CHECK(got[0] == got[1] && rows[0].n == rows[1].n && rows[0].flaw == rows[1].flaw &&
              rows[0].line == rows[1].line);
        for (size_t i = 0; i < rows[0].n && got[0]; i++) {
            const ti_field *a = &rows[0].field[i], *b = &rows[1].field[i];
            uint64_t line[2], column[2];
            CHECK(a->length == b->length && a->from == b->from &&
                  (a->length == 0 || memcmp(a->at, b->at, a->length) == 0));
            for (int k = 0; k < 2; k++)
                ti_rows_place(&rows[k], rows[k].field[i].from, &line[k], &column[k]);
            CHECK(line[0] == line[1] && column[0] == column[1]);
        }
    }
    for (int k = 0; k < 2; k++) { /* damage in packed data shows a little earlier in large blocks */
        while (status[1 - k] != THOLE_OK && status[k] == THOLE_OK && got[k])
            status[k] = ti_rows_next(&rows[k], &got[k], &error[k]);
    }
    CHECK(status[0] == status[1]);
    for (int k = 0; k < 2; k++) {
        ti_rows_close(&rows[k]);
        ti_source_close(source[k]);
    }
    CHECK(atomic_load(&memory.used) == 0);
}

int LLVMFuzzerTestOneInput(const uint8_t *data, size_t size) {
    enum { OPTIONS = 4 };
    if (size < OPTIONS)
        return 0;
    long until = data[2] | (data[3] & 1) << 8; /* 0: none is refused */
    thole_memory memory = {.resize = resize, .user = &until, .ceiling = data[3] & 2 ? 1u << 20 : 0};
    thole_context context = {.memory = &memory, .threads = 1};
    thole_contacts_options options = choose(data);
    thole_network *network = NULL;
    thole_error error = {.text = ""};
    thole_status status = thole_read_contacts_text(&context, "input.csv", (const char *)data + OPTIONS,
                                                   size - OPTIONS, &options, &network, &error);
    CHECK((status == THOLE_OK) == (network != NULL));
    if (status == THOLE_OK)
        check_network(network, &options);
    else
        check_error(&error, status);
    check_blocks((const char *)data + OPTIONS, size - OPTIONS,
                 options.separator != 0 ? options.separator : ',');
    thole_network_release(network);
    CHECK(atomic_load(&memory.used) == 0);
    return 0;
}
