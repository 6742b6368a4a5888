#include "tests/sql/database.h"

#include <cmath>
#include <cstdio>
#include <fstream>
#include <iterator>
#include <memory>
#include <sstream>
#include <stdexcept>

namespace ladderline::testing {
namespace {

struct Finalize {
  void operator()(sqlite3_stmt* statement) const { sqlite3_finalize(statement); }
};

std::optional<std::string> CellText(sqlite3_stmt* statement, int i) {
  switch (sqlite3_column_type(statement, i)) {
    case SQLITE_NULL:
      return std::nullopt;
    case SQLITE_FLOAT: {
      char text[32];
      std::snprintf(text, sizeof text, "%.17g", sqlite3_column_double(statement, i));
      return text;
    }
    default: {
      const void* bytes = sqlite3_column_blob(statement, i);
      return std::string(static_cast<const char*>(bytes),
                         static_cast<size_t>(sqlite3_column_bytes(statement, i)));
    }
  }
}

}  // namespace

const char* ModulePath() { return LADDERLINE_MODULE; }
std::string SourceDirectory() { return LADDERLINE_SOURCE_DIR "/"; }

std::string ReadFile(const std::string& path) {
  std::ifstream file(SourceDirectory() + path, std::ios::binary);
  if (!file) throw std::runtime_error("cannot read " + path);
  return {std::istreambuf_iterator<char>(file), {}};
}

std::string Statements(const std::string& path) {
  std::stringstream file(ReadFile(path));
  std::string sql;
  for (std::string line; std::getline(file, line);) {
    if (line.rfind(".read ", 0) == 0) {
      sql += Statements(line.substr(6));
    } else if (line.empty() || line[0] != '.') {
      sql += line + "\n";
    }
  }
  return sql;
}

Database::Database(const std::string& path, bool load) {
  constexpr int kFlags = SQLITE_OPEN_READWRITE | SQLITE_OPEN_CREATE | SQLITE_OPEN_URI;
  if (sqlite3_open_v2(path.c_str(), &db_, kFlags, nullptr) != SQLITE_OK)
    throw std::runtime_error("cannot open " + path);
  Run("PRAGMA trusted_schema=OFF");
  if (!load) return;
  sqlite3_db_config(db_, SQLITE_DBCONFIG_ENABLE_LOAD_EXTENSION, 1, nullptr);
  char* message = nullptr;
  if (sqlite3_load_extension(db_, ModulePath(), nullptr, &message) != SQLITE_OK) {
    const std::string text = message == nullptr ? "no message" : message;
    sqlite3_free(message);
    throw std::runtime_error("cannot load: " + text);
  }
}

Database::~Database() { sqlite3_close(db_); }

void Database::Run(const std::string& sql) const {
  char* message = nullptr;
  if (sqlite3_exec(db_, sql.c_str(), nullptr, nullptr, &message) != SQLITE_OK) {
    const std::string text = message == nullptr ? sqlite3_errmsg(db_) : message;
    sqlite3_free(message);
    throw std::runtime_error(text);
  }
}

std::vector<Database::Row> Database::Rows(const std::string& sql) const {
  std::vector<Row> rows;
  const char* tail = sql.c_str();
  while (*tail != '\0') {
    sqlite3_stmt* raw = nullptr;
    if (sqlite3_prepare_v2(db_, tail, -1, &raw, &tail) != SQLITE_OK)
      throw std::runtime_error(sqlite3_errmsg(db_));
    const std::unique_ptr<sqlite3_stmt, Finalize> statement(raw);
    if (raw == nullptr) continue;
    int rc;
    while ((rc = sqlite3_step(raw)) == SQLITE_ROW) {
      Row row;
      for (int i = 0; i < sqlite3_column_count(raw); ++i) row.push_back(CellText(raw, i));
      rows.push_back(std::move(row));
    }
    if (rc != SQLITE_DONE) throw std::runtime_error(sqlite3_errmsg(db_));
  }
  return rows;
}

std::string Database::Text(const std::string& sql) const {
  const auto rows = Rows(sql);
  if (rows.empty()) throw std::runtime_error("no rows: " + sql);
  return rows[0][0].value_or("NULL");
}

double Database::Number(const std::string& sql) const {
  const auto rows = Rows(sql);
  if (rows.empty()) throw std::runtime_error("no rows: " + sql);
  return rows[0][0] ? std::stod(*rows[0][0]) : std::nan("");
}

bool Database::IsNull(const std::string& sql) const { return !Rows(sql).at(0).at(0).has_value(); }

std::string Database::ErrorOf(const std::string& sql) const {
  try {
    (void)Rows(sql);
  } catch (const std::runtime_error& error) {
    return error.what();
  }
  return "(no error)";
}

void Database::LoadCsv(const std::string& table, const std::string& path) const {
  const auto columns = ReadCsvText(path);
  std::string names, marks;
  for (const auto& [name, cells] : columns) {
    names += (names.empty() ? "\"" : ", \"") + name + "\" NUMERIC";
    marks += marks.empty() ? "?" : ", ?";
  }
  Run("CREATE TABLE \"" + table + "\"(" + names + ")");
  sqlite3_stmt* raw = nullptr;
  sqlite3_prepare_v2(db_, ("INSERT INTO \"" + table + "\" VALUES(" + marks + ")").c_str(), -1, &raw,
                     nullptr);
  const std::unique_ptr<sqlite3_stmt, Finalize> statement(raw);
  for (size_t row = 0; row < columns.begin()->second.size(); ++row) {
    int i = 0;
    for (const auto& [name, cells] : columns)
      sqlite3_bind_text(raw, ++i, cells[row].data(), static_cast<int>(cells[row].size()),
                        SQLITE_STATIC);
    if (sqlite3_step(raw) != SQLITE_DONE) throw std::runtime_error(sqlite3_errmsg(db_));
    sqlite3_reset(raw);
  }
}

}  // namespace ladderline::testing
