#!/bin/sh
# Make reports and pictures with the command and look at each in a browser.
#
#   tests/browser/run.sh [BUILD]
set -eu
build=${1:-build}
here=$(dirname "$0")
out=$(mktemp -d)
trap 'rm -rf "$out"' EXIT

cat >"$out/pictures.lua" <<'LUA'
local thole = require "thole"
local p = thole.params { input = thole.needed }
local net = thole.read_contacts(p.input, { start = "departs", finish = "arrives", zone = "Atlantic/Azores" })
local cuts = thole.windows.sliding(net, { length = "1 h", overlap = 0.5 })
local bars = net:zigzag { windows = cuts, radius = 1, dims = { 0, 1, 2 } }
thole.write("bars.svg", bars)
thole.write("pieces.svg", bars, { view = "diagram", dim = 0 })
thole.write("loops.svg", bars, { view = "diagram", dim = 1, title = "Loops <of> the \"week\" & more \u{5E9}\u{5DC}\u{5D5}\u{5DD}" })
LUA
"$build/thole" run --quiet --out "$out" "$out/pictures.lua" input=recipes/data/archipelago-week.csv
"$build/thole" run --quiet --out "$out" recipes/week-report.lua out=demo.html

# Plain times, faulty rows, and words that want to be markup, long or written right to left.
odd="$out/<b>&'\"שלום.csv"
{
    echo 'from,to,start,finish'
    echo '"<script>alert(1)</script>","שלום & Co",0,10'
    echo '"שלום & Co","a</style>b",5,25'
    echo '"a</style>b","<script>alert(1)</script>",8,30'
    echo 'x,y,30,20'
    echo 'x,x,1,2'
    echo 'x,y,soon,20'
} >"$odd"
"$build/thole" run --quiet --out "$out" recipes/week-report.lua input="$odd" out=odd.html zone=none length=4 \
    start=start finish=finish title="</title><script>alert(2)</script> $(printf 'w%.0s' $(seq 300)) שלום"
grep -q '2 faulty rows' "$out/odd.html" || { echo "FAILED: the faulty rows are not in the report" >&2; exit 1; }

"$here/check_page.sh" "$out/demo.html" "$out/odd.html" "$out/bars.svg" "$out/pieces.svg" "$out/loops.svg"
