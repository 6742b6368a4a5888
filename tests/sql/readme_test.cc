// What the README and the demo show must run, and the function reference must be the table's.
//
// To write the reference anew after a change of the table, run this program with
// LADDERLINE_UPDATE=1 in its environment, and look at the difference.
#include <cstdlib>
#include <filesystem>
#include <fstream>
#include <set>

#include "tests/sql/database.h"

namespace ladderline::testing {
namespace {

const std::string kRoot = SourceDirectory();

struct DemoDatabase : Database {
  DemoDatabase() { Run(ReadFile("examples/make_database.sql")); }
};

// The blocks of Markdown fenced with ```sql, in order, and the files that blocks of the shell's own
// commands read.
std::vector<std::string> SqlBlocks(const std::string& page) {
  static const std::string kFence = "\n```", kSql = "sql\n", kRead = "text\n.bail on\n.read ";
  std::vector<std::string> blocks;
  for (size_t at = page.find(kFence); at != std::string::npos; at = page.find(kFence, at)) {
    at += kFence.size();
    const size_t end = page.find(kFence, at);
    const std::string block = page.substr(at, end - at);
    if (block.rfind(kSql, 0) == 0) blocks.push_back(block.substr(kSql.size()));
    if (block.rfind(kRead, 0) == 0) blocks.push_back(Statements(block.substr(kRead.size())));
    at = end + kFence.size();
  }
  return blocks;
}

TEST(Readme, EveryStatementRunsOnTheDemoDatabase) {
  const DemoDatabase db;
  const auto blocks = SqlBlocks(ReadFile("README.md"));
  EXPECT_GT(blocks.size(), 10u);
  for (const std::string& block : blocks) {
    try {
      EXPECT_FALSE(db.Rows(block).empty() && block.find("CREATE") == std::string::npos)
          << "no rows from\n"
          << block;
    } catch (const std::runtime_error& error) {
      ADD_FAILURE() << error.what() << "\nin\n" << block;
    }
  }
}

// Markdown tables by kind, in the order of the registration table.
std::string Reference(const Database& db) {
  static const std::pair<const char*, const char*> kKinds[] = {
      {"scalar", "Functions of one row"},
      {"aggregate", "Aggregates, with GROUP BY, FILTER and OVER"},
      {"table", "Functions that give a table"}};
  const auto cell = [](const std::string& text) {
    std::string escaped;
    for (const char c : text) {
      if (c == '|') escaped += '\\';
      escaped += c;
    }
    return escaped;
  };
  std::string page;
  for (const auto& [kind, heading] : kKinds) {
    page += "\n### " + std::string(heading) +
            "\n\n| function | what it gives | source |\n|---|---|---|\n";
    for (const auto& row :
         db.Rows("SELECT name, arguments, purpose, source FROM ladderline_functions "
                 "WHERE kind LIKE '" +
                 std::string(kind) + "%'")) {
      for (const std::string& part :
           {std::string("| `"), *row[0], std::string("("), cell(*row[1]), std::string(")` | "),
            cell(*row[2]), std::string(" | "), cell(row[3].value_or("")), std::string(" |\n")})
        page += part;
    }
  }
  return page + "\n";
}

TEST(Readme, FunctionReferenceIsThatOfTheTable) {
  const Database db;
  const std::string page = ReadFile("README.md");
  static const std::string kBegin = "<!-- functions: written by tests/sql/readme_test.cc -->\n";
  const size_t begin = page.find(kBegin), end = page.find("<!-- end of functions -->");
  ASSERT_NE(begin, std::string::npos);
  ASSERT_NE(end, std::string::npos);
  const size_t from = begin + kBegin.size();
  const std::string reference = Reference(db);
  if (std::getenv("LADDERLINE_UPDATE") != nullptr) {
    std::ofstream(kRoot + "README.md", std::ios::binary)
        << page.substr(0, from) + reference + page.substr(end);
    return;
  }
  EXPECT_EQ(page.substr(from, end - from), reference)
      << "run this program with LADDERLINE_UPDATE=1 to write the reference anew";
}

// ---- The demo ----

TEST(Demo, EveryFileRunsAndShowsWhatItPromises) {
  const DemoDatabase db;
  std::set<std::string> files;
  for (const auto& entry : std::filesystem::directory_iterator(kRoot + "examples")) {
    const std::string name = entry.path().filename();
    if (entry.path().extension() == ".sql" && name != "make_database.sql") files.insert(name);
  }
  ASSERT_GE(files.size(), 6u);
  for (const std::string& name : files) {
    SCOPED_TRACE(name);
    ASSERT_NO_THROW(EXPECT_FALSE(db.Rows(Statements("examples/" + name)).empty()));
  }
  // One district is too thin for a model, and says so.
  EXPECT_EQ(db.Text("SELECT group_concat(district) FROM district_model "
                    "WHERE model_problem(model) IS NOT NULL"),
            "Saltspur Isle");
  // The week of the flooded street stands out.
  EXPECT_GT(db.Number("SELECT max(z) FROM (SELECT monday, z_against_earlier(cases) OVER (PARTITION "
                      "BY district ORDER BY monday ROWS 52 PRECEDING) AS z FROM weekly_cases) "
                      "WHERE monday = '2024-10-14'"),
            4);
  // The choice for costs keeps the free repairs; the plain logarithm would lose them.
  const std::string scan = " FROM choice, re_expression_rows(scan) WHERE measure = 'cost' AND ";
  EXPECT_EQ(db.Text("SELECT spec GLOB 'log_offset 2*' AND rows_outside = 0" + scan + "rank = 1"),
            "1");
  EXPECT_GT(db.Number("SELECT rows_outside" + scan + "spec = 'log_offset'"), 800);
  // Re-expressed measures keep to what can occur, raw ones do not.
  const auto limit = [&](const std::string& which, const std::string& measure,
                         const std::string& model) {
    return db.Number("SELECT case_" + which + "(" + model +
                     ", 0.9, 'dwellings', 4, 'building age', 40, 'trade', 'Damp') FROM "
                     "re_expressed_model WHERE measure = '" +
                     measure + "'");
  };
  EXPECT_LT(limit("low", "cost", "raw"), 0);
  EXPECT_GT(limit("low", "cost", "model"), 0);
  EXPECT_GT(limit("high", "score", "raw"), 100);
  EXPECT_LT(limit("high", "score", "model"), 100);
  EXPECT_LT(limit("low", "visits", "raw"), 0.5);
  EXPECT_GT(limit("low", "visits", "model"), 0.5);
  // Sums of means come out at what was paid; sums of typical values fall well short.
  const auto share = [&](const std::string& function) {
    return db.Number("SELECT sum(" + function +
                     "(model, dwellings, building_age, trade, district)) "
                     "/ sum(cost) FROM repair, cost_model "
                     "WHERE cost IS NOT NULL AND building_age IS NOT NULL");
  };
  EXPECT_NEAR(share("fitted_mean"), 1, 0.03);
  EXPECT_LT(share("fitted_typical"), 0.85);
}

}  // namespace
}  // namespace ladderline::testing
