/* A seeded generator for tests: the same numbers everywhere. */
#ifndef DICE_H
#define DICE_H

#include <stdint.h>
#include <stdlib.h>

typedef struct dice {
    uint64_t state;
} dice;

/* splitmix64 (Steele, Lea and Flood, OOPSLA 2014). */
static inline uint64_t dice_next(dice *d) {
    uint64_t z = (d->state += UINT64_C(0x9E3779B97F4A7C15));
    z = (z ^ (z >> 30)) * UINT64_C(0xBF58476D1CE4E5B9);
    z = (z ^ (z >> 27)) * UINT64_C(0x94D049BB133111EB);
    return z ^ (z >> 31);
}

/* 0 .. n-1 */
static inline uint32_t dice_below(dice *d, uint32_t n) { return (uint32_t)((dice_next(d) >> 32) * n >> 32); }
static inline int dice_from(dice *d, int low, int high) { return low + (int)dice_below(d, (uint32_t)(high - low + 1)); }

/* A number from the environment, or `missing`. */
static inline uint64_t dice_setting(const char *name, uint64_t missing) {
    const char *text = getenv(name);
    return text != NULL && *text != '\0' ? strtoull(text, NULL, 10) : missing;
}

/* n times the multiplier CASES (1 unless told; may be a fraction), at least 1. */
static inline uint64_t dice_cases(uint64_t n) {
    const char *text = getenv("CASES");
    double times = text != NULL && *text != '\0' ? strtod(text, NULL) : 1;
    double cases = times > 0 ? (double)n * times : 1;
    return cases < 1 ? 1 : (uint64_t)cases;
}

#endif
