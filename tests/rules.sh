#!/usr/bin/env bash
# Rules of the tree that no compiler checks: format, who may include whom, public headers that stand alone.
set -euo pipefail
cd "$(dirname "$0")/.."
failures=0
fail() {
  echo "$1" >&2
  failures=$((failures + 1))
}

sources() { find lib tools tests samples -name '*.cpp' -o -name '*.hpp' | sort; }

# Format.
while read -r file; do
  clang-format --dry-run --Werror "$file" 2>/dev/null || fail "$file: not formatted by .clang-format"
done < <(sources)

# Arrows: room -> rooms whose private headers it may include. Public headers are open to all.
declare -A may=(
  [base]="base" [bessel]="base bessel" [fourier]="base fourier" [disk]="base bessel fourier disk"
  [study]="base fourier disk study" [files]="base files" [report]="base files report"
)
for room in "${!may[@]}"; do
  while IFS=: read -r file included; do
    case " ${may[$room]} " in
      *" $included "*) ;;
      *) fail "$file: room $room may not include room $included" ;;
    esac
  done < <(grep -roP '#include "\K(base|bessel|fourier|disk|study|files|report|radial)(?=/)' "lib/src/$room" || true)
done
if grep -rlP '#include "(base|bessel|fourier|disk|study|files|report|radial)/' tools; then
  fail "tools may include public headers and tools/common only"
fi

# Third parties stay in their rooms.
keep() {
  local what=$1 pattern=$2 allowed=$3
  while read -r file; do
    [[ $file =~ ^lib/src/($allowed)/ ]] || fail "$file: $what belongs to: $allowed"
  done < <(grep -rlP "#include <($pattern)" lib/src || true)
}
keep Boost 'boost/' 'bessel'
keep FFTW 'fftw3' 'fourier'
keep Eigen 'Eigen/' 'disk|study'
keep OpenCV 'opencv2/' 'files'
keep libtiff 'tiff' 'files'
keep HDF5 'H5|hdf5' 'files'
keep OpenSSL 'openssl/' 'files'

# Public headers: the standard library and each other only, and each compiles alone.
scratch=$(mktemp -d)
trap 'rm -rf "$scratch"' EXIT
for header in lib/include/tambour/*.hpp; do
  name=$(basename "$header")
  [ "$name" = opencv.hpp ] && continue
  if grep -P '#include ("(?!tambour/)|<.*[/.].*>)' "$header"; then
    fail "$header: a public header includes the standard library and public headers only"
  fi
  echo "#include \"tambour/$name\"" >"$scratch/alone.cpp"
  g++ -std=c++20 -fsyntax-only -Ilib/include "$scratch/alone.cpp" || fail "$header: does not compile alone"
done

if [ "$failures" -gt 0 ]; then
  echo "$failures rule(s) broken" >&2
  exit 1
fi
echo "All rules hold."
