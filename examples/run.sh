#!/bin/sh
# The whole job on a made-up county housing-repair office: sh examples/run.sh
#
# On a bare Debian 12 machine it first installs the packages it lacks. It leaves the extension in
# build/release, and the demo database and a page about it in examples/out, made anew on each run. A
# demo database that was changed since it was made is kept beside it under another name.
set -eu
cd "$(dirname "$0")/.."

sh tests/packages.sh g++ make cmake sqlite3 libsqlite3-dev libeigen3-dev libboost-dev \
  nlohmann-json3-dev

cmake -S . -B build/release
cmake --build build/release -j 2

database=examples/out/repairs.db
mkdir -p examples/out
made=$database.sha256  # of the database as this script left it
if [ -e "$database" ] && { [ -s "$database-wal" ] || ! sha256sum --status -c "$made" 2> /dev/null; }; then
  before=$database.before-$(date +%Y%m%d-%H%M%S)
  sqlite3 -bail "$database" ".backup '$before'"
  echo "The demo database was changed since it was made. It is kept as $before"
fi
rm -f "$database" "$database-wal" "$database-shm" "$made"
sqlite3 -batch -bail "$database" < examples/make_database.sql

for part in examples/[0-9]*.sql; do
  echo
  echo "== $part"
  sqlite3 -batch -bail -cmd '.load build/release/ladderline' -cmd '.mode box' "$database" < "$part"
done

echo
echo "== sql/page.sql"
(cd examples/out && sqlite3 -batch -bail -readonly -cmd '.load ../../build/release/ladderline' repairs.db \
  < ../../sql/page.sql)

sha256sum "$database" > "$made"
echo
[ -z "${before:-}" ] || echo "Your changed database of before: $before"
echo "To go on from here: sqlite3 -cmd '.load build/release/ladderline' $database"
echo "The page to look at: examples/out/models_and_rates.html"
