#!/bin/sh
# Install under a folder of its own; then a C program, stock Lua and the command use what was installed.
set -eu
build=${1:?build folder}
lua=${LUA:-lua5.4}
root=$(mktemp -d)
trap 'rm -rf "$root"' EXIT
make --no-print-directory -s BUILD="$build" PREFIX=/usr DESTDIR="$root" install >/dev/null
cat >"$root/week.csv" <<'CSV'
from,to,start,finish
Aldermoor,Brack,0,10
Brack,Corran,0,10
Corran,Aldermoor,0,10
CSV
cat >"$root/program.c" <<'C'
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
PKG_CONFIG_PATH="$root/usr/lib/pkgconfig" PKG_CONFIG_SYSROOT_DIR="$root"
export PKG_CONFIG_PATH PKG_CONFIG_SYSROOT_DIR
cc -std=c11 ${SAN_FLAGS:-} "$root/program.c" -o "$root/program" $(pkg-config --cflags --libs thole)
said=$(LD_LIBRARY_PATH="$root/usr/lib" "$root/program" "$root/week.csv")
[ "$said" = "3 events, version $(pkg-config --modversion thole)" ] || { echo "the program said: $said"; exit 1; }
said=$(LUA_CPATH="$root/usr/lib/lua/5.4/?.so" "$lua" -e 'print(require("thole").version)')
[ "$said" = "$(pkg-config --modversion thole)" ] || { echo "the module said: $said"; exit 1; }
"$root/usr/bin/thole" run --quiet --out "$root" "$root/usr/share/thole/recipes/barcode.lua" input="$root/week.csv" \
    out="$root/bars.csv" length=5 overlap=0 radius=graph
grep -q '^1,1,2,closed-closed,' "$root/bars.csv" || { cat "$root/bars.csv"; exit 1; }
make --no-print-directory -s BUILD="$build" PREFIX=/usr DESTDIR="$root" uninstall
[ ! -e "$root/usr/bin/thole" ] && [ ! -e "$root/usr/include/thole" ]
