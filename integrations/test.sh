#!/bin/sh
# Runs the hook and the CI scripts as a team would, on a throw-away git repository, and compares what they say. The first difference ends it.
#   sh integrations/test.sh [PROGRAM]
set -eu
here=$(cd "$(dirname "$0")" && pwd)
folder=$(mktemp -d)
trap 'rm -rf "$folder"' EXIT
program=${1:-}
if [ -z "$program" ]; then
  program=$folder/halfplane
  (cd "$here/.." && go build -o "$program" ./cmd/halfplane)
fi
HALFPLANE=$program
HOME=$folder GIT_CONFIG_NOSYSTEM=1
export HALFPLANE HOME GIT_CONFIG_NOSYSTEM
unset GIT_DIR GIT_WORK_TREE GIT_INDEX_FILE GIT_PREFIX || :

fail() { echo "FAILED: $*" >&2; exit 1; }
# wants STATUS COMMAND…: runs it, keeps what it says, and wants that exit status.
wants() {
  want=$1
  shift
  got=0
  "$@" >"$folder/said" 2>&1 || got=$?
  [ "$got" = "$want" ] || { cat "$folder/said"; fail "exit status $got, expected $want: $*"; }
}
says() { grep -q -- "$1" "$folder/said" || { cat "$folder/said"; fail "it does not say: $1"; }; }
silent() { ! grep -q -- "$1" "$folder/said" || { cat "$folder/said"; fail "it says: $1"; }; }
replace() { sed "s/$2/$3/" "$1" >"$folder/edited" && cat "$folder/edited" >"$1"; }
step() { echo "== $*"; }

step "a repository with healthy designs"
git init -q -b main "$folder/station"
cd "$folder/station"
git config user.name keeper
git config user.email keeper@station.invalid
"$HALFPLANE" demo --to "$folder/shelf" >/dev/null
mkdir -p 'designs/tide gauge'
cp "$folder/shelf/tide-gauge.converter.yaml" 'designs/tide gauge/lamp.converter.yaml'
cp "$folder/shelf/skiff-light.converter.yaml" designs/
cp "$folder/shelf/sonde.converter.yaml" designs/
cp "$here/hook/pre-commit" .git/hooks/pre-commit
good=designs/skiff-light.converter.yaml

step "the hook: first commit, nothing to check, a failing one, partly staged, commit -a"
git add designs
wants 0 git commit -m first
echo text >notes.txt
git add notes.txt
wants 0 git commit -m notes
resistor=$(sed -n 's/.*feedback-resistor: \([^ ]*\).*/\1/p' "$good")
[ -n "$resistor" ] || fail "no feedback resistor in $good"
replace "$good" "feedback-resistor: $resistor" "feedback-resistor: 470k"
wants 1 git commit -a -m broken
says 'error:'
says "$good"
silent 'tide gauge'
says 'this commit is refused'
git add "$good"
replace "$good" "feedback-resistor: 470k" "feedback-resistor: $resistor"
wants 1 git commit -m "staged is broken, the work tree is not"
git add "$good"
replace "$good" "feedback-resistor: $resistor" "feedback-resistor: 470k"
echo more >>notes.txt
git add notes.txt
wants 0 git commit -m "the work tree is broken, staged is not"
git checkout -q -- "$good"
printf 'title: {\n' >"designs/torn.converter.yaml"
git add designs/torn.converter.yaml
wants 1 git commit -m torn
says 'cannot be read'
git rm -q -f --cached designs/torn.converter.yaml
rm designs/torn.converter.yaml
printf 'format: 1\nthresholds: {phase-margin: 89 deg}\n' >halfplane.yaml
git add halfplane.yaml
wants 1 git commit -m "a policy that none meets"
says 'phase-margin'
git rm -q -f --cached halfplane.yaml
rm halfplane.yaml
git worktree add -q "$folder/linked" -b linked
(
  cd "$folder/linked"
  replace "$good" "feedback-resistor: $resistor" "feedback-resistor: 470k"
  wants 1 git commit -a -m "in a linked work tree"
  says "$good"
) || exit 1
[ -z "$(git status --porcelain)" ] || fail "the hook left something behind: $(git status --porcelain)"

step "the gate: passes, fails with its reports, passes with a ledger, fails on something new"
SHELF=designs
export SHELF
wants 0 sh "$here/ci/gate.sh" --depth quick
replace "$good" "feedback-resistor: $resistor" "feedback-resistor: 470k"
wants 1 sh "$here/ci/gate.sh" --depth quick
for report in findings.sarif findings.xml findings.md findings.json; do
  [ -s "halfplane-reports/$report" ] || fail "no $report"
done
"$HALFPLANE" check designs --depth quick --ledger halfplane.ledger --ledger-renew=all >/dev/null 2>&1 || fail "the ledger was not made"
wants 0 sh "$here/ci/gate.sh" --depth quick
says 'on record in the ledger'
cp "$folder/shelf/profiler.converter.yaml" designs/
wants 1 sh "$here/ci/gate.sh" --depth quick
says 'designs/profiler.converter.yaml'
silent "$good"

step "shards joined say what one check says"
rm -r halfplane-reports
wants 1 sh "$here/ci/gate.sh" --depth quick
mv halfplane-reports "$folder/whole"
cp "$folder/said" "$folder/whole/text"
for part in 1 2 3; do wants 0 sh "$here/ci/shard.sh" $part 3 --depth quick; done
wants 1 sh "$here/ci/join.sh" 3
cmp "$folder/said" "$folder/whole/text" || fail "the text differs"
for report in findings.sarif findings.xml findings.md findings.json; do
  cmp "halfplane-reports/$report" "$folder/whole/$report" || fail "$report differs"
done
rm halfplane-reports/shard-2.json
wants 2 sh "$here/ci/join.sh" 3
says 'job 2 of 3 are missing'

step "a review of what a branch does"
rm -r halfplane-reports halfplane.ledger designs/profiler.converter.yaml
git checkout -q -b change
git commit -q --no-verify -a -m "another resistor"
wants 1 sh "$here/ci/review.sh" main --depth quick
says 'fell through the target'
says "feedback-resistor $resistor"
grep -q '\*\*fell\*\*' halfplane-reports/review.md || fail "the comment does not say what fell"
git commit -q --no-verify --allow-empty -m nothing
wants 0 sh "$here/ci/review.sh" HEAD~1 --depth quick
wants 2 sh "$here/ci/review.sh" nosuch

step "the body for a code-scanning page"
wants 1 sh "$here/ci/gate.sh" --depth quick
sh "$here/ci/sarif-body.sh" halfplane-reports/findings.sarif "$(git rev-parse HEAD)" refs/heads/main >"$folder/body.json"
sed 's/.*"sarif":"\([^"]*\)".*/\1/' "$folder/body.json" | base64 -d | gzip -d | cmp - halfplane-reports/findings.sarif || fail "the body does not hold the file"
wants 2 sh "$here/ci/sarif-body.sh" halfplane-reports/findings.sarif 'a"b' refs/heads/main

step "the systems' files name scripts that exist"
for file in github-actions.yml gitlab-ci.yml Jenkinsfile; do
  grep -o 'tools/halfplane/[a-z-]*\.sh' "$here/ci/$file" | sort -u >"$folder/named"
  [ -s "$folder/named" ] || fail "$file names no script"
  while read -r script; do
    [ -f "$here/ci/${script##*/}" ] || fail "$file names $script, which is not there"
  done <"$folder/named"
done
echo "the hook and the CI scripts hold"
