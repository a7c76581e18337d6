/* Loaded before the C library: makes the n-th allocation of a program fail, once or from then on, and tells at the end how many
 * allocations there were and how many blocks were not given back.
 *
 * FAIL_AT=n (0: none), FAIL_ON=1 for all that follow too, FAIL_REPORT=path for the report. The blocks made before main begins
 * do not count. */
#include <errno.h>
#include <fcntl.h>
#include <stdatomic.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <unistd.h>

extern void *__libc_malloc(size_t);
extern void *__libc_calloc(size_t, size_t);
extern void *__libc_realloc(void *, size_t);
extern void __libc_free(void *);

static atomic_long calls, live;
static long fail_at;
static int fail_on, counting;

__attribute__((constructor)) static void begin(void) {
    const char *at = getenv("FAIL_AT"), *on = getenv("FAIL_ON");
    fail_at = at != NULL ? strtol(at, NULL, 10) : 0;
    fail_on = on != NULL && *on == '1';
    counting = 1;
}

__attribute__((destructor)) static void report(void) {
    const char *path = getenv("FAIL_REPORT");
    char text[64];
    counting = 0;
    int file = path != NULL ? open(path, O_WRONLY | O_CREAT | O_TRUNC, 0600) : -1;
    if (file >= 0) {
        int n = snprintf(text, sizeof text, "%ld %ld\n", atomic_load(&calls), atomic_load(&live));
        if (write(file, text, (size_t)n) < 0)
            _exit(99);
        close(file);
    }
}

static int refuse(void) {
    if (!counting)
        return 0;
    long call = atomic_fetch_add(&calls, 1) + 1;
    if (fail_at <= 0 || (call != fail_at && !(fail_on && call > fail_at)))
        return 0;
    errno = ENOMEM;
    return 1;
}

void *malloc(size_t n) {
    if (refuse())
        return NULL;
    void *block = __libc_malloc(n);
    if (block != NULL && counting)
        atomic_fetch_add(&live, 1);
    return block;
}
void *calloc(size_t n, size_t size) {
    if (refuse())
        return NULL;
    void *block = __libc_calloc(n, size);
    if (block != NULL && counting)
        atomic_fetch_add(&live, 1);
    return block;
}
void *realloc(void *old, size_t n) {
    if (n > 0 && refuse())
        return NULL;
    void *block = __libc_realloc(old, n);
    if (counting)
        atomic_fetch_add(&live, (block != NULL && old == NULL) - (old != NULL && n == 0));
    return block;
}
void free(void *block) {
    if (block != NULL && counting)
        atomic_fetch_sub(&live, 1);
    __libc_free(block);
}
