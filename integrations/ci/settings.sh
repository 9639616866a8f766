# Read by the scripts beside it. What they share comes from the environment, so that one place in a CI file sets it for all:
#   HALFPLANE           the program (default: what install.sh has built, else halfplane on the path)
#   HALFPLANE_REPORTS   folder for what is written (default halfplane-reports)
#   HALFPLANE_DEPTH     full or quick (default full)
#   HALFPLANE_FAIL_AT   error, warning, note or never (default error)
#   HALFPLANE_LEDGER    findings on record (default halfplane.ledger, where there is one)
#   HALFPLANE_POLICY    one policy for all designs (default: each design's nearest halfplane.yaml)
#   HALFPLANE_SINCE     check only what differs from this git revision (default: everything)
# shellcheck shell=sh disable=SC2034,SC2154 # used by the scripts that read this, which set "here" to the folder of it
program=${HALFPLANE:-}
if [ -z "$program" ]; then
  program=halfplane
  if [ -x "$here/../../bin/halfplane" ]; then program=$here/../../bin/halfplane; fi
fi
reports=${HALFPLANE_REPORTS:-halfplane-reports}
depth=${HALFPLANE_DEPTH:-full}
fail_at=${HALFPLANE_FAIL_AT:-error}
policy=${HALFPLANE_POLICY:-}
since=${HALFPLANE_SINCE:-}
ledger=${HALFPLANE_LEDGER:-}
if [ -z "$ledger" ] && [ -f halfplane.ledger ]; then ledger=halfplane.ledger; fi

say() { printf 'halfplane: %s\n' "$*" >&2; }

# judged ARGUMENT… runs check with the gate, the ledger and every form at once. The reports are written before the exit
# status says what was found, and old ones are gone first: a report that is there belongs to this run.
judged() {
  mkdir -p "$reports"
  for form in sarif xml md json; do rm -f "$reports/findings.$form"; done
  "$program" check --fail-at "$fail_at" ${ledger:+--ledger "$ledger"} \
    --as sarif --to "$reports/findings.sarif" \
    --as junit --to "$reports/findings.xml" \
    --as markdown --to "$reports/findings.md" \
    --as json --to "$reports/findings.json" \
    --as text "$@"
}
