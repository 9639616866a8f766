#!/bin/sh
# Uploads a SARIF file to a GitHub server's code scanning, from wherever its own upload action cannot run:
#   sarif-upload.sh FILE COMMIT REF
# GITHUB_REPOSITORY (owner/name) and GITHUB_TOKEN (allowed to write security events) come from the environment, and GITHUB_API_URL
# for a server of one's own.
set -eu
here=$(dirname "$0")
: "${GITHUB_REPOSITORY:?expected owner/name of the repository}"
: "${GITHUB_TOKEN:?expected a token that may write security events}"
api=${GITHUB_API_URL:-https://api.github.com}

# Everything in files that only this user can read: a command line can be read by others, and a body can be longer than one.
umask 077
scratch=$(mktemp -d "${TMPDIR:-/tmp}/halfplane.XXXXXX")
trap 'rm -rf "$scratch"' EXIT
trap 'exit 130' HUP INT TERM
sh "$here/sarif-body.sh" "$@" >"$scratch/body"
printf 'Authorization: Bearer %s\n' "$GITHUB_TOKEN" >"$scratch/header"
status=$(curl --silent --show-error --request POST --output "$scratch/answer" --write-out '%{http_code}' \
  --header "@$scratch/header" --header 'Accept: application/vnd.github+json' --header 'Content-Type: application/json' \
  --data-binary "@$scratch/body" "$api/repos/$GITHUB_REPOSITORY/code-scanning/sarifs")
cat "$scratch/answer"
case $status in
2??) ;;
*)
  printf 'sarif-upload.sh: the server answers %s\n' "$status" >&2
  exit 1
  ;;
esac
