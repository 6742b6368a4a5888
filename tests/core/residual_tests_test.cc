#include "core/checks/residual_tests.h"

#include <gmock/gmock.h>
#include <gtest/gtest.h>

#include <algorithm>
#include <cmath>
#include <map>
#include <numeric>
#include <string>
#include <vector>

#include "core/checks/durbin_watson.h"
#include "core/regression/centred_basis.h"
#include "tests/reference/reference.h"

namespace ladderline {
namespace {

using testing::Agrees;
using ::testing::HasSubstr;
using ::testing::IsEmpty;
using testing::ReadCsvColumn;
using testing::ReadCsvText;
using testing::ReadJson;

using Column = std::vector<double>;

// A design in memory and its fit.
struct Fitted {
  Column y = {}, w = {};
  std::vector<Column> x = {};
  bool intercept = true;

  ColumnSource Source() const { return ColumnSource(intercept, {x.begin(), x.end()}, y, w); }
  LeastSquares Fit() const { return FitLeastSquares(Source()); }
  // √w (y − fitted), by the coefficients.
  Column Residuals(const LeastSquares& fit) const {
    Column residuals;
    for (std::size_t i = 0; i < y.size(); ++i) {
      Column row(1, 1.0);
      if (!intercept) row.clear();
      for (const Column& column : x) row.push_back(column[i]);
      const double residual = y[i] - Estimate(fit.basis, row);
      residuals.push_back(w.empty() ? residual : std::sqrt(w[i]) * residual);
    }
    return residuals;
  }
  ResidualTests Test(std::span<const Index> order = {}) const {
    const LeastSquares fit = Fit();
    return TestResiduals(Source(), fit, Residuals(fit), order);
  }
};

Column Read(const std::string& data, const std::string& column) {
  return ReadCsvColumn("boxcox/" + data + ".csv", column);
}

template <class F>
Column Map(F f, const Column& a) {
  Column result;
  for (const double value : a) result.push_back(f(value));
  return result;
}
template <class F>
Column Map(F f, const Column& a, const Column& b) {
  Column result;
  for (std::size_t i = 0; i < a.size(); ++i) result.push_back(f(a[i], b[i]));
  return result;
}

// Indicators of all levels but the first in byte order.
std::vector<Column> Levels(const std::vector<std::string>& texts) {
  std::map<std::string, Column> columns;
  for (const std::string& text : texts) columns.try_emplace(text, texts.size(), 0.0);
  for (std::size_t i = 0; i < texts.size(); ++i) columns[texts[i]][i] = 1;
  std::vector<Column> result;
  for (auto& [level, column] : columns) result.push_back(std::move(column));
  result.erase(result.begin());
  return result;
}

Fitted Journals() {
  const auto log = [](double v) { return std::log(v); };
  const Column price =
      Map(std::divides<>(), Read("journals", "price"), Read("journals", "citations"));
  return {.y = Map(log, Read("journals", "subs")), .x = {Map(log, price)}};
}

Fitted Currency() {
  const std::string data = "currencysubstitution";
  const Column spread = Map(std::minus<>(), Read(data, "Iu"), Read(data, "Ic"));
  return {.y = Read(data, "logCUS"), .x = {spread, Read(data, "Ic"), Read(data, "logY")}};
}

Fitted Bonds() {
  return {.y = Read("bondyield", "RAARUS"),
          .x = {Read("bondyield", "MOOD"), Read("bondyield", "EPI"), Read("bondyield", "EXP"),
                Read("bondyield", "RUS")}};
}

Fitted Ornstein() {
  Fitted model{.y = Read("ornstein", "interlocks"), .x = {Read("ornstein", "assets")}};
  for (const char* category : {"sector", "nation"}) {
    for (Column& level : Levels(ReadCsvText("boxcox/ornstein.csv").at(category)))
      model.x.push_back(std::move(level));
  }
  return model;
}

Fitted OrnsteinNation() {
  Fitted model{.y = Read("ornstein", "interlocks"),
               .x = {Map([](double v) { return std::log(v); }, Read("ornstein", "assets"))}};
  for (Column& level : Levels(ReadCsvText("boxcox/ornstein.csv").at("nation")))
    model.x.push_back(std::move(level));
  return model;
}

Fitted Trees() {
  return {.y = Read("trees", "Volume"), .x = {Read("trees", "Girth"), Read("trees", "Height")}};
}

Fitted TreesWeighted() {
  Fitted model = Trees();
  model.y = Map([](double v) { return std::sqrt(v); }, model.y);
  model.w = Map([](double v) { return v / 50; }, Read("trees", "Height"));
  return model;
}

Fitted TreesOneAlone() {
  Fitted model = Trees();
  model.x[1].assign(model.y.size(), 0);
  model.x[1][6] = 1;
  return model;
}

// The generator of Park & Miller (1988) and the set drawn from it, as in residual_tests.R.
Fitted MadeUp() {
  double state = 1;
  const auto draw = [&] {
    state = std::fmod(16807 * state, 2147483647);
    return state / 2147483647;
  };
  Fitted model{.x = {{}}};
  double before = 0;
  for (int i = 0; i < 7000; ++i) {
    const double x = draw();
    const double first = draw(), second = draw(), third = draw();
    before = 0.5 * before + (first + second + third - 1.5);
    model.x[0].push_back(x);
    model.y.push_back(2 * x + 1.5 * x * x + x * before);
  }
  return model;
}

std::map<std::string, Fitted> Models() {
  std::map<std::string, Fitted> models = {{"journals", Journals()},
                                          {"currencysubstitution", Currency()},
                                          {"bondyield", Bonds()},
                                          {"ornstein", Ornstein()},
                                          {"ornstein_nation", OrnsteinNation()},
                                          {"trees", Trees()},
                                          {"trees_weighted", TreesWeighted()},
                                          {"trees_no_intercept", Trees()},
                                          {"trees_mean", Trees()},
                                          {"trees_one_alone", TreesOneAlone()},
                                          {"made_up", MadeUp()}};
  models["trees_no_intercept"].intercept = false;
  models["trees_mean"].x.clear();
  return models;
}

constexpr double kDigits = 11;

void ExpectTest(const TestFigures& test, const nlohmann::json& truth) {
  EXPECT_THAT(test.obstacle, IsEmpty());
  EXPECT_TRUE(Agrees(truth.front(), test.statistic, kDigits));
  EXPECT_TRUE(Agrees(truth.back(), test.p_value, kDigits));
  if (truth.size() > 2) {
    EXPECT_EQ(test.df, truth[1].get<double>());
  }
  if (truth.size() > 3) {
    EXPECT_EQ(test.df2, truth[2].get<double>());
  }
}

std::map<std::string, TestFigures> ByName(const ResidualTests& tests) {
  return {{"breusch_pagan", tests.breusch_pagan},
          {"white", tests.white},
          {"reset", tests.reset},
          {"breusch_godfrey", tests.breusch_godfrey},
          {"jarque_bera", tests.shape.jarque_bera},
          {"shapiro_wilk", tests.shape.shapiro_wilk}};
}

// residual_tests_r.json: R 4.2.2, lmtest 0.9-40, e1071 1.7-13; p-values down to 1e-290.
TEST(ResidualTests, AgreeWithR) {
  const nlohmann::json truth = ReadJson("residual_tests_r.json")["models"];
  for (const auto& [name, model] : Models()) {
    SCOPED_TRACE(name);
    const ResidualTests tests = model.Test();
    for (const auto& [test, figures] : ByName(tests)) {
      SCOPED_TRACE(test);
      if (truth[name].contains(test)) {
        ExpectTest(figures, truth[name][test]);
      } else {
        EXPECT_FALSE(figures.computed());
      }
    }
    EXPECT_TRUE(Agrees(truth[name]["durbin_watson"], tests.durbin_watson, kDigits));
    EXPECT_TRUE(Agrees(truth[name]["skewness"], tests.shape.skewness, kDigits));
    EXPECT_TRUE(Agrees(truth[name]["excess_kurtosis"], tests.shape.excess_kurtosis, kDigits));
  }
}

// residual_tests_statsmodels.json: statsmodels 0.13.5.
TEST(ResidualTests, AgreeWithStatsmodels) {
  const nlohmann::json truth = ReadJson("residual_tests_statsmodels.json")["models"];
  const std::map<std::string, Fitted> models = Models();
  for (const auto& [name, values] : truth.items()) {
    SCOPED_TRACE(name);
    const ResidualTests tests = models.at(name).Test();
    ExpectTest(tests.breusch_pagan, values["breusch_pagan"]);
    ExpectTest(tests.white, values["white"]);
    ExpectTest(tests.shape.jarque_bera, values["jarque_bera"]);
    EXPECT_TRUE(Agrees(values["durbin_watson"], tests.durbin_watson, kDigits));
  }
}

// Half a unit in the last digit printed.
void ExpectAsPrinted(const nlohmann::json& printed, double value) {
  const std::string text = printed;
  const std::size_t point = text.find('.');
  const int decimals = point == std::string::npos ? 0 : static_cast<int>(text.size() - point - 1);
  EXPECT_NEAR(std::stod(text), value, 0.5 * std::pow(10.0, -decimals)) << "printed as " << text;
}

// boxcox/published.json: printed outputs of R's AER and lmtest for worked examples of Kleiber &
// Zeileis (2008) and Krämer & Sonnberger (1986).
TEST(ResidualTests, AgreeWithPublishedFigures) {
  std::map<std::string, nlohmann::json> published;
  const nlohmann::json file = ReadJson("boxcox/published.json");
  for (const nlohmann::json& example : file["examples"])
    published[example["id"]] = example["published"];
  const auto expect = [](const nlohmann::json& printed, const TestFigures& test) {
    ExpectAsPrinted(printed["BP"], test.statistic);
    ExpectAsPrinted(printed["df"], test.df);
    ExpectAsPrinted(printed["p"], test.p_value);
  };
  const ResidualTests journals = Journals().Test();
  expect(published["journals"]["bp_studentized"], journals.breusch_pagan);
  expect(published["journals"]["bp_studentized_x_and_x2"], journals.white);
  const ResidualTests currency = Currency().Test();
  expect(published["currencysubstitution"]["bp_studentized"], currency.breusch_pagan);
  ExpectAsPrinted(published["currencysubstitution"]["durbin_watson"], currency.durbin_watson);
  expect(published["bondyield"]["bp_studentized"], Bonds().Test().breusch_pagan);
}

// order[t]: the row that comes t-th by ascending values; equal ones in row order.
std::vector<Index> OrderBy(const Column& values) {
  std::vector<Index> order(values.size());
  std::iota(order.begin(), order.end(), 0);
  std::stable_sort(order.begin(), order.end(), [&](Index a, Index b) {
    return values[static_cast<size_t>(a)] < values[static_cast<size_t>(b)];
  });
  return order;
}

// residual_tests_r.json, lmtest's order.by.
TEST(ResidualTests, SerialCorrelationFollowsAGivenOrder) {
  const nlohmann::json truth = ReadJson("residual_tests_r.json")["models"];
  const Column year = Read("journals", "foundingyear");
  const Column height = Map([](double v) { return -v; }, Read("trees", "Height"));
  for (const auto& [name, model, by] :
       {std::tuple{"journals", Journals(), year}, std::tuple{"trees", Trees(), height}}) {
    SCOPED_TRACE(name);
    const ResidualTests tests = model.Test(OrderBy(by));
    ExpectTest(tests.breusch_godfrey, truth[name]["ordered_breusch_godfrey"]);
    EXPECT_TRUE(Agrees(truth[name]["ordered_durbin_watson"], tests.durbin_watson, kDigits));
  }
}

TEST(ResidualTests, GivenRowOrderChangesNothing) {
  const Fitted model = MadeUp();
  const ResidualTests plain = model.Test();
  const ResidualTests ordered = model.Test(OrderBy(Column(model.y.size(), 0.0)));
  EXPECT_EQ(plain.breusch_godfrey.statistic, ordered.breusch_godfrey.statistic);
  EXPECT_EQ(plain.lag_correlation, ordered.lag_correlation);
  EXPECT_EQ(plain.durbin_watson, ordered.durbin_watson);
}

void ExpectSame(const ResidualTests& a, const ResidualTests& b, double digits) {
  const auto one = ByName(a), other = ByName(b);
  for (const auto& [name, test] : one) {
    SCOPED_TRACE(name);
    EXPECT_EQ(test.obstacle, other.at(name).obstacle);
    if (!test.computed()) continue;
    EXPECT_TRUE(Agrees(test.statistic, other.at(name).statistic, digits));
    if (name != "shapiro_wilk") {
      EXPECT_EQ(test.df, other.at(name).df);
    }
  }
  EXPECT_TRUE(Agrees(a.durbin_watson, b.durbin_watson, digits));
  EXPECT_TRUE(Agrees(a.reset_move, b.reset_move, digits));
}

TEST(ResidualTests, CollinearColumnsChangeNothing) {
  const Fitted trees = Trees();
  Fitted repeated = trees;
  repeated.x.insert(repeated.x.begin() + 1, trees.x[0]);
  repeated.x.push_back(Column(trees.y.size(), 3.0));
  ExpectSame(trees.Test(), repeated.Test(), 10);
  Fitted weighted = TreesWeighted();
  const ResidualTests before = weighted.Test();
  weighted.x.push_back(weighted.x[1]);
  ExpectSame(before, weighted.Test(), 10);
}

// The base columns' places do not matter, and a shift of 10^6 costs the digits of the data alone.
TEST(ResidualTests, ShiftAndUnitOfColumnsChangeNothing) {
  Fitted moved = Bonds();
  moved.y = Map([](double v) { return 4096 * v; }, moved.y);
  moved.x[0] = Map([](double v) { return -1024 * v; }, moved.x[0]);
  ExpectSame(Bonds().Test(), moved.Test(), 11);
  moved.x[1] = Map([](double v) { return v + 1e6; }, moved.x[1]);
  ExpectSame(Bonds().Test(), moved.Test(), 7);
}

TEST(ResidualTests, EqualWeightsChangeNothing) {
  Fitted weighted = Bonds();
  weighted.w.assign(weighted.y.size(), 4.0);
  ExpectSame(Bonds().Test(), weighted.Test(), 11);
}

TEST(ResidualTests, HugeAndTinyResponsesChangeNothing) {
  for (const double unit : {0x1p+400, 0x1p-400}) {
    Fitted scaled = Trees();
    scaled.y = Map([=](double v) { return v * unit; }, scaled.y);
    ExpectSame(Trees().Test(), scaled.Test(), 12);
  }
}

// A category of levels a, b, c: every function of the fitted value is one of the level.
TEST(ResidualTests, FitOfOneCategoryCannotBeBent) {
  Fitted model{.y = {1, 2, 4, 4, 6, 5, 9, 8, 12}, .x = {Column(9, 0.0), Column(9, 0.0)}};
  for (int i = 3; i < 9; ++i) model.x[i < 6 ? 0 : 1][static_cast<size_t>(i)] = 1;
  const ResidualTests tests = model.Test();
  EXPECT_THAT(std::string(tests.reset.obstacle), HasSubstr("repeat columns"));
  EXPECT_TRUE(std::isnan(tests.reset_move));
  // Squares repeat the indicators, their product is 0.
  EXPECT_EQ(tests.white.df, 2);
  EXPECT_TRUE(Agrees(tests.breusch_pagan.statistic, tests.white.statistic, 12));
}

// Three distinct fitted values of a number allow for a square but no cube.
TEST(ResidualTests, ThreeFittedValuesBearOnePower) {
  Fitted model{.y = {1, 2, 3, 3, 5, 4, 5, 9, 8}, .x = {{0, 0, 0, 1, 1, 1, 2, 2, 2}}};
  const ResidualTests tests = model.Test();
  EXPECT_EQ(tests.reset.df, 1);
  EXPECT_EQ(tests.reset.df2, 6);
}

// By hand: y = x ± 1 has slope 1 and residuals ±1.
TEST(ResidualTests, EquallyLargeResidualsHaveNoSpreadToExplain) {
  const Fitted model{.y = {1, -1, 2, 0, 3, 1}, .x = {{0, 0, 1, 1, 2, 2}}};
  const ResidualTests tests = model.Test();
  EXPECT_THAT(std::string(tests.breusch_pagan.obstacle), HasSubstr("equally large"));
  EXPECT_THAT(std::string(tests.white.obstacle), HasSubstr("equally large"));
  // (e_t − e_(t−1))² = 4 five times, Σ e² = 6.
  EXPECT_NEAR(tests.durbin_watson, 20.0 / 6, 1e-14);
  EXPECT_NEAR(tests.lag_correlation, -5.0 / 6, 1e-14);
}

TEST(ResidualTests, ExactFitSaysSo) {
  Fitted model = Trees();
  model.y = Map([](double a, double b) { return 3 + 2 * a - b; }, model.x[0], model.x[1]);
  for (const auto& [name, test] : ByName(model.Test()))
    EXPECT_THAT(std::string(test.obstacle), HasSubstr("the fit is exact")) << name;
  EXPECT_TRUE(std::isnan(model.Test().durbin_watson));
}

TEST(ResidualTests, SaturatedFitSaysSo) {
  const Fitted model{.y = {1, 5, 2}, .x = {{1, 2, 3}, {1, 0, 5}}};
  for (const auto& [name, test] : ByName(model.Test()))
    EXPECT_THAT(std::string(test.obstacle), HasSubstr("as many terms as rows")) << name;
}

TEST(ResidualTests, FewRowsLeaveOutWhatTheyCannotBear) {
  const Fitted model{.y = {1, 5, 2, 7}, .x = {{1, 2, 3, 4}, {1, 0, 5, 1}}};
  const ResidualTests tests = model.Test();
  EXPECT_TRUE(tests.breusch_pagan.computed());
  EXPECT_THAT(std::string(tests.white.obstacle), HasSubstr("too few rows"));
  EXPECT_THAT(std::string(tests.reset.obstacle), HasSubstr("too few rows"));
  EXPECT_THAT(std::string(tests.breusch_godfrey.obstacle), HasSubstr("too few rows"));
}

TEST(ResidualTests, WhiteTakesItsShortFormFromSevenColumnsOn) {
  Fitted model = MadeUp();
  for (const int period : {3, 5, 7, 11, 13})
    model.x.push_back(Map([=](double v) { return std::fmod(v * 100, period); }, model.x[0]));
  EXPECT_FALSE(model.Test().white_by_fitted);
  EXPECT_EQ(model.Test().white.df, 27);
  model.x.push_back(Map([](double v) { return std::fmod(v * 100, 17); }, model.x[0]));
  EXPECT_TRUE(model.Test().white_by_fitted);
  EXPECT_EQ(model.Test().white.df, 2);
}

TEST(DurbinWatson, SpecialCases) {
  EXPECT_TRUE(std::isnan(DurbinWatson({})));
  EXPECT_TRUE(std::isnan(DurbinWatson(Column{0, 0})));
  EXPECT_EQ(DurbinWatson(Column{3}), 0);
  EXPECT_EQ(DurbinWatson(Column{1, -1}), 2);
  const std::vector<Index> order = {2, 0, 1};
  // (1 − 3)² + (2 − 1)² over 1 + 4 + 9.
  EXPECT_NEAR(DurbinWatson(Column{1, 2, 3}, order), 5.0 / 14, 1e-15);
}

}  // namespace
}  // namespace ladderline
