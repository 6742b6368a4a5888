// Out of memory at every point: the example of each function is run with the first allocation
// failing, then the second, and so on until a run gets through. Each run must give the right answer
// or SQLITE_NOMEM, and leave the connection usable; that nothing leaks is for the sanitized build.
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

}  // namespace

void* operator new(std::size_t size) { return New(size, 1); }
void* operator new[](std::size_t size) { return New(size, 1); }
void* operator new(std::size_t size, std::align_val_t a) { return New(size, std::size_t(a)); }
void* operator new[](std::size_t size, std::align_val_t a) { return New(size, std::size_t(a)); }
void* operator new(std::size_t size, const std::nothrow_t&) noexcept { return NewOrNull(size, 1); }
void* operator new[](std::size_t size, const std::nothrow_t&) noexcept {
  return NewOrNull(size, 1);
}
void operator delete(void* bytes) noexcept { std::free(bytes); }
void operator delete[](void* bytes) noexcept { std::free(bytes); }
void operator delete(void* bytes, std::size_t) noexcept { std::free(bytes); }
void operator delete[](void* bytes, std::size_t) noexcept { std::free(bytes); }
void operator delete(void* bytes, std::align_val_t) noexcept { std::free(bytes); }
void operator delete[](void* bytes, std::align_val_t) noexcept { std::free(bytes); }
void operator delete(void* bytes, std::size_t, std::align_val_t) noexcept { std::free(bytes); }
void operator delete[](void* bytes, std::size_t, std::align_val_t) noexcept { std::free(bytes); }
void operator delete(void* bytes, const std::nothrow_t&) noexcept { std::free(bytes); }
void operator delete[](void* bytes, const std::nothrow_t&) noexcept { std::free(bytes); }

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

TEST_F(Memory, EveryFunctionGivesTheRightAnswerOrNoMemory) {
  const Database db;
  std::map<Source, long> total_struck;
  for (const auto& row : db.Rows("SELECT name, example FROM ladderline_functions")) {
    const std::string& name = *row[0];
    const std::string& example = *row[1];
    const Outcome right = RunWith({}, db.handle(), example);
    ASSERT_EQ(right.code, SQLITE_DONE) << name;
    for (const Source source : kSources) {
      for (const bool lasting : {false, true}) {
        long k = 1;
        long struck = 0;
        for (;; k = NextPoint(k)) {
          const Outcome outcome = RunWith({source, k, lasting}, db.handle(), example);
          if (outcome.code != SQLITE_NOMEM) {
            EXPECT_EQ(outcome.code, SQLITE_DONE)
                << name << ": allocation " << k << ": " << sqlite3_errmsg(db.handle());
            EXPECT_EQ(outcome.rows, right.rows) << name << ": allocation " << k;
          }
          if (!fault.struck || HasFailure()) break;
          ++struck;
        }
        total_struck[source] += struck;
        EXPECT_EQ(RunWith({}, db.handle(), example).rows, right.rows) << name;
      }
    }
  }
  // Both kinds of failure reached the module.
  EXPECT_GT(total_struck[Source::kHost], 0);
  EXPECT_GT(total_struck[Source::kNew], 0);
}

TEST_F(Memory, LoadingFailsCleanlyAndCanBeRepeated) {
  for (const Source source : kSources) {
    bool struck = true;
    for (long k = 1; struck; k = NextPoint(k)) {
      sqlite3* db = nullptr;
      ASSERT_EQ(sqlite3_open(":memory:", &db), SQLITE_OK);
      sqlite3_db_config(db, SQLITE_DBCONFIG_ENABLE_LOAD_EXTENSION, 1, nullptr);
      fault = {source, k, false, true};
      const int rc = sqlite3_load_extension(db, LADDERLINE_MODULE, nullptr, nullptr);
      struck = fault.struck;
      fault = {};
      EXPECT_TRUE(struck || rc == SQLITE_OK);
      EXPECT_EQ(sqlite3_load_extension(db, LADDERLINE_MODULE, nullptr, nullptr), SQLITE_OK)
          << "after failing allocation " << k;
      EXPECT_EQ(sqlite3_exec(db, "SELECT ladderline_version()", nullptr, nullptr, nullptr),
                SQLITE_OK);
      sqlite3_close(db);
    }
  }
}

}  // namespace
}  // namespace ladderline::testing
