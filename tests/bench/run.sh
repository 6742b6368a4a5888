#!/bin/sh
# Measures speed and memory, as ratios to SQLite's own functions: sh tests/bench/run.sh [--large]
#
# --large adds 10,000,000 rows (about 1 GB in build/bench). Leaves build/bench. Nothing is asserted:
# figures under load or on a shared machine wander by 5% and more.
set -eu
cd "$(dirname "$0")/../.."
mkdir -p build
cmake -S . -B build/bench -DCMAKE_BUILD_TYPE=Release -DLADDERLINE_BENCH=ON
cmake --build build/bench -j 2 --target ladderline_bench
exec build/bench/tests/bench/ladderline_bench build/bench "$@"
