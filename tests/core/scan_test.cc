// Scans of re-expressions: figures against NumPy, SciPy and statsmodels, candidates, and the order.
#include "core/scan/scan.h"

#include <gtest/gtest.h>

#include <algorithm>
#include <cmath>

#include "core/elementary/elementary.h"
#include "core/normality/normal_scores.h"
#include "core/scan/reading.h"
#include "tests/reference/reference.h"

namespace ladderline {
namespace {

using testing::Agrees;

const ScannedCandidate* Find(const ReExpressionScan& scan, const std::string& spec) {
  for (const ScannedCandidate& scanned : scan.candidates)
    if (scanned.candidate.transform.spec() == spec) return &scanned;
  return nullptr;
}

std::vector<TransformKind> Kinds(const ReExpressionScan& scan) {
  std::vector<TransformKind> kinds;
  for (const ScannedCandidate& scanned : scan.candidates)
    kinds.push_back(scanned.candidate.transform.kind());
  return kinds;
}

void ExpectFigure(const nlohmann::json& expected, double found, int digits) {
  if (expected.is_null()) {
    EXPECT_TRUE(std::isnan(found)) << found;
  } else {
    EXPECT_TRUE(Agrees(expected, found, digits));
  }
}

// tests/reference/scans.json.
TEST(Scan, FiguresAgreeWithOtherLibraries) {
  const nlohmann::json file = testing::ReadJson("scans.json");
  for (const nlohmann::json& c : file["cases"]) {
    const std::string path = c["file"];
    const std::vector<double> y = testing::ReadCsvColumn(path, c["response"]);
    std::vector<std::vector<double>> x;
    for (const std::string name : c["predictors"]) x.push_back(testing::ReadCsvColumn(path, name));
    std::vector<double> w;
    if (!c["weight"].is_null()) w = testing::ReadCsvColumn(path, c["weight"]);
    const ColumnSource design(true, {x.begin(), x.end()}, y, w);
    const Result<ReExpressionScan> scan = x.empty() ? ScanColumn(y) : ScanResponse(y, design);
    ASSERT_TRUE(scan.ok());
    for (const auto& [spec, expected] : c["candidates"].items()) {
      SCOPED_TRACE(path + " " + spec);
      const ScannedCandidate* found = Find(scan.value(), spec);
      ASSERT_NE(found, nullptr);
      EXPECT_EQ(found->rows_used, expected["rows_used"].get<std::int64_t>());
      EXPECT_EQ(found->rows_outside, expected["rows_outside"].get<std::int64_t>());
      ExpectFigure(expected["skewness"], found->shape.skewness, 9);
      ExpectFigure(expected["excess_kurtosis"], found->shape.excess_kurtosis, 9);
      ExpectFigure(expected["normal_correlation"], found->shape.normal_correlation, 11);
      // The library takes tails as 1 minus something: below 1e-8 it keeps few digits.
      if (expected["normal_p"].is_number() && expected["normal_p"] > 1e-8)
        ExpectFigure(expected["normal_p"], found->shape.normal_p, 7);
      ExpectFigure(expected["log_likelihood"], found->log_likelihood, 11);
      ExpectFigure(expected["aic"], found->aic, 11);
      ExpectFigure(expected["funnel_p"], found->funnel_p, 8);
    }
  }
}

// Quantiles of a normal law of the given mean and sd 1, as values.
std::vector<double> NormalValues(std::size_t n, double mean) {
  std::vector<double> values;
  for (std::size_t i = 1; i <= n; ++i) values.push_back(mean + NormalScore(i, n));
  return values;
}

template <class Function>
std::vector<double> Of(std::vector<double> values, Function function) {
  for (double& x : values) x = function(x);
  return values;
}

std::string First(const std::vector<double>& values) {
  const Result<ReExpressionScan> scan = ScanColumn(values);
  return scan.ok() ? scan.value().candidates.front().candidate.transform.spec() : scan.error();
}

// Values that one plain power makes exactly normal are given that power, however many they are.
TEST(Scan, FindsThePowerThatWasUsed) {
  const std::vector<double> normal = NormalValues(500, 8);
  EXPECT_EQ(First(normal), "identity");
  EXPECT_EQ(First(Of(normal, [](double z) { return Exp(z); })), "log_offset");
  EXPECT_EQ(First(Of(normal, [](double z) { return z * z; })), "sqrt_offset");
  EXPECT_EQ(First(Of(normal, [](double z) { return 1 / z; })), "negative_reciprocal");
  EXPECT_EQ(First(Of(NormalValues(5000, 5), [](double z) { return std::sqrt(z); })), "square");
  EXPECT_EQ(First(Of(normal, [](double z) { return z * z * z; })), "power_of 0.3333333333333333");
}

// With little spread or few rows every power fits, and then nothing is changed.
TEST(Scan, RecommendsNothingThatGainsNoMoreThanChance) {
  EXPECT_EQ(First(Of(NormalValues(500, 400), [](double z) { return z * z; })), "identity");
  EXPECT_EQ(First(Of(NormalValues(12, 8), [](double z) { return z * z; })), "identity");
  const Result<ReExpressionScan> scan =
      ScanColumn(Of(NormalValues(12, 8), [](double z) { return z * z; }));
  for (const ScannedCandidate& scanned : scan.value().candidates) {
    if (!scanned.as_good_as_best) continue;
    EXPECT_LE(2 * (scanned.log_likelihood - scan.value().candidates[0].log_likelihood), 3.85);
  }
  EXPECT_EQ(ScanReading(scan.value(), "cost").rfind("Leave cost as it is: over 12 rows", 0), 0u);
}

// Scores of five steps, all equally often, lean to no side; a normal likelihood alone would bend
// them towards their end.
TEST(Scan, EvenScoresOfFewStepsAreLeftAlone) {
  std::vector<double> scores;
  for (int i = 0; i < 500; ++i) scores.push_back(i % 5);
  const Result<ReExpressionScan> scan = ScanColumn(scores);
  ASSERT_TRUE(scan.ok());
  EXPECT_EQ(scan.value().candidates.front().candidate.transform.spec(), "identity");
  EXPECT_GT(scan.value().candidates[1].log_likelihood,
            scan.value().candidates.front().log_likelihood + 2);
  EXPECT_NE(ScanReading(scan.value(), "score").find("makes it more even"), std::string::npos);
}

// A tail to the left has the same ceiling, shifted, wherever the values lie.
TEST(Scan, TheCeilingOfNegativeValuesIsLookedForToo) {
  const std::vector<double> volumes = testing::ReadCsvColumn("boxcox/trees.csv", "Volume");
  std::vector<double> above, below;
  for (const double v : volumes) {
    above.push_back(1000.05 - v);
    below.push_back(-1000.05 - v);
  }
  double found[2] = {};
  for (int i = 0; i < 2; ++i) {
    const Result<ReExpressionScan> scan = ScanColumn(i == 0 ? above : below);
    ASSERT_TRUE(scan.ok());
    for (const ScannedCandidate& scanned : scan.value().candidates)
      if (scanned.candidate.transform.kind() == TransformKind::kLogReflected)
        found[i] = scanned.log_likelihood;
  }
  EXPECT_LT(found[0], 0);
  EXPECT_NEAR(found[0], found[1], 1e-6);
}

TEST(Scan, OrdersByRowsThenLikelihood) {
  std::vector<double> y = Of(NormalValues(100, 2.5), [](double z) { return Exp(z); });
  y.push_back(0);
  y.push_back(0);
  const Result<ReExpressionScan> scan = ScanColumn(y);
  ASSERT_TRUE(scan.ok());
  const std::vector<ScannedCandidate>& candidates = scan.value().candidates;
  for (std::size_t i = 1; i < candidates.size(); ++i) {
    const ScannedCandidate &before = candidates[i - 1], &after = candidates[i];
    EXPECT_LE(before.rows_outside, after.rows_outside);
    EXPECT_GE(before.as_good_as_best, after.as_good_as_best);
    if (after.as_good_as_best || after.rows_outside > 0) continue;
    EXPECT_FALSE(std::isnan(before.aic) && !std::isnan(after.aic));
    if (!before.as_good_as_best && !std::isnan(after.aic)) {
      EXPECT_LE(before.aic, after.aic);
    }
  }
  // A slope that is infinite at 0 leaves no likelihood; a logarithm loses the zeros.
  EXPECT_TRUE(std::isnan(Find(scan.value(), "sqrt_offset")->log_likelihood));
  EXPECT_EQ(Find(scan.value(), "log_offset")->rows_outside, 2);
  EXPECT_EQ(candidates.back().rows_outside, 2);
}

TEST(Scan, CandidatesFollowTheMeasure) {
  const auto specs = [](std::vector<double> values) {
    const MeasureFacts facts = FactsOfMeasure(values);
    std::vector<std::string> found;
    for (const Candidate& candidate : CandidatesFor(values, facts, 0.25, 0.75))
      found.push_back(candidate.transform.spec());
    return found;
  };
  const auto has = [](const std::vector<std::string>& all, const std::string& beginning) {
    return std::any_of(all.begin(), all.end(),
                       [&](const std::string& spec) { return spec.rfind(beginning, 0) == 0; });
  };
  const auto positive = specs({0.5, 1.5, 2.5, 300});
  EXPECT_TRUE(has(positive, "box_cox 0.25") && has(positive, "yeo_johnson 0.75"));
  EXPECT_FALSE(has(positive, "log_offset 1") || has(positive, "logit"));
  const auto counts = specs({0, 0, 1, 2, 30});
  EXPECT_TRUE(has(counts, "log_offset 1") && has(counts, "sqrt_offset 0.375"));
  EXPECT_FALSE(has(counts, "box_cox"));
  const auto shares = specs({0, 0.02, 0.4, 0.9, 1});
  EXPECT_TRUE(has(shares, "logit 0 1 0.01"));  // half of 0.02
  const auto scores = specs({100, 99, 97, 92, 60});
  EXPECT_TRUE(has(scores, "logit 0 100 0.005") && has(scores, "log_reflected 101"));
  const auto below = specs({99.5, 99, 97, 92, 60});
  EXPECT_TRUE(has(below, "logit") && has(below, "log_reflected 100"));
  const auto any_ceiling = specs({-1.5, -2, -3, -4, -40});
  EXPECT_TRUE(has(any_ceiling, "log_reflected "));
  EXPECT_FALSE(has(specs({1, 2, 3, 4, 40}), "log_reflected"));
}

TEST(Scan, AnEstimatedNumberCountsAsAParameter) {
  const std::vector<double> y = testing::ReadCsvColumn("boxcox/trees.csv", "Volume");
  const Result<ReExpressionScan> scan = ScanColumn(y);
  for (const ScannedCandidate& scanned : scan.value().candidates) {
    if (scanned.rows_outside > 0) continue;
    const bool estimated = scanned.candidate.estimated > 0;
    EXPECT_NEAR(scanned.aic + 2 * scanned.log_likelihood, estimated ? 6 : 4, 1e-9);
  }
}

TEST(Scan, UnitsAndOrderOfRowsDoNotMatter) {
  std::vector<double> y = testing::ReadCsvColumn("boxcox/trees.csv", "Volume");
  const Result<ReExpressionScan> scan = ScanColumn(y);
  std::reverse(y.begin(), y.end());
  EXPECT_EQ(Kinds(ScanColumn(y).value()), Kinds(scan.value()));
  for (double& v : y) v *= 1024;
  const Result<ReExpressionScan> other = ScanColumn(y);
  EXPECT_EQ(other.value().candidates.front().candidate.transform.spec(),
            scan.value().candidates.front().candidate.transform.spec());
  EXPECT_NEAR(Find(other.value(), "sqrt_offset")->log_likelihood,
              Find(scan.value(), "sqrt_offset")->log_likelihood - 31 * std::log(1024.0), 1e-9);
}

// Beyond kShapeRows the figures of order are of a sample, the moments of all rows.
TEST(Scan, LongColumnsAreSampled) {
  std::vector<double> y = Of(NormalValues(50'000, 8), [](double z) { return z * z; });
  // Each third row and then the next ones, so that no stretch holds only one end.
  std::vector<double> mixed;
  for (std::size_t start = 0; start < 7; ++start)
    for (std::size_t i = start; i < y.size(); i += 7) mixed.push_back(y[i]);
  const Result<ReExpressionScan> scan = ScanColumn(mixed);
  const ScannedCandidate& first = scan.value().candidates.front();
  EXPECT_EQ(first.candidate.transform.spec(), "sqrt_offset");
  EXPECT_EQ(first.rows_used, 50'000);
  EXPECT_NEAR(first.shape.skewness, 0, 1e-6);
  EXPECT_GT(first.shape.normal_correlation, 0.9999);
}

TEST(Scan, AHeapIsSpokenOf) {
  const auto reading = [](std::vector<double> values) {
    return ScanReading(ScanColumn(values).value(), "visits");
  };
  const std::string heap = "; but 60% of the values are 1, a heap that no re-expression spreads.";
  const std::string said = reading({1, 1, 1, 1, 1, 1, 2, 3, 4, 9});
  EXPECT_NE(said.find(heap), std::string::npos) << said;
  EXPECT_EQ(reading({1, 1.5, 1.7, 2, 2.1, 2.2, 2.4, 3, 4, 9}).find("heap"), std::string::npos);
}

TEST(Scan, ReadingsSayWhatBecomesOfAFunnel) {
  std::vector<double> y, x;
  for (int i = 1; i <= 200; ++i) {
    x.push_back(i % 20);
    y.push_back(Exp(1 + 0.15 * (i % 20) +
                    0.4 * NormalScore(static_cast<std::size_t>(i * 71 % 200) + 1, 200)));
  }
  const std::vector<std::span<const double>> columns = {x};
  const ColumnSource design(true, columns, y);
  const Result<ReExpressionScan> scan = ScanResponse(y, design);
  const std::string reading = ScanReading(scan.value(), "cost");
  EXPECT_EQ(reading.rfind("Re-express cost by log_offset: it keeps all 200 rows and takes the "
                          "skewness of the residuals from ",
                          0),
            0u)
      << reading;
  EXPECT_NE(reading.find("the spread of the residuals no longer changes visibly along the "
                         "predictors."),
            std::string::npos)
      << reading;
  EXPECT_LT(Find(scan.value(), "identity")->funnel_p, 0.001);
}

TEST(Scan, ReadingsRoundWhatWasEstimated) {
  ReExpressionScan scan;
  ScannedCandidate& first = scan.candidates.emplace_back();
  first.candidate.transform = *Transform::ReadSpec("box_cox 0.123456789").value().transform;
  first.rows_used = 9;
  EXPECT_EQ(ScanReading(scan, "cost").rfind("Re-express cost by box_cox 0.123457: it keeps ", 0),
            0u);
}

TEST(Scan, RowsWithoutAShapeAreRefusedInWords) {
  EXPECT_EQ(First({}), "no rows");
  EXPECT_EQ(First({4, 7}), "needs 3 rows, has 2");
  EXPECT_EQ(First({4, 4, 4}), "all 3 values are 4");
  EXPECT_EQ(First({4, 4, 5, 4}),
            "only two values occur, which no re-expression brings into another shape");
}

}  // namespace
}  // namespace ladderline
