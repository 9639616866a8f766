# install.sh builds, keeps what was built of the same revision, and builds anew for another one or a changed tree.
# shellcheck shell=sh disable=SC2154,SC2103 # read by ../test.sh
section "install.sh"
tool="$scratch/tool"
mkdir -p "$tool/integrations" "$scratch/fake"
cp -R "$top/integrations/ci" "$tool/integrations/"
printf '/bin/\n' >"$tool/.gitignore"
cat >"$scratch/fake/go" <<'FAKE'
#!/bin/sh
# go build -o FILE ./cmd/halfplane
printf '#!/bin/sh\nexit 0\n' >"$3"
chmod +x "$3"
FAKE
chmod +x "$scratch/fake/go"
install_tool() { PATH="$scratch/fake:$PATH" sh "$tool/integrations/ci/install.sh" "$@"; }
git init --quiet "$tool"
git -C "$tool" add -A
git -C "$tool" commit --quiet -m first
exits 0 install_tool
says "built $tool/bin/halfplane"
exits 0 install_tool
says "already"
git -C "$tool" commit --quiet --allow-empty -m second
exits 0 install_tool
silent "already"
printf 'changed\n' >>"$tool/.gitignore"
exits 0 install_tool
silent "already"
exits 0 install_tool "$scratch/elsewhere"
there "$scratch/elsewhere/halfplane"

# And once in earnest, unless there is a program.
if [ -z "$HALFPLANE" ]; then
  exits 0 sh "$top/integrations/ci/install.sh" "$scratch/bin"
else
  mkdir "$scratch/bin"
  cp "$HALFPLANE" "$scratch/bin/halfplane"
fi
HALFPLANE=$scratch/bin/halfplane
export HALFPLANE
exits 0 "$HALFPLANE" --version
says "halfplane"
