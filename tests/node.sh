#!/bin/sh
# Runs one test in Node.js: sh tests/node.sh SCRIPT [ARGUMENT …]
#
# Needs what tests/node_packages.sh installs. Where that is missing it prints "not run: " and the
# reason, and ends with status 77, which ctest reports as skipped and tests/run.sh by name.
set -eu

not_run() {
  echo "not run: $1"
  exit 77
}

command -v node > /dev/null || not_run "there is no Node.js"
version=$(node --version)
major=${version#v}
[ "${major%%.*}" -ge 20 ] || not_run "Node.js $version is older than 20"
root=$(dirname "$0")/..
for directory in examples tests; do
  stamp=$root/$directory/node_modules/.ladderline
  [ -f "$stamp" ] && [ "$(cat "$stamp")" = "$version $(cksum < "$root/$directory/package-lock.json")" ] ||
    not_run "the Node.js packages are not installed (sh tests/node_packages.sh)"
done
exec node "$@"
