/* Fixed tasks, handed out by a counter; results are combined by the caller in
 * task order, so that nothing depends on which thread did what. */
#include "base/parallel.h"

#include <pthread.h>

enum { MOST_THREADS = 256 };

typedef struct crew {
    thole_context *context;
    tb_task *body;
    void *user;
    size_t n;
    _Atomic size_t next, done;
    _Atomic bool stop;
    pthread_mutex_t lock; /* guards the two below */
    size_t failed_task;
    thole_error failure;
} crew;

typedef struct member {
    crew *crew;
    int worker;
    pthread_t thread;
} member;

int tb_threads(const thole_context *context) {
    return context->threads < 1 ? 1 : context->threads > MOST_THREADS ? MOST_THREADS : context->threads;
}

thole_status tb_tick(thole_context *context, const char *phase, double done, thole_error *error) {
    if (tb_cancelled(context) || (context->tick != NULL && context->tick(context->tick_user, phase, done)))
        return thole_fail(error, THOLE_CANCELLED, "stopped while %s", phase);
    return THOLE_OK;
}

static void note_failure(crew *c, size_t task, const thole_error *error) {
    pthread_mutex_lock(&c->lock);
    if (c->failure.status == THOLE_OK || task < c->failed_task) {
        c->failure = *error;
        c->failed_task = task;
    }
    pthread_mutex_unlock(&c->lock);
    atomic_store(&c->stop, true);
}

/* One task, if any is left: false when the member should go home. */
static bool do_one(crew *c, int worker) {
    if (atomic_load(&c->stop))
        return false;
    size_t task = atomic_fetch_add(&c->next, 1);
    if (task >= c->n)
        return false;
    thole_error error = {.status = THOLE_OK, .text = ""};
    thole_status status = c->body(c->user, task, worker, &error);
    if (status != THOLE_OK) {
        error.status = status;
        note_failure(c, task, &error);
    }
    atomic_fetch_add(&c->done, 1);
    return true;
}

static void *work(void *argument) {
    member *m = argument;
    while (do_one(m->crew, m->worker)) {
    }
    return NULL;
}

thole_status tb_parallel(thole_context *context, size_t n, tb_task *body, void *user, const char *phase,
                         double first, double last, thole_error *error) {
    crew c = {.context = context, .body = body, .user = user, .n = n};
    if (pthread_mutex_init(&c.lock, NULL) != 0)
        return thole_fail(error, THOLE_NO_MEMORY, "out of memory for a lock");
    int threads = tb_threads(context), started = 1;
    if ((size_t)threads > n)
        threads = n > 0 ? (int)n : 1;
    member members[MOST_THREADS];
    for (int i = 0; i < threads; i++)
        members[i] = (member){.crew = &c, .worker = i};
    /* Fewer threads than asked for still do all the work. */
    while (started < threads && pthread_create(&members[started].thread, NULL, work, &members[started]) == 0)
        started++;
    thole_error ticked = {.status = THOLE_OK, .text = ""};
    while (do_one(&c, 0)) {
        double share = n == 0 ? 1.0 : (double)atomic_load(&c.done) / (double)n;
        if (tb_tick(context, phase, first + (last - first) * share, &ticked) != THOLE_OK)
            atomic_store(&c.stop, true);
    }
    for (int i = 1; i < started; i++)
        pthread_join(members[i].thread, NULL);
    pthread_mutex_destroy(&c.lock);
    if (ticked.status != THOLE_OK)
        return thole_fail(error, ticked.status, "%s", ticked.text);
    if (c.failure.status != THOLE_OK)
        return thole_fail(error, c.failure.status, "%s", c.failure.text);
    return THOLE_OK;
}
