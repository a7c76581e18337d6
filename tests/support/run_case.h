/* A judge's case, computed by the core through its public interface. */
#ifndef RUN_CASE_H
#define RUN_CASE_H

#include "support/judge.h"
#include "thole.h"

/* The network and windows of a case; both are the caller's to release. Stops the test program when they
 * cannot be made. */
void run_case_make(thole_context *context, const judge_case *c, thole_network **network,
                   thole_windows **windows);

thole_zigzag_options run_case_options(const judge_case *c, uint32_t block);

/* A bar of the core's as the judge writes it. */
judge_bar run_case_bar(thole_bar bar);

/* The core's bars, in its own order; how many, or SIZE_MAX with error->text filled. */
size_t run_case_bars(thole_context *context, const judge_case *c, uint32_t block, judge_bar out[JUDGE_BARS],
                     thole_error *error);

/* Compare as lists; both are in the order dim, first, last. */
bool run_case_same(const judge_bar *a, size_t n, const judge_bar *b, size_t m);

void run_case_print_bars(const char *who, const judge_bar *bars, size_t n);

#endif
