# The hook sees what is staged, all of it and nothing else, and what uses it.
# shellcheck shell=sh disable=SC2154,SC2103,SC2164 # read by ../test.sh
section "the hook"
gauge=shelf/tide-gauge.converter.yaml
beacon="shelf/harbour beacon.converter.yaml"
shared="common parts/beacon.compensator.yaml"
TMPDIR=$scratch/tmp
export TMPDIR
mkdir "$TMPDIR"
cp "$top/integrations/hook/pre-commit" .git/hooks/pre-commit
git config halfplane.program "$scratch/bin/halfplane"
unset HALFPLANE HALFPLANE_DEPTH # git config says it here

# commits, refused STATUS: an attempt to commit. Nothing is left behind, and what was not committed stays as it was.
commits() {
  before=$(git rev-parse --verify --quiet HEAD || true)
  exits 0 git commit -m work "$@"
  [ "$(git rev-parse HEAD)" != "$before" ] || fail "nothing was committed"
  clean
}
refused() {
  before=$(git rev-parse --verify --quiet HEAD || true)
  state=$(git status --porcelain)
  exits 1 git commit -m work "$@"
  [ "$(git rev-parse --verify --quiet HEAD || true)" = "$before" ] || fail "it was committed"
  [ "$(git status --porcelain)" = "$state" ] || fail "the state has changed"
  says "nothing was committed"
  clean
}
clean() {
  [ -z "$(ls -A "$TMPDIR")" ] || fail "something is left in the temporary folder"
  [ -z "$(git stash list)" ] || fail "something is left in the stash"
  ok
}
restore() { git reset --quiet --hard; }
sound="feedback-resistor: 3k16" broken="feedback-resistor: 31k6"
break_gauge() { set_value "$gauge" "$sound" "$broken"; }
mend_gauge() { set_value "$gauge" "$broken" "$sound"; }

# The first commit of a repository: everything is new.
git add -A
break_gauge
git add -A
refused
says "$gauge:"
says "the closed loop is unstable"
mend_gauge
git add -A
commits

# What cannot be read.
printf 'title: {\n' >shelf/torn.converter.yaml
git add -A
exits 2 env GIT_INDEX_FILE=.git/index .git/hooks/pre-commit
says "shelf/torn.converter.yaml:1:"
refused
git rm --quiet --cached shelf/torn.converter.yaml
rm shelf/torn.converter.yaml

# What concerns no design: the program is not even called.
printf 'Calm.\n' >>notes/log.txt
git add -A
git config halfplane.program "$scratch/no such program"
commits
# What does concern one, and no program.
printf '# looked at\n' >>"$gauge"
git add -A
exits 1 git commit -m work
says "is not on the path"
git config halfplane.program "$scratch/bin/halfplane"
commits

# Only what is staged counts, in either direction.
break_gauge
git add -A
mend_gauge
refused
restore
printf '# looked at again\n' >>"$gauge"
git add -A
break_gauge
commits
restore

# A file that git does not know is not looked at; neither is a design that has nothing to do with the commit.
sed "s/$sound/$broken/" "$gauge" >shelf/draft.converter.yaml
printf '# looked at\n' >>shelf/sonde.converter.yaml
git add shelf/sonde.converter.yaml
commits
silent "draft"
silent "tide-gauge"
rm shelf/draft.converter.yaml

# commit -a, commit FILE with something else staged, commit --amend, from a folder below.
break_gauge
refused -a
mend_gauge
printf '# and again\n' >>"$gauge"
commits -a
break_gauge
git add "$gauge"
printf '# once more\n' >>shelf/sonde.converter.yaml
commits shelf/sonde.converter.yaml
refused
restore
break_gauge
git add -A
refused --amend
restore
(
  cd shelf
  set_value tide-gauge.converter.yaml "$sound" "$broken"
  refused -a
)
says "$gauge:"
restore

# A shared file: those that use it, whatever their names; also when it goes.
set_value "$shared" 7k87 20k
refused -a
says "$beacon"
says 'reef µ "beacon".converter.yaml'
silent "tide-gauge"
restore
git rm --quiet --cached "$shared"
exits 1 git commit -m work
says "$beacon"
restore
set_value "$beacon" "ramp-amplitude: 1.7 V" "ramp-amplitude: 1.71 V"
commits -a
silent "reef"

# A policy, new, moved designs, and one that goes.
cat >shelf/halfplane.yaml <<'POLICY'
format: 1
thresholds: {phase-margin: 80 deg}
POLICY
git add -A
refused
says "$gauge:"
restore
rm -f shelf/halfplane.yaml
git mv "$gauge" "shelf/gauge on the pile.converter.yaml"
set_value "shelf/gauge on the pile.converter.yaml" "$sound" "$broken"
git add -A
refused
says "shelf/gauge on the pile.converter.yaml:"
restore
git rm --quiet shelf/turbine-log.converter.yaml
commits

# A compensator behind a symbolic link, to a file and to a folder.
ln -s "../common parts/beacon.compensator.yaml" shelf/link.compensator.yaml
ln -s "../common parts" shelf/link
set_value "$beacon" "../common parts/beacon" "link"
set_value 'shelf/reef µ "beacon".converter.yaml' "../common parts/beacon" "link/beacon"
git add -A
commits
set_value "$shared" 7k87 20k
refused -a
says "$beacon"
restore
git revert --no-edit HEAD >"$scratch/out"

# Folders with designs: what lies elsewhere is not looked at.
mkdir drafts
sed "s/$sound/$broken/" "$gauge" >drafts/gauge.converter.yaml
git config halfplane.folder shelf
git add -A
commits
git config --add halfplane.folder drafts
printf '# drafted\n' >>drafts/gauge.converter.yaml
refused -a
says "drafts/gauge.converter.yaml"
restore
git config --unset-all halfplane.folder

# The ledger: what is on record passes; a record that goes is missed, though no design has changed.
exits 1 "$scratch/bin/halfplane" check --depth quick drafts
exits 0 "$scratch/bin/halfplane" check --depth quick drafts --ledger halfplane.ledger --ledger-renew=all
git add -A
commits
printf '# drafted\n' >>drafts/gauge.converter.yaml
commits -a
cp halfplane.ledger "$scratch/halfplane.ledger"
grep -v drafts halfplane.ledger >"$scratch/shorter" || true
cp "$scratch/shorter" halfplane.ledger
refused -a
says "drafts/gauge.converter.yaml"
restore
git config halfplane.ledger "no such.ledger"
printf '# drafted\n' >>drafts/gauge.converter.yaml
exits 1 git commit -a -m work
says "there is no ledger 'no such.ledger'"
git config --unset halfplane.ledger
restore

# The environment wins.
break_gauge
HALFPLANE_FAIL_AT=never
export HALFPLANE_FAIL_AT
commits -a
unset HALFPLANE_FAIL_AT
mend_gauge
commits -a

# A gate of one's own, a linked work tree, a merge.
git config halfplane.fail-at never
break_gauge
commits -a
git config --unset halfplane.fail-at
mend_gauge
commits -a
git worktree add --quiet "$scratch/linked tree" -b side
(
  cd "$scratch/linked tree"
  break_gauge
  refused -a
  mend_gauge
  printf '# from the side\n' >>"$gauge"
  commits -a
)
git merge --quiet side
git worktree remove "$scratch/linked tree"
git branch --quiet -d side

# The entries for a hook runner, as they stand in the manifest.
section "the hook runner's entries"
PATH="$scratch/bin:$PATH"
entries=0
sed -n 's/^  entry: //p' "$top/.pre-commit-hooks.yaml" >"$scratch/entries"
while IFS= read -r entry; do
  entries=$((entries + 1))
  exits 0 eval "$entry --depth quick --ledger halfplane.ledger"
  break_gauge
  exits 1 eval "$entry --depth quick --ledger halfplane.ledger"
  says "$gauge:"
  restore
done <"$scratch/entries"
[ "$entries" -eq 2 ] || fail "expected two entries, found $entries"
rm .git/hooks/pre-commit
HALFPLANE=$scratch/bin/halfplane HALFPLANE_DEPTH=quick
export HALFPLANE HALFPLANE_DEPTH
unset TMPDIR
