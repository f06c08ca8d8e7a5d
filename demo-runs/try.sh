#!/bin/sh
# Installs what is missing, builds clickwise, rides the first demo and reviews it.
set -eu
cd "$(dirname "$0")/.."
root=$PWD
sh .ci/install build
mkdir -p build
[ -f build/release/build.ninja ] ||
  cmake -S . -B build/release -G Ninja -DCMAKE_BUILD_TYPE=Release -DCLICKWISE_TESTS=OFF >build/release.log ||
  { cat build/release.log; exit 1; }
echo "building clickwise (a few minutes the first time) ..."
ninja -C build/release --quiet clickwise
demo=build/demo/practice-run
mkdir -p "$demo"
build/release/clickwise simulate demo-runs/practice-run/scene.toml -o "$demo"
echo
build/release/clickwise review "$demo/log.csv" --bike "$demo/bike.toml" -o "$demo/report"
echo
echo "the report: $root/$demo/report/review.html"
