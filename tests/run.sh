#!/usr/bin/env bash
# Installs what is missing, builds with warnings as errors and runs every test.
set -euo pipefail
cd "$(dirname "$0")/.."

echo "1/4 Packages"
bash .ci/packages.sh build test
echo "2/4 Rules of the tree: format, which room includes which, every public header alone"
bash tests/rules.sh
echo "3/4 Build (preset test, build/test)"
cmake --preset test >/dev/null
cmake --build --preset test
echo "4/4 Tests"
ctest --preset test --parallel "$(nproc)"
