// Out of memory at every point: a statement is run with the first allocation failing, then the
// second, and so on until a run gets through. Each run must give the right answer or SQLITE_NOMEM,
// and leave the connection usable; that nothing leaks is for the sanitized build. The statements
// are the example of each function, and some that reach what examples do not.
//
// Both kinds of allocation are made to fail: the host's, through its own hooks, and the module's,
// through `operator new`, which this program replaces for itself and for what it loads. (Eigen
// takes memory from malloc and is not reached.)
#include <cstdlib>
#include <new>

#include "tests/sql/database.h"

namespace {

enum class Source { kHost, kNew };

// While armed, counts down the allocations of one source; the one that reaches 0 fails, and with
// `lasting` every later one too.
struct Fault {
  Source source = Source::kHost;
  long left = 0;  // 0: none fails
  bool lasting = false;
  bool armed = false;
  bool struck = false;
};
Fault fault;

bool Fails(Source source) {
  if (!fault.armed || fault.source != source) return false;
  if (fault.struck && fault.lasting) return true;
  if (fault.left == 0 || --fault.left > 0) return false;
  fault.struck = true;
  return true;
}

void* NewOrNull(std::size_t size, std::size_t alignment) {
  if (Fails(Source::kNew)) return nullptr;
  if (alignment <= alignof(std::max_align_t)) return std::malloc(size == 0 ? 1 : size);
  return std::aligned_alloc(alignment, (size + alignment - 1) / alignment * alignment);
}

void* New(std::size_t size, std::size_t alignment) {
  void* bytes = NewOrNull(size, alignment);
  if (bytes == nullptr) throw std::bad_alloc();
  return bytes;
}

// Out of line: where GCC 12 inlines a delete but not its new, it takes them for a mismatched pair.
[[gnu::noinline]] void Free(void* bytes) { std::free(bytes); }

}  // namespace

void* operator new(std::size_t size) { return New(size, 1); }
void* operator new[](std::size_t size) { return New(size, 1); }
void* operator new(std::size_t size, std::align_val_t a) { return New(size, std::size_t(a)); }
void* operator new[](std::size_t size, std::align_val_t a) { return New(size, std::size_t(a)); }
void* operator new(std::size_t size, const std::nothrow_t&) noexcept { return NewOrNull(size, 1); }
void* operator new[](std::size_t size, const std::nothrow_t&) noexcept {
  return NewOrNull(size, 1);
}
void operator delete(void* bytes) noexcept { Free(bytes); }
void operator delete[](void* bytes) noexcept { Free(bytes); }
void operator delete(void* bytes, std::size_t) noexcept { Free(bytes); }
void operator delete[](void* bytes, std::size_t) noexcept { Free(bytes); }
void operator delete(void* bytes, std::align_val_t) noexcept { Free(bytes); }
void operator delete[](void* bytes, std::align_val_t) noexcept { Free(bytes); }
void operator delete(void* bytes, std::size_t, std::align_val_t) noexcept { Free(bytes); }
void operator delete[](void* bytes, std::size_t, std::align_val_t) noexcept { Free(bytes); }
void operator delete(void* bytes, const std::nothrow_t&) noexcept { Free(bytes); }
void operator delete[](void* bytes, const std::nothrow_t&) noexcept { Free(bytes); }

namespace ladderline::testing {
namespace {

sqlite3_mem_methods host_memory;

void* HostMalloc(int size) { return Fails(Source::kHost) ? nullptr : host_memory.xMalloc(size); }
void* HostRealloc(void* bytes, int size) {
  return Fails(Source::kHost) ? nullptr : host_memory.xRealloc(bytes, size);
}

struct Outcome {
  int code = SQLITE_OK;
  std::string rows;
};

// Runs one statement with the fault armed only while the host and the module work, so that what
// the test itself keeps never fails.
Outcome RunWith(const Fault& wanted, sqlite3* db, const std::string& sql) {
  Outcome outcome;
  sqlite3_stmt* statement = nullptr;
  fault = wanted;
  fault.armed = true;
  outcome.code = sqlite3_prepare_v2(db, sql.c_str(), -1, &statement, nullptr);
  while (outcome.code == SQLITE_OK || outcome.code == SQLITE_ROW) {
    outcome.code = sqlite3_step(statement);
    if (outcome.code != SQLITE_ROW) break;
    fault.armed = false;
    for (int i = 0; i < sqlite3_column_count(statement); ++i) {
      const auto* text = reinterpret_cast<const char*>(sqlite3_column_text(statement, i));
      outcome.rows += text == nullptr ? "NULL" : text;
      outcome.rows += '|';
    }
    outcome.rows += '\n';
    fault.armed = true;
  }
  sqlite3_finalize(statement);
  fault.armed = false;
  return outcome;
}

class Memory : public ::testing::Test {
 protected:
  static void SetUpTestSuite() {
    sqlite3_config(SQLITE_CONFIG_GETMALLOC, &host_memory);
    sqlite3_mem_methods failing = host_memory;
    failing.xMalloc = HostMalloc;
    failing.xRealloc = HostRealloc;
    ASSERT_EQ(sqlite3_config(SQLITE_CONFIG_MALLOC, &failing), SQLITE_OK);
  }
};

constexpr Source kSources[] = {Source::kHost, Source::kNew};

// The k-th point of failure for k = 1, 2, …; past a few hundred the points lie in long loops of the
// same kind, and every 1 + k/100th serves.
long NextPoint(long k) { return k + 1 + k / 100; }

// Counts the failures that struck, by source.
void ExpectRightAnswerOrNoMemory(const Database& db, const std::string& sql,
                                 std::map<Source, long>& struck) {
  SCOPED_TRACE(sql);
  const Outcome right = RunWith({}, db.handle(), sql);
  ASSERT_EQ(right.code, SQLITE_DONE) << sqlite3_errmsg(db.handle());
  for (const Source source : kSources) {
    for (const bool lasting : {false, true}) {
      for (long k = 1;; k = NextPoint(k)) {
        const Outcome outcome = RunWith({source, k, lasting}, db.handle(), sql);
        if (outcome.code != SQLITE_NOMEM) {
          EXPECT_EQ(outcome.code, SQLITE_DONE)
              << "allocation " << k << ": " << sqlite3_errmsg(db.handle());
          EXPECT_EQ(outcome.rows, right.rows) << "allocation " << k;
        }
        if (!fault.struck || ::testing::Test::HasFailure()) break;
        ++struck[source];
      }
      EXPECT_EQ(RunWith({}, db.handle(), sql).rows, right.rows);
    }
  }
}

TEST_F(Memory, EveryFunctionGivesTheRightAnswerOrNoMemory) {
  const Database db;
  std::map<Source, long> struck;
  for (const auto& row : db.Rows("SELECT example FROM ladderline_functions"))
    ExpectRightAnswerOrNoMemory(db, *row[0], struck);
  // Both kinds of failure reached the module.
  EXPECT_GT(struck[Source::kHost], 0);
  EXPECT_GT(struck[Source::kNew], 0);
}

TEST_F(Memory, FramesGroupsAndJoinedModelsGiveTheRightAnswerOrNoMemory) {
  const Database db;
  db.Run(
      "CREATE TABLE sample(id INTEGER PRIMARY KEY, g TEXT, x REAL, y REAL, w TEXT);"
      "INSERT INTO sample VALUES (1,'a',3.5,1.2,'1'), (2,'b',1.25,2.5,'2'), (3,'a',7,3.1,'n/a'),"
      " (4,'a',2,0.4,''), (5,'b',9.5,4.25,'07'), (6,'b',NULL,1,'2024-02-29'), (7,'a',4.75,6.5,'x'),"
      " (8,'b',0.5,2.2,'3'), (9,'a',6,3.3,'4'), (10,'b',8.25,5,'-99')");
  std::map<Source, long> struck;
  for (const char* sql : {
           "SELECT median(x) OVER w, skewness(x) OVER w, percentile_cont(x, 0.3) OVER w, "
           "z_against_earlier(x) OVER w, value_audit(w) OVER w, shape_summary(x) OVER w "
           "FROM sample WINDOW w AS (ORDER BY id ROWS 3 PRECEDING)",
           "SELECT ols_model('y', y, 'x', x, 'g', g, 'size | weight', id, 'w | key', w, "
           "'errors | option', 'hc3') FROM sample",
           "SELECT ols_model('y', y, 'x', x) OVER (ORDER BY id ROWS 4 PRECEDING) FROM sample",
           "SELECT id, fitted_mean(m, x), fit_note(m, 'x', x) FROM sample JOIN (SELECT g, "
           "ols_model('y | log_offset 1', y, 'x', x) AS m FROM sample GROUP BY g) USING (g)",
           "SELECT term, note FROM (SELECT ols_model('y', y, 'x', x, 'twice', 2 * x) AS m "
           "FROM sample), model_terms(m, 0.9, 'hc2')",
           "SELECT fact(p, 'lambda'), fact(p, 'simple_spec') FROM (SELECT box_cox_profile(x) AS p "
           "FROM sample)",
           "SELECT d.* FROM (SELECT ols_model('y', y, 'x | center', x, 'g', g) AS m, "
           "ols_model('y', "
           "y, 'x | z_score', x, 'g | category b', g) AS n FROM sample), model_difference(m, n) AS "
           "d",
           "SELECT model_for_release(ols_model('y', y, 'x | polynomial 2', x, 'part', CASE WHEN id "
           "IN (1, 9) THEN 'part ' || id ELSE g END, 'w | key', w), 2) FROM sample",
           "SELECT model_problem(ols_model('y', y, 'x', x, 'g | category c', g)) FROM sample",
           "SELECT ols_model('y | yeo_johnson', y, 'x | log_offset auto', x * x * x, 'z | "
           "box_cox', "
           "id * id, 'w | z_score', length(w)) FROM sample",
       }) {
    ExpectRightAnswerOrNoMemory(db, sql, struck);
  }
}

TEST_F(Memory, LoadingFailsCleanlyAndCanBeRepeated) {
  for (const Source source : kSources) {
    bool struck = true;
    for (long k = 1; struck; k = NextPoint(k)) {
      sqlite3* db = nullptr;
      ASSERT_EQ(sqlite3_open(":memory:", &db), SQLITE_OK);
      sqlite3_db_config(db, SQLITE_DBCONFIG_ENABLE_LOAD_EXTENSION, 1, nullptr);
      fault = {source, k, false, true};
      const int rc = sqlite3_load_extension(db, ModulePath(), nullptr, nullptr);
      struck = fault.struck;
      fault = {};
      EXPECT_TRUE(struck || rc == SQLITE_OK);
      EXPECT_EQ(sqlite3_load_extension(db, ModulePath(), nullptr, nullptr), SQLITE_OK)
          << "after failing allocation " << k;
      EXPECT_EQ(sqlite3_exec(db, "SELECT ladderline_version()", nullptr, nullptr, nullptr),
                SQLITE_OK);
      sqlite3_close(db);
    }
  }
}

}  // namespace
}  // namespace ladderline::testing
