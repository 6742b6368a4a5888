// The fit as a whole. Agreement with R and NIST is tested through SQL (ols_test.cc); here is what a
// database cannot show: invariances bit for bit.
#include "core/model/fit.h"

#include <gmock/gmock.h>
#include <gtest/gtest.h>

#include <cmath>
#include <utility>

#include "core/model/predict.h"

namespace ladderline {
namespace {

using Rows = std::vector<std::vector<double>>;

ColumnSet Make(const std::vector<std::string>& texts, const Rows& rows) {
  std::vector<Label> labels;
  for (const std::string& text : texts) {
    Result<Label> label = ReadLabel(text);
    if (!label.ok()) ADD_FAILURE() << label.error();
    labels.push_back(std::move(label).value());
  }
  Result<ColumnSet> made = ColumnSet::Make(std::move(labels));
  if (!made.ok()) ADD_FAILURE() << made.error();
  ColumnSet set = std::move(made).value();
  for (const std::vector<double>& row : rows) {
    std::vector<Cell> cells;
    for (const double x : row) cells.push_back({.kind = Cell::Kind::kNumber, .number = x});
    const std::optional<Error> error = set.Add(cells);
    EXPECT_FALSE(error) << error->what;
  }
  return set;
}

Model Fit(const std::vector<std::string>& texts, const Rows& rows, const FitOptions& options = {}) {
  Result<Model> model = FitOls(Make(texts, rows), options);
  if (!model.ok()) ADD_FAILURE() << model.error();
  EXPECT_EQ(model.value().reason, "");
  return std::move(model).value();
}

// Forty made-up rows y, a, b with some spread.
Rows SomeRows(double y_scale) {
  Rows rows;
  for (int i = 0; i < 40; ++i) {
    const double a = i % 9 - 4, b = 0.25 * ((i * 7) % 11);
    rows.push_back({y_scale * (3 + a - 0.5 * b + 0.125 * ((i * 5) % 13)), a, b});
  }
  return rows;
}

TEST(Fit, EveryRatioIsTheSameBitForBitWhateverTheUnitOfTheResponse) {
  FitOptions options;
  options.errors = ErrorKind::kHc3;
  const Model plain = Fit({"y", "a | number", "b | number"}, SomeRows(1), options);
  for (const int exponent : {-600, -540, -300, 40, 300, 540, 1000}) {
    const double unit = std::ldexp(1.0, exponent);
    const Model model = Fit({"y", "a | number", "b | number"}, SomeRows(unit), options);
    EXPECT_EQ(model.facts.r_squared, plain.facts.r_squared) << exponent;
    EXPECT_EQ(model.facts.f, plain.facts.f);
    EXPECT_EQ(model.facts.f_p, plain.facts.f_p);
    EXPECT_EQ(model.facts.residual_sd, unit * plain.facts.residual_sd);
    EXPECT_EQ(model.facts.median_absolute_error, unit * plain.facts.median_absolute_error);
    EXPECT_NEAR(model.facts.log_likelihood,
                plain.facts.log_likelihood - 40 * exponent * std::log(2.0), 1e-9);
    EXPECT_NEAR(model.facts.aic_original, -2 * model.facts.log_likelihood + 8, 1e-9);
    for (size_t j = 0; j < 3; ++j) {
      EXPECT_EQ(model.terms[j].coefficient, unit * plain.terms[j].coefficient);
      for (size_t kind = 0; kind < 5; ++kind)
        EXPECT_EQ(model.terms[j].standard_error[kind], unit * plain.terms[j].standard_error[kind]);
    }
    for (size_t i = 0; i < plain.tests.size(); ++i) {
      EXPECT_EQ(model.tests[i].f, plain.tests[i].f);
      EXPECT_EQ(model.tests[i].p_value, plain.tests[i].p_value);
    }
    for (size_t i = 0; i < plain.influence.size(); ++i) {
      EXPECT_EQ(model.influence[i].cooks_distance, plain.influence[i].cooks_distance);
      EXPECT_EQ(model.influence[i].studentized_residual, plain.influence[i].studentized_residual);
    }
    for (size_t i = 0; i < plain.residuals.bins.size(); ++i) {
      EXPECT_EQ(model.residuals.bins[i].rows, plain.residuals.bins[i].rows);
      EXPECT_EQ(model.residuals.bins[i].mean, unit * plain.residuals.bins[i].mean);
      EXPECT_EQ(model.residuals.bins[i].sd, unit * plain.residuals.bins[i].sd);
    }
    const Predictor predictor(model), plain_predictor(plain);
    const std::vector<Input> inputs = {{.kind = Input::Kind::kNumber, .number = 2},
                                       {.kind = Input::Kind::kNumber, .number = 1}};
    PredictionRow row;
    predictor.Resolve(inputs, row);
    for (const double level : {0.5, 0.95}) {
      EXPECT_EQ(predictor.TypicalLimits(row, level).low,
                unit * plain_predictor.TypicalLimits(row, level).low);
      EXPECT_EQ(predictor.CaseLimits(row, level).high,
                unit * plain_predictor.CaseLimits(row, level).high);
    }
    EXPECT_EQ(predictor.StudentizedResidual(row, 7 * unit),
              plain_predictor.StudentizedResidual(row, 7));
    EXPECT_EQ(predictor.CooksDistance(row, 7 * unit), plain_predictor.CooksDistance(row, 7));
  }
}

// Residuals far from zero in every bin: without an intercept x, which sums to 0 against y, explains
// nothing, so that residuals are y = 1e8 ± 1 and their sd is √(n/(n − 1)).
TEST(Fit, SpreadOfResidualsInABinIsMeasuredAboutTheirMean) {
  Rows rows;
  for (int i = 0; i < 40; ++i)
    rows.push_back({1e8 + (i / 2 % 2 == 0 ? 1 : -1), i % 2 == 0 ? 1.0 : -1.0});
  FitOptions options;
  options.intercept = false;
  const Model model = Fit({"y", "x | number"}, rows, options);
  ASSERT_EQ(model.residuals.bins.size(), 1u);
  EXPECT_EQ(model.residuals.bins[0].mean, 1e8);
  EXPECT_NEAR(model.residuals.bins[0].sd, std::sqrt(40.0 / 39), 1e-13);
}

// A reciprocal leads from a fit below zero to values that positive responses cannot have: their
// errors are infinite, not small or negative.
TEST(Fit, ErrorsOnTheImpossibleSideOfAReciprocalCountAsInfinite) {
  Rows rows;
  // 1/y = 10, 1, 1, …: the line in x falls below 0 from x = 3 on.
  const double x[] = {0, 1, 2, 3, 4, 5};
  const double y[] = {0.1, 0.2, 1, 4, 5, 10};
  for (int i = 0; i < 6; ++i) rows.push_back({y[i], x[i]});
  const Model model = Fit({"y | reciprocal", "x | number"}, rows);
  const Predictor predictor(model);
  int impossible = 0;
  for (const double at : x) {
    PredictionRow row;
    const std::vector<Input> inputs = {{.kind = Input::Kind::kNumber, .number = at}};
    predictor.Resolve(inputs, row);
    if (predictor.FittedScale(row) > 0) continue;
    ++impossible;
    EXPECT_TRUE(std::isnan(predictor.FittedTypical(row)));
    EXPECT_TRUE(std::isnan(predictor.FittedMean(row)));
    EXPECT_THAT(predictor.Note(inputs, row), ::testing::HasSubstr("no way back"));
  }
  EXPECT_GT(impossible, 0);
}

}  // namespace
}  // namespace ladderline
