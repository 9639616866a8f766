#!/bin/sh
# Builds halfplane from the checkout that this script lies in: install.sh [FOLDER] (default: bin at the top of the checkout).
# What was built of the same revision before, for example what a CI system's cache has brought back, is kept.
set -eu
source=$(cd "$(dirname "$0")/../.." && pwd -P)
folder=${1:-$source/bin}
mkdir -p "$folder"
folder=$(cd "$folder" && pwd -P)

revision=
if changed=$(git -C "$source" status --porcelain) && [ -z "$changed" ]; then revision=$(git -C "$source" rev-parse HEAD); fi
if [ -n "$revision" ] && [ "$(cat "$folder/halfplane.revision" 2>/dev/null)" = "$revision" ] &&
  "$folder/halfplane" --version >/dev/null 2>&1; then
  printf 'halfplane: %s is built of %s already\n' "$folder/halfplane" "$revision"
  exit 0
fi

rm -f "$folder/halfplane.revision"
(cd "$source" && CGO_ENABLED=0 go build -o "$folder/halfplane" ./cmd/halfplane)
printf '%s\n' "$revision" >"$folder/halfplane.revision"
printf 'halfplane: built %s\n' "$folder/halfplane"
