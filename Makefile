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
LUA_CFLAGS  = $(shell pkg-config --cflags $(LUA_PC) 2>/dev/null)
LUA_LIBS    = $(shell pkg-config --libs $(LUA_PC) 2>/dev/null)
CORE_PC  := libarchive zlib
CORE_CFLAGS = $(shell pkg-config --cflags $(CORE_PC) 2>/dev/null)
CORE_LIBS   = $(shell pkg-config --libs $(CORE_PC) 2>/dev/null) -lpthread -lm

ALL_CFLAGS = -std=c11 -D_POSIX_C_SOURCE=200809L -DTHOLE_VERSION='"$(VERSION)"' -Icore -I$(BUILD)/gen \
             $(WARNINGS) $(CFLAGS) $(SAN) -fPIC -fvisibility=hidden -pthread

CORE_SRC := $(sort $(filter-out core/bind/% core/host/%,$(wildcard core/*/*.c)))
BIND_SRC := $(sort $(wildcard core/bind/*.c))
HOST_SRC := $(sort $(wildcard core/host/*.c))
LUA_SRC  := $(sort $(filter-out lua/thole/library/%,$(shell find lua -name '*.lua')))
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

# ---- set-up ------------------------------------------------------------------------------------

# What a build needs, and what the tests need besides; docs/building.md says what each is for.
BUILD_PACKAGES := gcc libc6-dev pkg-config lua5.4 liblua5.4-dev libarchive-dev zlib1g-dev tzdata
TEST_PACKAGES  := libcmocka-dev libm4ri-dev libcsv-dev chromium tidy libxml2-utils
LINT_PACKAGES  := lua-check cppcheck clang

# Install what is missing; without the right to, say the one command that does.
define install
@missing=; for p in $(1); do dpkg-query -W -f='$${Status}' $$p 2>/dev/null | grep -q 'ok installed' || missing="$$missing $$p"; done; \
if [ -z "$$missing" ]; then exit 0; fi; \
if [ "$$(id -u)" = 0 ]; then as=; elif sudo -n true 2>/dev/null; then as=sudo; else \
  echo "Packages are missing. Type this, then try again:"; echo "  sudo apt-get install --no-install-recommends$$missing"; exit 1; fi; \
echo "installing$$missing"; \
$$as apt-get update -qq && DEBIAN_FRONTEND=noninteractive $$as apt-get install -y -qq --no-install-recommends $$missing >/dev/null
endef

.PHONY: deps test-deps lint-deps
deps:
	$(call install,$(BUILD_PACKAGES))
test-deps:
	$(call install,$(BUILD_PACKAGES) $(TEST_PACKAGES))
lint-deps:
	$(call install,$(BUILD_PACKAGES) $(LINT_PACKAGES))

# A second make, because what the first one found out about the machine may be out of date now.
.PHONY: demo
demo: deps
	@$(MAKE) --no-print-directory BUILD=$(BUILD) $(BUILD)/thole
	@mkdir -p out
	$(BUILD)/thole run --out out recipes/week-report.lua
	@echo "The report is out/week-report.html: open it in a browser."

# ---- installing ----------------------------------------------------------------------------------

CMODDIR ?= $(PREFIX)/lib/lua/5.4
HEADERS := $(addprefix core/,thole.h base/base.h clock/clock.h network/network.h network/filter.h network/windows.h \
             ingest/contacts.h complex/complex.h zigzag/zigzag.h zigzag/choose.h zigzag/carriers.h)

.PHONY: install uninstall
install: all
	install -d $(DESTDIR)$(PREFIX)/bin $(DESTDIR)$(PREFIX)/lib/pkgconfig $(DESTDIR)$(CMODDIR) $(DESTDIR)$(PREFIX)/share/thole/recipes/data
	install $(BUILD)/thole $(DESTDIR)$(PREFIX)/bin/
	install -m 644 $(BUILD)/libthole.a $(DESTDIR)$(PREFIX)/lib/
	install $(BUILD)/libthole.so $(DESTDIR)$(PREFIX)/lib/libthole.so.$(VERSION)
	ln -sf libthole.so.$(VERSION) $(DESTDIR)$(PREFIX)/lib/libthole.so.0
	ln -sf libthole.so.0 $(DESTDIR)$(PREFIX)/lib/libthole.so
	install -m 644 $(BUILD)/thole.pc $(DESTDIR)$(PREFIX)/lib/pkgconfig/
	install $(BUILD)/thole.so $(DESTDIR)$(CMODDIR)/
	for h in $(HEADERS:core/%=%); do install -D -m 644 core/$$h $(DESTDIR)$(PREFIX)/include/thole/$$h; done
	install -m 644 recipes/*.lua $(DESTDIR)$(PREFIX)/share/thole/recipes/
	install -m 644 recipes/data/* $(DESTDIR)$(PREFIX)/share/thole/recipes/data/
	install -D -m 644 lua/thole/library/thole.lua $(DESTDIR)$(PREFIX)/share/thole/library/thole.lua
	install -d $(DESTDIR)$(PREFIX)/share/doc/thole && install -m 644 README.md LICENSE docs/*.md $(DESTDIR)$(PREFIX)/share/doc/thole/
uninstall:
	rm -rf $(DESTDIR)$(PREFIX)/bin/thole $(DESTDIR)$(PREFIX)/lib/libthole.* $(DESTDIR)$(PREFIX)/lib/pkgconfig/thole.pc \
	  $(DESTDIR)$(CMODDIR)/thole.so $(DESTDIR)$(PREFIX)/include/thole $(DESTDIR)$(PREFIX)/share/thole $(DESTDIR)$(PREFIX)/share/doc/thole

.PHONY: clean
clean:
	rm -rf $(BUILD)
