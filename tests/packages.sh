#!/bin/sh
# Installs the Debian packages named as arguments that are not there yet; says what it does.
# Needs apt, and root or sudo only when something is missing. On a system without dpkg it only
# names what it would have looked for.
set -eu

if ! command -v dpkg-query > /dev/null; then
  echo "This is no Debian system; it must have the equivalents of: $*"
  exit 0
fi

missing=
for package in "$@"; do
  status=$(dpkg-query -W -f='${Status}' "$package" 2> /dev/null) || status=
  [ "$status" = "install ok installed" ] || missing="$missing $package"
done
[ -n "$missing" ] || exit 0

as_root=
if [ "$(id -u)" -ne 0 ]; then
  if ! command -v sudo > /dev/null; then
    echo "Missing packages:$missing. Install them as root, then run this again." >&2
    exit 1
  fi
  as_root=sudo
fi
echo "Installing with apt:$missing"
$as_root apt-get update -q
# $missing holds several words on purpose.
$as_root env DEBIAN_FRONTEND=noninteractive apt-get install -q -y --no-install-recommends $missing
