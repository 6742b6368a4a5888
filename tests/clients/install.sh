#!/bin/sh
# cmake --install into a clean prefix, and a program that finds it there:
# sh install.sh BUILD FOLDER
#
# BUILD is an up-to-date release build; FOLDER has the demo database and what the shell's example
# printed (host.sh shell).
set -eu

build=$1 folder=$2
root=$(cd "$(dirname "$0")/../.." && pwd)
work=$(mktemp -d)
trap 'rm -rf "$work"' EXIT

if [ ! -f "$build/ladderline.so" ] ||
  [ -n "$(find "$root/core" "$root/ext" -name '*.[ch]*' -newer "$build/ladderline.so")" ]; then
  echo "not run: build/release is missing or older than the sources (sh examples/run.sh)"
  exit 77
fi

cmake --install "$build" --prefix "$work/prefix" > "$work/log"
(cd "$work/prefix" && find . -type f | sed 's|/lib/[a-z0-9_]*-linux-gnu[a-z0-9]*/|/lib/|' | sort) \
  > "$work/files"
for file in ./lib/ladderline.so ./lib/libladderline.a ./lib/libladderline_core.a \
  ./include/ladderline.h ./lib/cmake/Ladderline/LadderlineConfig.cmake \
  ./lib/cmake/Ladderline/LadderlineConfigVersion.cmake ./share/doc/ladderline/copyright \
  ./share/ladderline/keep_models.sql; do
  grep -qx "$file" "$work/files" || { echo "not installed: $file"; cat "$work/files"; exit 1; }
done
# Nothing installed may lead back to this machine's sources or builds.
if grep -rl -e "$root" -e "$build" "$work/prefix"; then
  echo "the files above name the place they were built in"
  exit 1
fi

# The example's project, with the libraries that only our own sources need out of its reach.
cmake -S "$root/examples/hosts/application" -B "$work/application" \
  -DCMAKE_PREFIX_PATH="$work/prefix" -DCMAKE_BUILD_TYPE=Release \
  -DCMAKE_DISABLE_FIND_PACKAGE_Eigen3=ON -DCMAKE_DISABLE_FIND_PACKAGE_Boost=ON \
  -DCMAKE_DISABLE_FIND_PACKAGE_nlohmann_json=ON > "$work/log"
cmake --build "$work/application" > "$work/log" || { cat "$work/log"; exit 1; }
"$work/application/application" "$folder/repairs.db" > "$work/application.txt"
diff "$folder/shell.example.txt" "$work/application.txt"

# The installed module, and to the last bit what the module under test says.
module=$(find "$work/prefix" -name ladderline.so)
sqlite3 -batch -bail -readonly -cmd ".load '$module'" \
  -cmd ".read '$root/tests/clients/main_job.sql'" "$folder/repairs.db" "SELECT line FROM told ORDER BY rowid" > "$work/installed.txt"
diff "$folder/shell.txt" "$work/installed.txt" | cut -c 1-200 | head -n 20 > "$work/differences"
cat "$work/differences"
[ ! -s "$work/differences" ]
