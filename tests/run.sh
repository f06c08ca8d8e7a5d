#!/bin/sh
# Installs what is missing, builds, and runs every test: once as users get the program, once under
# AddressSanitizer and UndefinedBehaviorSanitizer.
set -eu
cd "$(dirname "$0")/.."
sh .ci/install test
export PYTHONPATH="$PWD/build/python"

configure() { # configure DIRECTORY OPTION...
  directory=$1
  shift
  cmake -S . -B "$directory" -G Ninja -DPython3_EXECUTABLE=/usr/bin/python3 "$@" >"$directory.log" ||
    { cat "$directory.log"; exit 1; }
}

mkdir -p build
configure build/sanitize -DCMAKE_BUILD_TYPE=Debug -DCMAKE_CXX_FLAGS_DEBUG="-O1 -g1" \
  -DCLICKWISE_SANITIZE=ON
ninja -C build/sanitize --quiet
(cd build/sanitize && ASAN_OPTIONS=detect_leaks=1 ctest --output-on-failure -j "$(nproc)" -LE plain_only)

configure build/release -DCMAKE_BUILD_TYPE=Release -DCLICKWISE_TESTS=ON
ninja -C build/release --quiet
(cd build/release && ctest --output-on-failure -j "$(nproc)")
