#!/bin/sh
# The shared library shows thole_ functions alone, and asks nothing of the system that a guest in another
# program must not: no exit, no printing, no locale.
set -eu
library=${1:?build folder}/libthole.so
failed=0
shown=$(nm -D --defined-only "$library" | awk '$2 == "T" && $3 !~ /^thole_/ { print $3 }')
if [ -n "$shown" ]; then
    echo "$library exports:" $shown >&2
    failed=1
fi
count=$(nm -D --defined-only "$library" | grep -c ' T thole_')
[ "$count" -gt 50 ] || { echo "$library exports only $count functions" >&2; failed=1; }
wanted=$(nm -D --undefined-only "$library" | awk '{ sub(/@.*/, "", $NF); print $NF }' |
    grep -xE 'exit|_exit|abort|printf|puts|putchar|perror|setlocale|localtime|gmtime|rand|srand|system|popen' || true)
if [ -n "$wanted" ]; then
    echo "$library calls:" $wanted >&2
    failed=1
fi
exit $failed
