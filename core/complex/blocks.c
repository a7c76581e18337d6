#include "complex/blocks.h"

/* New stays a block should bring at least, and how many times the inherited ones: measured on generated networks of
 * each density; flat around these values. */
typedef struct pace {
    double most_density;
    uint64_t least_new;
    double times_inherited;
} pace;
static const pace paces[] = {{0.3, 3000, 3}, {1.0, 1000, 1}, {1e300, 1, 0.2}};

static bool choose_cuts(const tc_stays *stays, thole_join join, double density, uint32_t also, tc_blocks *out) {
    const pace *p = paces;
    while (density > p->most_density)
        p++;
    uint32_t positions = stays->positions;
    uint32_t *begins = tb_new(stays->memory, (size_t)positions + 1, sizeof *begins);
    uint32_t *ends = tb_new(stays->memory, (size_t)positions + 1, sizeof *ends);
    bool fine = begins != NULL && ends != NULL;
    for (size_t i = 0; fine && i < stays->list.n; i++) {
        begins[stays->list.at[i].first]++;
        ends[stays->list.at[i].last + 1]++;
    }
    /* A union join holds the links of two windows, so blocks meet at windows; an intersection
     * join holds fewer than either, so there they meet at joins. */
    uint32_t parity = join == THOLE_JOIN_UNION ? 0 : 1;
    uint64_t alive = fine ? begins[0] : 0, inherited = alive, fresh = 0;
    for (uint32_t t = 1; fine && t < positions; t++) {
        alive += begins[t];
        alive -= ends[t];
        fresh += begins[t];
        bool enough = (t & 1) == parity && fresh >= p->least_new && (double)fresh >= p->times_inherited * (double)inherited;
        if ((enough || t == also) && t + 1 < positions) {
            fine = TB_VEC_PUSH(out->memory, &out->cut, t);
            inherited = alive;
            fresh = 0;
        }
    }
    tb_free(stays->memory, begins, (size_t)positions + 1, sizeof *begins);
    tb_free(stays->memory, ends, (size_t)positions + 1, sizeof *ends);
    return fine;
}

/* For each position, the first block that holds it. */
static uint32_t *block_of_position(const tc_stays *stays, const tc_blocks *blocks) {
    uint32_t *block = tb_resize(stays->memory, NULL, 0, stays->positions, sizeof *block);
    if (block == NULL)
        return NULL;
    uint32_t k = 0;
    for (uint32_t t = 0; t < stays->positions; t++) {
        while (t > blocks->cut.at[k + 1])
            k++;
        block[t] = k;
    }
    return block;
}

static bool hand_out(const tc_stays *stays, tc_blocks *out) {
    size_t n = tc_blocks_count(out);
    uint32_t *block = block_of_position(stays, out);
    out->start = tb_new(out->memory, n + 2, sizeof *out->start);
    if (block == NULL || out->start == NULL) {
        tb_free(stays->memory, block, stays->positions, sizeof *block);
        return false;
    }
    /* A stay that reaches a boundary is in the block on either side of it. */
#define LAST_BLOCK(s) (block[(s)->last] + (block[(s)->last] + 1 < n && (s)->last == out->cut.at[block[(s)->last] + 1]))
    for (size_t i = 0; i < stays->list.n; i++) {
        const tc_stay *s = &stays->list.at[i];
        for (uint32_t k = block[s->first], end = LAST_BLOCK(s); k <= end; k++)
            out->start[k + 2]++;
    }
    for (size_t k = 2; k < n + 2; k++)
        out->start[k] += out->start[k - 1];
    out->stay_count = out->start[n + 1];
    out->stay = tb_resize(out->memory, NULL, 0, (size_t)out->stay_count + 1, sizeof *out->stay);
    for (size_t i = 0; out->stay != NULL && i < stays->list.n; i++) {
        const tc_stay *s = &stays->list.at[i];
        for (uint32_t k = block[s->first], end = LAST_BLOCK(s); k <= end; k++)
            out->stay[out->start[k + 1]++] = (uint32_t)i;
    }
#undef LAST_BLOCK
    tb_free(stays->memory, block, stays->positions, sizeof *block);
    return out->stay != NULL;
}

thole_status tc_blocks_of(const tc_stays *stays, thole_join join, uint32_t length, double density, uint32_t also,
                          tc_blocks *out, thole_error *error) {
    *out = (tc_blocks){.memory = stays->memory};
    bool fine = TB_VEC_PUSH(out->memory, &out->cut, 0);
    if (length == 0)
        fine = fine && choose_cuts(stays, join, density, also, out);
    else
        for (uint64_t t = length, before = 0; fine && t + 1 < stays->positions; before = t, t += length) {
            if (before < also && also < t)
                fine = TB_VEC_PUSH(out->memory, &out->cut, also);
            fine = fine && TB_VEC_PUSH(out->memory, &out->cut, (uint32_t)t);
        }
    uint32_t behind = out->cut.n > 0 ? out->cut.at[out->cut.n - 1] : 0;
    if (fine && behind < also && also < stays->positions - 1)
        fine = TB_VEC_PUSH(out->memory, &out->cut, also);
    fine = fine && TB_VEC_PUSH(out->memory, &out->cut, stays->positions - 1);
    fine = fine && hand_out(stays, out);
    if (!fine) {
        tc_blocks_clear(out);
        return tb_refused(stays->memory, error, "the blocks of time");
    }
    return THOLE_OK;
}

void tc_blocks_clear(tc_blocks *blocks) {
    if (blocks->start != NULL)
        tb_free(blocks->memory, blocks->start, tc_blocks_count(blocks) + 2, sizeof *blocks->start);
    tb_free(blocks->memory, blocks->stay, (size_t)blocks->stay_count + 1, sizeof *blocks->stay);
    blocks->start = NULL;
    blocks->stay = NULL;
    TB_VEC_CLEAR(blocks->memory, &blocks->cut);
}
