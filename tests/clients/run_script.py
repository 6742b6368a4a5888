# Runs a script through Python's sqlite3 and prints the lines it told:
# python3 run_script.py DATABASE MODULE SCRIPT
import sqlite3
import sys

database, module, script = sys.argv[1:]
if not hasattr(sqlite3.Connection, "enable_load_extension"):
    print("not run: this Python was built without extension loading")
    sys.exit(77)
if sqlite3.sqlite_version_info < (3, 38):
    print("not run: this Python has SQLite", sqlite3.sqlite_version)
    sys.exit(77)
db = sqlite3.connect(f"file:{database}?mode=ro", uri=True)
db.enable_load_extension(True)
db.load_extension(module)
with open(script, encoding="utf-8") as file:
    db.executescript(file.read())
for (line,) in db.execute("SELECT line FROM told ORDER BY rowid"):
    print(line)
