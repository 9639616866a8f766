#!/bin/sh
# One of N jobs side by side: shard.sh K N checks every N-th design and leaves its findings for join.sh, which is the gate. It fails only where the
# program itself does.
#   HALFPLANE (halfplane)  SHELF (.)  REPORTS (halfplane-reports)
set -eu
[ $# -ge 2 ] || { echo "usage: shard.sh K N" >&2; exit 2; }
part=$1 of=$2
shift 2
reports=${REPORTS:-halfplane-reports}
mkdir -p "$reports"
status=0
"${HALFPLANE:-halfplane}" check "${SHELF:-.}" --shard "$part/$of" "$@" --fail-at never --as json --to "$reports/shard-$part.json" || status=$?
[ -s "$reports/shard-$part.json" ] || exit "$status"
[ "$status" -le 2 ] || exit "$status"
