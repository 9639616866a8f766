#!/bin/sh
# What a branch does to every margin, as the text of a review comment: review.sh TARGET [PATH…] compares HEAD with the commit
# at which it parted from TARGET and writes halfplane-reports/review.md. It reports and leaves judging to the gate.
# Exit status: 0 where there is a report; else that of 'halfplane compare'.
set -eu
here=$(dirname "$0")
. "$here/settings.sh"
if [ $# -lt 1 ]; then
  say "usage: review.sh TARGET [PATH…]"
  exit 2
fi
target=$1
shift

mkdir -p "$reports"
rm -f "$reports/review.md"
if ! git rev-parse --verify --quiet "$target^{commit}" >/dev/null; then
  say "git knows no commit $target here: is it fetched?"
  exit 2
fi
if ! base=$(git merge-base "$target" HEAD); then
  say "$target and HEAD have no commit in common here: the review needs the whole history, not a shallow clone"
  exit 2
fi
status=0
"$program" compare --depth "$depth" ${policy:+--policy "$policy"} --as markdown --to "$reports/review.md" --as text \
  "$base" HEAD "$@" || status=$?
if [ "$status" -le 2 ] && [ -s "$reports/review.md" ]; then exit 0; fi
exit "$status"
