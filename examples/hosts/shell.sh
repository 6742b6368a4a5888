#!/bin/sh
# Ladderline in the sqlite3 shell: sh examples/hosts/shell.sh [DATABASE [MODULE]]
sqlite3 -batch -bail -readonly -cmd ".load '${2:-build/release/ladderline}'" \
  "${1:-examples/out/repairs.db}" "
  SELECT printf('%-14s %4d cases, %5.1f%% damp (%.1f to %.1f)', district, cases,
                percent_of(damp, cases), percent_low(damp, cases), percent_high(damp, cases))
  FROM (SELECT district, count(*) AS cases, sum(trade = 'Damp') AS damp
        FROM repair WHERE reported >= '2024-01-01' GROUP BY district)"
