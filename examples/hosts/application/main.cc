// Ladderline linked into a program: application [DATABASE]
#include <ladderline.h>
#include <sqlite3.h>

#include <cstdio>

int main(int count, char** arguments) {
  // From here on every connection has the functions.
  sqlite3_auto_extension(reinterpret_cast<void (*)()>(sqlite3_ladderline_init));
  sqlite3* db = nullptr;
  sqlite3_open(count > 1 ? arguments[1] : "examples/out/repairs.db", &db);
  const auto print = [](void*, int, char** row, char**) { return std::puts(row[0]) < 0 ? 1 : 0; };
  const int rc = sqlite3_exec(db, R"sql(
      SELECT printf('%-14s %4d cases, %5.1f%% damp (%.1f to %.1f)', district, cases,
                    percent_of(damp, cases), percent_low(damp, cases), percent_high(damp, cases))
      FROM (SELECT district, count(*) AS cases, sum(trade = 'Damp') AS damp
            FROM repair WHERE reported >= '2024-01-01' GROUP BY district))sql",
                              print, nullptr, nullptr);
  if (rc != SQLITE_OK) std::fprintf(stderr, "%s\n", sqlite3_errmsg(db));
  return sqlite3_close(db) == SQLITE_OK && rc == SQLITE_OK ? 0 : 1;
}
