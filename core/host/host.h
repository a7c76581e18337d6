/* Inside the host: the `thole` command around one Lua state.
 *
 * main.c opens the state and does everything inside one protected call; the command line, confinement and
 * help are Lua (lua/thole/command.lua, confine.lua) on the functions of calls.c. One run a process: what a
 * signal handler must see is the only state that is not in the Lua state. */
#ifndef TH_HOST_H
#define TH_HOST_H

#include <stdatomic.h>
#include <stdbool.h>

#include <lauxlib.h>
#include <lua.h>
#include <lualib.h>

/* Exit codes, as docs/command.md has them. An ending signal gives 128 and its number: 130 for Ctrl-C. */
enum { TH_DONE = 0, TH_FAILED = 1, TH_USAGE = 2, TH_SIGNAL = 128 };

/* ---- stop.c: ending a run before its end ------------------------------------------------------ */

/* Catch SIGINT and SIGTERM (unless they are ignored, as for a job in the background), and ignore SIGPIPE, so
 * that a closed pipe is an error of writing. The first signal asks to stop, the second one kills. */
void th_stop_install(lua_State *L);

/* Nothing runs any more: signals only set the flag. Before the state is closed. */
void th_stop_forget(void);

/* Set as soon as a signal asked to stop; for the core to poll. */
_Atomic bool *th_stop_flag(void);

/* True once a signal asked to stop. */
bool th_stopping(void);

/* True once th_stop_end was called, until the recipe has unwound. */
bool th_ending(void);

/* The signal that asked to stop, or 0. */
int th_stop_signal(void);

/* End the recipe that runs in L; does not return. Unlike a signal this lets the __close of variables run;
 * pcall, xpcall and resume pass the error on. */
int th_stop_end(lua_State *L);

/* The recipe is over: let Lua of the host run on in L. */
void th_stop_disarm(lua_State *L);

/* ---- coroutines.c ----------------------------------------------------------------------------- */

/* Run in `co`, as lua_resume, with what runs now known to th_stop. */
int th_stop_resume(lua_State *L, lua_State *co, int arguments, int *results);

/* Which thread runs from here on; returns the one before. */
lua_State *th_stop_running(lua_State *now);

/* Put versions of coroutine.resume, wrap and close and of pcall and xpcall into the global tables that do not
 * hold up a recipe that is to stop or to end. */
void th_coroutines_open(lua_State *L);

/* ---- terminal.c: what a person sees ----------------------------------------------------------- */

/* Show progress if standard error is a terminal. */
void th_progress_on(void);

/* A thole_context's tick. */
bool th_progress_tick(void *user, const char *phase, double done);

/* Take the progress line off the screen, before anything else is written. */
void th_progress_clear(void);

/* Text and a line feed to standard error. */
void th_say(const char *text, size_t length);

/* print that reports a failing write, writers that clear the progress line, and warnings. */
void th_terminal_open(lua_State *L);

/* ---- calls.c ---------------------------------------------------------------------------------- */

/* Push the table of functions that lua/thole/command.lua works with. */
void th_calls_push(lua_State *L);

/* The exit code, and on the top of the stack the text (or nil), that the recipe ended itself with; -1 and
 * nothing when it did not. */
int th_calls_ending(lua_State *L);

#endif
