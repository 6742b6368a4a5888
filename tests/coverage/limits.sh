#!/bin/sh
# Counts how often 95% limits of a fit hold the truth where the spread is uneven and where rows come
# in clusters: sh tests/coverage/limits.sh
#
# 10,000 draws each: some seconds. Leaves build/bench. Nothing is asserted; the aims are 93 to 97%
# for hc3 and cluster errors.
set -eu
cd "$(dirname "$0")/../.."
mkdir -p build
cmake -S . -B build/bench -DCMAKE_BUILD_TYPE=Release -DLADDERLINE_BENCH=ON
cmake --build build/bench -j 2 --target ladderline_limits
exec build/bench/tests/coverage/ladderline_limits
