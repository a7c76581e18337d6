#!/bin/sh
# The shared library shows thole_ functions alone, asks nothing of the system that a guest in another program must not
# (no exit, no printing, no locale), and keeps nothing between calls: no object of the core or the bindings has
# writable data.
#
#     tests/lint/library.sh BUILD
set -eu
build=${1:?build folder}
library=$build/libthole.so
failed=0

shown=$(nm -D --defined-only "$library" | awk '$3 !~ /^thole_/ { print $3 }')
if [ -n "$shown" ]; then
    echo "$library exports:" $shown >&2
    failed=1
fi
# Every public function is there, and no other one.
nm -D --defined-only "$library" | awk '{ print $3 }' | sort >"$build/shown"
sed -n 's/^#include "\(.*\)"$/\1/p' core/thole.h | while read -r header; do cat "core/$header"; done |
    tr '\n' ' ' | grep -oE 'THOLE_API [^;{(]*\bthole_[a-z0-9_]+\(' | sed -E 's/.*(thole_[a-z0-9_]+)\($/\1/' | sort -u >"$build/declared"
[ "$(wc -l <"$build/declared")" -gt 50 ] || { echo "only $(wc -l <"$build/declared") public functions were found" >&2; failed=1; }
if ! diff "$build/declared" "$build/shown" >&2; then
    echo "the headers (<) and $library (>) differ" >&2
    failed=1
fi

wanted=$(nm -D --undefined-only "$library" | awk '{ sub(/@.*/, "", $NF); print $NF }')
forbidden='_?exit|quick_exit|abort|atexit|__assert_fail|v?f?printf|f?puts|putchar|f?putc|fwrite|perror|stdout|stderr|'
forbidden="$forbidden"'setlocale|newlocale|uselocale|localtime|gmtime|mktime|strto[dfl]+|ato[ifl]+|(__isoc99_)?[sf]?scanf|s?rand(om)?|'
forbidden="$forbidden"'system|popen|fork|exec.*|signal|sigaction|raise|_?_?(sig)?setjmp|_?longjmp|chdir|setenv|putenv|umask|lua.*'
bad=$(echo "$wanted" | grep -xE "$forbidden" || true)
if [ -n "$bad" ]; then
    echo "$library calls:" $bad >&2
    failed=1
fi
# The pattern itself can find something: what the library does call is seen.
echo "$wanted" | grep -qx realloc || { echo "the calls of $library were not found" >&2; failed=1; }

for object in $(find "$build/obj/core" -name '*.o' ! -path '*/host/*'); do
    [ -e "$(echo "$object" | sed "s|^$build/obj/||; s|o\$|c|")" ] || continue # its source is gone
    writable=$(size -A "$object" | awk '$1 ~ /^\.t?(data|bss)/ && $1 !~ /^\.data\.rel\.ro/ && $2 > 0 { print $1, $2 }')
    if [ -n "$writable" ]; then
        echo "$object keeps writable data: $writable" >&2
        failed=1
    fi
done
exit $failed
