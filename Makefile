# Thole. `make demo` and `make test` do all set-up on a Debian machine.
# Builds into build/; set BUILD, CC, CFLAGS, SANITIZE, WERROR=1 to change what is built.

VERSION  := 0.1.0
BUILD    ?= build
PREFIX   ?= /usr/local
CFLAGS   ?= -O2 -g
WARNINGS := -Wall -Wextra -Wpedantic -Wconversion -Wshadow -Wundef -Wvla -Wstrict-prototypes \
            -Wmissing-prototypes -Wwrite-strings -Wcast-qual -Wformat=2 -Wdouble-promotion
ifdef WERROR
WARNINGS += -Werror
endif
ifdef SANITIZE
SAN      := -fsanitize=$(SANITIZE) -fno-sanitize-recover=all -fno-omit-frame-pointer
endif

# The first pkg-config name that is a Lua 5.4.
LUA_PC   := $(shell for p in lua5.4 lua-5.4 lua54 lua; do \
              pkg-config --atleast-version=5.4 --max-version=5.4.99 $$p 2>/dev/null && { echo $$p; break; }; done)
LUA      ?= $(firstword $(shell command -v lua5.4 lua5.4 lua 2>/dev/null) lua5.4)
LUA_CFLAGS  = $(shell pkg-config --cflags $(LUA_PC))
LUA_LIBS    = $(shell pkg-config --libs $(LUA_PC))
CORE_PC  := libarchive zlib
CORE_CFLAGS = $(shell pkg-config --cflags $(CORE_PC))
CORE_LIBS   = $(shell pkg-config --libs $(CORE_PC)) -lpthread -lm

ALL_CFLAGS = -std=c11 -D_POSIX_C_SOURCE=200809L -DTHOLE_VERSION='"$(VERSION)"' -Icore -I$(BUILD)/gen \
             $(WARNINGS) $(CFLAGS) $(SAN) -fPIC -fvisibility=hidden -pthread

CORE_SRC := $(sort $(filter-out core/bind/% core/host/%,$(wildcard core/*/*.c)))
BIND_SRC := $(sort $(wildcard core/bind/*.c))
HOST_SRC := $(sort $(wildcard core/host/*.c))
LUA_SRC  := $(sort $(shell find lua -name '*.lua'))
CORE_OBJ := $(CORE_SRC:%.c=$(BUILD)/obj/%.o)
BIND_OBJ := $(BIND_SRC:%.c=$(BUILD)/obj/%.o) $(BUILD)/obj/gen/lua_half.o
HOST_OBJ := $(HOST_SRC:%.c=$(BUILD)/obj/%.o)

.PHONY: all
all: $(BUILD)/thole $(BUILD)/thole.so $(BUILD)/libthole.a $(BUILD)/libthole.so $(BUILD)/thole.pc

include tests/tests.mk

$(BUILD)/obj/core/bind/%.o $(BUILD)/obj/core/host/%.o: ALL_CFLAGS += $(LUA_CFLAGS)
$(BUILD)/obj/core/ingest/%.o: ALL_CFLAGS += $(CORE_CFLAGS)
$(BUILD)/obj/%.o: %.c
	@mkdir -p $(@D)
	$(CC) $(ALL_CFLAGS) -MMD -MP -c $< -o $@

# The Lua half travels inside the binaries as C arrays.
$(BUILD)/gen/lua_half.c: core/bind/embed.lua $(LUA_SRC)
	@mkdir -p $(@D)
	$(LUA) core/bind/embed.lua $(LUA_SRC) > $@.tmp && mv $@.tmp $@
$(BUILD)/obj/gen/lua_half.o: $(BUILD)/gen/lua_half.c
	@mkdir -p $(@D)
	$(CC) $(ALL_CFLAGS) -c $< -o $@

$(BUILD)/libthole.a: $(CORE_OBJ)
	rm -f $@ && $(AR) rcs $@ $^
$(BUILD)/libthole.so: $(CORE_OBJ)
	$(CC) $(CFLAGS) $(SAN) -shared -Wl,-soname,libthole.so.0 -o $@ $^ $(CORE_LIBS) $(LDFLAGS)
# The module takes Lua's functions from the program that loads it: no -llua here.
$(BUILD)/thole.so: $(CORE_OBJ) $(BIND_OBJ) core/bind/module.map
	$(CC) $(CFLAGS) $(SAN) -shared -Wl,--version-script=core/bind/module.map -o $@ $(CORE_OBJ) $(BIND_OBJ) $(CORE_LIBS) $(LDFLAGS)
$(BUILD)/thole: $(CORE_OBJ) $(BIND_OBJ) $(HOST_OBJ)
	$(CC) $(CFLAGS) $(SAN) -o $@ $^ $(LUA_LIBS) $(CORE_LIBS) $(LDFLAGS)

$(BUILD)/thole.pc: Makefile
	@mkdir -p $(@D)
	@printf '%s\n' 'prefix=$(PREFIX)' 'includedir=$${prefix}/include/thole' 'libdir=$${prefix}/lib' '' \
	  'Name: thole' 'Description: persistent homology of networks that change through time' \
	  'Version: $(VERSION)' 'Cflags: -I$${includedir}' 'Libs: -L$${libdir} -lthole' \
	  'Requires.private: $(CORE_PC)' 'Libs.private: -lpthread -lm' > $@

-include $(CORE_OBJ:.o=.d) $(BIND_SRC:%.c=$(BUILD)/obj/%.d) $(HOST_OBJ:.o=.d)

.PHONY: clean
clean:
	rm -rf $(BUILD)
