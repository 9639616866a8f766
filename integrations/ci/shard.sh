#!/bin/sh
# One of N jobs that run side by side: shard.sh K N [PATH…] checks every N-th file, the K-th first, and leaves the result in
# halfplane-reports/shards/K.json. It does not judge: join.sh does, once, for all of them.
# Exit status: 0 where the result says everything there is to say, also that a file cannot be read.
set -eu
here=$(dirname "$0")
. "$here/settings.sh"
if [ $# -lt 2 ]; then
  say "usage: shard.sh K N [PATH…]"
  exit 2
fi
k=$1 n=$2
shift 2

result=$reports/shards/$k.json
mkdir -p "$reports/shards"
rm -f "$result"
status=0
"$program" check --depth "$depth" ${policy:+--policy "$policy"} ${since:+--since "$since"} --fail-at never \
  --shard "$k/$n" --as json --to "$result" --as text "$@" || status=$?
if [ "$status" -eq 0 ]; then exit 0; fi

# What went wrong is left to join.sh if the result tells it; a folder that could not be searched, for example, it cannot tell.
told=0
if [ -s "$result" ]; then "$program" check --fail-at never --quiet --merge "$result" >/dev/null || told=$?; fi
if [ "$told" -eq "$status" ]; then exit 0; fi
rm -f "$result"
exit "$status"
