#!/bin/sh
# The body that a code-scanning page takes findings in: sarif-body.sh FILE COMMIT REF writes JSON with the file compressed (gzip) and in base64. It is sent by
# the system's own step, or with curl: see README.md.
set -eu
if [ $# -ne 3 ] || [ ! -s "$1" ]; then echo "usage: sarif-body.sh FILE COMMIT REF" >&2; exit 2; fi
case $2$3 in
  *[!0-9A-Za-z/._-]*) echo "sarif-body.sh: a commit or a ref has a character that it cannot have" >&2; exit 2 ;;
esac
printf '{"commit_sha":"%s","ref":"%s","sarif":"%s"}\n' "$2" "$3" "$(gzip -9 -n -c "$1" | base64 | tr -d '\n')"
