// What a refresh of kept models is to others while it runs, and after it was cut short: readers,
// killed processes, locks, files that cannot be written, programs without the extension.
#include <fcntl.h>
#include <gmock/gmock.h>
#include <signal.h>
#include <sys/wait.h>
#include <unistd.h>

#include <atomic>
#include <cstdlib>
#include <filesystem>
#include <set>
#include <thread>

#include "tests/sql/kept_models.h"

namespace ladderline::testing {
namespace {

namespace fs = std::filesystem;

// A folder of the test's own, removed at its end.
class RefreshFaults : public ::testing::Test {
 protected:
  RefreshFaults() {
    std::string name = (fs::temp_directory_path() / "ladderline-XXXXXX").string();
    folder_ = mkdtemp(name.data());
  }
  ~RefreshFaults() override { fs::remove_all(folder_); }
  std::string Path(const std::string& name) const { return (folder_ / name).string(); }

 private:
  fs::path folder_;
};

const char* const kRates =
    "DROP VIEW rate_source; CREATE VIEW rate_source AS SELECT district AS area, 2024 AS period, "
    "count(*) AS events, 500 AS base, 1000 AS per FROM visit GROUP BY district";

// ---- Readers ----

TEST_F(RefreshFaults, ReadersSeeTheOldOrTheNewStateWhole) {
  const KeptModels writer(kSource, Path("kept.db"));
  writer.Run("PRAGMA journal_mode=WAL; PRAGMA busy_timeout=10000");
  writer.Run(kRates);
  writer.Refresh();
  // A state is told by how many cases its models and its rates speak of: five figures that agree in
  // every state.
  const std::string model = "(SELECT rows FROM published_model WHERE name = 'time')";
  const std::string fact =
      "(SELECT value FROM published_facts WHERE name = 'time' AND fact = 'rows_fitted')";
  const std::string total = "(SELECT events FROM published_totals)";
  const std::string text =
      "(SELECT fact(model, 'rows_fitted') FROM published_text "
      "WHERE name = 'time')";
  const std::string live =
      "(SELECT value FROM live_facts WHERE name = 'time' AND fact = 'rows_fitted')";
  std::atomic<bool> done{false}, ready{false};
  std::set<std::string> states;
  long torn = 0, mixed = 0, reads = 0;
  std::string failure;
  std::thread reader([&] {
    try {
      const Database db(Path("kept.db"));
      ready = true;
      while (!done) {
        const auto once = db.Rows("SELECT " + model + ", " + fact + ", " + total + ", " + text +
                                  ", " + live + ", (SELECT count(*) FROM published_terms)");
        const Database::Row row(once[0].begin(), once[0].begin() + 5);
        torn += std::set(row.begin(), row.end()).size() != 1 || once[0][5] != "6";
        db.Run("BEGIN");
        const std::string first = db.Text("SELECT " + model);
        states.insert(first);
        for (const std::string& other : {total, fact, live, text, model})
          mixed += db.Text("SELECT " + other) != first;
        db.Run("COMMIT");
        ++reads;
      }
    } catch (const std::exception& error) {
      failure = error.what();
      ready = true;
    }
  });
  while (!ready) std::this_thread::yield();
  for (int i = 0; i < 60; ++i) {
    writer.Run("INSERT INTO visit SELECT max(id) + 1, 'North', 20 + max(id) % 7, 3 FROM visit");
    writer.Refresh();
  }
  done = true;
  reader.join();
  EXPECT_EQ(failure, "");
  EXPECT_EQ(torn, 0);
  EXPECT_EQ(mixed, 0);
  EXPECT_GT(reads, 5);
  EXPECT_GT(states.size(), 3u);
}

// ---- Killed half-way ----

// The system calls by which SQLite changes files; the k-th is not made: the process dies instead.
long calls_until_death = 0;

void CountCall() {
  if (--calls_until_death == 0) kill(getpid(), SIGKILL);
}
ssize_t CountedWriteAt(int file, const void* bytes, size_t count, off_t at) {
  CountCall();
  return pwrite(file, bytes, count, at);
}
int CountedTruncate(int file, off_t length) {
  CountCall();
  return ftruncate(file, length);
}
int CountedUnlink(const char* path) {
  CountCall();
  return unlink(path);
}

// Runs a refresh in a process of its own, killed at the k-th such call, or at the k-th step of
// SQLite's machine. True when it was killed.
enum class KillAt { kCall, kStep };
bool RefreshKilled(const std::string& path, KillAt at, long k) {
  const pid_t child = fork();
  if (child == 0) {
    try {
      const Database db(path);
      // Few pages in memory: changes reach the file long before the end.
      db.Run("PRAGMA cache_size=5; PRAGMA cache_spill=5");
      calls_until_death = k;
      if (at == KillAt::kCall) {
        sqlite3_vfs* vfs = sqlite3_vfs_find(nullptr);
        const auto replace = [&](const char* name, auto* call) {
          vfs->xSetSystemCall(vfs, name, reinterpret_cast<sqlite3_syscall_ptr>(call));
        };
        replace("pwrite", CountedWriteAt);
        replace("pwrite64", CountedWriteAt);
        replace("ftruncate", CountedTruncate);
        replace("unlink", CountedUnlink);
      } else {
        sqlite3_progress_handler(
            db.handle(), 100,
            [](void*) {
              CountCall();
              return 0;
            },
            nullptr);
      }
      db.Run("INSERT INTO model_refresh(at) VALUES ('2025-03-04')");
    } catch (const std::exception&) {
      _exit(1);
    }
    _exit(0);
  }
  int status = 0;
  EXPECT_EQ(waitpid(child, &status, 0), child);
  EXPECT_TRUE((WIFSIGNALED(status) && WTERMSIG(status) == SIGKILL) ||
              (WIFEXITED(status) && WEXITSTATUS(status) == 0))
      << status;
  return WIFSIGNALED(status);
}

TEST_F(RefreshFaults, KilledHalfWayTheDatabaseHoldsTheOldStateOrTheNew) {
  for (const std::string mode : {"WAL", "DELETE"}) {
    SCOPED_TRACE(mode);
    const std::string start = Path("start.db"), work = Path("work.db");
    const auto remove = [](const std::string& path) {
      for (const char* end : {"", "-wal", "-shm", "-journal"}) fs::remove(path + end);
    };
    remove(start);
    {
      const KeptModels db(kSource, start);
      db.Run("PRAGMA journal_mode=" + mode);
      db.Run(kRates);
      db.Run("INSERT INTO model_refresh(at) VALUES ('2025-03-03')");
      db.Run("INSERT INTO visit SELECT max(id) + 1, 'North', 20, 3 FROM visit");
    }
    const auto contents = [&] { return ContentsOf(Database(work)); };
    const auto restore = [&] {
      remove(work);
      fs::copy_file(start, work);
    };
    restore();
    const auto before = contents();
    ASSERT_FALSE(RefreshKilled(work, KillAt::kCall, 1000000));
    const auto after = contents();
    ASSERT_NE(before, after);
    for (const KillAt at : {KillAt::kCall, KillAt::kStep}) {
      long old_states = 0, new_states = 0, kills = 0;
      for (long k = 1;; k += 1 + k / 6) {
        restore();
        const bool killed = RefreshKilled(work, at, k);
        kills += killed;
        ASSERT_EQ(Database(work).Text("PRAGMA integrity_check"), "ok") << k;
        const auto now = contents();
        ASSERT_TRUE(now == before || now == after) << "killed at " << k;
        ++(now == before ? old_states : new_states);
        if (!killed) break;
        // What was left can be refreshed.
        if (kills % 10 == 0) {
          ASSERT_FALSE(RefreshKilled(work, at, 1000000));
        }
      }
      EXPECT_GT(kills, 10);
      EXPECT_GT(old_states, 10);
      EXPECT_GE(new_states, 1);
    }
  }
}

// ---- Locks, files that cannot be written, no extension ----

TEST_F(RefreshFaults, ALockedDatabaseSaysSoAndIsRefreshedLater) {
  for (const std::string mode : {"WAL", "DELETE"}) {
    SCOPED_TRACE(mode);
    const std::string path = Path(mode);
    const KeptModels db(kSource, path);
    db.Run("PRAGMA journal_mode=" + mode);
    db.Refresh();
    const auto before = ContentsOf(db);
    const Database other(path);
    other.Run("BEGIN IMMEDIATE");
    EXPECT_EQ(db.ErrorOf(kRefresh), "database is locked");
    other.Run("COMMIT");
    EXPECT_EQ(ContentsOf(db), before);
    // Without WAL, a reader in the middle of reading is in the way too.
    other.Run("BEGIN; SELECT count(*) FROM published_model");
    EXPECT_EQ(db.ErrorOf(kRefresh), mode == "WAL" ? "(no error)" : "database is locked");
    other.Run("COMMIT");
    if (mode == "DELETE") {
      EXPECT_EQ(ContentsOf(db), before);
    }
    db.Refresh();
    EXPECT_EQ(db.Text("SELECT max(refresh) FROM current_model"), mode == "WAL" ? "3" : "2");
  }
}

TEST_F(RefreshFaults, TwoWhoRefreshAtOnceTakeTurns) {
  for (const std::string mode : {"WAL", "DELETE"}) {
    SCOPED_TRACE(mode);
    const std::string path = Path(mode);
    const KeptModels db(kSource, path);
    db.Run("PRAGMA journal_mode=" + mode);
    const auto refresh = [&](std::string* failed) {
      try {
        const Database own(path);
        own.Run("PRAGMA busy_timeout=20000");
        for (int i = 0; i < 8; ++i) own.Run(kRefresh);
      } catch (const std::exception& error) {
        *failed = error.what();
      }
    };
    std::string failures[2];
    std::thread first(refresh, &failures[0]), second(refresh, &failures[1]);
    first.join();
    second.join();
    EXPECT_EQ(failures[0] + failures[1], "");
    EXPECT_EQ(db.Rows("SELECT count(DISTINCT refresh), count(*), max(refresh) FROM model_fit"),
              (Table{{"16", "32", "16"}}));
    EXPECT_EQ(db.Text("PRAGMA integrity_check"), "ok");
  }
}

TEST_F(RefreshFaults, AReadOnlyDatabaseIsReadAndNotRefreshed) {
  const std::string path = Path("kept.db");
  Table effects;
  {
    const KeptModels db(kSource, path);
    db.Refresh();
    effects = db.Rows("SELECT * FROM published_effects ORDER BY name, position");
  }
  const Database db("file:" + path + "?mode=ro");
  EXPECT_EQ(db.ErrorOf(kRefresh), "attempt to write a readonly database");
  EXPECT_EQ(db.Rows("SELECT * FROM live_effects ORDER BY name, position"), effects);
}

TEST_F(RefreshFaults, WithoutTheExtensionTablesAreReadAndRecordsWritten) {
  const std::string path = Path("kept.db");
  const KeptModels kept(kSource, path);
  kept.Run(kRates);
  kept.Refresh();
  const Database plain(path, false);
  for (const auto& table : plain.Rows("SELECT name FROM sqlite_schema WHERE type = 'table'")) {
    const std::string all = "SELECT * FROM " + *table[0];
    EXPECT_EQ(plain.Rows(all), kept.Rows(all));
  }
  plain.Run(
      "INSERT INTO visit VALUES (100, 'North', 25, 4); UPDATE visit SET minutes = 26 "
      "WHERE id = 100; DELETE FROM visit WHERE id = 1; VACUUM; PRAGMA foreign_key_check");
  plain.Run("ALTER TABLE visit ADD COLUMN note TEXT");
  // SQLite reads every view again before it renames.
  for (const std::string change : {"RENAME TO call", "RENAME note TO remark", "DROP COLUMN note"}) {
    EXPECT_THAT(plain.ErrorOf("ALTER TABLE visit " + change),
                ::testing::HasSubstr("error in view live_facts: no such table"));
  }
  Database(path).Run(
      "ALTER TABLE visit RENAME note TO remark; ALTER TABLE visit DROP COLUMN remark");
  const auto before = ContentsOf(plain);
  EXPECT_EQ(plain.ErrorOf(kRefresh), "no such function: ladderline_version");
  EXPECT_EQ(ContentsOf(plain), before);
  kept.Refresh();
  EXPECT_EQ(plain.Text("SELECT rows FROM published_model WHERE name = 'time'"), "60");
}

}  // namespace
}  // namespace ladderline::testing
