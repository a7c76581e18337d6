/* Thole windows: half-open intervals of time, in order, that cut a network into snapshots.
 *
 * Windows are in order of start (equal starts: of finish); they may overlap, leave gaps, or
 * lie inside one another. Each has a label (text, perhaps empty).
 */
#ifndef THOLE_WINDOWS_H
#define THOLE_WINDOWS_H

#include "base/base.h"
#include "clock/clock.h"

typedef struct thole_windows thole_windows;

/* Windows from lists, n of them, n from 1 to 1,000,000,000. labels may be NULL, and each label too.
 * THOLE_ARGUMENT names the first window (from 1) with finish <= start, or
 * that starts before the one ahead of it. `clock` (may be NULL: plain numbers) is
 * only for writing times in messages. Everything is copied. */
THOLE_API thole_status thole_windows_list(thole_context *context, const thole_clock *clock, size_t n,
                                          const int64_t *starts, const int64_t *finishes, const char *const *labels,
                                          thole_windows **out, thole_error *error);

/* Windows of `length` ticks, each starting `step` ticks after the one before, the first at
 * `start`; the last is the first one that reaches `finish` (or the last that starts before it,
 * when step > length leaves gaps). length and step at least 1, start < finish, else
 * THOLE_ARGUMENT; more than 1,000,000,000 windows are THOLE_LIMIT. */
THOLE_API thole_status thole_windows_sliding(thole_context *context, int64_t start, int64_t finish, int64_t length,
                                             int64_t step, thole_windows **out, thole_error *error);

THOLE_API thole_windows *thole_windows_retain(thole_windows *windows);
THOLE_API void thole_windows_release(thole_windows *windows);

/* How many, and the times and label of window i (from 0, below the count); the bytes that they take. */
THOLE_API size_t thole_windows_count(const thole_windows *windows);
THOLE_API int64_t thole_windows_start(const thole_windows *windows, size_t i);
THOLE_API int64_t thole_windows_finish(const thole_windows *windows, size_t i);
THOLE_API const char *thole_windows_label(const thole_windows *windows, size_t i); /* "" when there is none */
THOLE_API size_t thole_windows_bytes(const thole_windows *windows);

/* The centre of position p (0 .. 2n-2; see zigzag/zigzag.h) in ticks, rounded down, with the
 * remainder in quarters of a tick: a window's centre is the mean of its ends, a join's the mean
 * of its two windows' centres. */
THOLE_API int64_t thole_windows_centre(const thole_windows *windows, size_t position, int *quarters);

#endif
