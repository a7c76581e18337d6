/* Inside bind: what the files of the Lua types share.
 *
 * Every function that Lua calls has three phases: (a) check and copy the arguments, which may raise;
 * (b) the core, with a status and no Lua; (c) push results, which may raise. What must live across (a) or (c)
 * belongs to a userdata on the stack. Remarks "[-pops, +pushes, raises]" are as in Lua's manual.
 *
 * Nothing is kept in C variables: all hangs off the Lua state. */
#ifndef TL_BIND_H
#define TL_BIND_H

#include <lauxlib.h>
#include <lua.h>

#include "thole.h"

#ifdef __cplusplus
#error "C only"
#endif

/* Open the module in L: [-0, +1, raises]. */
THOLE_API int luaopen_thole(lua_State *L);

/* The context of this Lua state: [-0, +0, -]. The host may set tick and cancel; NULL before luaopen_thole. */
thole_context *tl_context(lua_State *L);

/* Names of types carry the version of their C layout: two builds of Thole in one process do not take each
 * other's objects for their own. */
#define TL_NETWORK "thole.network@1"
#define TL_WINDOWS "thole.windows@1"
#define TL_BARCODE "thole.barcode@1"
#define TL_LINK "thole.link@1"
#define TL_OUTPUT "thole.output@1"
#define TL_CHOSEN "thole.chosen@1"
#define TL_BLOCK "thole.block@1"
#define TL_BUILD "thole.build@1"
#define TL_CARRIERS "thole.carriers@1"
#define TL_ZONE "thole.zone@1"

/* ---- raise.c: errors ----------------------------------------------------------------------------- */

/* Push "recipe.lua:12: " for the innermost line that runs and is not of Thole's own Lua half, or "". */
void tl_where(lua_State *L);

/* Raise a message with that position; formats as lua_pushfstring. What raises is an int so that one can
 * return it. */
int tl_fail(lua_State *L, const char *format, ...);

/* Raise what the core said, after `before` ("event 3: "; NULL for nothing). */
int tl_raise(lua_State *L, const thole_error *error, const char *before);

/* Push 'did you mean "x"?', 'known are x, y', or "" when there are no names. */
void tl_push_hint(lua_State *L, const char *wanted, size_t n, const char *const *names);

/* ---- module.c: the state ------------------------------------------------------------------------- */

/* Before a call of the core: forget what an earlier one ran into. */
thole_context *tl_begin(lua_State *L);

/* The memory that core calls may use unless told otherwise, in bytes. */
size_t tl_usual_ceiling(void);

/* Tell the collector that an object now holds `bytes` outside of Lua: [-0, +0, raises (finalisers run)]. */
void tl_burden(lua_State *L, size_t bytes);

/* Push the path to open for `path` at `index` (a text without NUL), as the host's gate has it; raises when
 * the gate refuses. mode: "read" or "write". of: who asks, for messages. */
const char *tl_gate(lua_State *L, int index, const char *mode, const char *of);

/* Make the metatable of a type: `special` are its __ functions; with `index`, its __index is that function
 * with the table of `methods` as its upvalue, else that table. The methods are also put under the name's
 * middle part ("network") into the table "methods" of the native functions on the top: [-0, +0, raises]. */
void tl_new_type(lua_State *L, const char *name, const luaL_Reg *special, const luaL_Reg *methods,
                 lua_CFunction index);

/* More methods for the type of that middle part: [-0, +0, raises]. */
void tl_add_methods(lua_State *L, const char *type, const luaL_Reg *methods);

/* Note the names of the fields of that type, for those who compare the description with what there is: into
 * the table "fields" of the native functions on the top: [-0, +0, raises]. */
void tl_add_fields(lua_State *L, const char *type, size_t n, const char *const *names);

/* Make the metatable of a type that recipes never see, which only needs to be collected: [-0, +0, raises]. */
void tl_new_owner(lua_State *L, const char *name, lua_CFunction collect);

/* How much room to ask of Lua at once for a list of n items: a table may be larger than an int says. */
static inline int tl_room(size_t n) { return n < 1 << 24 ? (int)n : 1 << 24; }

/* In an __index: the value for the key at 2 from the methods in upvalue 1, pushed, true; else false. */
bool tl_find_method(lua_State *L);

/* Raise that `what` ("a network") has no field with the key at 2. Known are the keys of the table at `table`
 * and n more. */
int tl_no_field(lua_State *L, const char *what, int table, size_t n, const char *const *more);

/* ---- option_table.c: tables of options ----------------------------------------------------------- */

/* A table of options at `index` (0: none given) of the function `of`. */
typedef struct tl_options {
    int index;
    const char *of;
} tl_options;

/* Check that there is a table, or nothing, and no key outside `names` (n of them). */
tl_options tl_options_at(lua_State *L, int index, const char *of, size_t n, const char *const *names);

/* Push option `name` and return its type; LUA_TNIL when it is not given. */
int tl_option(lua_State *L, const tl_options *options, const char *name);

/* Raise 'option "x" of f: …'. */
int tl_option_fail(lua_State *L, const tl_options *options, const char *name, const char *format, ...);

/* Options of one type, or what stands for a missing one. Texts are without NUL and live as long as the table.
 */
const char *tl_option_text(lua_State *L, const tl_options *options, const char *name, const char *missing);
bool tl_option_boolean(lua_State *L, const tl_options *options, const char *name, bool missing);
lua_Integer tl_option_integer(lua_State *L, const tl_options *options, const char *name, lua_Integer least,
                              lua_Integer most, lua_Integer missing);
/* The number of the given text in `names`. */
int tl_option_choice(lua_State *L, const tl_options *options, const char *name, size_t n,
                     const char *const *names, int missing);

/* ---- lua_times.c: times and durations ------------------------------------------------------------ */

/* The time, or duration, at `index` to ticks; exact. On failure false, with a text that says why pushed. */
bool tl_to_time(lua_State *L, int index, const thole_clock *clock, int64_t *ticks);
bool tl_to_duration(lua_State *L, int index, const thole_clock *clock, int64_t *ticks);

/* A finite Lua number to ticks (its decimal text times 10^9), exactly; as above. */
bool tl_number_to_ticks(lua_State *L, int index, int64_t *ticks);

/* Push a time as recipes see it: a number on a plain clock, ISO 8601 text on a calendar clock. */
void tl_push_time(lua_State *L, const thole_clock *clock, int64_t ticks, int quarters);

/* Push an amount of time in the clock's unit: a whole number where it is one. */
void tl_push_amount(lua_State *L, uint64_t ticks, int quarters, bool negative);

/* ---- objects ------------------------------------------------------------------------------------- */

/* Each object is closed (its pointer NULL) until the core made it, and after close. */

/* lua_network.c. `push` makes a closed one on the stack and returns where its network goes. */
thole_network **tl_push_network(lua_State *L);
thole_network *tl_check_network(lua_State *L, int index, const char *of);
void tl_network_made(lua_State *L, size_t bytes); /* the one on the top is filled now */

/* lua_windows.c */
typedef struct tl_windows {
    thole_windows *windows;
    thole_clock clock; /* its zone retained while windows is not NULL */
} tl_windows;
tl_windows *tl_push_windows(lua_State *L);
tl_windows *tl_check_windows(lua_State *L, int index, const char *of);
void tl_windows_set_clock(tl_windows *windows, const thole_clock *clock);

/* lua_barcode.c: push a closed barcode and return where the core's goes. */
thole_barcode **tl_push_barcode(lua_State *L);
thole_barcode *tl_check_barcode(lua_State *L, int index, const char *of);
/* The option "at", a window's number or the half between two, as a position; false when it is not given. */
bool tl_option_position(lua_State *L, const tl_options *options, const thole_barcode *b, uint32_t *position);

/* lua_link.c: push the proxy for the links of the network at `index`. It retains the network until
 * tl_link_over or its collection. */
typedef struct tl_link {
    thole_network *network;
    size_t at; /* the link that it shows */
} tl_link;
tl_link *tl_push_link(lua_State *L, int network_index, const char *of);
void tl_link_over(tl_link *link);

/* lua_filter.c: the test in the table at `index`; everything that it points to is kept alive by the table
 * that is pushed: [-0, +1, raises]. */
const thole_test *tl_push_test(lua_State *L, int index, const thole_clock *clock, const char *of);

/* block.c: n items of memory, not set to anything, that belong to a userdata, which is pushed; NULL items for
 * n = 0. Raises when refused; `what` says what it is for. */
void *tl_push_block(lua_State *L, size_t n, size_t item, const char *what);
/* Give a block back before the collector does. */
void tl_free_block(lua_State *L, int index);

/* What each file puts into the table of native functions on the top of the stack: [-0, +0, raises]. */
void tl_open_block(lua_State *L);
void tl_open_network(lua_State *L);
void tl_open_build(lua_State *L);
void tl_open_contacts(lua_State *L);
void tl_open_link(lua_State *L);
void tl_open_keep(lua_State *L);
void tl_open_times(lua_State *L);
void tl_open_windows(lua_State *L);
void tl_open_zigzag(lua_State *L);
void tl_open_barcode(lua_State *L);
void tl_open_carriers(lua_State *L);
void tl_open_output(lua_State *L);

#endif
