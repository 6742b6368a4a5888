#!/bin/sh
# Builds and runs every test: sh tests/run.sh
#
# On a bare Debian 12 machine it first installs the packages it lacks. It leaves build/release (as
# examples/run.sh does), build/dev (debug, warnings as errors), build/asan (the same under
# AddressSanitizer and UndefinedBehaviorSanitizer) and, where Clang is installed, build/clang, all of
# which a second run uses again. It ends with a non-zero status when anything fails to build or to
# pass. Tests whose host program (R, Node.js 20, a browser) this machine cannot have are listed at
# the end as not run.
set -eu
cd "$(dirname "$0")/.."

jobs=2

sh tests/packages.sh g++ make cmake dpkg-dev sqlite3 libsqlite3-dev libeigen3-dev libboost-dev \
  nlohmann-json3-dev libgtest-dev libgmock-dev

# Programs that load the extension, or show what it made. Where one cannot be had the rest is tested.
sh tests/packages.sh python3 r-base-core r-cran-rsqlite chromium ||
  echo "Not all host programs are installed; the tests that need them will not run." >&2
# Debian 12's own Node.js is too old, and not worth its packages.
if ! command -v node > /dev/null &&
  apt-cache policy nodejs 2> /dev/null | grep -q 'Candidate: [2-9][0-9]'; then
  sh tests/packages.sh nodejs npm || :
fi
sh tests/node_packages.sh || echo "The tests that need them will not run." >&2

launcher=
if command -v ccache > /dev/null; then launcher=-DCMAKE_CXX_COMPILER_LAUNCHER=ccache; fi

configure() {
  directory=$1
  shift
  echo
  echo "== $directory: configure"
  cmake -S . -B "$directory" -DLADDERLINE_DEVELOPER=ON $launcher "$@"
}

# Light optimisation keeps asserts and line numbers, and the longer tests short.
debug="-DCMAKE_BUILD_TYPE=Debug -DCMAKE_CXX_FLAGS=-O1"

failed=0
passed=0
skipped=0
not_run=build/not_run.txt
mkdir -p build
: > "$not_run"
run_tests() {
  directory=$1
  log=$directory/test.log
  echo
  echo "== $directory: build"
  cmake --build "$directory" -j "$jobs"
  echo
  echo "== $directory: test"
  # A pipe would hide ctest's status.
  status=0
  ctest --test-dir "$directory" -j "$jobs" --timeout 900 --output-on-failure > "$log" 2>&1 ||
    status=$?
  cat "$log"
  bad=$(sed -n 's/.*tests passed, \([0-9]*\) tests failed out of [0-9]*.*/\1/p' "$log")
  all=$(sed -n 's/.*tests passed, [0-9]* tests failed out of \([0-9]*\).*/\1/p' "$log")
  if [ -z "$all" ] || [ "$all" -eq 0 ]; then
    echo "$directory: no test ran" >&2
    exit 1
  fi
  if [ "$status" -ne 0 ] && [ "$bad" -eq 0 ]; then bad=1; fi
  # ctest counts a test that did not run as passed, and keeps what it printed in a log of its own.
  missed=$(grep -c '(Skipped)$' "$log") || :
  awk -v where="$directory" '
    / Test: / { name = $3 }
    sub(/^not run: /, "") { print "  " name " in " where ": " $0 }
  ' "$directory/Testing/Temporary/LastTest.log" >> "$not_run"
  failed=$((failed + bad))
  skipped=$((skipped + missed))
  passed=$((passed + all - bad - missed))
}

if command -v clang++ > /dev/null; then
  configure build/clang -DCMAKE_CXX_COMPILER=clang++ -DCMAKE_BUILD_TYPE=Debug
  echo
  echo "== build/clang: build only (a second compiler's warnings)"
  cmake --build build/clang -j "$jobs" --target ladderline ladderline_static
fi

echo
echo "== build/release: what the tests of installing use"
cmake -S . -B build/release
cmake --build build/release -j "$jobs"

configure build/dev $debug
run_tests build/dev

configure build/asan $debug -DLADDERLINE_SANITIZE=ON
run_tests build/asan

echo
if [ "$skipped" -ne 0 ]; then
  echo "Not run:"
  cat "$not_run"
fi
echo "$passed passed, $failed failed, $skipped skipped"
[ "$failed" -eq 0 ]
