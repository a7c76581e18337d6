#!/bin/sh
# Setting up a machine, played with stand-ins for its package tools: what is missing is installed, as root or
# through sudo; otherwise one command is printed; apt is left alone when nothing is missing. The path holds no
# compiler and no pkg-config, as on a bare machine.
set -eu
work=$(mktemp -d)
trap 'rm -rf "$work"' EXIT
failed=0
fail() { echo "FAILED  $*" >&2; failed=1; }

mkdir "$work/bin"
for tool in make sh grep sed find sort cat cmp mkdir env; do
    ln -s "$(command -v $tool)" "$work/bin/$tool"
done
stand_in() { # name, body
    printf '#!/bin/sh\n%s\n' "$2" >"$work/bin/$1"
    chmod +x "$work/bin/$1"
}
stand_in dpkg-query 'for p; do :; done; case " $MISSING " in *" $p "*) echo "unknown ok not-installed"; exit 1 ;; *) echo "install ok installed" ;; esac'
stand_in id 'echo "$WHO"'
stand_in apt-get 'echo "apt-get $*" >>"$CALLS"; [ "$1" != "$BREAKS" ]'

# run NAME WANTED_EXIT TARGET: a make in that world; what it says is in $work/said, calls of apt in $work/calls.
run() {
    : >"$work/calls"
    code=0
    env -i PATH="$work/bin" CALLS="$work/calls" MISSING="$missing" WHO="$who" BREAKS="$breaks" \
        make --no-print-directory BUILD="$work/build" "$3" >"$work/said" 2>&1 || code=$?
    [ "$code" -eq "$2" ] || fail "$1: exit $code, not $2: $(cat "$work/said")"
}
calls_are() { [ "$(cat "$work/calls")" = "$2" ] || fail "$1: called $(cat "$work/calls")"; }
says() { grep -qxF -- "$2" "$work/said" || fail "$1: did not say \"$2\" but $(cat "$work/said")"; }

install='install -y -qq --no-install-recommends'
missing= who=1000 breaks=
run "nothing missing" 0 deps
calls_are "nothing missing" ""
run "nothing missing for tests" 0 test-deps
calls_are "nothing missing for tests" ""

missing='gcc tzdata libm4ri-dev' who=0
run "root" 0 deps
calls_are "root" "apt-get update -qq
apt-get $install gcc tzdata"
run "root, tests" 0 test-deps
calls_are "root, tests" "apt-get update -qq
apt-get $install gcc tzdata libm4ri-dev"
breaks=install
run "apt fails" 2 deps
breaks=update
run "apt cannot update" 2 deps
breaks= who=1000
run "no rights, no sudo" 2 deps
calls_are "no rights, no sudo" ""
says "no rights, no sudo" "  su -c 'apt-get install --no-install-recommends gcc tzdata'"

stand_in sudo 'if [ "$1" = -n ]; then exit 1; fi; echo "sudo $*" >>"$CALLS"'
run "sudo asks" 2 deps
calls_are "sudo asks" ""
says "sudo asks" "  sudo apt-get install --no-install-recommends gcc tzdata"
run "demo stops when packages are missing" 2 demo
stand_in sudo 'if [ "$1" = -n ]; then exit 0; fi; echo "as root:" >>"$CALLS"; "$@"'
run "sudo" 0 deps
calls_are "sudo" "as root:
apt-get update -qq
as root:
apt-get $install gcc tzdata"

missing=
run "make without tools" 2 all
says "make without tools" "pkg-config is missing: make deps"
exit $failed
