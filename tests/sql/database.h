// An in-memory database with the module loaded, for tests that speak SQL.
#ifndef LADDERLINE_TESTS_SQL_DATABASE_H_
#define LADDERLINE_TESTS_SQL_DATABASE_H_

#include <sqlite3.h>

#include <optional>
#include <string>
#include <vector>

#include "tests/reference/reference.h"

namespace ladderline::testing {

// What the build made, and where it was made from.
const char* ModulePath();
std::string SourceDirectory();  // ends with a slash
// A file of the repository, by its path in it.
std::string ReadFile(const std::string& path);
// The statements of a file for the shell, those of the files that it reads with them, without the
// shell's other commands.
std::string Statements(const std::string& path);

class Database {
 public:
  // Loads the module that the build made, unless told not to; PRAGMA trusted_schema=OFF. `path` is
  // a file, or a URI with what SQLite takes after its question mark.
  explicit Database(const std::string& path = ":memory:", bool load = true);
  ~Database();
  Database(const Database&) = delete;
  Database& operator=(const Database&) = delete;

  sqlite3* handle() const { return db_; }

  // Runs statements; throws std::runtime_error with the host's message.
  void Run(const std::string& sql) const;
  // All rows as text, NULL as nullopt; REALs with 17 digits. Throws as Run does.
  using Row = std::vector<std::optional<std::string>>;
  std::vector<Row> Rows(const std::string& sql) const;
  // The first row's first column. Text of NULL is "NULL", a number of NULL is NaN.
  std::string Text(const std::string& sql) const;
  double Number(const std::string& sql) const;
  bool IsNull(const std::string& sql) const;
  // The message of a statement that must fail; "(no error)" when it does not.
  std::string ErrorOf(const std::string& sql) const;
  // A table with the columns of a CSV file under tests/reference, each cell a number where it
  // reads as one whole, else text.
  void LoadCsv(const std::string& table, const std::string& path) const;

 private:
  sqlite3* db_ = nullptr;
};

}  // namespace ladderline::testing

#endif  // LADDERLINE_TESTS_SQL_DATABASE_H_
