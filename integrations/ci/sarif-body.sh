#!/bin/sh
# The body of a code-scanning upload: sarif-body.sh FILE COMMIT REF writes JSON with the SARIF file compressed (gzip) and in
# base64, the form that the upload's interface takes. COMMIT is the whole hash, REF the whole name: refs/heads/main.
set -eu
if [ $# -ne 3 ]; then
  printf 'usage: sarif-body.sh FILE COMMIT REF\n' >&2
  exit 2
fi
file=$1 commit=$2 ref=$3
fail() {
  printf 'sarif-body.sh: %s\n' "$*" >&2
  exit 2
}
[ -s "$file" ] || fail "there is no SARIF file $file"
case $commit in
*[!0-9a-f]*) fail "'$commit' is no commit: expected its whole hash, in lower case" ;;
esac
[ ${#commit} -eq 40 ] || [ ${#commit} -eq 64 ] || fail "'$commit' is no commit: expected its whole hash"
git check-ref-format "$ref" || fail "'$ref' is no whole name of a reference: expected for example refs/heads/main"

# git allows quotes in the name of a reference, and forbids backslashes and control characters.
quoted=$(printf '%s' "$ref" | sed 's/"/\\"/g')
printf '{"commit_sha":"%s","ref":"%s","sarif":"' "$commit" "$quoted"
gzip -9nc <"$file" | base64 | tr -d '\n'
printf '"}\n'
