#!/usr/bin/env bash
# Installs what the given purposes need on Debian 12, as root or through sudo, and says so. Purposes: build, test.
set -euo pipefail

declare -A packages=(
  [build]="g++ cmake ninja-build pkg-config libfftw3-dev libopencv-core-dev libopencv-imgcodecs-dev libboost-math-dev
           libeigen3-dev libhdf5-dev libtiff-dev libssl-dev libfmt-dev nlohmann-json3-dev libcli11-dev libjs-chart.js"
  [test]="libgtest-dev python3 python3-numpy python3-scipy python3-h5py python3-mrcfile python3-tifffile python3-skimage
          clang-format"
)

missing=()
for purpose in "$@"; do
  for package in ${packages[$purpose]}; do
    if [ "$(dpkg-query -W -f='${Status}' "$package" 2>/dev/null)" != "install ok installed" ]; then
      missing+=("$package")
    fi
  done
done
if [ "${#missing[@]}" -eq 0 ]; then
  echo "All packages for: $* are installed."
  exit 0
fi

become=()
if [ "$(id -u)" -ne 0 ]; then
  if ! command -v sudo >/dev/null; then
    echo "These packages are missing, and neither root rights nor sudo are here to install them: ${missing[*]}" >&2
    exit 1
  fi
  become=(sudo)
fi
echo "Installing: ${missing[*]}"
log=$(mktemp)
trap 'rm -f "$log"' EXIT
if ! { "${become[@]}" apt-get update && "${become[@]}" env DEBIAN_FRONTEND=noninteractive \
       apt-get install -y --no-install-recommends "${missing[@]}"; } >"$log" 2>&1; then
  tail -n 20 "$log" >&2
  echo "The packages could not be installed." >&2
  exit 1
fi
