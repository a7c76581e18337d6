#!/bin/sh
# Look at reports and pictures the way a browser does.
#
#   tests/browser/check_page.sh FILE…      (FILE.html or FILE.svg)
#
# A page must pass tidy without errors, load in headless Chromium without a word on the console, fetch nothing,
# hold its drawings, and need no sideways scrolling at 360, 1200 and 2400 pixels. A picture must be well-formed
# XML and load without a word as well. The checks first prove on broken files that they can fail. A missing
# tool is a failure, not a skip.
set -eu

work=$(mktemp -d)
trap 'rm -rf "$work"' EXIT
failed=0

fail() {
    echo "FAILED: $*" >&2
    failed=1
}

for tool in chromium tidy xmllint; do
    command -v "$tool" >/dev/null || {
        echo "FAILED: $tool is not installed: apt-get install chromium tidy libxml2-utils" >&2
        exit 1
    }
done

# The page as the browser has it after loading, to $work/dom; what the console said, to $work/console.
browse() { # file
    rm -rf "$work/profile"
    timeout 120 chromium --headless --no-sandbox --disable-gpu --disable-quic --no-first-run \
        --disable-background-networking --disable-component-update --disable-sync --hide-scrollbars \
        --user-data-dir="$work/profile" --window-size=2600,900 --enable-logging=stderr --log-level=0 \
        --virtual-time-budget=5000 --dump-dom "file://$1" >"$work/dom" 2>"$work/log" || {
        cat "$work/log" >&2
        fail "chromium ended badly on $1"
    }
    grep -a 'CONSOLE' "$work/log" >"$work/console" || true
}

# The widths that a page needs in frames of 360, 1200 and 2400 pixels, to $told as "360:360 1200:1200 …". A
# browser's window has a least width that is wider than a phone, hence the frames. A copy of the page measures
# itself and tells the page around it; the policy that forbids scripts has to go from the copy.
measure() { # file
    sed -e '/Content-Security-Policy/d' \
        -e 's|</body>|<script>parent.postMessage(innerWidth + ":" + document.documentElement.scrollWidth, "*")</script></body>|' \
        "$1" >"$work/measured.html"
    {
        echo '<!DOCTYPE html><html lang="en"><head><title>told</title><script>'
        echo 'addEventListener("message", function (event) { document.title += " " + event.data; });'
        echo '</script></head><body style="margin:0">'
        for width in 360 1200 2400; do
            echo "<iframe src=\"measured.html\" style=\"border:0;width:${width}px;height:800px\"></iframe>"
        done
        echo '</body></html>'
    } >"$work/frame.html"
    browse "$work/frame.html"
    told=$(sed -n 's|.*<title>told \([0-9: ]*\)</title>.*|\1|p' "$work/dom" | head -n 1)
}

fits() { # width: true when the page needed no more
    case " $told " in
    *" $1:$1 "*) return 0 ;;
    esac
    return 1
}

# ---- the checks can fail -----------------------------------------------------------------------

cat >"$work/broken.html" <<'HTML'
<!DOCTYPE html><html lang="en"><head><meta charset="utf-8"><title>broken</title></head>
<body><div style="width:2000px">x</div><script>console.error("on purpose")</script></body></html>
HTML
browse "$work/broken.html"
[ -s "$work/console" ] || fail "a console error was not noticed"
measure "$work/broken.html"
if fits 360 || fits 1200; then fail "a page that is too wide was not noticed: $told"; fi
fits 2400 || fail "the width of a page was not measured: $told"
printf '<p>x</b><svg><nonsense' >"$work/broken2.html"
if tidy -q -e "$work/broken2.html" >/dev/null 2>&1; then fail "tidy let a broken page pass"; fi
printf '<svg><line></svg>' >"$work/broken.svg"
if xmllint --noout "$work/broken.svg" 2>/dev/null; then fail "xmllint let a broken picture pass"; fi

# ---- pages and pictures ------------------------------------------------------------------------

check_silence() { # file
    if [ -s "$work/console" ]; then
        cat "$work/console" >&2
        fail "$1: the console is not silent"
    fi
}

check_page() { # file
    # Tidy ends with 2 when there are errors; it warns of attributes inside SVG, which it does not know.
    code=0
    tidy -q -e "$1" 2>"$work/tidy" || code=$?
    if [ "$code" -ge 2 ] || grep -v 'proprietary attribute' "$work/tidy" | grep -q .; then
        cat "$work/tidy" >&2
        fail "$1: tidy complains of more than attributes of SVG"
    fi
    if grep -aiEq '(src|href)="(https?:)?//|@import|url\((https?:)?//' "$1"; then fail "$1 points outside"; fi
    browse "$(realpath "$1")"
    check_silence "$1"
    drawings=$(grep -c '<svg role="img"' "$work/dom" || true)
    [ "$drawings" -ge 1 ] || fail "$1: no drawing in the page as loaded"
    measure "$1"
    for width in 360 1200 2400; do
        fits "$width" || fail "$1: sideways scrolling at $width: $told"
    done
    echo "$(basename "$1"): $drawings drawings, widths $told"
}

check_picture() { # file
    xmllint --noout --nonet "$1" || fail "$1 is not well-formed"
    browse "$(realpath "$1")"
    check_silence "$1"
    grep -q '</svg>' "$work/dom" || fail "$1 does not load"
    echo "$(basename "$1"): looked at"
}

for file in "$@"; do
    case $file in
    *.html) check_page "$file" ;;
    *.svg) check_picture "$file" ;;
    *) fail "$file is neither a page nor a picture" ;;
    esac
done
[ $# -gt 0 ] || fail "nothing to look at"
exit $failed
