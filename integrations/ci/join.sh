#!/bin/sh
# The gate behind shard.sh: joins what the jobs found, leaves a report in every form, and ends with the gate's exit status. join.sh N wants the findings of
# all N jobs: one that is missing is no clean shelf.
#   HALFPLANE (halfplane)  LEDGER (halfplane.ledger)  REPORTS (halfplane-reports)  FAIL_AT (error)
set -eu
[ $# -eq 1 ] || { echo "usage: join.sh N" >&2; exit 2; }
of=$1
reports=${REPORTS:-halfplane-reports}
ledger=${LEDGER:-halfplane.ledger}
set --
part=1
while [ "$part" -le "$of" ]; do
  [ -s "$reports/shard-$part.json" ] || { echo "join.sh: the findings of job $part of $of are missing: $reports/shard-$part.json" >&2; exit 2; }
  set -- "$@" --merge "$reports/shard-$part.json"
  part=$((part + 1))
done
[ ! -f "$ledger" ] || set -- "$@" --ledger "$ledger"
exec "${HALFPLANE:-halfplane}" check "$@" --fail-at "${FAIL_AT:-error}" \
  --as sarif --to "$reports/findings.sarif" --as junit --to "$reports/findings.xml" \
  --as markdown --to "$reports/findings.md" --as json --to "$reports/findings.json" --as text
