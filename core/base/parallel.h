/* Inside the core: parallel loops over fixed tasks, cancel and progress. */
#ifndef TB_PARALLEL_H
#define TB_PARALLEL_H

#include "base/base.h"

/* Do task 0..n-1 with up to context->threads threads (the caller's among them).
 * `body` may run for different tasks at the same time and in any order: it
 * writes only to what belongs to its task. `worker` (0 .. threads-1) tells which
 * scratch memory it may use. The failure of the lowest-numbered task that
 * failed is returned, so the message does not depend on the threads; tasks
 * after a failure may not be run. Ticks with `phase` between tasks: share =
 * first + (last - first) * done/n. */
typedef thole_status tb_task(void *user, size_t task, int worker, thole_error *error);
thole_status tb_parallel(thole_context *context, size_t n, tb_task *body, void *user, const char *phase,
                         double first, double last, thole_error *error);

/* Threads to use: context->threads within 1..256. */
int tb_threads(const thole_context *context);

/* True when someone asked to stop; cheap, callable from any thread. */
static inline bool tb_cancelled(const thole_context *context) {
    return context->cancel != NULL && atomic_load_explicit(context->cancel, memory_order_relaxed);
}

/* Report progress from the caller's thread; THOLE_CANCELLED when asked to stop. */
thole_status tb_tick(thole_context *context, const char *phase, double done, thole_error *error);

#endif
