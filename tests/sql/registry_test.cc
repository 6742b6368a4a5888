// The registration table against the host: what is listed is registered, and every example runs.
#include <set>

#include "tests/sql/database.h"

namespace ladderline::testing {
namespace {

TEST(Registry, EveryExampleRuns) {
  const Database db;
  for (const auto& row : db.Rows("SELECT name, example FROM ladderline_functions")) {
    ASSERT_TRUE(row[1].has_value() && !row[1]->empty()) << *row[0];
    EXPECT_EQ(db.ErrorOf(*row[1]), "(no error)") << *row[0] << ": " << *row[1];
    EXPECT_NE(row[1]->find(*row[0]), std::string::npos) << *row[0] << " is not in its own example";
  }
}

std::set<std::string> Names(sqlite3* db) {
  std::set<std::string> names;
  sqlite3_exec(
      db, "SELECT name FROM pragma_function_list UNION SELECT name FROM pragma_module_list",
      [](void* out, int, char** row, char**) {
        static_cast<std::set<std::string>*>(out)->insert(row[0]);
        return 0;
      },
      &names, nullptr);
  return names;
}

TEST(Registry, LoadingAddsExactlyTheTable) {
  sqlite3* bare = nullptr;
  ASSERT_EQ(sqlite3_open(":memory:", &bare), SQLITE_OK);
  (void)Names(bare);  // the pragmas' own modules appear on first use
  std::set<std::string> before = Names(bare);
  sqlite3_close(bare);
  const Database db;
  (void)Names(db.handle());
  std::set<std::string> listed;
  for (const auto& row : db.Rows("SELECT name FROM ladderline_functions")) listed.insert(*row[0]);
  std::set<std::string> expected = before;
  expected.insert(listed.begin(), listed.end());
  for (const std::string& name : listed) EXPECT_FALSE(before.count(name)) << name << " shadows";
  EXPECT_EQ(Names(db.handle()), expected);
}

TEST(Registry, EveryFunctionIsInnocuousAndDeterministic) {
  const Database db;
  // 0x200000 is SQLITE_INNOCUOUS, 0x800 SQLITE_DETERMINISTIC.
  for (const auto& row :
       db.Rows("SELECT DISTINCT name, flags FROM pragma_function_list WHERE name IN "
               "(SELECT name FROM ladderline_functions)")) {
    EXPECT_EQ(std::stol(*row[1]) & 0x200800, 0x200800) << *row[0];
  }
}

}  // namespace
}  // namespace ladderline::testing
