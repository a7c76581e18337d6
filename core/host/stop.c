/* Ending a run before its end: signals, and a hook that no pcall can swallow. */
#include "host/host.h"

#include <errno.h>
#include <pthread.h>
#include <signal.h>

/* Lua code is stopped by a hook that raises an error at the next instruction of the thread that runs, and at
 * every one after, until the run has unwound. `running` is that thread: coroutines.c keeps it up to date.
 * The core polls `flag` (from worker threads too). */
static struct {
    _Atomic(lua_State *) running;
    _Atomic bool flag;
    _Atomic int signal;
    bool ending; /* the recipe ends itself; pcall and its kin do not hold that up */
    pthread_t thread;
} stop;

static void stop_hook(lua_State *L, lua_Debug *event) {
    (void)event;
    luaL_error(L, "interrupted");
}

/* As Lua's own interpreter does, this relies on lua_sethook being safe in a signal handler. */
static void arm(lua_State *L) {
    lua_sethook(L, stop_hook, LUA_MASKCALL | LUA_MASKRET | LUA_MASKLINE | LUA_MASKCOUNT, 1);
}

static void on_signal(int number) {
    int saved = errno;
    if (!pthread_equal(pthread_self(), stop.thread)) {
        pthread_kill(stop.thread, number); /* a worker got it: the hook is set where Lua runs */
    } else if (atomic_load(&stop.flag)) {
        /* Asked twice: die at once. Outputs are whole even so, being renamed into place. */
        struct sigaction plain = {.sa_handler = SIG_DFL};
        sigemptyset(&plain.sa_mask);
        sigaction(number, &plain, NULL);
        raise(number);
    } else {
        atomic_store(&stop.signal, number);
        atomic_store(&stop.flag, true);
        lua_State *L = atomic_load(&stop.running);
        if (L != NULL)
            arm(L);
    }
    errno = saved;
}

static void catch_signal(int number) {
    struct sigaction now;
    if (sigaction(number, NULL, &now) == 0 && now.sa_handler == SIG_IGN)
        return;
    /* No SA_RESTART: a read that waits for input must end. */
    struct sigaction action = {.sa_handler = on_signal};
    sigemptyset(&action.sa_mask);
    sigaction(number, &action, NULL);
}

void th_stop_install(lua_State *L) {
    stop.thread = pthread_self();
    atomic_store(&stop.running, L);
    struct sigaction ignore = {.sa_handler = SIG_IGN};
    sigemptyset(&ignore.sa_mask);
    sigaction(SIGPIPE, &ignore, NULL);
    catch_signal(SIGINT);
    catch_signal(SIGTERM);
}

void th_stop_forget(void) { atomic_store(&stop.running, NULL); }

_Atomic bool *th_stop_flag(void) { return &stop.flag; }

bool th_stopping(void) { return atomic_load(&stop.flag); }

bool th_ending(void) { return stop.ending; }

int th_stop_signal(void) { return atomic_load(&stop.signal); }

int th_stop_end(lua_State *L) {
    stop.ending = true;
    return luaL_error(L, "the run is ending");
}

void th_stop_disarm(lua_State *L) {
    stop.ending = false;
    lua_sethook(L, NULL, 0, 0);
}

lua_State *th_stop_running(lua_State *now) {
    lua_State *before = atomic_exchange(&stop.running, now);
    /* A signal between the two found `before`: arm here, after the exchange. */
    if (now != NULL && th_stopping())
        arm(now);
    return before;
}

int th_stop_resume(lua_State *L, lua_State *co, int arguments, int *results) {
    lua_State *before = th_stop_running(co);
    int status = lua_resume(co, L, arguments, results);
    th_stop_running(before);
    return status;
}
