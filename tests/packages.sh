# SPDX-License-Identifier: Apache-2.0
# The Debian packages that sunder needs, in one place; sourced by tests/run and examples/run.
# shellcheck shell=bash disable=SC2034

# What the program is built from, and what it draws charts with.
program_packages=(
  g++ cmake ninja-build
  libeigen3-dev libboost-dev libboost-iostreams-dev libboost-system-dev libboost-filesystem-dev
  libfmt-dev nlohmann-json3-dev libtomlplusplus-dev libcli11-dev libgnuplot-iostream-dev
  gnuplot-nox fonts-dejavu-core
)
# What the tests need besides: the test framework, random properties, the circuit simulator that
# solves the reference networks.
test_packages=(catch2 librapidcheck-dev ngspice)
# What the benchmarks (preset "bench") need besides. Nothing here installs them.
bench_packages=(libbenchmark-dev)

# install_missing PURPOSE PACKAGE... : installs what is not there yet, and says so. When nothing is
# missing it asks nobody and changes nothing.
install_missing() {
  local purpose=$1 package
  shift
  local missing=() elevate=()
  for package in "$@"; do
    if [[ $(dpkg-query -W -f '${db:Status-Status}' "$package" 2>/dev/null) != installed ]]; then
      missing+=("$package")
    fi
  done
  if ((${#missing[@]} == 0)); then return 0; fi
  echo "Installing what is missing to $purpose: ${missing[*]}"
  if ((EUID != 0)); then
    if ! command -v sudo >/dev/null; then
      echo "These packages are missing and only root may install them (sudo is not there either):" >&2
      echo "  apt-get install ${missing[*]}" >&2
      return 1
    fi
    elevate=(sudo)
  fi
  "${elevate[@]}" apt-get update
  "${elevate[@]}" env DEBIAN_FRONTEND=noninteractive \
    apt-get install --yes --no-install-recommends "${missing[@]}"
}

# configure PRESET [CMAKE ARGUMENT...] : a second time this only looks for changes. The compiler
# cache is used where it is installed, and never required.
configure() {
  local preset=$1 launcher=""
  shift
  if command -v ccache >/dev/null; then launcher=ccache; fi
  cmake --preset "$preset" -DCMAKE_CXX_COMPILER_LAUNCHER="$launcher" "$@"
}
