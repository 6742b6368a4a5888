// How often a power's 95% interval holds the true one, and a scan's first choice is right.
//
//   ladderline_coverage [RUNS] [ROWS …]     2000 runs of 50, 500 and 5000 rows unless given
//
// Columns are drawn from laws whose power is known: a normal of mean 8 and sd 1 (so that its values
// are positive for all that matters), its square, its reciprocal and its exponential. A limit that
// is NULL counts as open. The first choice of a scan is right if it is the true power, or a power
// inside that interval. Seeds are fixed, and the generator is the same everywhere: the same figures
// each time. Everything is asked in SQL, of the functions linked into this program.
#include <sqlite3.h>

#include <cstdint>
#include <cstdio>
#include <cstdlib>
#include <random>
#include <string>
#include <vector>

#include "core/elementary/elementary.h"
#include "core/support/distributions.h"
#include "ext/ladderline.h"

namespace {

struct Law {
  const char* name;
  double power;  // that makes it normal
  double (*of_normal)(double);
};
constexpr Law kLaws[] = {
    {"normal", 1, [](double z) { return z; }},
    {"square of a normal", 0.5, [](double z) { return z * z; }},
    {"log-normal", 0, [](double z) { return ladderline::Exp(z); }},
    {"reciprocal of a normal", -1, [](double z) { return 1 / z; }},
};

[[noreturn]] void Die(sqlite3* db) {
  std::fprintf(stderr, "%s\n", sqlite3_errmsg(db));
  std::exit(1);
}

class Table {
 public:
  Table() {
    if (sqlite3_open(":memory:", &db_) != SQLITE_OK ||
        sqlite3_ladderline_init(db_, nullptr, nullptr) != SQLITE_OK)
      Die(db_);
    Run("CREATE TABLE drawn(x REAL)");
    insert_ = Prepared("INSERT INTO drawn VALUES (?1)");
    ask_ = Prepared(
        "WITH asked(profile, scan) AS MATERIALIZED (SELECT box_cox_profile(x), "
        "re_expression_scan(x) FROM drawn) SELECT fact(profile, 'low'), fact(profile, 'high'), "
        "(SELECT power FROM re_expression_rows(scan) WHERE rank = 1) FROM asked");
  }
  ~Table() {
    sqlite3_finalize(insert_);
    sqlite3_finalize(ask_);
    sqlite3_close(db_);
  }
  Table(const Table&) = delete;
  Table& operator=(const Table&) = delete;

  void Fill(const std::vector<double>& values) {
    Run("BEGIN; DELETE FROM drawn");
    for (const double x : values) {
      sqlite3_bind_double(insert_, 1, x);
      if (sqlite3_step(insert_) != SQLITE_DONE) Die(db_);
      sqlite3_reset(insert_);
    }
    Run("COMMIT");
  }

  struct Answer {
    bool low_open, high_open, has_power;
    double low, high, power;
    bool Holds(double lambda) const {
      return (low_open || low <= lambda) && (high_open || lambda <= high);
    }
  };
  Answer Ask() {
    sqlite3_reset(ask_);
    if (sqlite3_step(ask_) != SQLITE_ROW) Die(db_);
    const auto given = [&](int i) { return sqlite3_column_type(ask_, i) != SQLITE_NULL; };
    const auto number = [&](int i) { return sqlite3_column_double(ask_, i); };
    return {!given(0), !given(1), given(2), number(0), number(1), number(2)};
  }

 private:
  void Run(const char* sql) {
    if (sqlite3_exec(db_, sql, nullptr, nullptr, nullptr) != SQLITE_OK) Die(db_);
  }
  sqlite3_stmt* Prepared(const char* sql) {
    sqlite3_stmt* statement = nullptr;
    if (sqlite3_prepare_v2(db_, sql, -1, &statement, nullptr) != SQLITE_OK) Die(db_);
    return statement;
  }

  sqlite3* db_ = nullptr;
  sqlite3_stmt *insert_ = nullptr, *ask_ = nullptr;
};

}  // namespace

int main(int argc, char** argv) {
  const int runs = argc > 1 ? std::atoi(argv[1]) : 2000;
  std::vector<int> sizes;
  for (int i = 2; i < argc; ++i) sizes.push_back(std::atoi(argv[i]));
  if (sizes.empty()) sizes = {50, 500, 5000};
  std::printf("%d runs each\n%-24s %6s %10s %14s %14s\n", runs, "law", "rows", "interval",
              "first right", "left alone");
  Table table;
  for (const int rows : sizes) {
    std::mt19937_64 chance(20240229 + static_cast<unsigned>(rows));
    for (const Law& law : kLaws) {
      int held = 0, right = 0, alone = 0;
      std::vector<double> values(static_cast<std::size_t>(rows));
      for (int run = 0; run < runs; ++run) {
        for (double& x : values) {
          const double uniform = (static_cast<double>(chance() >> 11) + 0.5) * 0x1p-53;
          x = law.of_normal(8 + ladderline::NormalQuantile(uniform));
        }
        table.Fill(values);
        const Table::Answer answer = table.Ask();
        held += answer.Holds(law.power);
        right += answer.has_power && (answer.power == law.power || answer.Holds(answer.power));
        alone += answer.has_power && answer.power == 1;
      }
      const auto percent = [&](int count) { return 100.0 * count / runs; };
      std::printf("%-24s %6d %9.2f%% %13.2f%% %13.2f%%\n", law.name, rows, percent(held),
                  percent(right), percent(alone));
      std::fflush(stdout);
    }
  }
  return 0;
}
