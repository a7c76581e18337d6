#!/bin/sh
# Run all groups of tests, or those named (core,lua,cli,writers,docs,browser,install,threads,lint), on what is built in BUILD.
#
#     tests/all.sh BUILD [GROUP[,GROUP…]]
#
# Each line is one program or script; a failing one does not hide the others. Closes with "N passed, N failed".
set -u
build=${1:?build folder}
groups=${2:-core,lua,cli,writers,docs,browser,install}
lua=${LUA:-lua5.4}
logs=$build/test-logs
mkdir -p "$logs"
passed=0
failed=0

# What a program says that it counted, for the line that is shown: "12 tests", "345 checks".
counted() {
    sed -nE 's/^\[  PASSED  \] ([0-9]+) test\(s\)\.$/\1 tests, /p; s/^([0-9]+ (checks|passed|stories|tests)), 0 failed$/\1, /p' "$1" |
        tail -n 1
}

# try NAME COMMAND...: run it, keep what it says, show the end of it when it fails. A test that was skipped
# is no test that passed.
try() {
    name=$1
    shift
    log=$logs/$(printf '%s' "$name" | tr ' /' '__').log
    began=$(date +%s)
    if "$@" >"$log" 2>&1 </dev/null && ! grep -q '^\[  SKIPPED ' "$log"; then
        passed=$((passed + 1))
        echo "ok      $name ($(counted "$log")$(($(date +%s) - began)) s)"
    else
        failed=$((failed + 1))
        echo "FAILED  $name: the end of $log:"
        tail -n 40 "$log" | sed 's/^/        /'
    fi
}

# Nothing to run is a failure: a group that lost its files must not pass.
some() {
    [ -e "$1" ] || { failed=$((failed + 1)); echo "FAILED  nothing matches $1"; return 1; }
}

core() {
    for source in tests/core/test_*.c tests/oracle/test_*.c tests/reference/test_*.c; do
        some "$source" && try "${source%.c}" "$build/${source%.c}"
    done
    try "tests/fuzz corpus" "$build/tests/fuzz/replay" tests/fuzz/corpus_contacts
    # The sanitizers bring functions of their own.
    [ -n "${SANITIZED:-}" ] || try "library's symbols" sh tests/lint/library.sh "$build"
}

lua_group() {
    [ -n "${SANITIZED:-}" ] || try "module's needs and exports" sh tests/lint/module.sh "$build"
    if [ -n "${SANITIZED:-}" ]; then # the stock interpreter was built without the sanitizers' run time
        try "Lua interface in $lua" env LD_PRELOAD="$(cc -print-file-name=libasan.so)" ASAN_OPTIONS=detect_leaks=0 \
            LUA_CPATH="$(cd "$build" && pwd)/?.so" "$lua" tests/lua/run.lua
    else
        try "Lua interface in $lua" env LUA_CPATH="$(cd "$build" && pwd)/?.so" "$lua" tests/lua/run.lua
    fi
    try "Lua interface in the host" "$build/thole" run --trust tests/lua/run.lua
    try "memory refused to every binding" "$build/tests/lua/fault_injection"
}

cli() {
    try "command line" "$lua" tests/cli/cases.lua "$build"
    try "escapes from confinement" "$lua" tests/cli/escapes.lua "$build"
    # Under the sanitizers the allocator is theirs; the core's own failures are injected in tests/core.
    [ -n "${SANITIZED:-}" ] || try "every allocation of a recipe fails" "$build/tests/cli/allocations" "$build"
}

writers() {
    for script in tests/writers/test_*.lua; do
        some "$script" && try "${script%.lua}" env TZ=UTC "$lua" "$script" "$build"
    done
}

browser() { try "reports and pictures in a browser" sh tests/browser/run.sh "$build"; }

docs() { try "examples and links of the documents" "$lua" tests/docs/examples.lua "$build"; }

install_group() {
    try "setting up a machine" sh tests/lint/setup.sh
    try "installed library, module and command" sh tests/lint/install.sh "$build"
}

# What runs in several threads, for the sanitizer that watches them.
threads() {
    for source in tests/oracle/test_*.c tests/reference/test_properties.c; do
        some "$source" && try "${source%.c}" "$build/${source%.c}"
    done
    for count in 1 4; do
        try "report by $count threads" "$build/thole" run --threads $count --out "$logs/threads-$count" recipes/week-report.lua
    done
    try "the same report" cmp "$logs/threads-1/week-report.html" "$logs/threads-4/week-report.html"
}

lint() {
    for script in tests/lint/*.lua; do
        some "$script" && try "$script" "$lua" "$script"
    done
    try "luacheck" luacheck -q lua recipes tests core/bind/embed.lua
    try "cppcheck" sh tests/lint/cppcheck.sh
    try "second compiler" sh tests/lint/second_compiler.sh
}

for group in $(echo "$groups" | tr ',' ' '); do
    case $group in
    core | cli | writers | docs | browser | threads | lint) "$group" ;;
    lua | install) "${group}_group" ;;
    *) echo "unknown group $group" >&2; exit 2 ;;
    esac
done
echo "$passed passed, $failed failed"
[ "$failed" -eq 0 ] && [ "$passed" -gt 0 ]
