# What a refresh leaves, read and written by a Python that does not load the extension, with the
# extension loaded in another connection: python3 plain_tables_test.py MODULE
import pathlib
import shutil
import sqlite3
import subprocess
import sys
import tempfile

if not hasattr(sqlite3.Connection, "enable_load_extension"):
    print("not run: this Python was built without extension loading")
    sys.exit(77)
if sqlite3.sqlite_version_info < (3, 38):
    print("not run: this Python has SQLite", sqlite3.sqlite_version)
    sys.exit(77)

script = pathlib.Path(__file__).parents[2] / "sql" / "keep_models.sql"
with tempfile.TemporaryDirectory() as folder:
    path = pathlib.Path(folder) / "kept.db"
    kept = sqlite3.connect(path)
    kept.enable_load_extension(True)
    kept.load_extension(sys.argv[1])
    kept.execute("PRAGMA trusted_schema=OFF")
    kept.executescript(script.read_text(encoding="utf-8"))
    kept.execute("CREATE TABLE visit(id INTEGER PRIMARY KEY, minutes REAL, stairs INTEGER)")
    kept.executemany(
        "INSERT INTO visit(minutes, stairs) VALUES (?, ?)",
        [(10 + i * i % 13, i * 7 % 11) for i in range(60)],
    )
    kept.execute(
        "CREATE VIEW model_source AS SELECT 'time' AS name, "
        "ols_model('minutes', minutes, 'stairs', stairs) AS model FROM visit"
    )
    # One statement refreshes; the transaction that Python opens around it is ended by a commit.
    kept.execute("INSERT INTO model_refresh DEFAULT VALUES")
    kept.commit()

    plain = sqlite3.connect(path)
    names = [n for (n,) in plain.execute("SELECT name FROM sqlite_master WHERE type = 'table'")]
    assert sum(name.startswith("published_") for name in names) >= 8, names
    for name in names:
        query = f"SELECT * FROM {name} ORDER BY rowid"
        assert plain.execute(query).fetchall() == kept.execute(query).fetchall(), name
    assert plain.execute("SELECT rows FROM published_model").fetchall() == [(60,)]
    plain.execute("INSERT INTO visit(minutes, stairs) VALUES (30, 5)")
    plain.commit()
    try:
        plain.execute("INSERT INTO model_refresh DEFAULT VALUES")
        raise AssertionError("refreshed without the extension")
    except sqlite3.OperationalError as error:
        assert str(error) == "no such function: ladderline_version", error
    plain.rollback()
    kept.execute("INSERT INTO model_refresh DEFAULT VALUES")
    kept.commit()
    assert plain.execute("SELECT rows FROM published_model").fetchall() == [(61,)]

    # The published tables alone, in a file to hand out, month after month by the README's commands.
    if shutil.which("sqlite3"):
        page = (script.parents[1] / "README.md").read_text(encoding="utf-8")
        commands = page.split("```sh\nrm -f dashboard.new\n")[1].split("\n```")[0]
        commands = "rm -f dashboard.new\n" + commands.replace("repairs.db", "kept.db")
        copy = pathlib.Path(folder) / "dashboard.db"

        def hand_over(expected=0):
            done = subprocess.run(["sh", "-c", commands], cwd=folder, capture_output=True)
            assert (done.returncode == 0) == (expected == 0), done

        hand_over()
        kept.execute("INSERT INTO visit(minutes, stairs) VALUES (25, 4)")
        kept.execute("INSERT INTO model_refresh DEFAULT VALUES")
        kept.commit()
        hand_over()
        # Where there is nothing to copy, the copy of before stays.
        held = copy.read_bytes()
        path.rename(path.with_suffix(".away"))
        hand_over(expected=1)
        assert copy.read_bytes() == held
        path.with_suffix(".away").rename(path)
        handed_out = sqlite3.connect(copy)
        published = [name for name in names if name.startswith("published_")]
        tables = handed_out.execute("SELECT name FROM sqlite_master WHERE type = 'table'")
        assert sorted(n for (n,) in tables) == sorted(published)
        for name in published:
            query = f"SELECT * FROM {name} ORDER BY rowid"
            assert handed_out.execute(query).fetchall() == kept.execute(query).fetchall(), name
