# gate.sh writes every report and fails for what is new; jobs of shard.sh and join.sh say the same together.
# shellcheck shell=sh disable=SC2154 # read by ../test.sh
section "the gate"
ci="$top/integrations/ci"
whole="$scratch/whole reports"
parts="$scratch/parts"
gate() { HALFPLANE_REPORTS="$whole" sh "$ci/gate.sh" "$@"; }
shards() {
  n=$1
  shift
  k=1
  while [ "$k" -le "$n" ]; do
    exits 0 shard "$k" "$n" "$@"
    k=$((k + 1))
  done
}
shard() { HALFPLANE_REPORTS="$parts" sh "$ci/shard.sh" "$@"; }
merge() { HALFPLANE_REPORTS="$parts" sh "$ci/join.sh" "$@"; }
# alike STATUS N PATH…: one job and N jobs end alike and write the same reports, whatever the status.
alike() {
  status=$1 jobs=$2
  shift 2
  exits "$status" gate "$@"
  cp "$scratch/out" "$scratch/whole.txt"
  shards "$jobs" "$@"
  exits "$status" merge "$jobs"
  same "$scratch/out" "$scratch/whole.txt"
  for form in sarif xml md json; do
    there "$whole/findings.$form"
    same "$whole/findings.$form" "$parts/findings.$form"
  done
}

alike 0 3
says "on record"
grep -q '"2.1.0"' "$whole/findings.sarif" || fail "this is no SARIF"
grep -q '<testsuites' "$whole/findings.xml" || fail "this is no JUnit"
break_gauge
alike 1 3
says "$gauge:"
grep -q 'The closed loop is unstable' "$whole/findings.md" || fail "the Markdown report lacks the finding"
alike 1 20
alike 0 2 drafts
restore
cp "$scratch/demo/float-valve.converter.yaml" shelf/
alike 2 3
says "float-valve"
rm shelf/float-valve.converter.yaml
alike 2 2 shelf "no such.converter.yaml"

# Only what differs, a policy for all, a gate of one's own.
break_gauge
HALFPLANE_SINCE=HEAD alike 1 2 shelf
says "1 file"
HALFPLANE_FAIL_AT=never alike 0 2
printf 'format: 1\nseverity: {closed-loop-stability: warning, phase-margin: warning, gain-margin: warning}\n' >"$scratch/policy.yaml"
HALFPLANE_POLICY="$scratch/policy.yaml" alike 0 2
says "warning: the closed loop is unstable"
restore

# What is missing is said, and reports of an earlier run do not stay.
rm "$parts/shards/2.json"
exits 2 merge 2
says "the result of job 2 of 2 is missing"
exits 2 merge many
exits 2 shard 1 2 --no-such-option
[ ! -e "$parts/shards/1.json" ] || fail "an old result stays"
exits 2 gate --no-such-option
[ ! -e "$whole/findings.json" ] || fail "an old report stays"
HALFPLANE_LEDGER=nowhere.ledger exits 2 gate
says "nowhere.ledger"
# A program that ends without a word, or with a status that its result does not explain, fails the job.
printf '#!/bin/sh\nexit 3\n' >"$scratch/fake/halfplane"
chmod +x "$scratch/fake/halfplane"
HALFPLANE="$scratch/fake/halfplane" exits 3 shard 1 2
cat >"$scratch/fake/halfplane" <<FAKE
#!/bin/sh
case "\$*" in *--merge*) exec "$HALFPLANE" "\$@" ;; esac
"$HALFPLANE" "\$@"
exit 2
FAKE
HALFPLANE="$scratch/fake/halfplane" exits 2 shard 1 2
[ ! -e "$parts/shards/1.json" ] || fail "a result that hides something stays"
