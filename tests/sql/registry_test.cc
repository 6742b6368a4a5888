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

TEST(Registry, LoadingAgainFromAStatementChangesNothing) {
  const Database db;
  ASSERT_EQ(sqlite3_enable_load_extension(db.handle(), 1), SQLITE_OK);
  const std::string load = "SELECT load_extension('" + std::string(ModulePath()) + "')";
  EXPECT_EQ(db.ErrorOf(load), "(no error)");
  EXPECT_EQ(db.ErrorOf(load), "(no error)");
  EXPECT_EQ(db.Number("SELECT log_offset(1)"), 0);
}

TEST(Registry, AFunctionOfAnotherExtensionInTheWayIsNamed) {
  const Database db(":memory:", false);
  const auto theirs = [](sqlite3_context* context, int, sqlite3_value**) {
    sqlite3_result_text(context, "theirs", -1, SQLITE_STATIC);
  };
  ASSERT_EQ(sqlite3_create_function(db.handle(), "square", 1, SQLITE_UTF8, nullptr, theirs, nullptr,
                                    nullptr),
            SQLITE_OK);
  ASSERT_EQ(sqlite3_enable_load_extension(db.handle(), 1), SQLITE_OK);
  const std::string load = "SELECT load_extension('" + std::string(ModulePath()) + "')";
  const std::string error = db.ErrorOf(load);
  EXPECT_NE(error.find("ladderline: there is a function square already, which cannot be replaced "
                       "while a statement runs; load ladderline before other extensions"),
            std::string::npos)
      << error;
  EXPECT_EQ(db.Text("SELECT square(2)"), "theirs");
  // Outside a statement the host replaces it.
  ASSERT_EQ(sqlite3_load_extension(db.handle(), ModulePath(), nullptr, nullptr), SQLITE_OK);
  EXPECT_EQ(db.Number("SELECT square(2)"), 4);
}

}  // namespace
}  // namespace ladderline::testing
