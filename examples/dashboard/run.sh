#!/bin/sh
# The dashboard example: sh examples/dashboard/run.sh [PORT]
#
# Needs Node.js 20 or newer with npm, and what `sh examples/run.sh` leaves. Leaves
# examples/out/dashboard.db, a copy of the demo database with models kept, and serves it on this
# machine alone until you press Ctrl-C.
set -eu
cd "$(dirname "$0")/../.."

for file in examples/out/repairs.db build/release/ladderline.so; do
  [ -f "$file" ] || { echo "$file is missing: run sh examples/run.sh first" >&2; exit 1; }
done
sh tests/node_packages.sh examples
cp examples/out/repairs.db examples/out/dashboard.db
sqlite3 -batch -bail -cmd '.load build/release/ladderline' examples/out/dashboard.db \
  '.read sql/keep_models.sql' '.read examples/dashboard/prepare.sql'
exec node examples/dashboard/server.mjs examples/out/dashboard.db build/release/ladderline "${1:-8017}"
