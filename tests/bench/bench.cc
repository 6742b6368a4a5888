// Speed and memory against SQLite's own functions, in one process, on one made-up table.
//
//   ladderline_bench DIRECTORY [--large]
//
// Each line is the median over several rounds of a ratio formed within the round: the statement's
// time over that of its yardstick, run just before. Times are of the loaded module; how often a
// statement parses a model is counted by the same code linked into this program. Peak memory is
// that of a process of its own, less what a process that only averages the columns takes.
#include <sqlite3.h>
#include <sys/wait.h>
#include <unistd.h>

#include <algorithm>
#include <chrono>
#include <cmath>
#include <cstdint>
#include <cstdio>
#include <cstdlib>
#include <cstring>
#include <fstream>
#include <string>
#include <utility>
#include <vector>

#include "ext/ladderline.h"
#include "ext/model_cache.h"

namespace {

constexpr int kRounds = 7;

[[noreturn]] void Die(const std::string& what) {
  std::fprintf(stderr, "%s\n", what.c_str());
  std::exit(1);
}

class Connection {
 public:
  enum class Functions { kLoaded, kLinked };
  explicit Connection(const std::string& path, Functions functions = Functions::kLoaded) {
    if (sqlite3_open(path.c_str(), &db_) != SQLITE_OK) Die("cannot open " + path);
    if (functions == Functions::kLinked) {
      if (sqlite3_ladderline_init(db_, nullptr, nullptr) != SQLITE_OK) Die("cannot register");
      return;
    }
    sqlite3_db_config(db_, SQLITE_DBCONFIG_ENABLE_LOAD_EXTENSION, 1, nullptr);
    char* message = nullptr;
    if (sqlite3_load_extension(db_, LADDERLINE_MODULE, nullptr, &message) != SQLITE_OK)
      Die(message);
  }
  ~Connection() { sqlite3_close(db_); }
  Connection(const Connection&) = delete;
  Connection& operator=(const Connection&) = delete;

  void Run(const std::string& sql) const {
    char* message = nullptr;
    if (sqlite3_exec(db_, sql.c_str(), nullptr, nullptr, &message) != SQLITE_OK)
      Die(std::string(message) + "\nin " + sql);
  }

  // Steps through all rows, `text` bound to the first parameter if there is one; the last row's
  // first column.
  std::string Last(const std::string& sql, const std::string& text = "") const {
    sqlite3_stmt* statement = nullptr;
    if (sqlite3_prepare_v2(db_, sql.c_str(), -1, &statement, nullptr) != SQLITE_OK)
      Die(std::string(sqlite3_errmsg(db_)) + "\nin " + sql);
    if (sqlite3_bind_parameter_count(statement) > 0)
      sqlite3_bind_text(statement, 1, text.data(), static_cast<int>(text.size()), SQLITE_STATIC);
    std::string last;
    int rc;
    while ((rc = sqlite3_step(statement)) == SQLITE_ROW) {
      const auto* cell = reinterpret_cast<const char*>(sqlite3_column_text(statement, 0));
      last = cell == nullptr ? "" : cell;
    }
    if (rc != SQLITE_DONE) Die(std::string(sqlite3_errmsg(db_)) + "\nin " + sql);
    sqlite3_finalize(statement);
    return last;
  }

  double Seconds(const std::string& sql, const std::string& text) const {
    const auto start = std::chrono::steady_clock::now();
    (void)Last(sql, text);
    return std::chrono::duration<double>(std::chrono::steady_clock::now() - start).count();
  }

  sqlite3* handle() const { return db_; }

 private:
  sqlite3* db_ = nullptr;
};

// The generator of Park & Miller (1988) with the multiplier 48271.
class Chance {
 public:
  double Uniform() {
    state_ = state_ * 48271 % 2147483647;
    return static_cast<double>(state_) / 2147483647.0;
  }
  double Normal() {
    const double radius = std::sqrt(-2 * std::log(Uniform()));
    return radius * std::cos(6.283185307179586 * Uniform());
  }

 private:
  std::uint64_t state_ = 20240229;
};

std::string CentsText(double x) {
  char text[64];
  std::snprintf(text, sizeof text, "%.2f", x);
  return text;
}

// Six measures, half of them whole numbers, and a text column of 12 levels.
void MakeTable(const std::string& path, int rows) {
  std::remove(path.c_str());
  const Connection db(path);
  db.Run(
      "PRAGMA journal_mode=OFF; PRAGMA synchronous=OFF; BEGIN; CREATE TABLE t(id INTEGER PRIMARY "
      "KEY, a REAL, b REAL, c INTEGER, d INTEGER, e REAL, f INTEGER, g TEXT)");
  static const char* const kTrades[12] = {"Plumbing",  "Electrical", "Heating", "Damp",
                                          "Carpentry", "Roofing",    "Glazing", "Drainage",
                                          "Painting",  "Locks",      "Fencing", "Lifts"};
  sqlite3_stmt* insert = nullptr;
  sqlite3_prepare_v2(db.handle(), "INSERT INTO t(a, b, c, d, e, f, g) VALUES (?,?,?,?,?,?,?)", -1,
                     &insert, nullptr);
  Chance chance;
  for (int i = 0; i < rows; ++i) {
    const double b = 100 * chance.Uniform();
    const int c = 1 + static_cast<int>(120 * chance.Uniform());
    const int d = 1 + static_cast<int>(std::exp(1 + chance.Normal()));
    const double e = 50 + 12 * chance.Normal();
    const int f = static_cast<int>(8 * chance.Uniform());
    const auto g = static_cast<int>(12 * chance.Uniform());
    const double a = std::exp(3 + 0.004 * b + 0.005 * c + 0.3 * std::log(d) + 0.01 * e + 0.02 * f +
                              0.05 * g + 0.6 * chance.Normal());
    sqlite3_bind_double(insert, 1, std::strtod(CentsText(a).c_str(), nullptr));
    sqlite3_bind_double(insert, 2, b);
    sqlite3_bind_int(insert, 3, c);
    sqlite3_bind_int(insert, 4, d);
    sqlite3_bind_double(insert, 5, e);
    sqlite3_bind_int(insert, 6, f);
    sqlite3_bind_text(insert, 7, kTrades[g], -1, SQLITE_STATIC);
    sqlite3_step(insert);
    sqlite3_reset(insert);
  }
  sqlite3_finalize(insert);
  db.Run("COMMIT");
}

struct Line {
  std::string what;
  std::string sql;
  std::string yardstick;  // SQL
  double limit;           // the ratio aimed at
  std::string bound = {};
};

constexpr const char* kSixAverages = "SELECT avg(a), avg(b), avg(c), avg(d), avg(e), avg(f) FROM t";
constexpr const char* kFit =
    "ols_model('a', a, 'b', b, 'c', c, 'd', d, 'e', e, 'f', f, 'checks | option', 'none')";
constexpr const char* kLogFit =
    "ols_model('a | log_offset 1', a, 'g', g, 'b', b, 'c', c, 'd', d, 'e', e, 'f', f, "
    "'checks | option', 'none')";
constexpr const char* kChecked = "'a', a, 'b', b, 'c', c, 'd', d, 'e', e, 'f', f";
const std::string kCheckedModel = std::string("SELECT ols_model(") + kChecked + ") FROM t";
const std::string kClusteredModel =
    std::string("SELECT ols_model(") + kChecked + ", 'k | cluster', id % 1000) FROM t";
const std::string kModel = std::string("SELECT ") + kFit + " FROM t";
const std::string kLogModel = std::string("SELECT ") + kLogFit + " FROM t";

std::vector<Line> Lines(const std::string& model) {
  const std::string inputs = ", b, c, d, e, f";
  const std::string six = "'a', a, 'b', b, 'c', c, 'd', d, 'e', e, 'f', f";
  const std::string rounded = "SELECT sum(round(a, 2)) FROM t";
  const std::string window = " OVER (ORDER BY id ROWS 100 PRECEDING) AS w FROM t)";
  // A figure of each stretch of 5,000 rows: short statements one by one would measure the clock.
  const auto of_stretches = [](const std::string& figure) {
    return "WITH RECURSIVE stretch(first) AS (SELECT 1 UNION ALL SELECT first + 5000 FROM stretch "
           "WHERE first + 5000 <= (SELECT max(id) FROM t)) SELECT count((SELECT " +
           figure + " FROM t WHERE id BETWEEN first AND first + 4999)) FROM stretch";
  };
  const std::string typical = "SELECT sum(fitted_typical(m" + inputs + ")) ";
  return {
      {"ols_model, five numbers", kModel, kSixAverages, 1.40},
      {"ols_model, log response, 12-level category", kLogModel, kSixAverages, 2.1},
      {"ols_model, five numbers, all checks", kCheckedModel, kSixAverages, 2.3},
      {"the same with 1,000 clusters", kClusteredModel, kSixAverages, 2.8},
      {"ols_model by a 12-level column", kModel + " GROUP BY g",
       std::string(kSixAverages) + " GROUP BY g", 1.4},
      {"stddev_samp", "SELECT stddev_samp(a) FROM t", "SELECT avg(a) FROM t", 1.2},
      {"skewness", "SELECT skewness(a) FROM t", "SELECT avg(a) FROM t", 1.2},
      {"stddev_samp, moving", "SELECT sum(w) FROM (SELECT stddev_samp(a)" + window,
       "SELECT sum(w) FROM (SELECT avg(a)" + window, 1.25},
      {"shapiro_wilk of 5,000 rows against median", of_stretches("shapiro_wilk(a)"),
       of_stretches("median(a)"), 3},
      {"box_cox_lambda", "SELECT box_cox_lambda(a) FROM t", "SELECT avg(a) FROM t", 2},
      {"box_cox_profile", "SELECT box_cox_profile(a) FROM t", kSixAverages, 0.9},
      {"box_cox_profile, five predictors", "SELECT box_cox_profile(" + six + ") FROM t",
       kSixAverages, 2.5},
      {"re_expression_scan", "SELECT re_expression_scan(a) FROM t", kSixAverages, 6},
      {"re_expression_scan, five predictors", "SELECT re_expression_scan(" + six + ") FROM t",
       kSixAverages, 9},
      {"fitted_typical, literal model",
       "SELECT sum(fitted_typical('" + model + "'" + inputs + ")) FROM t", rounded, 1.0},
      {"fitted_typical, bound model", "SELECT sum(fitted_typical(?1" + inputs + ")) FROM t",
       rounded, 1.0, model},
      {"fitted_typical, model of a CTE",
       "WITH held(m) AS (SELECT small FROM one) " + typical + "FROM t, held", rounded, 1.5},
      {"fitted_typical, model of a joined row",
       typical + "FROM t JOIN (SELECT small AS m FROM one)", rounded, 1.5},
      {"fitted_typical, model of a scalar subquery",
       "SELECT sum(fitted_typical((SELECT small FROM one)" + inputs + ")) FROM t", rounded, 1.8},
      {"fitted_typical, 12 models joined by group",
       typical + "FROM t JOIN (SELECT g, small AS m FROM each_group) USING (g)", rounded, 2.5},
  };
}

double Median(std::vector<double> values) {
  std::sort(values.begin(), values.end());
  return values[values.size() / 2];
}

// What a process takes that runs one statement and nothing else.
struct Cost {
  double seconds = 0;
  double peak_kib = 0;
};

// Measures in a child, which begins with what this process holds: to be asked while that is little.
Cost CostOf(const std::string& path, const std::string& sql) {
  int ends[2];
  if (pipe(ends) != 0) Die("no pipe");
  const pid_t child = fork();
  Cost cost;
  if (child == 0) {
    {
      const Connection db(path);
      cost.seconds = db.Seconds(sql, "");
    }
    std::ifstream status("/proc/self/status");
    for (std::string line; std::getline(status, line);)
      if (line.rfind("VmHWM:", 0) == 0) cost.peak_kib = std::strtod(line.c_str() + 6, nullptr);
    _exit(write(ends[1], &cost, sizeof cost) == sizeof cost ? 0 : 1);
  }
  const bool told = read(ends[0], &cost, sizeof cost) == sizeof cost;
  waitpid(child, nullptr, 0);
  close(ends[0]);
  close(ends[1]);
  if (!told) Die("a measured process failed: " + sql);
  return cost;
}

constexpr double kMiB = 1024.0 * 1024.0;

void PrintMemory(const std::string& path, int rows, const char* what, const std::string& sql,
                 int numbers) {
  const double taken = 1024 * (CostOf(path, sql).peak_kib - CostOf(path, kSixAverages).peak_kib);
  const double limit = 1.3 * 8 * numbers * rows + 16 * kMiB;
  std::printf("%-46s %7.1f MiB   aim %7.1f MiB   %5.2f bytes a number\n", what, taken / kMiB,
              limit / kMiB, taken / (static_cast<double>(numbers) * rows));
}

void PrintGrowth(const std::string& path, int rows) {
  for (const auto& [what, sql] : {std::pair<const char*, std::string>{"six averages", kSixAverages},
                                  {"ols_model, five numbers", kModel},
                                  {"ols_model, log response, 12-level category", kLogModel},
                                  {"box_cox_lambda", "SELECT box_cox_lambda(a) FROM t"},
                                  {"median", "SELECT median(a) FROM t"}}) {
    const Cost cost = CostOf(path, sql);
    std::printf("%-46s %10d rows %8.2f s %8.1f MiB\n", what, rows, cost.seconds,
                cost.peak_kib / 1024);
    std::fflush(stdout);
  }
}

void PrintRatios(const std::string& path) {
  const Connection db(path);
  db.Run(std::string("CREATE TABLE one AS SELECT ") + kFit + " AS model FROM t");
  db.Run(std::string("CREATE TABLE each_group(g TEXT PRIMARY KEY, model); "
                     "INSERT INTO each_group SELECT g, ") +
         kFit + " FROM t GROUP BY g");
  const std::string full = db.Last("SELECT model FROM one");
  // A model of the size for which the aims were set: without the lists that predictions do not
  // need. Beyond a page of the database the host alone takes longer to hand a text over.
  for (const char* table : {"one", "each_group"}) {
    db.Run(std::string("ALTER TABLE ") + table + " ADD COLUMN small; UPDATE " + table +
           " SET small = json_remove(model, '$.influence', '$.residuals', '$.tests')");
  }
  const std::string small = db.Last("SELECT small FROM one");
  std::printf("ratios to the yardstick; models of %zu bytes, small ones of %zu\n", full.size(),
              small.size());
  const std::vector<Line> lines = Lines(small);
  std::vector<std::vector<double>> ratios(lines.size());
  for (int round = 0; round < kRounds; ++round) {
    for (size_t i = 0; i < lines.size(); ++i) {
      const double yardstick = db.Seconds(lines[i].yardstick, "");
      ratios[i].push_back(db.Seconds(lines[i].sql, lines[i].bound) / yardstick);
    }
  }
  for (size_t i = 0; i < lines.size(); ++i) {
    const auto [low, high] = std::minmax_element(ratios[i].begin(), ratios[i].end());
    const Connection linked(path, Connection::Functions::kLinked);
    const std::int64_t before = ladderline::ModelParses();
    (void)linked.Last(lines[i].sql, lines[i].bound);
    std::printf("%-46s %5.2f x   aim %4.2f   (%.2f to %.2f)   %lld parses\n", lines[i].what.c_str(),
                Median(ratios[i]), lines[i].limit, *low, *high,
                static_cast<long long>(ladderline::ModelParses() - before));
  }
}

}  // namespace

int main(int argc, char** argv) {
  if (argc < 2) Die("usage: ladderline_bench DIRECTORY [--large]");
  const std::string path = std::string(argv[1]) + "/bench.db";
  const bool large = argc > 2 && std::strcmp(argv[2], "--large") == 0;
  constexpr int kRows = 1'000'000;
  MakeTable(path, kRows);
  std::printf("%s\n%d rows\n\npeak memory\n",
              Connection(path).Last("SELECT ladderline_version()").c_str(), kRows);
  PrintMemory(path, kRows, "ols_model, five numbers", kModel, 6);
  PrintMemory(path, kRows, "ols_model, five numbers, all checks", kCheckedModel, 6);
  PrintMemory(path, kRows, "the same with 1,000 clusters", kClusteredModel, 7);
  PrintMemory(path, kRows, "ols_model, log response, 12-level category", kLogModel, 7);
  std::printf("\ngrowth\n");
  PrintGrowth(path, kRows);
  if (large) {
    const std::string large_path = std::string(argv[1]) + "/large.db";
    MakeTable(large_path, 10 * kRows);
    PrintGrowth(large_path, 10 * kRows);
    std::remove(large_path.c_str());
  }
  std::printf("\n");
  PrintRatios(path);
  std::remove(path.c_str());
  return 0;
}
