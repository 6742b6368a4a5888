#!/bin/sh
# Installs the npm packages that the Node.js examples and tests use:
# sh tests/node_packages.sh [examples|tests]
#
# Needs Node.js 20 or newer with npm. Leaves examples/node_modules and tests/node_modules, as the
# lock files there say; a second run finds them in place. better-sqlite3 is compiled here, once for
# the examples and the tests, where Node.js has its headers beside it. Ends with status 1, and one
# line that says why, when it cannot: the tests that need these packages then do not run.
set -eu
cd "$(dirname "$0")/.."

fail() {
  echo "The Node.js packages are not installed: $1" >&2
  exit 1
}

command -v node > /dev/null || fail "there is no Node.js"
version=$(node --version)
major=${version#v}
[ "${major%%.*}" -ge 20 ] || fail "Node.js $version is older than 20"
command -v npm > /dev/null || fail "there is no npm"

# npm's own name for compiling rather than looking for a ready-made binary.
headers=$(dirname "$(dirname "$(readlink -f "$(command -v node)")")")
if [ -f "$headers/include/node/node.h" ]; then
  export npm_config_build_from_source=true npm_config_nodedir="$headers"
  if command -v ccache > /dev/null; then export CC="ccache cc" CXX="ccache c++"; fi
fi

for directory in ${*:-examples tests}; do
  stamp=$directory/node_modules/.ladderline
  wanted="$version $(cksum < "$directory/package-lock.json")"
  if [ -f "$stamp" ] && [ "$(cat "$stamp")" = "$wanted" ]; then continue; fi
  echo "Installing with npm: $directory/package-lock.json"
  (cd "$directory" && npm ci --no-audit --no-fund) || fail "npm ci failed in $directory"
  echo "$wanted" > "$stamp"
done
