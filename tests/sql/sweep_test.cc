// Every function of the registration table, in every place where SQL lets it stand, and with
// everything that SQL can hand it.
//
// What is called with what follows from the names in the table's `arguments`; a new function whose
// arguments have new names is added to `kUsual` below (the sweep says so by failing).
#include <cmath>
#include <functional>
#include <map>
#include <sstream>

#include "tests/sql/database.h"

namespace ladderline::testing {
namespace {

struct Function {
  std::string name, kind;
  std::vector<std::string> arguments;  // names, in order; of an open list those named once
  size_t least = 0;                    // arguments that cannot be left out
  bool open = false;                   // any number may follow
  bool table() const { return kind == "table"; }
  bool scalar() const { return kind == "scalar"; }
};

bool IsAggregate(const Function& function) { return !function.scalar() && !function.table(); }

// Reads `x [, offset = 0 [, base = e]]`: names up to each comma, optional from the first bracket.
Function ReadFunction(const std::string& name, const std::string& kind, const std::string& text) {
  Function function{name, kind, {}, 0, text.find("…") != std::string::npos};
  bool optional = false;
  std::stringstream parts(text);
  for (std::string part; std::getline(parts, part, ',');) {
    const size_t first = part.find_first_not_of(" [");
    if (first == std::string::npos) continue;
    const size_t last = part.find_first_of(" []=…", first);
    const std::string argument = part.substr(first, last - first);
    optional = optional || part.find('[') < first;
    if (!argument.empty()) {
      function.arguments.push_back(argument);
      if (!optional && part.find("…") == std::string::npos) ++function.least;
    }
    optional = optional || part.find('[') != std::string::npos;
  }
  return function;
}

std::string Quoted(const std::string& text) {
  std::string quoted = "'";
  for (const char c : text) quoted += c == '\'' ? "''" : std::string(1, c);
  return quoted + "'";
}

class Sweep : public ::testing::Test {
 protected:
  Sweep() {
    db_.Run(
        "CREATE TABLE sample(id INTEGER PRIMARY KEY, g TEXT, x REAL, y REAL);"
        "INSERT INTO sample VALUES (1,'a',3.5,1.2), (2,'b',1.25,2.5), (3,'a',7,3.1), (4,'a',2,0.4),"
        " (5,'b',9.5,4.25), (6,'b',NULL,1), (7,'a',4.75,6.5), (8,'b',0.5,2.2), (9,'a',6,3.3),"
        " (10,'b',8.25,5), (11,'a',1.5,1.9), (12,'b',5.5,0.7), (13,'a',2.75,2.6), (14,'b',3,4.1)");
    for (const auto& row : db_.Rows("SELECT name, kind, arguments FROM ladderline_functions")) {
      const std::string ways = row[2].value_or(""), either = " or ";  // `x or label, value, …`
      for (size_t first = 0, end = 0; end != std::string::npos; first = end + either.size()) {
        end = ways.find(either, first);
        functions_.push_back(ReadFunction(*row[0], *row[1], ways.substr(first, end - first)));
      }
    }
    if (Has("ols_model_plain")) {
      model_ = Quoted(db_.Text("SELECT ols_model_plain(y, x) FROM sample"));
      refused_ = Quoted(db_.Text("SELECT ols_model_plain(y, x) FROM sample WHERE id = 1"));
    }
  }

  bool Has(const std::string& name) const {
    for (const Function& function : functions_)
      if (function.name == name) return true;
    return false;
  }

  // A call that has an answer, every optional argument given. In an aggregate x and y are columns
  // of `sample`.
  std::vector<std::string> Usual(const Function& function) const {
    static const std::map<std::string, std::string> kUsual = {
        {"x", "0.3"},         {"y", "1.5"},        {"z", "0.25"},      {"p", "0.3"},
        {"offset", "1"},      {"base", "120"},     {"lambda", "0.5"},  {"theta", "2"},
        {"low", "0"},         {"high", "1"},       {"inset", "0.01"},  {"mean", "1"},
        {"sd", "2"},          {"old_low", "0"},    {"old_high", "10"}, {"new_low", "1"},
        {"new_high", "2"},    {"middle", "1"},     {"top", "100"},     {"d", "'2024-02-29'"},
        {"n", "19782"},       {"events", "3"},     {"per", "1000"},    {"level", "0.9"},
        {"part", "3"},        {"whole", "10"},     {"e1", "3"},        {"b1", "100"},
        {"e2", "5"},          {"b2", "120"},       {"code", "'n/a'"},  {"spec", "'log_offset 1'"},
        {"name", "'rows'"},   {"inputs", "2.5"},   {"bins", "4"},      {"points", "5"},
        {"fraction", "0.25"}, {"errors", "'hc3'"}, {"term", "'x1'"},   {"floor", "3"},
        {"title", "'t'"},     {"axis", "'a'"},     {"x_axis", "'a'"},  {"y_axis", "'b'"},
        {"guide", "0.5"},     {"rows", "5"},       {"form", "'html'"}, {"text", "'<b>'"},
    };
    static const std::map<std::string, std::string> kResults = {
        {"fact", "SELECT box_cox_profile(x) FROM sample"},
        {"value_audit_rows", "SELECT value_audit(x) FROM sample"},
    };
    std::vector<std::string> values;
    for (const std::string& argument : function.arguments) {
      if (argument == "scan") {
        values.push_back(Quoted(db_.Text("SELECT re_expression_scan(x) FROM sample")));
      } else if (argument == "m" || argument == "model" || argument == "first" ||
                 argument == "second" || argument == "old" || argument == "new") {
        values.push_back(model_);
      } else if (argument == "result") {
        values.push_back(Quoted(db_.Text(kResults.at(function.name))));
      } else if (argument == "label") {
        values.push_back("'y', y, 'x', x");
        break;
      } else if (IsAggregate(function) &&
                 (argument == "x" || argument == "y" || argument == "x1")) {
        values.push_back(argument == "y" ? "y" : "x");
        if (argument == "x1") break;
      } else if (IsAggregate(function) && argument == "n") {
        values.push_back("id % 7");
      } else {
        const auto found = kUsual.find(argument);
        EXPECT_TRUE(found != kUsual.end()) << function.name << " has an argument " << argument;
        values.push_back(found == kUsual.end() ? "1" : found->second);
      }
    }
    return values;
  }

  static std::string Call(const Function& function, const std::vector<std::string>& values) {
    std::string sql = function.name + "(";
    for (size_t i = 0; i < values.size(); ++i) sql += (i == 0 ? "" : ", ") + values[i];
    return sql + ")";
  }

  std::vector<Database::Row> Rows(const std::string& sql) const {
    try {
      return db_.Rows(sql);
    } catch (const std::runtime_error& error) {
      ADD_FAILURE() << error.what() << "\nin " << sql;
      return {};
    }
  }

  void ForEach(const std::function<bool(const Function&)>& wanted,
               const std::function<void(const Function&)>& body) const {
    int seen = 0;
    for (const Function& function : functions_) {
      if (!wanted(function)) continue;
      ++seen;
      SCOPED_TRACE(function.name);
      body(function);
    }
    EXPECT_GT(seen, 0);
  }

  Database db_;
  std::vector<Function> functions_;
  std::string model_ = "''", refused_ = "''";  // as SQL literals
};

// ---- What SQL can hand over ----

// Every value in each position: alone and with every other value beside it for one and two
// arguments, and beside plausible ones for three and four. The answer is a value, or an error whose
// message begins with the function's name; the host itself refuses a wrong number of arguments.
TEST_F(Sweep, AnyValueInAnyPositionIsAnsweredOrRefusedInWords) {
  const std::vector<std::string> values = {"NULL",
                                           "''",
                                           "' '",
                                           "'text'",
                                           "x'00FF41'",
                                           "x''",
                                           "9e999",
                                           "-9e999",
                                           "9223372036854775807",
                                           "-9223372036854775807 - 1",
                                           "1.7e308",
                                           "-1.7e308",
                                           "5e-324",
                                           "0",
                                           "-1",
                                           "0.5",
                                           "1",
                                           "400",
                                           "' 12 '",
                                           "'5.'",
                                           "'2024-02-29'",
                                           "'log_offset 1'",
                                           "'box_cox 0.25 7 7'",
                                           "'age | category'",
                                           "'a | b | c'",
                                           "'{\"a\": [1, {}]}'",
                                           "CAST(x'FFFE' AS TEXT)",
                                           model_,
                                           refused_,
                                           "substr(" + model_ + ", 1, 300)",
                                           "replace(" + model_ + ", '0', 'null')"};
  const std::vector<std::vector<std::string>> beside = {{"1", "1", "1", "1"},
                                                        {model_, "0.9", "1", "1"},
                                                        {model_, "1", "1", "1"},
                                                        {"'y'", "1.5", "'x | log_offset 1'", "2"},
                                                        {"NULL", "NULL", "NULL", "NULL"}};
  for (const Function& function : functions_) {
    SCOPED_TRACE(function.name);
    const auto check = [&](const std::vector<std::string>& arguments) {
      const std::string call = Call(function, arguments);
      const std::string sql = function.table() ? "SELECT * FROM " + call : "SELECT " + call;
      const std::string error = db_.ErrorOf(sql);
      if (error == "(no error)") return;
      const bool count_is_right = arguments.size() >= function.least &&
                                  (function.open || arguments.size() <= function.arguments.size());
      if (count_is_right) {
        EXPECT_EQ(error.rfind(function.name + ": ", 0), 0u) << error << "\nin " << sql;
      } else {
        EXPECT_NE(error.find(function.name), std::string::npos) << error << "\nin " << sql;
      }
    };
    check({});
    for (const std::string& a : values) check({a});
    for (const std::string& a : values)
      for (const std::string& b : values) check({a, b});
    for (size_t count = 3; count <= 4; ++count) {
      for (const auto& base : beside) {
        for (size_t i = 0; i < count; ++i) {
          for (const std::string& a : values) {
            std::vector<std::string> arguments(base.begin(),
                                               base.begin() + static_cast<std::ptrdiff_t>(count));
            arguments[i] = a;
            check(arguments);
          }
        }
      }
    }
  }
}

TEST_F(Sweep, AScalarOfNullIsNull) {
  ForEach([](const Function& f) { return f.scalar(); },
          [&](const Function& function) {
            // These speak of a missing model or value in words; a code that is NULL is no code.
            const bool speaks = function.name == "fit_note" || function.name == "model_problem" ||
                                function.name == "model_flaw";
            const std::vector<std::string> usual = Usual(function);
            for (size_t i = 0; i < usual.size(); ++i) {
              if (speaks || (function.name == "number_or_null" && i > 0)) continue;
              std::vector<std::string> values = usual;
              values[i] = "NULL";
              const auto rows = Rows("SELECT " + Call(function, values));
              ASSERT_EQ(rows.size(), 1u);
              EXPECT_FALSE(rows[0][0].has_value()) << Call(function, values);
            }
          });
}

// ---- Where a call can stand ----

TEST_F(Sweep, EveryExampleStandsInViewsAndTriggersOfAnUntrustedSchema) {
  ASSERT_EQ(db_.Text("PRAGMA trusted_schema"), "0");
  db_.Run("CREATE TABLE event(id); CREATE TABLE log(rows)");
  for (const auto& row : db_.Rows("SELECT name, example FROM ladderline_functions")) {
    SCOPED_TRACE(*row[0]);
    const auto direct = Rows(*row[1]);
    db_.Run("CREATE VIEW looked_at AS " + *row[1]);
    EXPECT_EQ(Rows("SELECT * FROM looked_at"), direct);
    db_.Run(
        "CREATE TRIGGER noted AFTER INSERT ON event BEGIN INSERT INTO log "
        "SELECT count(*) FROM (" +
        *row[1] + "); END; INSERT INTO event VALUES (1)");
    EXPECT_EQ(db_.Text("SELECT rows FROM log"), std::to_string(direct.size()));
    db_.Run("DROP TRIGGER noted; DROP VIEW looked_at; DELETE FROM log; DELETE FROM event");
  }
}

TEST_F(Sweep, EveryScalarStandsInColumnsChecksAndIndexesOfAnUntrustedSchema) {
  ForEach([](const Function& f) { return f.scalar() && !f.arguments.empty(); },
          [&](const Function& function) {
            std::vector<std::string> values = Usual(function);
            const std::string direct = Call(function, values);
            const auto expected = Rows("SELECT " + direct);
            const std::string first = values[0];
            values[0] = "a";
            const std::string call = Call(function, values);
            Rows("CREATE TABLE derived(a, kept AS (" + call + ") STORED, made AS (" + call +
                 ") VIRTUAL, CHECK (" + call + " IS kept))");
            Rows("CREATE INDEX by_call ON derived(" + call + ")");
            Rows("INSERT INTO derived(a) VALUES (" + first + "), (" + first + ")");
            EXPECT_EQ(Rows("SELECT kept FROM derived LIMIT 1"), expected);
            EXPECT_EQ(Rows("SELECT made FROM derived LIMIT 1"), expected);
            EXPECT_EQ(Rows("SELECT count(*) FROM derived INDEXED BY by_call WHERE " + call +
                           " IS " + direct),
                      Rows("SELECT 2"));
            EXPECT_EQ(Rows("PRAGMA integrity_check"), Rows("SELECT 'ok'"));
            Rows("DROP TABLE derived");
          });
}

TEST_F(Sweep, EveryAggregateGivesTheSameByGroupByFilterAndOver) {
  ForEach(IsAggregate, [&](const Function& function) {
    EXPECT_EQ(function.kind, "aggregate, window");
    const std::string call = Call(function, Usual(function));
    const auto grouped = Rows("SELECT " + call + " FROM sample GROUP BY g ORDER BY g");
    ASSERT_EQ(grouped.size(), 2u);
    EXPECT_EQ(Rows("SELECT " + call + " FILTER (WHERE g = 'a') FROM sample")[0], grouped[0]);
    EXPECT_EQ(Rows("SELECT " + call + " FILTER (WHERE g = 'b') FROM sample")[0], grouped[1]);
    EXPECT_EQ(Rows("SELECT DISTINCT " + call + " OVER (PARTITION BY g) FROM sample WHERE g = 'b'"),
              std::vector<Database::Row>{grouped[1]});
    EXPECT_EQ(Rows("SELECT " + call + " FILTER (WHERE g = 'a') OVER () FROM sample LIMIT 1"),
              std::vector<Database::Row>{grouped[0]});
    Rows("CREATE VIEW looked_at AS SELECT g, " + call + " AS found FROM sample GROUP BY g");
    EXPECT_EQ(Rows("SELECT found FROM looked_at ORDER BY g"), grouped);
    Rows("DROP VIEW looked_at");
  });
}

// A model without a key names its influential rows by their numbers, which in a moving frame count
// from the first row offered, not from the frame's.
std::string WithoutRowNumbers(const std::string& text) {
  auto model = nlohmann::ordered_json::parse(text, nullptr, false);
  if (!model.is_object() || !model.contains("influence")) return text;
  for (auto& row : model["influence"]) row[0] = nullptr;
  return model.dump();
}

// Numbers to 9 digits, since a moving frame may round otherwise; all else to the byte.
void ExpectClose(const Database::Row& found, const Database::Row& expected) {
  ASSERT_EQ(found.size(), 1u);
  ASSERT_EQ(found[0].has_value(), expected[0].has_value());
  if (!found[0]) return;
  const auto number = [](const std::string& text) {
    char* end = nullptr;
    const double value = std::strtod(text.c_str(), &end);
    return *end == '\0' ? value : std::nan("");
  };
  const double a = number(*found[0]), b = number(*expected[0]);
  if (std::isnan(b)) {
    EXPECT_EQ(WithoutRowNumbers(*found[0]), WithoutRowNumbers(*expected[0]));
  } else {
    EXPECT_LE(std::abs(a - b), 1e-9 * std::max(1.0, std::abs(b)));
  }
}

TEST_F(Sweep, EveryAggregateAgreesInMovingFramesWithTheFramesRows) {
  ForEach(IsAggregate, [&](const Function& function) {
    const std::string call = Call(function, Usual(function));
    for (const auto& [before, after] : {std::pair{5, 1}, {0, 8}, {7, -3}}) {
      const std::string end =
          after >= 0 ? std::to_string(after) + " FOLLOWING" : std::to_string(-after) + " PRECEDING";
      const auto moving =
          Rows("SELECT " + call + " OVER (ORDER BY id ROWS BETWEEN " + std::to_string(before) +
               " PRECEDING AND " + end + ") FROM sample ORDER BY id");
      ASSERT_EQ(moving.size(), 14u);
      for (int id = 1; id <= 14; ++id) {
        SCOPED_TRACE("row " + std::to_string(id) + " of frame to " + end);
        const auto fresh = Rows("SELECT " + call + " FROM (SELECT * FROM sample WHERE id BETWEEN " +
                                std::to_string(id - before) + " AND " + std::to_string(id + after) +
                                " ORDER BY id)");
        ExpectClose(moving[static_cast<size_t>(id - 1)], fresh[0]);
      }
    }
  });
}

TEST_F(Sweep, EveryAggregateOfAFrameEmptyFromTheStartIsThatOfNoRows) {
  ForEach(IsAggregate, [&](const Function& function) {
    const std::string call = Call(function, Usual(function));
    const auto of_none = Rows("SELECT " + call + " FROM sample WHERE false");
    const auto moving = Rows("SELECT " + call +
                             " OVER (ORDER BY id ROWS BETWEEN 4 PRECEDING AND 3 PRECEDING)"
                             " FROM sample ORDER BY id LIMIT 3");
    for (const auto& row : moving) EXPECT_EQ(row, of_none[0]);
  });
}

}  // namespace
}  // namespace ladderline::testing
