#include "network/windows.h"

#include <stdio.h>

#include "base/memory.h"

enum { MOST_WINDOWS = 1000000000 };

struct thole_windows {
    tb_refs refs;
    thole_memory *memory;
    size_t n;
    int64_t *start, *finish;
    size_t *label; /* where label i begins in text; NULL when there are none */
    char *text;
    size_t text_size;
};

thole_windows *thole_windows_retain(thole_windows *windows) {
    tb_ref(&windows->refs);
    return windows;
}

void thole_windows_release(thole_windows *w) {
    if (w == NULL || !tb_unref(&w->refs))
        return;
    tb_free(w->memory, w->start, w->n, sizeof *w->start);
    tb_free(w->memory, w->finish, w->n, sizeof *w->finish);
    tb_free(w->memory, w->label, w->n, sizeof *w->label);
    tb_free(w->memory, w->text, w->text_size, 1);
    tb_free(w->memory, w, 1, sizeof *w);
}

size_t thole_windows_count(const thole_windows *w) { return w->n; }
int64_t thole_windows_start(const thole_windows *w, size_t i) { return w->start[i]; }
int64_t thole_windows_finish(const thole_windows *w, size_t i) { return w->finish[i]; }
const char *thole_windows_label(const thole_windows *w, size_t i) { return w->label == NULL ? "" : w->text + w->label[i]; }
size_t thole_windows_bytes(const thole_windows *w) {
    return sizeof *w + w->n * 2 * sizeof *w->start + (w->label == NULL ? 0 : w->n * sizeof *w->label) + w->text_size;
}

/* Windows without labels, to be filled in. NULL when refused. */
static thole_windows *make(thole_memory *memory, size_t n) {
    thole_windows *w = tb_new(memory, 1, sizeof *w);
    if (w == NULL)
        return NULL;
    atomic_init(&w->refs, 1);
    w->memory = memory;
    w->n = n;
    w->start = tb_resize(memory, NULL, 0, n, sizeof *w->start);
    w->finish = tb_resize(memory, NULL, 0, n, sizeof *w->finish);
    if (w->start == NULL || w->finish == NULL) {
        thole_windows_release(w);
        return NULL;
    }
    return w;
}

static bool copy_labels(thole_windows *w, const char *const *labels) {
    size_t size = 1; /* an empty text at the start serves all missing labels */
    for (size_t i = 0; i < w->n; i++)
        size += labels[i] == NULL ? 0 : strlen(labels[i]) + 1;
    w->label = tb_resize(w->memory, NULL, 0, w->n, sizeof *w->label);
    w->text = tb_resize(w->memory, NULL, 0, size, 1);
    if (w->label == NULL || w->text == NULL) {
        tb_free(w->memory, w->text, size, 1);
        w->text = NULL;
        return false;
    }
    w->text_size = size;
    w->text[0] = '\0';
    size_t at = 1;
    for (size_t i = 0; i < w->n; i++) {
        w->label[i] = 0;
        if (labels[i] == NULL)
            continue;
        size_t length = strlen(labels[i]) + 1;
        memcpy(w->text + at, labels[i], length);
        w->label[i] = at;
        at += length;
    }
    return true;
}

/* The first window that is empty or out of order, as an error. */
static thole_status check(const thole_clock *clock, size_t n, const int64_t *starts, const int64_t *finishes,
                          thole_error *error) {
    thole_clock plain = {.kind = THOLE_PLAIN, .unit = "s"};
    const thole_clock *c = clock != NULL ? clock : &plain;
    char a[THOLE_TIME_SIZE], b[THOLE_TIME_SIZE];
    for (size_t i = 0; i < n; i++) {
        if (finishes[i] <= starts[i]) {
            thole_format_time(c, starts[i], 0, a);
            thole_format_time(c, finishes[i], 0, b);
            return thole_fail(error, THOLE_ARGUMENT, "window %zu is empty: it starts at %s and finishes at %s; a window must finish after it starts",
                              i + 1, a, b);
        }
        if (i > 0 && (starts[i] < starts[i - 1] || (starts[i] == starts[i - 1] && finishes[i] < finishes[i - 1]))) {
            thole_format_time(c, starts[i], 0, a);
            thole_format_time(c, starts[i - 1], 0, b);
            return thole_fail(error, THOLE_ARGUMENT, "window %zu is out of order: it starts at %s, window %zu at %s%s; sort windows by start, then by finish",
                              i + 1, a, i, b, starts[i] == starts[i - 1] ? " and finishes later" : "");
        }
    }
    return THOLE_OK;
}

thole_status thole_windows_list(thole_context *context, const thole_clock *clock, size_t n, const int64_t *starts,
                                const int64_t *finishes, const char *const *labels, thole_windows **out,
                                thole_error *error) {
    if (n == 0)
        return thole_fail(error, THOLE_ARGUMENT, "no windows: give at least one");
    if (n > MOST_WINDOWS)
        return thole_fail(error, THOLE_LIMIT, "%zu windows are more than 1,000,000,000: use longer ones", n);
    thole_status status = check(clock, n, starts, finishes, error);
    if (status != THOLE_OK)
        return status;
    thole_windows *w = make(context->memory, n);
    if (w == NULL || (labels != NULL && !copy_labels(w, labels))) {
        thole_windows_release(w);
        return tb_refused(context->memory, error, "the windows");
    }
    memcpy(w->start, starts, n * sizeof *starts);
    memcpy(w->finish, finishes, n * sizeof *finishes);
    *out = w;
    return THOLE_OK;
}

thole_status thole_windows_sliding(thole_context *context, int64_t start, int64_t finish, int64_t length, int64_t step,
                                   thole_windows **out, thole_error *error) {
    if (length < 1 || step < 1)
        return thole_fail(error, THOLE_ARGUMENT, "windows need a length and a step above zero");
    if (start >= finish)
        return thole_fail(error, THOLE_ARGUMENT, "there is nothing to cut into windows: the span finishes when it starts, or before");
    uint64_t span = (uint64_t)finish - (uint64_t)start, last_start = (span - 1) / (uint64_t)step;
    /* Of the windows that start inside the span, those after the first to reach its finish add nothing. */
    uint64_t reach = (uint64_t)length >= span ? 0 : (span - (uint64_t)length + (uint64_t)step - 1) / (uint64_t)step;
    uint64_t n = (reach < last_start ? reach : last_start) + 1;
    if (n > MOST_WINDOWS)
        return thole_fail(error, THOLE_LIMIT, "%llu windows are more than 1,000,000,000: use longer ones, or a longer step", (unsigned long long)n);
    uint64_t offset = (n - 1) * (uint64_t)step; /* of the last start; below the span */
    if (start > INT64_MAX - length || offset > (uint64_t)(INT64_MAX - length) - (uint64_t)start)
        return thole_fail(error, THOLE_LIMIT, "the last window ends after the latest time that can be told: shorten the windows");
    thole_windows *w = make(context->memory, (size_t)n);
    if (w == NULL)
        return tb_refused(context->memory, error, "the windows");
    for (size_t i = 0; i < w->n; i++) {
        w->start[i] = (int64_t)((uint64_t)start + (uint64_t)i * (uint64_t)step);
        w->finish[i] = w->start[i] + length;
    }
    *out = w;
    return THOLE_OK;
}

int64_t thole_windows_centre(const thole_windows *w, size_t position, int *quarters) {
    size_t i = position / 2, j = position % 2 == 0 ? i : i + 1;
    const int64_t parts[4] = {w->start[i], w->finish[i], w->start[j], w->finish[j]};
    int64_t sum = 0, rest = 0; /* of quotients and remainders: the plain sum could overflow */
    for (int k = 0; k < 4; k++) {
        int64_t q = parts[k] / 4, r = parts[k] % 4;
        if (r < 0) {
            q--;
            r += 4;
        }
        sum += q;
        rest += r;
    }
    *quarters = (int)(rest % 4);
    return sum + rest / 4;
}
