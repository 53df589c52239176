#!/usr/bin/env bash
# The whole job on an invented preparation: installs what is missing, builds, makes a stack, surveys it, compares with
# the truth. With TAMBOUR_BIN set to a folder of built tools, the first two steps are left out.
#
# Scenario: a facility screens a preparation of a ring-shaped pore complex that comes 12-fold and 13-fold, with some
# broken rings. 400 images of 96 x 96 px, noise at SNR 0.5, centres off by up to 2 px.
set -euo pipefail
here=$(cd "$(dirname "$0")/.." && pwd)
out=${1:-quickstart-output}

if [ -z "${TAMBOUR_BIN:-}" ]; then
  echo "1/4 Packages"
  bash "$here/.ci/packages.sh" build
  echo "2/4 Build (preset release, build/release); some minutes the first time"
  (cd "$here" && cmake --preset release >/dev/null && cmake --build --preset release)
  TAMBOUR_BIN=$here/build/release/bin
fi

echo "3/4 An invented stack with known truth: $out/pores.mrc, $out/truth.csv"
mkdir -p "$out"
"$TAMBOUR_BIN/tambour-phantom" -o "$out/pores.mrc" --truth "$out/truth.csv" --images 400 --size 96 --radius 40 \
  --mix ring:12=0.45,ring:13=0.4,broken:12=0.15 --snr 0.5 --centre-spread 2 --pixel-size 4.2 --unit angstrom \
  --seed 12 --force

echo "4/4 Survey: $out/survey"
"$TAMBOUR_BIN/tambour-survey" "$out/pores.mrc" -o "$out/survey" \
  --title "Pore complex, screening of one preparation" --force

# What the survey says of each kind that the truth knows.
awk -F, '
  /^#/ { next }
  !(FILENAME in seen) { seen[FILENAME]; for (i = 1; i <= NF; ++i) column[FILENAME, $i] = i; next }
  FILENAME == ARGV[1] { kind[$1] = $column[FILENAME, "kind"]; next }
  {
    said = $column[FILENAME, "verdict"]
    if (said == "best_supported") said = $column[FILENAME, "fold"] "-fold"
    if (said ~ /-fold$/ && said != "12-fold" && said != "13-fold") said = "other fold"
    ++count[kind[$1], said]
    ++total[kind[$1]]
  }
  END {
    printf "\n%-12s %8s %10s %10s %12s %14s %9s\n", "truth", "images", "12-fold", "13-fold", "other fold",
           "inconclusive", "skipped"
    fflush()
    for (k in total)
      printf "%-12s %8d %10d %10d %12d %14d %9d\n", k, total[k], count[k, "12-fold"], count[k, "13-fold"],
             count[k, "other fold"], count[k, "inconclusive"], count[k, "skipped"] | "sort"
  }' "$out/truth.csv" "$out/survey/images.csv"
echo
echo "Report: $out/survey/report.html"
