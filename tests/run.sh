#!/usr/bin/env bash
# Installs what is missing, builds the dev preset (assertions on, warnings as errors) and runs every test.
# Usage: bash tests/run.sh [--no-install] [further words for ctest, e.g. -R review]
set -euo pipefail
root=$(cd "$(dirname "${BASH_SOURCE[0]}")/.." && pwd)
install=yes
if [ "${1:-}" = --no-install ]; then
  install=no
  shift
fi

step() { printf '\n== %s\n' "$*"; }

if [ "$install" = yes ]; then
  step "Packages"
  bash "$root/.ci/install" build test
fi

cd "$root"
launcher=()
if command -v ccache >/dev/null; then launcher=(-DCMAKE_CXX_COMPILER_LAUNCHER=ccache); fi

step "Configure: cmake --preset dev"
cmake --preset dev "${launcher[@]}" >/dev/null

step "Build: cmake --build --preset dev"
cmake --build --preset dev

step "Test: ctest --preset dev $*"
start=$(date +%s)
status=0
ctest --preset dev "$@" || status=$?
step "Summary"
if [ "$status" -eq 0 ]; then
  echo "All tests passed in $(($(date +%s) - start)) s."
else
  echo "Some tests failed: see above, and build/dev/Testing/Temporary/LastTest.log." >&2
fi
exit "$status"
