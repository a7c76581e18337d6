/* Some of the bars of a barcode. */
#include "zigzag/choose.h"

#include "base/sort.h"
#include "zigzag/barcode.h"

bool thole_barcode_lifespan(const thole_barcode *barcode, size_t i, uint64_t *ticks, int *quarters) {
    thole_bar bar = barcode->bars.at[i];
    int from_quarters, to_quarters;
    int64_t from = thole_windows_centre(barcode->windows, bar.first, &from_quarters);
    int64_t to = thole_windows_centre(barcode->windows, bar.last, &to_quarters);
    bool negative = to < from || (to == from && to_quarters < from_quarters);
    if (negative) {
        int64_t other = from;
        from = to;
        to = other;
        int other_quarters = from_quarters;
        from_quarters = to_quarters;
        to_quarters = other_quarters;
    }
    uint64_t whole = (uint64_t)to - (uint64_t)from; /* may be past INT64_MAX */
    int rest = to_quarters - from_quarters;
    *ticks = rest < 0 ? whole - 1 : whole;
    *quarters = rest < 0 ? rest + 4 : rest;
    return negative;
}

static bool passes(const thole_barcode *barcode, const thole_choice *choice, size_t i) {
    thole_bar bar = barcode->bars.at[i];
    if (choice->dims != 0 && (choice->dims >> bar.dim & 1) == 0)
        return false;
    if (choice->kinds != 0 && (choice->kinds >> bar.kind & 1) == 0)
        return false;
    if (choice->at && (choice->position < bar.first || choice->position > bar.last))
        return false;
    if (!choice->lasting)
        return true;
    uint64_t ticks;
    int quarters;
    return !thole_barcode_lifespan(barcode, i, &ticks, &quarters) && ticks >= choice->shortest;
}

/* Keys that ascend as lifespans descend. */
typedef struct entry {
    uint64_t ticks, bar;
    uint32_t quarters, negative;
} entry;

static entry entry_of(const thole_barcode *barcode, size_t i) {
    uint64_t ticks;
    int quarters;
    if (thole_barcode_lifespan(barcode, i, &ticks, &quarters))
        return (entry){ticks, i, (uint32_t)quarters, 1};
    return (entry){~ticks, i, (uint32_t)(3 - quarters), 0};
}

/* Order chosen[0 .. n - 1] by lifespan; the sort is stable, so equal ones stay in order. */
static bool longest_first(thole_memory *memory, const thole_barcode *barcode, size_t *chosen, size_t n) {
    entry *at = tb_resize(memory, NULL, 0, n, sizeof *at),
          *scratch = tb_resize(memory, NULL, 0, n, sizeof *scratch);
    bool fine = at != NULL && scratch != NULL;
    if (fine) {
        for (size_t i = 0; i < n; i++)
            at[i] = entry_of(barcode, chosen[i]);
        tb_sort_by_u32(at, scratch, n, sizeof *at, offsetof(entry, quarters));
        tb_sort_by_u64(at, scratch, n, sizeof *at, offsetof(entry, ticks));
        tb_sort_by_u32(at, scratch, n, sizeof *at, offsetof(entry, negative));
        for (size_t i = 0; i < n; i++)
            chosen[i] = (size_t)at[i].bar;
    }
    tb_free(memory, at, n, sizeof *at);
    tb_free(memory, scratch, n, sizeof *scratch);
    return fine;
}

void thole_chosen_release(thole_context *context, size_t *chosen, size_t n) {
    tb_free(context->memory, chosen, n + 1, sizeof *chosen);
}

thole_status thole_barcode_choose(thole_context *context, const thole_barcode *barcode,
                                  const thole_choice *choice, size_t **out, size_t *n, thole_error *error) {
    size_t all = barcode->bars.n, passing = 0;
    for (size_t i = 0; i < all; i++)
        passing += passes(barcode, choice, i);
    size_t *chosen = tb_resize(context->memory, NULL, 0, passing + 1, sizeof *chosen);
    if (chosen == NULL)
        return tb_refused(context->memory, error, "the bars chosen");
    for (size_t i = 0, k = 0; i < all && k < passing; i++)
        if (passes(barcode, choice, i))
            chosen[k++] = i;
    size_t kept = passing;
    if (choice->longest != 0 && passing > 0) {
        if (!longest_first(context->memory, barcode, chosen, passing)) {
            thole_chosen_release(context, chosen, passing);
            return tb_refused(context->memory, error, "the bars chosen");
        }
        kept = passing < choice->longest ? passing : choice->longest;
        chosen = tb_resize(context->memory, chosen, passing + 1, kept + 1,
                           sizeof *chosen); /* a shrink is not refused */
    }
    *out = chosen;
    *n = kept;
    return THOLE_OK;
}
