# review.sh compares with the commit at which the branches parted, and reports without judging.
# shellcheck shell=sh disable=SC2154,SC2103,SC2164 # read by ../test.sh
section "the review"
review() { HALFPLANE_REPORTS="$scratch/review" sh "$ci/review.sh" "$@"; }
page="$scratch/review/review.md"
git checkout --quiet -b stiffer
set_value "$shared" 7k87 20k
git commit --quiet -am "A stiffer loop for the beacons"
git checkout --quiet main
printf '# meanwhile\n' >>"$gauge"
git commit --quiet -am "Meanwhile"
git checkout --quiet stiffer
exits 0 review main
there "$page"
cp "$page" "$scratch/out"
says "harbour beacon"
says "**fell**"
says "feedback-resistor 7k87"
silent "tide-gauge"
exits 0 review main drafts
silent "harbour beacon"
# A design that cannot be compared is said, and the report is there.
set_value "$shared" "20k ± 1 %" "20 uF"
git commit --quiet -am "A slip"
exits 0 review main
cp "$page" "$scratch/out"
says "harbour beacon"
exits 2 review "no such branch"
says "no such branch"
[ ! -e "$page" ] || fail "an old report stays"
# A shallow clone has no common commit.
git clone --quiet --depth 1 --no-single-branch "file://$repository" "$scratch/shallow"
cd "$scratch/shallow"
exits 2 review origin/main
says "not a shallow clone"
cd "$repository"
# A branch that brings the first designs.
git checkout --quiet --orphan empty
git rm --quiet -r --cached .
git clean --quiet -fd
printf 'soundings\n' >README
git add README
git commit --quiet -m "No designs yet"
git checkout --quiet -b first-designs
git checkout --quiet main -- .
git commit --quiet -m "Designs"
exits 0 review empty
there "$page"
grep -q "harbour beacon" "$page" || fail "the new designs are not in the report"
git checkout --quiet main
