/* The Lua half of Thole, carried inside the binaries; made by embed.lua. */
#ifndef TL_LUA_HALF_H
#define TL_LUA_HALF_H

#include <stddef.h>

/* One file: its path under lua/ ("thole/write.lua") and its text, not NUL-ended. */
typedef struct tl_file {
    const char *name;
    const unsigned char *bytes;
    size_t length;
} tl_file;

extern const tl_file tl_lua_half[];
extern const size_t tl_lua_half_count;

#endif
