#!/bin/sh
# Look at a report the way a browser does.
#
#   tests/browser/check_page.sh PAGE.html [PICTURE.svg …]
#
# The page must pass tidy without errors, load in headless Chromium without a word on the console, fetch
# nothing, hold its drawings, and need no sideways scrolling at 360, 1200 and 2400 pixels. Each picture must be
# well-formed XML and load without a word as well. The check first proves on a broken page that it
# can fail. A missing tool is a failure, not a skip.
set -eu

page=$1
shift
work=$(mktemp -d)
trap 'rm -rf "$work"' EXIT
failed=0

fail() {
    echo "FAILED: $*" >&2
    failed=1
}

for tool in chromium tidy xmllint; do
    command -v "$tool" >/dev/null || { echo "FAILED: $tool is not installed: apt-get install chromium tidy libxml2-utils" >&2; exit 1; }
done

# The page as the browser has it after loading, to $work/dom; what the console said, to $work/console.
browse() { # file width
    rm -rf "$work/profile"
    timeout 120 chromium --headless --no-sandbox --disable-gpu --disable-quic --no-first-run \
        --disable-background-networking --disable-component-update --disable-sync --hide-scrollbars \
        --user-data-dir="$work/profile" --window-size="$2,900" --enable-logging=stderr --log-level=0 --virtual-time-budget=5000 \
        --dump-dom "file://$1" >"$work/dom" 2>"$work/log" || { cat "$work/log" >&2; fail "chromium ended badly on $1"; }
    grep -a 'CONSOLE' "$work/log" >"$work/console" || true
}

# A browser's window has a least width that is wider than a phone, so the page is put into a frame of the width
# asked for. A copy of it measures itself and tells the frame around it; the policy that forbids scripts has to
# go from the copy.
sideways() { # file width: true when the page is wider than its frame; *told* holds "WIDTH in FRAME"
    sed -e '/Content-Security-Policy/d' \
        -e 's|</body>|<script>parent.postMessage(document.documentElement.scrollWidth + " in " + innerWidth, "*")</script></body>|' \
        "$1" >"$work/measured.html"
    cat >"$work/frame.html" <<HTML
<!DOCTYPE html><html lang="en"><head><title>nothing</title><script>
addEventListener("message", function (event) { document.title = "told " + event.data; });
</script></head><body style="margin:0"><iframe src="measured.html" style="border:0;width:$2px;height:800px"></iframe>
</body></html>
HTML
    browse "$work/frame.html" 2600
    told=$(sed -n 's|.*<title>told \([0-9]* in [0-9]*\)</title>.*|\1|p' "$work/dom" | head -n 1)
    [ "${told#* in }" = "$2" ] || { fail "the width at $2 could not be measured: $told"; return 1; }
    [ "${told% in *}" -gt "$2" ]
}

# ---- the check can fail ------------------------------------------------------------------------

cat >"$work/broken.html" <<'HTML'
<!DOCTYPE html><html lang="en"><head><meta charset="utf-8"><title>broken</title></head>
<body><div style="width:3000px">x</div><script>console.error("on purpose")</script></body></html>
HTML
browse "$work/broken.html" 360
[ -s "$work/console" ] || fail "a console error was not noticed"
sideways "$work/broken.html" 360 || fail "a page that is too wide was not noticed"
printf '<p>x</b><svg><nonsense' >"$work/broken2.html"
tidy -q -e "$work/broken2.html" >/dev/null 2>&1 && fail "tidy let a broken page pass"
printf '<svg><line></svg>' >"$work/broken.svg"
xmllint --noout "$work/broken.svg" 2>/dev/null && fail "xmllint let a broken picture pass"

# ---- the page ----------------------------------------------------------------------------------

# Tidy's exit code is 2 when there are errors; its warnings about attributes inside SVG, which it does not know,
# are not errors.
code=0
tidy -q -e "$page" 2>"$work/tidy" || code=$?
[ "$code" -lt 2 ] || { cat "$work/tidy" >&2; fail "tidy finds errors"; }
if grep -v 'proprietary attribute' "$work/tidy" | grep -q .; then
    cat "$work/tidy" >&2
    fail "tidy warns of more than attributes of SVG"
fi

browse "$(realpath "$page")" 1200
[ -s "$work/console" ] && { cat "$work/console" >&2; fail "the console is not silent"; }
drawings=$(grep -c '<svg role="img"' "$work/dom" || true)
[ "$drawings" -ge 1 ] || fail "no drawing in the page as loaded"
grep -aiEq '(src|href)="(https?:)?//|@import|url\((https?:)?//' "$page" && fail "the page points outside"
for width in 360 1200 2400; do
    if sideways "$page" "$width"; then fail "the page is $told wide"; fi
done

for picture in "$@"; do
    xmllint --noout --nonet "$picture" || fail "$picture is not well-formed"
    browse "$(realpath "$picture")" 1200
    [ -s "$work/console" ] && { cat "$work/console" >&2; fail "$picture makes the console speak"; }
done

[ "$failed" -eq 0 ] || exit 1
echo "$page: $drawings drawings, silent console, no sideways scrolling; $# pictures well-formed"
