/* For the tests of the reader: reading from a text, and a network as text to compare with. */
#ifndef TESTS_READING_H
#define TESTS_READING_H

#include <setjmp.h>
#include <stdarg.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

#include <cmocka.h>

#include "thole.h"

static thole_memory memory;
static thole_context context = {.memory = &memory, .threads = 1};

/* The four words, as most files have them. */
#define ROLES .from = {"from", 0}, .to = {"to", 0}, .start = {"start", 0}, .finish = {"finish", 0}
static const thole_contacts_options USUAL = {ROLES};

static inline thole_network *read_bytes(const char *text, size_t length,
                                        const thole_contacts_options *options) {
    thole_network *network = NULL;
    thole_error error;
    if (thole_read_contacts_text(&context, "log.csv", text, length, options, &network, &error) != THOLE_OK)
        fail_msg("%s", error.text);
    return network;
}

static inline thole_network *read_text(const char *text, const thole_contacts_options *options) {
    return read_bytes(text, strlen(text), options);
}

/* A text that grows at its end. */
typedef struct pad {
    char text[1 << 16];
    size_t n;
} pad;

static inline void put(pad *p, const char *format, ...) {
    va_list list;
    va_start(list, format);
    int n = vsnprintf(p->text + p->n, sizeof p->text - p->n, format, list);
    va_end(list);
    assert_true(n >= 0 && (size_t)n < sizeof p->text - p->n);
    p->n += (size_t)n;
}

/* Events, one a line: "from>to start finish name=value ...", then the columns' types, then what was counted.
 */
static inline const char *describe(const thole_network *network, pad *p) {
    static const char *const TYPE[] = {"integer", "real", "text"};
    const thole_account *account = thole_network_account(network);
    p->n = 0;
    p->text[0] = '\0';
    for (size_t i = 0; i < thole_network_count(network); i++) {
        thole_event e = thole_network_event(network, i);
        char start[THOLE_TIME_SIZE], finish[THOLE_TIME_SIZE];
        thole_format_time(thole_network_clock(network), e.start, 0, start);
        thole_format_time(thole_network_clock(network), e.finish, 0, finish);
        put(p, "%s>%s %s %s", thole_network_node_name(network, e.from, NULL),
            thole_network_node_name(network, e.to, NULL), start, finish);
        for (uint32_t c = 0; c < thole_network_columns(network); c++) {
            thole_value value = thole_network_value(network, c, i);
            if (!value.present)
                continue;
            put(p, " %s=", thole_network_column_name(network, c));
            if (value.type == THOLE_INTEGER)
                put(p, "%lld", (long long)value.integer);
            else if (value.type == THOLE_REAL)
                put(p, "%.17g", value.real);
            else
                put(p, "'%s'", value.text);
        }
        put(p, "\n");
    }
    for (uint32_t c = 0; c < thole_network_columns(network); c++)
        put(p, "%s: %s\n", thole_network_column_name(network, c),
            TYPE[thole_network_column_type(network, c)]);
    for (size_t i = 0; i < account->reason_count; i++)
        put(p, "skipped: %s, %llu from line %llu\n", account->reasons[i].what,
            (unsigned long long)account->reasons[i].count,
            (unsigned long long)account->reasons[i].first_line);
    for (size_t i = 0; i < account->remark_count; i++)
        put(p, "remark: %s, %llu from line %llu\n", account->remarks[i].what,
            (unsigned long long)account->remarks[i].count,
            (unsigned long long)account->remarks[i].first_line);
    return p->text;
}

/* Read and compare with a description. */
static inline void expect(const char *text, const thole_contacts_options *options, const char *wanted) {
    static pad p;
    thole_network *network = read_text(text, options);
    assert_string_equal(describe(network, &p), wanted);
    thole_network_release(network);
}

static inline int check_memory(void **state) {
    (void)state;
    return atomic_load(&memory.used) == 0 ? 0 : -1;
}

#endif
