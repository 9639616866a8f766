# The body of the code-scanning upload holds the SARIF file, whole.
# shellcheck shell=sh disable=SC2154 # read by ../test.sh
section "the SARIF upload's body"
payload() { sh "$ci/sarif-body.sh" "$@"; }
break_gauge
exits 1 gate
restore
commit=$(git rev-parse HEAD)
payload "$whole/findings.sarif" "$commit" refs/heads/main >"$scratch/body"
cp "$scratch/body" "$scratch/out"
says "{\"commit_sha\":\"$commit\",\"ref\":\"refs/heads/main\",\"sarif\":\""
[ "$(wc -l <"$scratch/body")" -eq 1 ] || fail "the body is not one line"
sed 's/.*"sarif":"\([A-Za-z0-9+/=]*\)"}$/\1/' "$scratch/body" | base64 -d | gzip -dc >"$scratch/again.sarif"
same "$scratch/again.sarif" "$whole/findings.sarif"
payload "$whole/findings.sarif" "$commit" refs/heads/main >"$scratch/body again"
same "$scratch/body" "$scratch/body again"
exits 0 payload "$whole/findings.sarif" "$commit" 'refs/heads/a"quote'
says 'refs/heads/a\"quote'
exits 2 payload "$whole/findings.sarif" "$commit" main
says "expected for example refs/heads/main"
exits 2 payload "$whole/findings.sarif" HEAD refs/heads/main
exits 2 payload "$whole/findings.sarif" "abc" refs/heads/main
exits 2 payload "$scratch/none.sarif" "$commit" refs/heads/main
