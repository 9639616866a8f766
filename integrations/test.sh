#!/bin/sh
# Runs the hook and the scripts for CI on a throw-away repository: integrations/test.sh [PROGRAM]. Without a program it builds one.
# Needs git and Go, and no network where Go has the modules. Every check says what it expected; the first that fails ends the run.
# shellcheck disable=SC2103,SC2164 # set -e ends the run
set -eu
top=$(cd "$(dirname "$0")/.." && pwd -P)
scratch=$(mktemp -d "${TMPDIR:-/tmp}/halfplane-test.XXXXXX")
trap 'rm -rf "$scratch"' EXIT
trap 'exit 130' HUP INT TERM

# Nobody's settings: not this user's, not those of a git command that this runs under.
HALFPLANE=${1:-}
# shellcheck disable=SC2046 # names of variables, one word each
unset $(git rev-parse --local-env-vars) HALFPLANE_FOLDER HALFPLANE_REPORTS HALFPLANE_FAIL_AT HALFPLANE_LEDGER HALFPLANE_POLICY HALFPLANE_SINCE
export GIT_CONFIG_NOSYSTEM=1 GIT_CONFIG_GLOBAL="$scratch/gitconfig" HALFPLANE_DEPTH=quick
git config --file "$GIT_CONFIG_GLOBAL" user.name keeper
git config --file "$GIT_CONFIG_GLOBAL" user.email keeper@station.invalid
git config --file "$GIT_CONFIG_GLOBAL" init.defaultBranch main

passed=0
ok() { passed=$((passed + 1)); }
fail() {
  printf 'FAIL: %s\n' "$*" >&2
  if [ -s "$scratch/out" ]; then sed 's/^/    /' "$scratch/out" | tail -n 20 >&2; fi
  exit 1
}
# exits STATUS COMMAND… runs it, keeps what it says in out, and wants this exit status.
exits() {
  expected=$1
  shift
  got=0
  "$@" >"$scratch/out" 2>&1 || got=$?
  [ "$got" -eq "$expected" ] || fail "exit status $got, expected $expected: $*"
  ok
}
# says TEXT, silent TEXT: in what the last command said.
says() {
  grep -qF -- "$1" "$scratch/out" || fail "expected the words: $1"
  ok
}
silent() {
  if grep -qF -- "$1" "$scratch/out"; then fail "did not expect the words: $1"; fi
  ok
}
same() {
  cmp -s "$1" "$2" || fail "$1 and $2 differ"
  ok
}
there() {
  [ -s "$1" ] || fail "$1 is not there, or empty"
  ok
}
# set_value FILE OLD NEW changes a value where it stands.
set_value() {
  grep -qF -- "$2" "$1" || fail "there is no $2 in $1"
  sed "s|$2|$3|" "$1" >"$scratch/edited"
  cat "$scratch/edited" >"$1"
}
section() { printf '%s\n' "$*"; }

. "$top/integrations/test/install.sh"
. "$top/integrations/test/shelf.sh"
. "$top/integrations/test/hook.sh"
. "$top/integrations/test/gate.sh"
. "$top/integrations/test/review.sh"
. "$top/integrations/test/sarif.sh"
printf '%s passed, 0 failed\n' "$passed"
