#include "zigzag/barcode.h"

#include "base/sort.h"

thole_barcode *tz_barcode_new(thole_memory *memory, const thole_clock *clock, thole_windows *windows,
                              const thole_zigzag_options *options) {
    thole_barcode *barcode = tb_new(memory, 1, sizeof *barcode);
    if (barcode == NULL)
        return NULL;
    atomic_init(&barcode->refs, 1);
    barcode->memory = memory;
    barcode->windows = thole_windows_retain(windows);
    barcode->clock = *clock;
    if (clock->zone != NULL)
        barcode->clock.zone = thole_zone_retain(clock->zone);
    barcode->options = *options;
    return barcode;
}

/* A bar with its dimension and kind as one sortable number. */
typedef struct keyed {
    uint32_t first, last, dim, kind;
} keyed;

static bool sort_bars(thole_barcode *barcode) {
    /* Kinds in the order of their names. */
    static const uint8_t place[] = {[THOLE_CLOSED_OPEN] = 1, [THOLE_OPEN_CLOSED] = 2, [THOLE_CLOSED_CLOSED] = 0, [THOLE_OPEN_OPEN] = 3};
    static const uint8_t kind[] = {THOLE_CLOSED_CLOSED, THOLE_CLOSED_OPEN, THOLE_OPEN_CLOSED, THOLE_OPEN_OPEN};
    size_t n = barcode->bars.n;
    if (n == 0)
        return true;
    keyed *list = tb_resize(barcode->memory, NULL, 0, 2 * n, sizeof *list);
    if (list == NULL)
        return false;
    for (size_t i = 0; i < n; i++) {
        thole_bar bar = barcode->bars.at[i];
        list[i] = (keyed){bar.first, bar.last, bar.dim, place[bar.kind]};
    }
    static const size_t keys[] = {offsetof(keyed, kind), offsetof(keyed, last), offsetof(keyed, first), offsetof(keyed, dim)};
    for (size_t k = 0; k < 4; k++)
        tb_sort_by_u32(list, list + n, n, sizeof *list, keys[k]);
    for (size_t i = 0; i < n; i++)
        barcode->bars.at[i] = (thole_bar){list[i].first, list[i].last, (uint8_t)list[i].dim, kind[list[i].kind]};
    tb_free(barcode->memory, list, 2 * n, sizeof *list);
    return true;
}

bool tz_barcode_take(thole_barcode *barcode, const tz_bars *bars, const tz_value *rest) {
    size_t n = bars->n;
    for (int p = 0; p < rest->dims; p++)
        n += rest->dim[p].bars.n;
    if (!TB_VEC_RESERVE(barcode->memory, &barcode->bars, n))
        return false;
    if (bars->n > 0)
        memcpy(barcode->bars.at, bars->at, bars->n * sizeof *bars->at);
    barcode->bars.n = bars->n;
    for (int p = 0; p < rest->dims; p++)
        for (size_t i = 0; i < rest->dim[p].bars.n; i++)
            barcode->bars.at[barcode->bars.n++] = rest->dim[p].bars.at[i];
    return sort_bars(barcode);
}

thole_barcode *thole_barcode_retain(thole_barcode *barcode) {
    tb_ref(&barcode->refs);
    return barcode;
}

void thole_barcode_release(thole_barcode *barcode) {
    if (barcode == NULL || !tb_unref(&barcode->refs))
        return;
    thole_windows_release(barcode->windows);
    thole_zone_release(barcode->clock.zone);
    TB_VEC_CLEAR(barcode->memory, &barcode->bars);
    tb_free(barcode->memory, barcode, 1, sizeof *barcode);
}

size_t thole_barcode_count(const thole_barcode *barcode) { return barcode->bars.n; }
thole_bar thole_barcode_bar(const thole_barcode *barcode, size_t i) { return barcode->bars.at[i]; }
thole_windows *thole_barcode_windows(const thole_barcode *barcode) { return barcode->windows; }
const thole_clock *thole_barcode_clock(const thole_barcode *barcode) { return &barcode->clock; }
const thole_zigzag_options *thole_barcode_options(const thole_barcode *barcode) { return &barcode->options; }
const thole_zigzag_counts *thole_barcode_counts(const thole_barcode *barcode) { return &barcode->counts; }
size_t thole_barcode_bytes(const thole_barcode *barcode) {
    return sizeof *barcode + barcode->bars.cap * sizeof *barcode->bars.at;
}

const char *thole_bar_kind_name(thole_bar_kind kind) {
    switch (kind) {
    case THOLE_CLOSED_OPEN: return "closed-open";
    case THOLE_OPEN_CLOSED: return "open-closed";
    case THOLE_CLOSED_CLOSED: return "closed-closed";
    case THOLE_OPEN_OPEN: return "open-open";
    }
    return "unknown";
}

thole_status thole_barcode_betti(thole_context *context, const thole_barcode *barcode, uint32_t dim, uint64_t *out,
                                 thole_error *error) {
    size_t positions = 2 * thole_windows_count(barcode->windows) - 1;
    if (dim > THOLE_MOST_DIMENSION || (barcode->options.dims >> dim & 1) == 0)
        return thole_fail(error, THOLE_ARGUMENT, "dimension %u was not computed: ask for it in dims", (unsigned)dim);
    int64_t *change = tb_new(context->memory, positions + 1, sizeof *change);
    if (change == NULL)
        return tb_refused(context->memory, error, "Betti numbers");
    for (size_t i = 0; i < barcode->bars.n; i++) {
        const thole_bar *bar = &barcode->bars.at[i];
        if (bar->dim != dim)
            continue;
        change[bar->first]++;
        change[(size_t)bar->last + 1]--;
    }
    int64_t alive = 0;
    for (size_t t = 0; t < positions; t++) {
        alive += change[t];
        out[t] = (uint64_t)alive;
    }
    tb_free(context->memory, change, positions + 1, sizeof *change);
    return THOLE_OK;
}
