#!/bin/sh
# The main job and the example of one host, against those of the sqlite3 shell:
# sh host.sh HOST MODULE FOLDER [LINKED_APPLICATION EXAMPLE]
#
# HOST is shell, python, node, r or linked. `shell` comes first: it makes the demo database in
# FOLDER and leaves what the shell told there, for the others to compare with. Lines of part `host`
# show the host's own functions and may differ; every other line must be the same to the last bit.
# Where the host is missing or too old it prints "not run: " and the reason, with status 77.
set -eu

host=$1 module=$2 folder=$3
tests=$(cd "$(dirname "$0")" && pwd)
root=$tests/../..
database=$folder/repairs.db
script=$tests/main_job.sql
examples=$root/examples/hosts

not_run() {
  echo "not run: $1"
  exit 77
}

case $host in
  shell)
    mkdir -p "$folder"
    rm -rf "$folder"/*
    sqlite3 -batch -bail "$database" < "$root/examples/make_database.sql"
    job() {
      sqlite3 -batch -bail -readonly -cmd ".load '$module'" -cmd ".read '$script'" "$database" \
        "SELECT line FROM told ORDER BY rowid"
    }
    example() { sh "$examples/shell.sh" "$@"; } ;;
  python)
    python=/usr/bin/python3  # Debian's; others may lack extension loading
    [ -x $python ] || python=$(command -v python3) || not_run "there is no Python"
    job() { $python "$tests/run_script.py" "$database" "$module" "$script"; }
    example() { $python "$examples/python.py" "$@"; } ;;
  node)
    job() { sh "$root/tests/node.sh" "$tests/run_script.mjs" "$database" "$module" "$script"; }
    example() { node "$examples/node.mjs" "$@"; } ;;
  r)
    command -v Rscript > /dev/null || not_run "there is no R"
    job() { Rscript "$tests/run_script.R" "$database" "$module" "$script"; }
    example() { Rscript "$examples/rsqlite.R" "$@"; } ;;
  linked)
    linked=$5
    job() { "$4" "$database" "$script"; }
    example() { "$linked" "$1"; } ;;
esac

status=0
job "$@" > "$folder/$host.txt" || status=$?
if [ $status -ne 0 ]; then
  cat "$folder/$host.txt"
  exit $status
fi
example "$database" "$module" > "$folder/$host.example.txt"
# The module is found by itself where a user has built it.
mkdir -p "$folder/$host.built/build/release"
ln -sf "$module" "$folder/$host.built/build/release/ladderline.so"
(cd "$folder/$host.built" && example "$database") | diff "$folder/$host.example.txt" -

# Each part of the job told something, and no figure was lost on the way.
for part in audit text rates re-expression shape weekly choice model terms effects checks \
  predictions host; do
  grep -q "^$part | " "$folder/$host.txt" || { echo "nothing told of $part"; exit 1; }
done
if grep 'too small$' "$folder/$host.txt"; then exit 1; fi
if [ "$(wc -l < "$folder/$host.example.txt")" -ne 8 ]; then
  echo "the example should give one line for each of eight districts:"
  cat "$folder/$host.example.txt"
  exit 1
fi

# Lines that differ, the longest cut; empty where none does.
differences() {
  diff "$1" "$2" | sed -n '/^[<>]/p' | cut -c 1-200 | head -n 40
}
for kind in txt example.txt; do
  grep -v '^host | ' "$folder/shell.$kind" > "$folder/expected.$host.$kind"
  grep -v '^host | ' "$folder/$host.$kind" > "$folder/got.$host.$kind"
  found=$(differences "$folder/expected.$host.$kind" "$folder/got.$host.$kind")
  if [ -n "$found" ]; then
    echo "differs from the shell (<):"
    echo "$found"
    status=1
  fi
done
own=$(differences "$folder/shell.txt" "$folder/$host.txt" | grep '^[<>] host | ') || :
[ -z "$own" ] || printf 'the host adds up and prints in its own way (shell: <):\n%s\n' "$own"
exit $status
