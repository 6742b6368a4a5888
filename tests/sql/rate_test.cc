// Rates, shares and ratios, as SQL sees them. Their digits are proved in core/rates_test.
#include "tests/sql/database.h"

namespace ladderline::testing {
namespace {

struct CallCase {
  const char* function;
  std::vector<const char*> arguments;
};

const CallCase kCalls[] = {
    {"rate_per", {"17", "4200", "1000"}},
    {"rate_low", {"17", "4200", "1000", "0.9"}},
    {"rate_high", {"17", "4200", "1000", "0.9"}},
    {"percent_of", {"12", "80"}},
    {"percent_low", {"12", "80", "0.9"}},
    {"percent_high", {"12", "80", "0.9"}},
    {"rate_ratio", {"17", "4200", "9", "3900"}},
    {"rate_ratio_low", {"17", "4200", "9", "3900", "0.9"}},
    {"rate_ratio_high", {"17", "4200", "9", "3900", "0.9"}},
    {"rate_ratio_p", {"17", "4200", "9", "3900"}},
};

std::string CallText(const CallCase& c, size_t replaced, const std::string& by) {
  std::string text = std::string(c.function) + "(";
  for (size_t i = 0; i < c.arguments.size(); ++i) {
    if (i > 0) text += ", ";
    text += i == replaced ? by : c.arguments[i];
  }
  return text + ")";
}

constexpr size_t kNone = 99;

// R 4.2.2: poisson.test(17, 4.2), poisson.test(17, 4.2, conf.level = 0.9), 100 *
// binom.test(12, 80)$conf.int, poisson.test(c(17, 9), c(4200, 3900)); R's limits and p have at
// least ten digits.
TEST(Rates, AgreeWithR) {
  const Database db;
  const std::pair<const char*, double> cases[] = {
      {"rate_per(17, 4200, 1000)", 4.0476190476190474},
      {"rate_low(17, 4200, 1000)", 2.3578872546684018},
      {"rate_high(17, 4200, 1000)", 6.4806301942634787},
      {"rate_low(17, 4200, 1000, 0.9)", 2.5790810372085677},
      {"percent_of(12, 80)", 15},
      {"percent_low(12, 80)", 7.998156130971382},
      {"percent_high(12, 80)", 24.736411159289762},
      {"rate_ratio(17, 4200, 9, 3900)", 1.7539682539682537},
      {"rate_ratio_low(17, 4200, 9, 3900)", 0.73950519812865467},
      {"rate_ratio_high(17, 4200, 9, 3900)", 4.4655793065576583},
      {"rate_ratio_p(17, 4200, 9, 3900)", 0.17621689959159834},
  };
  for (const auto& [call, value] : cases)
    EXPECT_TRUE(Agrees(value, db.Number(std::string("SELECT ") + call), 11)) << call;
}

TEST(Rates, MissingInMissingOut) {
  const Database db;
  for (const CallCase& c : kCalls) {
    EXPECT_FALSE(db.IsNull("SELECT " + CallText(c, kNone, ""))) << c.function;
    for (size_t i = 0; i < c.arguments.size(); ++i) {
      for (const char* missing : {"NULL", "''", "' '"})
        EXPECT_TRUE(db.IsNull("SELECT " + CallText(c, i, missing))) << CallText(c, i, missing);
    }
  }
}

TEST(Rates, WhatIsNoNumberIsAnErrorThatNamesIt) {
  const Database db;
  for (const CallCase& c : kCalls) {
    for (size_t i = 0; i < c.arguments.size(); ++i) {
      const std::string error = db.ErrorOf("SELECT " + CallText(c, i, "'n/a'"));
      EXPECT_EQ(error.find(std::string(c.function) + ": "), 0U) << error;
      EXPECT_NE(error.find(" must be a number, got text 'n/a'"), std::string::npos) << error;
    }
  }
  EXPECT_EQ(db.ErrorOf("SELECT rate_per('n/a', 1, 1)"),
            "rate_per: events must be a number, got text 'n/a'");
  EXPECT_EQ(db.ErrorOf("SELECT rate_ratio_p(1, 2, 'many', 4)"),
            "rate_ratio_p: e2 must be a number, got text 'many'");
}

TEST(Rates, AMisplacedLevelOrBaseIsAnError) {
  const Database db;
  EXPECT_EQ(db.ErrorOf("SELECT rate_low(17, 4200, 0.95)"),
            "rate_low: per must be at least 1, got 0.95");
  EXPECT_EQ(db.ErrorOf("SELECT rate_per(17, 4200, 0)"), "rate_per: per must be at least 1, got 0");
  EXPECT_EQ(db.ErrorOf("SELECT rate_per(NULL, NULL, -1)"),
            "rate_per: per must be at least 1, got -1");
  for (const char* level : {"0", "1", "95", "-0.5", "'1.0'"}) {
    for (const CallCase& c : kCalls) {
      if (c.arguments.back() != std::string("0.9")) continue;
      const std::string error = db.ErrorOf("SELECT " + CallText(c, c.arguments.size() - 1, level));
      EXPECT_EQ(error.find(std::string(c.function) + ": level must lie between 0 and 1, got "), 0U)
          << error;
    }
  }
  EXPECT_EQ(db.ErrorOf("SELECT percent_low(NULL, 5, 95)"),
            "percent_low: level must lie between 0 and 1, got 95; write 0.95");
}

TEST(Rates, OutsideTheDomainIsNull) {
  const Database db;
  for (const char* call :
       {"rate_per(1, 0, 1000)", "rate_per(1, -5, 1000)", "rate_per(-1, 5, 1000)",
        "rate_low(-1, 5, 1000)", "rate_high(1, 0, 1000)", "percent_of(1, 0)", "percent_of(-1, 5)",
        "percent_of(6, 5)", "percent_low(6, 5)", "percent_high(0, 0)", "rate_ratio(1, 1, 0, 1)",
        "rate_ratio(1, 0, 1, 1)", "rate_ratio(-1, 1, 1, 1)", "rate_ratio_low(1, 1, 1, 0)",
        "rate_ratio_high(1, 1, 0, 1)", "rate_ratio_p(1, 1, 1, -1)", "rate_ratio_p(1.5, 1, 2, 1)"}) {
    EXPECT_TRUE(db.IsNull(std::string("SELECT ") + call)) << call;
  }
}

TEST(Rates, TheUsualLevelIs95Percent) {
  const Database db;
  for (const char* pair :
       {"rate_low(17, 4200, 1000", "rate_high(0, 4200, 1000", "percent_low(12, 80",
        "percent_high(12, 80", "rate_ratio_low(17, 4200, 9, 3900",
        "rate_ratio_high(17, 4200, 9, 3900"}) {
    EXPECT_EQ(db.Text(std::string("SELECT ") + pair + ") = " + pair + ", 0.95)"), "1") << pair;
  }
}

TEST(Rates, FractionalCountsHaveLimits) {
  const Database db;
  EXPECT_EQ(
      db.Text("SELECT rate_low(2.5, 10, 100) < 25 AND rate_high(2.5, 10, 100) > 25 AND "
              "percent_low(2.5, 10) < 25 AND percent_high(2.5, 10) > 25 AND "
              "rate_ratio_low(2.5, 10, 5, 10) < 0.5 AND rate_ratio_high(2.5, 10, 5, 10) > 0.5"),
      "1");
}

TEST(Rates, NoEventsHaveAnUpperLimitAndAllOfThemALower) {
  const Database db;
  EXPECT_EQ(db.Number("SELECT rate_low(0, 4200, 1000)"), 0);
  EXPECT_GT(db.Number("SELECT rate_high(0, 4200, 1000)"), 0);
  EXPECT_EQ(db.Number("SELECT percent_low(0, 80)"), 0);
  EXPECT_EQ(db.Number("SELECT percent_high(80, 80)"), 100);
  EXPECT_GT(db.Number("SELECT rate_ratio_low(4, 1, 0, 1)"), 0);
  EXPECT_EQ(db.Number("SELECT rate_ratio(0, 1, 4, 1)"), 0);
  EXPECT_EQ(db.Number("SELECT rate_ratio_low(0, 1, 4, 1)"), 0);
}

TEST(Rates, WorkInAnUntrustedSchema) {
  const Database db;  // PRAGMA trusted_schema=OFF
  db.Run(
      "CREATE TABLE district(name, repairs, dwellings CHECK (rate_per(1, dwellings, 1) > 0),"
      " rate AS (rate_per(repairs, dwellings, 1000)) STORED);"
      "CREATE INDEX district_high ON district(rate_high(repairs, dwellings, 1000));"
      "CREATE VIEW shares AS SELECT name, percent_low(repairs, dwellings) AS low FROM district;"
      "INSERT INTO district(name, repairs, dwellings) VALUES ('North', 17, 4200), ('Mill', '9', "
      "3900);");
  EXPECT_EQ(db.Number("SELECT rate FROM district WHERE name = 'North'"), 17000.0 / 4200);
  EXPECT_EQ(db.Number("SELECT count(low) FROM shares"), 2);
  EXPECT_NE(db.ErrorOf("INSERT INTO district(name, repairs, dwellings) VALUES ('Quay', 1, 'few')")
                .find("rate_per: base must be a number, got text 'few'"),
            std::string::npos);
  EXPECT_EQ(db.Text("PRAGMA integrity_check"), "ok");
}

}  // namespace
}  // namespace ladderline::testing
