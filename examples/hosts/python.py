# Ladderline in Python: /usr/bin/python3 examples/hosts/python.py [DATABASE [MODULE]]
import sqlite3, sys
given = sys.argv[1:]
database, module = given + ["examples/out/repairs.db", "build/release/ladderline"][len(given):]
db = sqlite3.connect(database)
db.enable_load_extension(True)
db.load_extension(module)
for row in db.execute("""
    SELECT district, cases, percent_of(damp, cases), percent_low(damp, cases), percent_high(damp, cases)
    FROM (SELECT district, count(*) AS cases, sum(trade = 'Damp') AS damp
          FROM repair WHERE reported >= '2024-01-01' GROUP BY district)"""):
    print("%-14s %4d cases, %5.1f%% damp (%.1f to %.1f)" % row)
