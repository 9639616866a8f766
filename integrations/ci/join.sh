#!/bin/sh
# The gate behind N jobs of shard.sh: join.sh N joins halfplane-reports/shards/1.json to N.json and writes what gate.sh writes. It runs
# in the folder that the jobs ran in, since files are named relative to it.
# Exit status: what 'halfplane check' would have had for all files at once; 2 where a result is missing.
set -eu
here=$(dirname "$0")
. "$here/settings.sh"
if [ $# -ne 1 ] || ! [ "$1" -ge 1 ] 2>/dev/null; then
  say "usage: join.sh N"
  exit 2
fi
n=$1

set --
k=1
missing=
while [ "$k" -le "$n" ]; do
  if [ -s "$reports/shards/$k.json" ]; then
    set -- "$@" --merge "$reports/shards/$k.json"
  else
    missing="$missing $k"
  fi
  k=$((k + 1))
done
if [ -n "$missing" ]; then
  say "the result of job$missing of $n is missing in $reports/shards: what it should have checked is not known"
  exit 2
fi
judged "$@"
