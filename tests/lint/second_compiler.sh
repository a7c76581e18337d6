#!/bin/sh
# clang reads the core and the tests with its own warnings, as errors.
set -eu
lua=$(for p in lua5.4 lua-5.4 lua54 lua; do pkg-config --cflags "$p" 2>/dev/null && break; done)
read_by_clang() { # folder of headers…, then sources
    clang -std=c11 -D_POSIX_C_SOURCE=200809L -DTHOLE_VERSION='"0"' -fsyntax-only -Werror -Wall -Wextra -Wpedantic -Wconversion \
        -Wshadow -Wunreachable-code -Wassign-enum -Wloop-analysis -Wshift-sign-overflow -Wstrict-prototypes \
        -Wmissing-prototypes -Wmissing-variable-declarations -Wimplicit-fallthrough -Wcast-align -Wformat=2 -Wno-format-nonliteral "$@"
}

read_by_clang -Icore $lua core/*/*.c
read_by_clang -Icore -Itests $lua $(find tests -name '*.c' ! -name fail_nth.c ! -path '*/fuzz/*')

# It can find something: a name that hides another.
if echo 'int f(int a) { if (a) { int a = 1; return a; } return a; }' |
    read_by_clang -Wno-missing-prototypes -x c - 2>/dev/null; then
    echo "clang let a fault pass" >&2
    exit 1
fi
