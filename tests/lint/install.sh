#!/bin/sh
# Install under a folder of its own; then a C program, stock Lua and the command use what was installed, and
# uninstalling leaves nothing. Once where Debian's packages go, once where a person's own programs go.
#
#     tests/lint/install.sh BUILD
set -eu
build=${1:?build folder}
lua=${LUA:-lua5.4}
work=$(mktemp -d)
trap 'rm -rf "$work"' EXIT
fail() { echo "$*" >&2; exit 1; }

cat >"$work/week.csv" <<'CSV'
from,to,start,finish
Aldermoor,Brack,0,10
Brack,Corran,0,10
Corran,Aldermoor,0,10
CSV
cat >"$work/program.c" <<'C'
#include <stdio.h>
#include <thole.h>
int main(int n, char **argument) {
    thole_memory memory = {0};
    thole_context context = {.memory = &memory, .threads = 1};
    thole_contacts_options columns = {.from = {"from", 0}, .to = {"to", 0}, .start = {"start", 0}, .finish = {"finish", 0}};
    thole_network *network = NULL;
    thole_error error;
    if (n != 2 || thole_read_contacts(&context, argument[1], &columns, &network, &error) != THOLE_OK)
        return 1;
    printf("%zu events, version %s\n", thole_network_count(network), thole_version());
    thole_network_release(network);
    return 0;
}
C

for prefix in /usr /usr/local; do
    root=$work/root
    make --no-print-directory -s BUILD="$build" PREFIX=$prefix DESTDIR="$root" install >/dev/null
    installed() { PKG_CONFIG_PATH=$root$prefix/lib/pkgconfig PKG_CONFIG_SYSROOT_DIR=$root pkg-config "$@" thole; }
    version=$(installed --modversion)

    cc -std=c11 -Wall -Wextra -Wpedantic -Werror "$work/program.c" -o "$work/shared" $(installed --cflags --libs)
    said=$(LD_LIBRARY_PATH="$root$prefix/lib" "$work/shared" "$work/week.csv")
    [ "$said" = "3 events, version $version" ] || fail "the program said: $said"
    needed=$(readelf -d "$work/shared" | sed -n 's/.*NEEDED.*\[\(libthole.*\)\]/\1/p')
    [ "$needed" = libthole.so.0 ] || fail "the program wants $needed, not libthole.so.0"
    # The archive alone, with what thole.pc says that it needs in turn (from the machine, not from below $root).
    cc -std=c11 "$work/program.c" -o "$work/static" $(installed --cflags) "$root$prefix/lib/libthole.a" \
        $(pkg-config --libs $(installed --print-requires-private)) -lpthread -lm
    said=$("$work/static" "$work/week.csv")
    [ "$said" = "3 events, version $version" ] || fail "the static program said: $said"

    module=$(find "$root" -name thole.so)
    folder=${module%/thole.so}
    echo 'os.exit(package.cpath:find(arg[1] .. "/?.so", 1, true) ~= nil)' >"$work/looks.lua"
    "$lua" "$work/looks.lua" "${folder#"$root"}" || fail "$lua does not look for modules in ${folder#"$root"}"
    said=$(cd "$work" && LUA_CPATH="$folder/?.so" "$lua" -e 'print(require("thole").version)')
    [ "$said" = "$version" ] || fail "the module said: $said"

    "$root$prefix/bin/thole" run --quiet --out "$work" "$root$prefix/share/thole/recipes/barcode.lua" \
        input="$work/week.csv" out="$work/bars.csv" length=5 overlap=0 radius=graph
    grep -q '^1,1,2,closed-closed,' "$work/bars.csv" || fail "wrong bars: $(cat "$work/bars.csv")"
    [ "$("$root$prefix/bin/thole" version)" = "thole $version" ] || fail "the command is of another version"

    make --no-print-directory -s BUILD="$build" PREFIX=$prefix DESTDIR="$root" uninstall
    left=$(find "$root" ! -type d)
    [ -z "$left" ] || fail "uninstalling left $left"
    rm -rf "$root"
done
