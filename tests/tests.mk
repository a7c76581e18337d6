# How the tests are built and run. Each tests/core/*.c, tests/oracle/*.c and
# tests/reference/*.c is one cmocka program, linked to the static library, which also shows
# the core's inner functions.
TEST_SRC  := $(sort $(wildcard tests/core/*.c tests/oracle/test_*.c tests/reference/test_*.c))
TEST_BIN  := $(TEST_SRC:%.c=$(BUILD)/%)
TEST_HELP := $(sort $(wildcard tests/support/*.c))
TEST_LIBS  = $(shell pkg-config --libs cmocka) -lm4ri -lcsv

$(BUILD)/tests/%: tests/%.c $(TEST_HELP) $(BUILD)/libthole.a
	@mkdir -p $(@D)
	$(CC) $(ALL_CFLAGS) -Itests -o $@ $< $(TEST_HELP) $(BUILD)/libthole.a $(TEST_LIBS) $(CORE_LIBS) $(LDFLAGS)

.PHONY: test-core
test-core: $(TEST_BIN)
	@for t in $(TEST_BIN); do echo "== $$t"; $$t || exit 1; done

# The command: what it says and does, and recipes that try to get out of their confinement.
.PHONY: test-cli
test-cli: $(BUILD)/thole $(BUILD)/thole.so
	$(LUA) tests/cli/cases.lua $(BUILD)
	$(LUA) tests/cli/escapes.lua $(BUILD)

# The Lua interface, in the stock interpreter and in the host.
.PHONY: test-lua
test-lua: $(BUILD)/thole $(BUILD)/thole.so
	tests/lint/module.sh $(BUILD)
	LUA_CPATH='$(abspath $(BUILD))/?.so' $(LUA) tests/lua/run.lua
	$(BUILD)/thole run --trust tests/lua/run.lua
