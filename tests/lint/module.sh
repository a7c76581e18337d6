#!/bin/sh
# The module takes Lua's functions from the program that loads it, and shows nothing but its entry: a second
# Lua inside it, or a symbol that another build could capture, would be found by no test that runs it.
#
#     tests/lint/module.sh BUILD
set -eu
module=${1:?build folder}/thole.so
failed=0

if readelf -d "$module" | grep 'NEEDED.*liblua'; then
    echo "$module links liblua" >&2
    failed=1
fi

shown=$(nm -D --defined-only "$module" | awk '$2 != "A" { print $3 }')
if [ "$shown" != luaopen_thole ]; then
    echo "$module exports more or less than luaopen_thole:" $shown >&2
    failed=1
fi

# What it wants of Lua must be Lua's public interface.
inner=$(nm -D --undefined-only "$module" | awk '{ print $NF }' | grep -E '^lua[A-KM-Z]_|^luai_' || true)
if [ -n "$inner" ]; then
    echo "$module uses inner functions of Lua:" $inner >&2
    failed=1
fi
exit $failed
