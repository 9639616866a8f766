#!/bin/sh
# The merge gate: checks a shelf, leaves a report in every form, and ends with the gate's exit status, so that reports are there also when it
# fails. A ledger is used where there is one.
#   HALFPLANE (halfplane)  SHELF (.)  LEDGER (halfplane.ledger)  REPORTS (halfplane-reports)  FAIL_AT (error)
set -eu
reports=${REPORTS:-halfplane-reports}
ledger=${LEDGER:-halfplane.ledger}
mkdir -p "$reports"
set -- check "${SHELF:-.}" "$@" --fail-at "${FAIL_AT:-error}" \
  --as sarif --to "$reports/findings.sarif" --as junit --to "$reports/findings.xml" \
  --as markdown --to "$reports/findings.md" --as json --to "$reports/findings.json" --as text
[ ! -f "$ledger" ] || set -- "$@" --ledger "$ledger"
exec "${HALFPLANE:-halfplane}" "$@"
