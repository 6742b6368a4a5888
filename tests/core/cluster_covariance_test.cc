#include "core/regression/cluster_covariance.h"

#include <cmath>
#include <map>
#include <numeric>

#include "tests/core/regression_cases.h"
#include "tests/reference/reference.h"

namespace ladderline::testing {
namespace {

// A design, its clusters, and what came of them.
struct Clustered {
  Column y = {}, w = {};
  std::vector<Column> x = {};
  std::vector<double> cluster = {};
  bool intercept = true;

  ColumnSource Source() const { return ColumnSource(intercept, {x.begin(), x.end()}, y, w); }
};

struct Errors {
  std::int64_t clusters = 0;
  std::vector<double> standard_error;
};

std::vector<std::uint32_t> Number(const std::vector<double>& values, std::int64_t* count) {
  std::map<double, std::uint32_t> numbers;
  std::vector<std::uint32_t> result;
  for (const double value : values)
    result.push_back(
        numbers.try_emplace(value, static_cast<std::uint32_t>(numbers.size())).first->second);
  *count = static_cast<std::int64_t>(numbers.size());
  return result;
}

struct Work {
  LeastSquares fit;
  ResidualSummary summary;
  Column residuals;
};

Work Fit(const RowSource& source, Extended extended) {
  Work work{.fit = FitLeastSquares(source, extended), .summary = {}, .residuals = {}};
  ResidualOptions options;
  options.visit = [&](const ResidualBlock& block) {
    work.residuals.insert(work.residuals.end(), block.residual, block.residual + block.rows);
  };
  work.summary = PassResiduals(source, work.fit, options);
  return work;
}

Errors ErrorsOf(const Clustered& model, Extended extended) {
  const ColumnSource source = model.Source();
  const Work work = Fit(source, extended);
  Errors errors;
  const std::vector<std::uint32_t> of_row = Number(model.cluster, &errors.clusters);
  const Covariance covariance =
      ClusterCovariance(source, work.fit, work.summary, work.residuals, {of_row, errors.clusters});
  errors.standard_error = StandardErrors(work.fit.basis, covariance);
  return errors;
}

Column Data(const std::string& path, const std::string& column) {
  return ReadCsvColumn(path, column);
}

Clustered Trees() {
  const std::string path = "boxcox/trees.csv";
  return {.y = Data(path, "Volume"),
          .x = {Data(path, "Girth"), Data(path, "Height")},
          .cluster = Data(path, "Height")};
}

// cluster_errors.json: R 4.2, sandwich 3.0. Both ways of working: doubles and double-doubles.
TEST(ClusterCovariance, AgreesWithR) {
  std::map<std::string, Clustered> models = {{"trees", Trees()}, {"trees_no_intercept", Trees()}};
  models["trees_no_intercept"].intercept = false;
  Clustered weighted = Trees();
  weighted.y = Map(weighted.y, [](double v) { return std::sqrt(v); });
  weighted.w = Map(weighted.x[1], [](double v) { return v / 50; });
  weighted.cluster = Map(weighted.x[0], [](double v) { return std::floor(v); });
  models["trees_weighted"] = weighted;
  const std::string journals = "boxcox/journals.csv";
  const Column year = Data(journals, "foundingyear");
  models["journals"] = {
      .y = Map(Data(journals, "subs"), Ln),
      .x = {Map(Data(journals, "price"), Ln), Map(Data(journals, "citations"), Ln), year},
      .cluster = Map(year, [](double v) { return std::floor(v / 10); })};
  const nlohmann::json truth = ReadJson("cluster_errors.json")["cases"];
  for (const auto& [name, model] : models) {
    for (const Extended extended : {Extended::kNever, Extended::kAlways}) {
      SCOPED_TRACE(name);
      const Errors errors = ErrorsOf(model, extended);
      EXPECT_EQ(errors.clusters, truth[name]["clusters"].get<std::int64_t>());
      ASSERT_EQ(errors.standard_error.size(), truth[name]["standard_error"].size());
      EXPECT_TRUE(AllAgree(truth[name]["standard_error"], errors.standard_error, 11));
    }
  }
}

// Columns that repeat each other to 1e-5 of themselves: longley_robust.json, from 60 digits.
TEST(ClusterCovariance, LongleyKeepsItsDigits) {
  const std::string longley = "nist/Longley.csv";
  Clustered model{.y = Data(longley, "y"),
                  .cluster = Map(Data(longley, "x6"), [](double v) { return std::floor(v / 3); })};
  for (int j = 1; j <= 6; ++j) model.x.push_back(Data(longley, "x" + std::to_string(j)));
  const nlohmann::json truth = ReadJson("longley_robust.json")["cluster"];
  EXPECT_TRUE(AllAgree(truth, ErrorsOf(model, Extended::kMeasured).standard_error, 14));
}

// One cluster per row: n/(n−1) · (n−1)/(n−k) is the factor of HC1. With two columns the sums of
// 100,000 clusters take twice the memory of the rows, so that they are worked in parts.
TEST(ClusterCovariance, OneRowPerClusterIsHc1) {
  constexpr std::size_t kRows = 100'000;
  Clustered model{.y = Noise(kRows, 1), .x = {Noise(kRows, 2)}, .cluster = Column(kRows)};
  for (std::size_t i = 0; i < kRows; ++i) model.y[i] *= 1 + model.x[0][i] * model.x[0][i];
  std::iota(model.cluster.begin(), model.cluster.end(), 0.0);
  const ColumnSource source = model.Source();
  const Work work = Fit(source, Extended::kNever);
  const std::vector<double> hc1 =
      StandardErrors(work.fit.basis, CovarianceOf(ErrorKind::kHc1, work.fit, work.summary));
  const Errors errors = ErrorsOf(model, Extended::kNever);
  for (std::size_t j = 0; j < hc1.size(); ++j)
    EXPECT_TRUE(Agrees(hc1[j], errors.standard_error[j], 12));
}

// Columns that name the group they belong to are summed through it.
TEST(ClusterCovariance, GroupedColumnsChangeNothing) {
  constexpr std::size_t kRows = 3000;
  std::vector<std::string> levels;
  std::vector<std::uint32_t> cluster;
  for (std::size_t i = 0; i < kRows; ++i) {
    levels.push_back(std::string(1, static_cast<char>('a' + i * 7 % 9)));
    cluster.push_back(static_cast<std::uint32_t>(i * i % 41));
  }
  std::int64_t count = 0;
  cluster = Number(Column(cluster.begin(), cluster.end()), &count);
  std::vector<double> errors[2];
  for (const bool as_groups : {false, true}) {
    Case design(true);
    design.AddNumber(Noise(kRows, 3));
    design.AddCategory(levels, as_groups);
    design.y = Noise(kRows, 4);
    const ColumnSource source = design.Source();
    const Work work = Fit(source, Extended::kNever);
    errors[as_groups] = StandardErrors(
        work.fit.basis,
        ClusterCovariance(source, work.fit, work.summary, work.residuals, {cluster, count}));
  }
  for (std::size_t j = 0; j < errors[0].size(); ++j)
    EXPECT_TRUE(Agrees(errors[0][j], errors[1][j], 12));
}

TEST(ClusterCovariance, OneClusterAndSaturatedFitsHaveNone) {
  Clustered model = Trees();
  model.cluster.assign(model.y.size(), 7);
  for (const double error : ErrorsOf(model, Extended::kMeasured).standard_error)
    EXPECT_TRUE(std::isnan(error));
  const Clustered saturated{.y = {1, 5}, .x = {{1, 2}}, .cluster = {1, 2}};
  for (const double error : ErrorsOf(saturated, Extended::kMeasured).standard_error)
    EXPECT_TRUE(std::isnan(error));
}

// A row that alone decides a column says nothing of that column's variance.
TEST(ClusterCovariance, RowOfLeverageOneLeavesItsTermUnknown) {
  Clustered model = Trees();
  model.x[1].assign(model.y.size(), 0);
  model.x[1][6] = 1;
  const Errors errors = ErrorsOf(model, Extended::kMeasured);
  EXPECT_GT(errors.standard_error[1], 0);
  EXPECT_TRUE(std::isnan(errors.standard_error[2]));
}

}  // namespace
}  // namespace ladderline::testing
