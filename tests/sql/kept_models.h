// A database with sql/keep_models.sql, for the tests of what it does.
#ifndef LADDERLINE_TESTS_SQL_KEPT_MODELS_H_
#define LADDERLINE_TESTS_SQL_KEPT_MODELS_H_

#include <map>
#include <string>
#include <vector>

#include "tests/sql/database.h"

namespace ladderline::testing {

using Table = std::vector<Database::Row>;

// 60 made-up cases in three districts, and a view of two models of them.
inline constexpr const char* kCases =
    "CREATE TABLE visit(id INTEGER PRIMARY KEY, district TEXT, minutes REAL, stairs INTEGER);"
    "INSERT INTO visit WITH RECURSIVE i(i) AS (SELECT 1 UNION ALL SELECT i + 1 FROM i WHERE i < 60)"
    "SELECT i, CASE i % 3 WHEN 0 THEN 'North' WHEN 1 THEN 'South' ELSE 'West' END,"
    " 10 + 2 * (i * 7 % 11) + i * i % 13, i * 7 % 11 FROM i;";
inline constexpr const char* kTimeModel =
    "ols_model('minutes (min)', minutes, 'stairs', stairs, 'district | category South', district, "
    "'visit | key', id)";
inline const std::string kSource =
    std::string("CREATE VIEW model_source AS SELECT 'time' AS name, ") + kTimeModel +
    " AS model FROM visit UNION ALL SELECT 'log time', ols_model('minutes | log_offset', minutes, "
    "'stairs', stairs) FROM visit WHERE district <> 'West';";

// Everything that is stored, table by table.
inline std::map<std::string, Table> ContentsOf(const Database& db) {
  std::map<std::string, Table> contents;
  for (const auto& table : db.Rows("SELECT name FROM sqlite_schema WHERE type = 'table'"))
    contents[*table[0]] = db.Rows("SELECT * FROM \"" + *table[0] + "\" ORDER BY rowid");
  return contents;
}

inline constexpr const char* kRefresh = "INSERT INTO model_refresh DEFAULT VALUES";

struct KeptModels : Database {
  explicit KeptModels(const std::string& source = kSource, const std::string& path = ":memory:")
      : Database(path) {
    Run(kCases);
    Run(Statements("sql/keep_models.sql"));
    Run(source);
  }
  void Refresh() const { Run(kRefresh); }
  void NewSource(const std::string& select) const {
    Run("DROP VIEW IF EXISTS model_source; CREATE VIEW model_source AS " + select);
  }
};

}  // namespace ladderline::testing

#endif  // LADDERLINE_TESTS_SQL_KEPT_MODELS_H_
