# How the tests are built and run. Each tests/core/test_*.c, tests/oracle/test_*.c and
# tests/reference/test_*.c is one cmocka program, linked to the static library, which also shows
# the core's inner functions. What runs, and in which order, is in tests/all.sh.
TEST_SRC  := $(sort $(wildcard tests/core/test_*.c tests/oracle/test_*.c tests/reference/test_*.c))
TEST_BIN  := $(TEST_SRC:%.c=$(BUILD)/%) $(BUILD)/tests/fuzz/replay $(BUILD)/tests/cli/allocations \
             $(BUILD)/tests/cli/fail_nth.so $(BUILD)/tests/lua/fault_injection
TEST_HELP := $(patsubst %.c,$(BUILD)/%.o,$(sort $(wildcard tests/support/*.c)))
TEST_LIBS  = $(shell pkg-config --libs cmocka 2>/dev/null) -lm4ri -lcsv
# What a program was made from, so that it is made again when a header changes.
TEST_NOTE  = -MMD -MP -MT $@ -MF $@.d

$(BUILD)/tests/support/%.o: tests/support/%.c $(BUILD)/flags.stamp
	@mkdir -p $(@D)
	$(call say,CC,$<)$(CC) $(ALL_CFLAGS) $(TEST_NOTE) -Itests -c $< -o $@
$(BUILD)/tests/fuzz/replay: tests/fuzz/replay.c tests/fuzz/fuzz_contacts.c $(BUILD)/libthole.a
	@mkdir -p $(@D)
	$(call say,TEST,$<)$(CC) $(ALL_CFLAGS) -Itests -o $@ tests/fuzz/replay.c tests/fuzz/fuzz_contacts.c $(BUILD)/libthole.a $(CORE_LIBS) $(LDFLAGS)
$(BUILD)/tests/cli/allocations: tests/cli/allocations.c $(BUILD)/flags.stamp
	@mkdir -p $(@D)
	$(call say,TEST,$<)$(CC) $(ALL_CFLAGS) -o $@ $<
$(BUILD)/tests/cli/fail_nth.so: tests/cli/fail_nth.c
	@mkdir -p $(@D)
	$(call say,TEST,$<)$(CC) -std=c11 -D_GNU_SOURCE -O2 -Wall -Wextra -fPIC -shared -o $@ $<
$(BUILD)/tests/lua/fault_injection: tests/lua/fault_injection.c $(BIND_OBJ) $(BUILD)/libthole.a
	@mkdir -p $(@D)
	$(call say,TEST,$<)$(CC) $(ALL_CFLAGS) $(TEST_NOTE) $(LUA_CFLAGS) -o $@ $< $(BIND_OBJ) $(BUILD)/libthole.a $(LUA_LIBS) $(TEST_LIBS) $(CORE_LIBS) $(LDFLAGS)
$(BUILD)/tests/%: tests/%.c $(TEST_HELP) $(BUILD)/libthole.a
	@mkdir -p $(@D)
	$(call say,TEST,$<)$(CC) $(ALL_CFLAGS) $(TEST_NOTE) -Itests -o $@ $< $(TEST_HELP) $(BUILD)/libthole.a $(TEST_LIBS) $(CORE_LIBS) $(LDFLAGS)

.SECONDARY: $(TEST_HELP)
-include $(TEST_BIN:%=%.d) $(TEST_HELP:%=%.d)

# Everything: installs what is missing, builds, runs, and counts. ONLY=core,lua,… runs some groups.
.PHONY: test
test: test-deps
	@$(MAKE) --no-print-directory BUILD=$(BUILD) test-build
	@LUA=$(LUA) sh tests/all.sh $(BUILD) $(ONLY)

.PHONY: test-build
test-build: all $(TEST_BIN)

# One group, already installed: make test-core, test-lua, test-cli, test-writers, test-docs, test-browser, test-install.
ONE_GROUP := test-core test-lua test-cli test-writers test-docs test-browser test-install
.PHONY: $(ONE_GROUP)
$(ONE_GROUP): test-build
	@LUA=$(LUA) sh tests/all.sh $(BUILD) $(@:test-%=%)

# Lint: the rules of DEVELOPERS.md, the Lua code, and a second compiler.
.PHONY: lint
lint: lint-deps
	@$(MAKE) --no-print-directory BUILD=$(BUILD) all
	@LUA=$(LUA) sh tests/all.sh $(BUILD) lint

# Fuzz the reader for SECONDS, beginning with the corpus; new finds stay in the build folder.
SECONDS ?= 60
.PHONY: fuzz
fuzz: fuzz-deps
	@$(MAKE) --no-print-directory BUILD=$(BUILD) $(BUILD)/fuzz/contacts
	@mkdir -p $(BUILD)/fuzz/found
	$(BUILD)/fuzz/contacts -max_total_time=$(SECONDS) -timeout=10 -rss_limit_mb=4096 -print_final_stats=1 \
	  -artifact_prefix=$(BUILD)/fuzz/ $(BUILD)/fuzz/found tests/fuzz/corpus_contacts
FUZZED := $(wildcard core/base/*.c core/clock/*.c core/network/*.c core/ingest/*.c)
$(BUILD)/fuzz/contacts: tests/fuzz/fuzz_contacts.c $(FUZZED) $(wildcard core/*/*.h)
	@mkdir -p $(@D)
	$(call say,FUZZ,$<)clang -std=c11 -D_POSIX_C_SOURCE=200809L -DTHOLE_VERSION='"$(VERSION)"' -g -O1 \
	  -fsanitize=fuzzer,address,undefined -fno-sanitize-recover=undefined \
	  -Icore -Itests $(CORE_CFLAGS) -o $@ $< $(FUZZED) $(CORE_LIBS)

# Benches: ratios against a reference measured in the same run, and growth as the work grows.
BENCH_BIN := $(patsubst %.c,$(BUILD)/%,$(sort $(wildcard tests/bench/bench_*.c)))
.PHONY: bench
bench: test-deps
	@$(MAKE) --no-print-directory BUILD=$(BUILD) $(BENCH_BIN)
	@for b in $(BENCH_BIN); do echo "== $${b##*/}"; $$b || exit 1; done
