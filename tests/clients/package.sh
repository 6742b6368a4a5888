#!/bin/sh
# The Debian package, in a root of its own: sh package.sh BUILD FOLDER
#
# BUILD is an up-to-date release build. The root holds the files of the packages that ours depends
# on, the shell with the libraries it is linked to, and what a package's scripts use; nothing else.
set -eu

build=$1
root=$(cd "$(dirname "$0")/../.." && pwd)
work=$(mktemp -d)
trap 'rm -rf "$work"' EXIT

not_run() {
  echo "not run: $1"
  exit 77
}

fail() {
  echo "$1"
  exit 1
}

command -v dpkg-shlibdeps > /dev/null || not_run "there is no dpkg-dev"
[ "$(id -u)" -eq 0 ] || not_run "only root can install in a root of its own"
if [ ! -f "$build/ladderline.so" ] ||
  [ -n "$(find "$root/core" "$root/ext" -name '*.[ch]*' -newer "$build/ladderline.so")" ]; then
  not_run "build/release is missing or older than the sources (sh examples/run.sh)"
fi

(cd "$build" && cpack -G DEB -B "$work/packages") > "$work/log" 2>&1 || { cat "$work/log"; exit 1; }
package=$(find "$work/packages" -maxdepth 1 -name '*.deb')
depends=$(dpkg-deb -f "$package" Depends)
echo "depends on $depends"
case $depends in
  *libstdc++6*) ;;
  *) fail "it should depend on the C++ library" ;;
esac
case $depends in
  *-dev*) fail "it should depend on no development package" ;;
esac
[ -n "$(dpkg-deb -f "$package" Description)" ] || fail "it has no description"

# The root.
bare=$work/root
mkdir -p "$bare/usr/bin" "$bare/usr/sbin" "$bare/usr/lib" "$bare/usr/lib64" "$bare/etc" "$bare/tmp" \
  "$bare/var/lib/dpkg/info" "$bare/var/lib/dpkg/updates" "$bare/var/log" "$bare/var/cache/ldconfig"
for directory in bin sbin lib lib64; do ln -s "usr/$directory" "$bare/$directory"; done
cp /var/lib/dpkg/info/format "$bare/var/lib/dpkg/info/"
copy() {  # file names on standard input
  tar -C / --no-recursion -cf - -T - 2> /dev/null | tar -C "$bare" --keep-directory-symlink -xf -
}
architecture=$(dpkg --print-architecture)
for name in $(echo "$depends" | sed 's/([^)]*)//g; s/,/ /g'); do
  dpkg-query -s "$name:$architecture" >> "$bare/var/lib/dpkg/status"
  echo >> "$bare/var/lib/dpkg/status"
  dpkg-query -L "$name:$architecture" | tee "$bare/var/lib/dpkg/info/$name:$architecture.list" | copy
done
{
  printf '%s\n' /usr/bin/sqlite3 /bin/sh /bin/dash /sbin/ldconfig /etc/ld.so.conf
  find /etc/ld.so.conf.d -type f
  ldd /usr/bin/sqlite3 /bin/sh | sed -n 's/.* \(\/[^ ]*\) (.*/\1/p' | while read -r file; do
    echo "$file"
    readlink -f "$file"
  done
} | sort -u | copy
chroot "$bare" /sbin/ldconfig

shell() {
  chroot "$bare" /usr/bin/sqlite3 -batch -bail :memory: "$@"
}
shell "SELECT 'the shell runs'"
files() {
  (cd "$bare" && find . ! -path './var/lib/dpkg/*' ! -path './var/log/*' | sort)
}
files > "$work/before"
if shell ".load ladderline" 2> /dev/null; then fail "the module is there before the package"; fi

dpkg --root="$bare" -i "$package" > "$work/log" 2>&1 || { cat "$work/log"; exit 1; }
for directory in / /tmp; do
  answer=$(shell ".cd $directory" ".load ladderline" \
    "SELECT ladderline_version(), log_offset(0, 1) = 0 AND fact(shape_summary(value), 'rows') = 3
     FROM (SELECT 1 AS value UNION ALL SELECT 2 UNION ALL SELECT 4)")
  echo "from $directory: $answer"
  case $answer in
    *'|1') ;;
    *) fail "the module does not answer" ;;
  esac
done
shell ".load ladderline" ".read /usr/share/ladderline/keep_models.sql" \
  "CREATE VIEW model_source AS SELECT 'thin' AS name, ols_model('y', 1, 'x', 2) AS model" \
  "INSERT INTO model_refresh DEFAULT VALUES" "SELECT name, status, reason FROM published_model" |
  grep '^thin|refused|' || fail "the scripts do not run from where they are installed"
grep -q '^MIT License' "$bare/usr/share/doc/ladderline/copyright" || fail "it has no licence"

dpkg --root="$bare" -P ladderline > "$work/log" 2>&1 || { cat "$work/log"; exit 1; }
files > "$work/after"
diff "$work/before" "$work/after" || fail "removing it leaves or takes the files above"
if ls "$bare/var/lib/dpkg/info/" | grep ladderline; then fail "dpkg still knows it"; fi
if shell ".load ladderline" 2> /dev/null; then fail "the module is still there"; fi
