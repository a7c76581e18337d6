# Thole. `make demo` and `make test` do all set-up on a Debian machine.
# Builds into build/; set BUILD, CC, CFLAGS, SANITIZE, WERROR=1 to change what is built, V=1 to see the commands.

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

# $(call say,CC,$<) before a command shows one short line instead of it.
ifdef V
say       =
else
say       = @printf '  %-6s %s\n' '$(1)' '$(2)';
endif

# The first pkg-config name that is a Lua 5.4.
LUA_PC   := $(shell for p in lua5.4 lua-5.4 lua54 lua; do \
              pkg-config --atleast-version=5.4 --max-version=5.4.99 $$p 2>/dev/null && { echo $$p; break; }; done)
LUA      ?= lua5.4
LUA_CFLAGS  = $(shell pkg-config --cflags $(LUA_PC) 2>/dev/null)
LUA_LIBS    = $(shell pkg-config --libs $(LUA_PC) 2>/dev/null)
CORE_PC  := libarchive zlib
CORE_CFLAGS = $(shell pkg-config --cflags $(CORE_PC) 2>/dev/null)
CORE_LIBS   = $(shell pkg-config --libs $(CORE_PC) 2>/dev/null) -lpthread -lm

# Where stock Lua looks for C modules: pkg-config's folder when that is under PREFIX, else the usual one.
LUA_CMOD  = $(shell pkg-config --variable=INSTALL_CMOD $(LUA_PC) 2>/dev/null)
CMODDIR  ?= $(if $(filter $(PREFIX)/%,$(LUA_CMOD)),$(LUA_CMOD),$(PREFIX)/lib/lua/5.4)

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

# ---- stamps --------------------------------------------------------------------------------------

# Each holds what a kind of output was made with, and is touched only when that changes: other flags, a source
# that went away, or another PREFIX then make anew what depends on them.
.PHONY: always
define stamp
$(BUILD)/$(1): always
	@mkdir -p $$(@D)
	@echo '$(2)' | cmp -s - $$@ || echo '$(2)' > $$@
endef
$(eval $(call stamp,flags.stamp,$$(CC) $$(CFLAGS) $$(SAN) $$(LDFLAGS) $$(VERSION)))
$(eval $(call stamp,sources.stamp,$$(CORE_SRC) $$(BIND_SRC) $$(HOST_SRC) $$(LUA_SRC)))
$(eval $(call stamp,prefix.stamp,$$(PREFIX) $$(VERSION)))

# Says what is missing before a compiler does, in words that help.
.PHONY: tools
tools:
	@pkg-config --version >/dev/null 2>&1 || { echo "pkg-config is missing: make deps" >&2; exit 1; }
	@[ -n "$(LUA_PC)" ] || { echo "pkg-config finds no Lua 5.4: make deps" >&2; exit 1; }
	@pkg-config --exists $(CORE_PC) || { echo "pkg-config does not find all of $(CORE_PC): make deps" >&2; exit 1; }
	@command -v $(firstword $(CC)) >/dev/null || { echo "$(firstword $(CC)) is missing: make deps" >&2; exit 1; }
	@command -v $(LUA) >/dev/null || { echo "$(LUA) is missing: make deps" >&2; exit 1; }

# ---- objects -------------------------------------------------------------------------------------

$(BUILD)/obj/core/bind/%.o $(BUILD)/obj/core/host/%.o: ALL_CFLAGS += $(LUA_CFLAGS)
$(BUILD)/obj/core/ingest/%.o: ALL_CFLAGS += $(CORE_CFLAGS)
$(BUILD)/obj/%.o: %.c $(BUILD)/flags.stamp | tools
	@mkdir -p $(@D)
	$(call say,CC,$<)$(CC) $(ALL_CFLAGS) -MMD -MP -c $< -o $@

# The Lua half travels inside the binaries as C arrays.
$(BUILD)/gen/lua_half.c: core/bind/embed.lua $(LUA_SRC) $(BUILD)/sources.stamp | tools
	@mkdir -p $(@D)
	$(call say,EMBED,lua/)$(LUA) core/bind/embed.lua $(LUA_SRC) > $@.tmp && mv $@.tmp $@
$(BUILD)/obj/gen/lua_half.o: $(BUILD)/gen/lua_half.c $(BUILD)/flags.stamp
	@mkdir -p $(@D)
	$(call say,CC,$@)$(CC) $(ALL_CFLAGS) -c $< -o $@

# ---- libraries, module, command --------------------------------------------------------------------

$(BUILD)/libthole.a: $(CORE_OBJ) $(BUILD)/sources.stamp
	$(call say,AR,$@)rm -f $@ && $(AR) rcs $@ $(CORE_OBJ)
$(BUILD)/libthole.so: $(CORE_OBJ) $(BUILD)/sources.stamp
	$(call say,LINK,$@)$(CC) $(CFLAGS) $(SAN) -shared -Wl,-soname,libthole.so.0 -o $@.$(VERSION) $(CORE_OBJ) $(CORE_LIBS) $(LDFLAGS)
	@ln -sf libthole.so.$(VERSION) $(BUILD)/libthole.so.0 && ln -sf libthole.so.0 $@
# The module takes Lua's functions from the program that loads it: no -llua here.
$(BUILD)/thole.so: $(CORE_OBJ) $(BIND_OBJ) core/bind/module.map $(BUILD)/sources.stamp
	$(call say,LINK,$@)$(CC) $(CFLAGS) $(SAN) -shared -Wl,--version-script=core/bind/module.map -o $@ $(CORE_OBJ) $(BIND_OBJ) $(CORE_LIBS) $(LDFLAGS)
$(BUILD)/thole: $(CORE_OBJ) $(BIND_OBJ) $(HOST_OBJ) $(BUILD)/sources.stamp
	$(call say,LINK,$@)$(CC) $(CFLAGS) $(SAN) -o $@ $(CORE_OBJ) $(BIND_OBJ) $(HOST_OBJ) $(LUA_LIBS) $(CORE_LIBS) $(LDFLAGS)

$(BUILD)/thole.pc: Makefile $(BUILD)/prefix.stamp
	@printf '%s\n' 'prefix=$(PREFIX)' 'includedir=$${prefix}/include/thole' 'libdir=$${prefix}/lib' '' \
	  'Name: thole' 'Description: when networks that change through time hold together, and their loops' \
	  'Version: $(VERSION)' 'Cflags: -I$${includedir}' 'Libs: -L$${libdir} -lthole' \
	  'Requires.private: $(CORE_PC)' 'Libs.private: -lpthread -lm' > $@

-include $(CORE_OBJ:.o=.d) $(BIND_SRC:%.c=$(BUILD)/obj/%.d) $(HOST_OBJ:.o=.d)

# ---- set-up ------------------------------------------------------------------------------------

# What a build needs, and what the tests need besides; docs/building.md says what each is for.
BUILD_PACKAGES := gcc libc6-dev pkg-config lua5.4 liblua5.4-dev libarchive-dev zlib1g-dev tzdata
TEST_PACKAGES  := libcmocka-dev libm4ri-dev libcsv-dev chromium tidy libxml2-utils
LINT_PACKAGES  := git lua-check cppcheck clang
FUZZ_PACKAGES  := clang libclang-rt-dev

# Install what is missing; without the right to, say the one command that does. Nothing missing: apt is not called.
define install_packages
@command -v dpkg-query >/dev/null || { echo "not a Debian machine: this needs what Debian calls $(1)"; exit 0; }; \
missing=; for p in $(1); do \
  dpkg-query -W -f='$${Status}' $$p 2>/dev/null | grep -q 'ok installed' || missing="$$missing $$p"; done; \
[ -n "$$missing" ] || exit 0; \
command="apt-get install --no-install-recommends$$missing"; \
if [ "$$(id -u)" = 0 ]; then as=; \
elif sudo -n true 2>/dev/null; then as=sudo; \
else echo "Packages are missing. Type this, then try again:"; \
  if command -v sudo >/dev/null; then echo "  sudo $$command"; else echo "  su -c '$$command'"; fi; exit 1; fi; \
echo "installing$$missing"; \
$$as apt-get update -qq && \
$$as env DEBIAN_FRONTEND=noninteractive apt-get install -y -qq --no-install-recommends $$missing >/dev/null
endef

.PHONY: deps test-deps lint-deps fuzz-deps
deps:
	$(call install_packages,$(BUILD_PACKAGES))
test-deps:
	$(call install_packages,$(BUILD_PACKAGES) $(TEST_PACKAGES))
lint-deps:
	$(call install_packages,$(BUILD_PACKAGES) $(LINT_PACKAGES))
fuzz-deps:
	$(call install_packages,$(BUILD_PACKAGES) $(FUZZ_PACKAGES))

# A second make, because what the first one found out about the machine may be out of date now.
.PHONY: demo
demo: deps
	@$(MAKE) --no-print-directory BUILD=$(BUILD) $(BUILD)/thole
	@mkdir -p out
	$(BUILD)/thole run --out out recipes/week-report.lua
	@echo "The report is $(CURDIR)/out/week-report.html: open it in a browser."

# ---- installing ----------------------------------------------------------------------------------

# What programs include: thole.h and what stands in it.
HEADERS := thole.h $(shell sed -n 's/^\#include "\(.*\)"$$/\1/p' core/thole.h)

AT = $(DESTDIR)$(PREFIX)

.PHONY: install uninstall
install: all
	install -d $(AT)/bin $(AT)/lib/pkgconfig $(AT)/share/thole/recipes/data $(AT)/share/doc/thole $(DESTDIR)$(CMODDIR)
	install $(BUILD)/thole $(AT)/bin/
	install -m 644 $(BUILD)/libthole.a $(AT)/lib/
	install -m 644 $(BUILD)/libthole.so.$(VERSION) $(AT)/lib/
	ln -sf libthole.so.$(VERSION) $(AT)/lib/libthole.so.0
	ln -sf libthole.so.0 $(AT)/lib/libthole.so
	install -m 644 $(BUILD)/thole.pc $(AT)/lib/pkgconfig/
	install -m 644 $(BUILD)/thole.so $(DESTDIR)$(CMODDIR)/
	@for h in $(HEADERS); do install -D -m 644 core/$$h $(AT)/include/thole/$$h || exit 1; done
	install -m 644 recipes/*.lua $(AT)/share/thole/recipes/
	install -m 644 recipes/data/* $(AT)/share/thole/recipes/data/
	install -D -m 644 lua/thole/library/thole.lua $(AT)/share/thole/library/thole.lua
	install -m 644 README.md LICENSE docs/*.md $(AT)/share/doc/thole/
	@[ -n "$(DESTDIR)" ] || [ "$$(id -u)" != 0 ] || ldconfig || true
uninstall:
	rm -f $(AT)/bin/thole $(AT)/lib/libthole.a $(AT)/lib/libthole.so $(AT)/lib/libthole.so.0* $(AT)/lib/pkgconfig/thole.pc \
	  $(DESTDIR)$(CMODDIR)/thole.so
	rm -rf $(AT)/include/thole $(AT)/share/thole $(AT)/share/doc/thole

.PHONY: clean
clean:
	rm -rf $(BUILD)
