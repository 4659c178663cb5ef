#!/usr/bin/env bash
# Installs what is missing, builds the program and runs the main job on the demo town: import, draft, review, sheets, comparison.
# Usage: bash examples/run.sh [--no-install] [--output DIR]
set -euo pipefail
root=$(cd "$(dirname "${BASH_SOURCE[0]}")/.." && pwd)
install=yes
out=$root/out
while [ $# -gt 0 ]; do
  case "$1" in
    --no-install) install=no ;;
    --output)
      out=${2:?--output needs a folder}
      shift
      ;;
    *)
      echo "usage: bash examples/run.sh [--no-install] [--output DIR]" >&2
      exit 2
      ;;
  esac
  shift
done

step() { printf '\n== %s\n' "$*"; }
run() {
  printf '\n$ entrain %s\n' "$*"
  "$entrain" "$@"
}

if [ "$install" = yes ]; then
  step "Packages"
  bash "$root/.ci/install" build
fi

cd "$root"
launcher=()
if command -v ccache >/dev/null; then launcher=(-DCMAKE_CXX_COMPILER_LAUNCHER=ccache); fi
step "Configure: cmake --preset release"
cmake --preset release "${launcher[@]}" >/dev/null
step "Build: cmake --build --preset release"
cmake --build --preset release --target entrain
entrain=$root/build/release/bin/entrain

project=examples/ostrelby
plans=$out/ostrelby
mkdir -p "$plans"

step "1. Import: from roads and tables to a network"
run import "$project" -o "$plans/network.gpkg"

step "2. Draft: a coordinated plan for the morning and the evening, with sheets"
run draft "$project" -o "$plans"

step "3. Review: the plans checked by other code than made them"
run review "$plans/am/plan.json"
run review "$plans/pm/plan.json"

step "4. Sheets: both periods on one set of timing sheets"
run sheet "$plans/am/plan.json" "$plans/pm/plan.json" -o "$plans/sheets"

step "5. Compare: a complete plan for each cycle length"
run compare "$project" --cycles 80:120:5 -o "$plans/compare"

step "Done"
echo "Open these in a browser (no network needed):"
find "$plans" -name '*.html' | LC_ALL=C sort | sed 's/^/  /'
cat <<END
Plans:              $plans/am/plan.json and $plans/pm/plan.json
The network in GIS: $plans/network.gpkg
Everything here is a draft for engineering review: local standards and law come first, a licensed engineer signs.
END
