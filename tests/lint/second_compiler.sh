#!/bin/sh
# clang reads the core with its own warnings, as errors.
set -eu
for source in core/*/*.c; do
    case $source in core/bind/* | core/host/*) lua=$(pkg-config --cflags lua5.4) ;; *) lua= ;; esac
    clang -std=c11 -D_POSIX_C_SOURCE=200809L -fsyntax-only -Werror -Wall -Wextra -Wpedantic -Wconversion -Wshadow \
        -Wunreachable-code -Wassign-enum -Icore $lua "$source"
done
