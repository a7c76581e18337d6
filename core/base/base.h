/* Thole base: status, errors, memory and the running context.
 *
 * House rules that hold for every public function of Thole, unless its own
 * documentation says otherwise:
 *   - A function that can fail returns a thole_status. On failure its outputs
 *     are untouched and, where `error` is not NULL, *error says what was wrong,
 *     where, and what to do about it.
 *   - The caller owns what a function hands out through a `**out` argument and
 *     gives it back with the matching `_release`; `_release` accepts NULL.
 *   - Objects are immutable once handed out and may be read by several threads
 *     at once; sharing is by reference count (`_retain`, `_release`).
 *   - Strings are UTF-8. A pointer to text or to an array that a function
 *     returns belongs to the object it was asked of and lives as long.
 *   - Nothing here exits, aborts, prints, or keeps global state.
 */
#ifndef THOLE_BASE_H
#define THOLE_BASE_H

#include <stdatomic.h>
#include <stdbool.h>
#include <stddef.h>
#include <stdint.h>

#ifdef __cplusplus
#error "the C11 interface uses _Atomic; wrap it for C++"
#endif

#ifndef THOLE_API
#if defined(__GNUC__)
#define THOLE_API __attribute__((visibility("default")))
#else
#define THOLE_API
#endif
#endif

#if defined(__GNUC__)
#define THOLE_PRINTF(f, a) __attribute__((format(printf, f, a)))
#else
#define THOLE_PRINTF(f, a)
#endif

/* What became of a call. */
typedef enum thole_status {
    THOLE_OK = 0,
    THOLE_NO_MEMORY, /* the allocator refused */
    THOLE_LIMIT,     /* the memory ceiling or the range of a type was reached */
    THOLE_ARGUMENT,  /* an argument or option is out of its range */
    THOLE_INPUT,     /* the data is wrong; the text names file, line, column, value */
    THOLE_FILE,      /* opening, reading or writing failed */
    THOLE_CANCELLED, /* the tick callback, or the cancel flag, asked to stop */
    THOLE_CALLBACK   /* a callback of the caller's failed; it knows why */
} thole_status;

/* Where a failed call leaves its explanation. Owned by the caller; no
 * initialisation needed before a call. `text` is one line, without a full
 * stop at its end, in the form "what is wrong: what to do". */
typedef struct thole_error {
    thole_status status;
    char text[1024];
} thole_error;

/* Fill *error (which may be NULL) and return `status`, so that a failing
 * function can `return thole_fail(error, THOLE_INPUT, "...", ...)`.
 * Text that does not fit is cut at a character boundary. */
THOLE_API thole_status thole_fail(thole_error *error, thole_status status, const char *format, ...)
    THOLE_PRINTF(3, 4);

/* A short English name of a status ("out of memory"); never NULL. */
THOLE_API const char *thole_status_name(thole_status status);

/* ---- memory ------------------------------------------------------------ */

/* All memory of the core goes through one of these. Zero-initialise it, or set
 * the first three fields, before first use; it must outlive every object made
 * with it. Safe to use from several threads at once when `resize` is.
 *
 * resize(user, block, old_bytes, new_bytes): as realloc, with block NULL when
 *   old_bytes is 0 and new_bytes 0 to free. Must not refuse to free. NULL takes
 *   the C library's.
 * ceiling: the most bytes that may be in use at once; 0 for no ceiling. */
typedef struct thole_memory {
    void *(*resize)(void *user, void *block, size_t old_bytes, size_t new_bytes);
    void *user;
    size_t ceiling;
    _Atomic size_t used;     /* bytes in use now */
    _Atomic size_t peak;     /* most bytes ever in use */
    _Atomic size_t calls;    /* allocations and growths asked for, ever */
    _Atomic bool hit_ceiling; /* an allocation was refused because of `ceiling` */
} thole_memory;

/* Bytes of memory that this process may use: the machine's, or its control
 * group's where that is less; 0 where neither can be told. */
THOLE_API size_t thole_machine_memory(void);

/* ---- context ----------------------------------------------------------- */

/* What a long call needs to know about the run it is part of. Owned by the
 * caller, who keeps it unchanged during a call.
 *
 * threads: worker threads to use, 1 to 256; 0 takes 1. Results are the same
 *   bytes for any number.
 * tick: called now and then, always from the thread that made the call, with
 *   the name of the phase and the share done (0 to 1, or negative when it can
 *   not be told); returning true stops the call with THOLE_CANCELLED. May be
 *   NULL.
 * cancel: polled by worker threads too; setting it stops the call. May be NULL. */
typedef struct thole_context {
    thole_memory *memory;
    int threads;
    bool (*tick)(void *user, const char *phase, double done);
    void *tick_user;
    _Atomic bool *cancel;
} thole_context;

/* The version of this library, "MAJOR.MINOR.PATCH". */
THOLE_API const char *thole_version(void);

#endif
