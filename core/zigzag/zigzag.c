/* The zigzag of a network: blocks of time decomposed side by side, glued in order. */
#include "zigzag/barcode.h"
#include "zigzag/run.h"

/* The peak of this run alone, above what was in use before it. */
static size_t begin_peak(thole_memory *memory, size_t *before) {
    *before = atomic_load(&memory->used);
    atomic_store(&memory->hit_ceiling, false);
    return atomic_exchange(&memory->peak, *before);
}
static size_t end_peak(thole_memory *memory, size_t before, size_t old_peak) {
    size_t peak = atomic_load(&memory->peak);
    if (peak < old_peak)
        atomic_store(&memory->peak, old_peak);
    return peak - before;
}

thole_status thole_zigzag(thole_context *context, const thole_network *network, thole_windows *windows,
                          const thole_zigzag_options *options, thole_barcode **out, thole_error *error) {
    size_t before, old_peak = begin_peak(context->memory, &before);
    tz_bars bars = {0};
    tz_value all;
    tz_run run;
    thole_barcode *barcode = NULL;
    thole_status status = tz_run_open(context, network, windows, options, TC_NONE, &run, error);
    if (status == THOLE_OK)
        status = tz_run_blocks(&run, 0, tc_blocks_count(&run.blocks), true, &bars, 0, 1, &all, error);
    if (status == THOLE_OK) {
        barcode = tz_barcode_new(context->memory, thole_network_clock(network), windows, options);
        if (barcode == NULL || !tz_value_seal_right(&all) || !tz_barcode_take(barcode, &bars, &all))
            status = tb_refused(context->memory, error, "the barcode");
        if (status == THOLE_OK) {
            memcpy(barcode->counts.cells, all.cells, sizeof barcode->counts.cells);
            barcode->counts.blocks = tc_blocks_count(&run.blocks);
        }
        tz_value_clear(&all);
    }
    TB_VEC_CLEAR(context->memory, &bars);
    tz_run_clear(&run);
    size_t peak = end_peak(context->memory, before, old_peak);
    if (status == THOLE_OK) {
        barcode->counts.peak_bytes = peak;
        *out = barcode;
    } else {
        thole_barcode_release(barcode);
    }
    return status;
}
