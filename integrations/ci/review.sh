#!/bin/sh
# What a branch does to every margin, since it parted from BASE: review.sh BASE leaves a review comment and prints the same as text. Exit status 1: a
# margin falls through its target.
#   HALFPLANE (halfplane)  REPORTS (halfplane-reports)
set -eu
[ $# -ge 1 ] || { echo "usage: review.sh BASE [PATH…]" >&2; exit 2; }
base=$(git merge-base "$1" HEAD) || { echo "review.sh: $1 and HEAD have no commit in common here; fetch the whole history" >&2; exit 2; }
shift
reports=${REPORTS:-halfplane-reports}
mkdir -p "$reports"
exec "${HALFPLANE:-halfplane}" compare "$base" HEAD "$@" --as markdown --to "$reports/review.md" --as text
