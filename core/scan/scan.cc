#include "core/scan/scan.h"

#include <algorithm>
#include <cmath>
#include <memory>
#include <tuple>
#include <utility>

#include "core/checks/auxiliary_basis.h"
#include "core/checks/breusch_pagan.h"
#include "core/checks/design_runs.h"
#include "core/checks/projection_sums.h"
#include "core/elementary/elementary.h"
#include "core/profile/lambda_profile.h"
#include "core/profile/power_response.h"
#include "core/profile/response_profile.h"
#include "core/regression/chosen_rows.h"
#include "core/regression/column_kernels.h"
#include "core/regression/least_squares.h"
#include "core/regression/triangle_solve.h"
#include "core/support/prose.h"
#include "core/support/systematic_sample.h"

namespace ladderline {
namespace {

constexpr double kInf = std::numeric_limits<double>::infinity();
constexpr double kLogTwoPi = 1.8378770664093454836;
constexpr double kLogTwo = 0.69314718055994530942;

// The drop of twice the log-likelihood at which a 95% interval ends: R 4.2.2 qchisq(0.95, 1).
constexpr double kNoise = 3.841458820694124;

// Residuals below this share of the response's spread are rounding: the fit is exact.
constexpr double kExactShare = 1e-12;

// Some of the rows, with what all candidates that keep just these have in common.
class RowSet {
 public:
  RowSet(std::vector<double> y, const RowSource& design)
      : y_(std::move(y)), design_(&design), fit_(FitLeastSquares(design, Extended::kNever)) {
    if (fit_.rank() > 1) auxiliary_ = AuxiliaryBasis(design, fit_);
  }
  RowSet(std::vector<double> y, std::unique_ptr<ChosenRows> design)
      : RowSet(std::move(y), *design) {
    chosen_ = std::move(design);
  }

  std::size_t rows() const { return y_.size(); }
  const std::vector<double>& y() const { return y_; }
  const RowSource& design() const { return *design_; }
  const LeastSquares& fit() const { return fit_; }
  const CentredBasis& auxiliary() const { return auxiliary_; }
  const PowerResponse& powers(PowerFamily family) {
    std::unique_ptr<PowerResponse>& powers = powers_[family == PowerFamily::kYeoJohnson];
    if (!powers) powers = std::make_unique<PowerResponse>(family, y_);
    return *powers;
  }

 private:
  std::vector<double> y_;
  std::unique_ptr<ChosenRows> chosen_;
  const RowSource* design_;
  LeastSquares fit_;
  CentredBasis auxiliary_;
  std::unique_ptr<PowerResponse> powers_[2];
};

// Re-expressed values, up to a linear map, and the log-Jacobian of that.
struct Values {
  std::vector<double> z;
  double log_jacobian = 0;
};

bool IsPower(const Candidate& candidate) {
  return !std::isnan(candidate.power) && candidate.power != 1;
}

Values ReExpress(const Candidate& candidate, RowSet& set) {
  Values values;
  values.z.resize(set.rows());
  const Transform& transform = candidate.transform;
  const bool yeo_johnson = transform.kind() == TransformKind::kYeoJohnson;
  const bool positive = *std::min_element(set.y().begin(), set.y().end()) > 0;
  if (yeo_johnson || (IsPower(candidate) && positive)) {
    // Without overflow, and logarithms taken once. Rising, where a power below 0 falls.
    const PowerFamily family = yeo_johnson ? PowerFamily::kYeoJohnson : PowerFamily::kBoxCox;
    const PowerResponse::Transformed transformed =
        set.powers(family).At(yeo_johnson ? transform.arguments()[0] : candidate.power);
    PowerResponse::Block block;
    const double sign = transform.Decreasing() ? -1 : 1;
    for (std::size_t first = 0; first < set.rows();) {
      const std::size_t count = transformed.Fill(first, block);
      for (std::size_t i = 0; i < count; ++i) values.z[first + i] = sign * block.value[i];
      first += count;
    }
    values.log_jacobian = transformed.log_jacobian();
    return values;
  }
  transform.ForwardBlock(set.y().data(), values.z.data(), set.rows());
  if (candidate.IsIdentity()) return values;
  DoubleDouble sum;
  for (std::size_t first = 0; first < set.rows(); first += kBlockRows) {
    const std::size_t end = std::min<std::size_t>(set.rows(), first + kBlockRows);
    double part = 0;
    for (std::size_t i = first; i < end; ++i)
      part += transform.LogJacobian(set.y()[i], values.z[i]);
    sum += part;
  }
  values.log_jacobian = sum.value();
  return values;
}

// To moderate numbers about 0, so that squares neither overflow nor cancel.
void Standardise(Values& values) {
  std::vector<double>& z = values.z;
  const auto n = static_cast<Index>(z.size());
  const int exponent = SizeExponent(z.data(), n);
  // 2^-exponent in two parts, since it can exceed the range where the values are least.
  const double factor = std::ldexp(1, -exponent / 2), rest = std::ldexp(1, exponent / 2 - exponent);
  DoubleDouble sum;
  for (Index first = 0; first < n; first += kBlockRows) {
    const Index end = std::min(n, first + kBlockRows);
    double part = 0;
    for (Index i = first; i < end; ++i) part += z[i] = z[i] * factor * rest;
    sum += part;
  }
  const double mean = (sum / static_cast<double>(n)).value();
  for (double& value : z) value -= mean;
  values.log_jacobian -= static_cast<double>(n) * exponent * kLogTwo;
}

class Scanner {
 public:
  Scanner(std::span<const double> y, const MeasureFacts& facts, const RowSource& design)
      : facts_(facts) {
    sets_.push_back(std::make_unique<RowSet>(std::vector<double>(y.begin(), y.end()), design));
  }

  RowSet& all() { return *sets_.front(); }

  ScannedCandidate Scan(const Candidate& candidate) {
    RowSet& set = KeptBy(candidate.transform);
    ScannedCandidate scanned;
    scanned.candidate = candidate;
    scanned.rows_used = static_cast<std::int64_t>(set.rows());
    scanned.rows_outside = static_cast<std::int64_t>(all().rows() - set.rows());
    if (set.rows() == 0 || set.fit().residual_df() <= 0) return scanned;
    Values values = ReExpress(candidate, set);
    Standardise(values);
    Fit(set, values, scanned);
    return scanned;
  }

 private:
  RowSet& KeptBy(const Transform& transform) {
    // A domain is a stretch of the line, with or without its zero.
    if (transform.Returns(facts_.least) && transform.Returns(facts_.largest) &&
        (!facts_.zeros || transform.Returns(0)))
      return all();
    const std::vector<double>& y = all().y();
    std::vector<Index> rows;
    for (std::size_t i = 0; i < y.size(); ++i)
      if (transform.Returns(y[i])) rows.push_back(static_cast<Index>(i));
    for (const std::unique_ptr<RowSet>& set : sets_) {
      if (set->rows() != rows.size()) continue;
      const auto* chosen = dynamic_cast<const ChosenRows*>(&set->design());
      if (set->rows() == y.size() ||
          (chosen != nullptr && std::equal(rows.begin(), rows.end(), chosen->chosen().begin())))
        return *set;
    }
    std::vector<double> kept;
    for (const Index row : rows) kept.push_back(y[static_cast<std::size_t>(row)]);
    sets_.push_back(std::make_unique<RowSet>(
        std::move(kept), std::make_unique<ChosenRows>(all().design(), std::move(rows))));
    return *sets_.back();
  }

  void Fit(const RowSet& set, Values& values, ScannedCandidate& out) {
    const LeastSquares& fit = set.fit();
    const double n = static_cast<double>(fit.rows);
    const double squares_about_mean = ToResiduals(set, values.z);
    const double squares = residual_ss_;
    const bool exact = squares <= kExactShare * kExactShare * squares_about_mean;
    if (std::isfinite(values.log_jacobian)) {
      out.log_likelihood = exact ? kInf
                                 : -n / 2 * (1 + kLogTwoPi + Log(squares / n)) +
                                       fit.log_weight_sum / 2 + values.log_jacobian;
    }
    if (out.rows_outside == 0) {
      const double parameters = static_cast<double>(fit.rank() + 1 + out.candidate.estimated);
      out.aic = 2 * parameters - 2 * out.log_likelihood;
    }
    if (exact) return;
    if (fit.rank() > 1) out.funnel_p = FunnelP(set, values.z, std::sqrt(squares / n));
    std::vector<double> sample = SystematicSample(values.z, kShapeRows);
    const bool plain = fit.rank() == 1;
    out.shape = plain ? shapes_.Of(values.z, std::move(sample)) : shapes_.Of(sample, sample);
  }

  // Leaves the residuals of rows scaled by √w in `z`, their squares in residual_ss_, and returns
  // the sum of squares about the mean.
  double ToResiduals(const RowSet& set, std::vector<double>& z) {
    const CentredBasis& basis = set.fit().basis;
    ProjectionSums sums(basis);
    DesignRuns runs(set.design(), basis);
    DoubleDouble total;
    double weighted[kCheckRows];
    runs.ForEach([&](const CheckBlock& run, Index first) {
      const double* u = z.data() + first;
      if (run.w != nullptr) {
        for (Index i = 0; i < run.rows; ++i) weighted[i] = run.w[i] * u[i];
        u = weighted;
      }
      sums.Add(run, u);
      total += Dot(u, z.data() + first, run.rows);
    });
    std::vector<double> slopes = sums.Coordinates();
    const double about_mean = (total - TwoProduct(slopes[0], slopes[0])).value();
    SolveUpper(RoundedFactor(basis), basis.rank(), slopes.data());
    DoubleDouble squares;
    runs.ForEach([&](const CheckBlock& run, Index first) {
      double* e = z.data() + first;
      for (Index j = 0; j < basis.rank(); ++j)
        SubtractMultiple(slopes[j], run.x[basis.kept[j]], e, run.rows);
      if (run.root_w != nullptr)
        for (Index i = 0; i < run.rows; ++i) e[i] *= run.root_w[i];
      squares += Dot(e, e, run.rows);
    });
    residual_ss_ = squares.value();
    return about_mean;
  }

  static double FunnelP(const RowSet& set, const std::vector<double>& residuals, double unit) {
    BreuschPagan test(set.auxiliary());
    double spread[kCheckRows];
    DesignRuns(set.design(), set.fit().basis).ForEach([&](const CheckBlock& run, Index first) {
      for (Index i = 0; i < run.rows; ++i) {
        const double e = residuals[first + i] / unit;
        spread[i] = e * e - 1;
      }
      CheckBlock block = run;
      block.spread = spread;
      test.Add(block);
    });
    return test.Finish(set.fit().rows).p_value;
  }

  MeasureFacts facts_;
  std::vector<std::unique_ptr<RowSet>> sets_;  // the first has all rows
  double residual_ss_ = 0;
  NormalShapes shapes_;
};

// ---- Ranking ----

bool KeepsAll(const ScannedCandidate& scanned) { return scanned.rows_outside == 0; }

// Smaller comes first.
auto PlaceOf(const ScannedCandidate& scanned) {
  const double by_correlation =
      std::isnan(scanned.shape.normal_correlation) ? 1 : -scanned.shape.normal_correlation;
  const double aic = std::isnan(scanned.aic) ? kInf : scanned.aic;
  const Candidate& candidate = scanned.candidate;
  const int plainness = !scanned.as_good_as_best                                   ? 0
                        : candidate.IsIdentity()                                   ? 0
                        : candidate.estimated == 0 && !std::isnan(candidate.power) ? 1
                        : candidate.estimated == 0                                 ? 2
                                                                                   : 3;
  return std::tuple(scanned.rows_outside, !scanned.as_good_as_best, plainness, aic, by_correlation);
}

void Rank(std::vector<ScannedCandidate>& candidates, bool given_predictors) {
  double best = -kInf, best_skewness = 0;
  for (const ScannedCandidate& scanned : candidates) {
    if (!KeepsAll(scanned) || !(scanned.log_likelihood > best)) continue;
    best = scanned.log_likelihood;
    best_skewness = scanned.shape.skewness;
  }
  for (ScannedCandidate& scanned : candidates) {
    const bool as_even = !given_predictors && scanned.candidate.IsIdentity() &&
                         std::abs(scanned.shape.skewness) <= std::abs(best_skewness);
    scanned.as_good_as_best = KeepsAll(scanned) && (as_even || scanned.log_likelihood == best ||
                                                    2 * (best - scanned.log_likelihood) <= kNoise);
  }
  std::stable_sort(
      candidates.begin(), candidates.end(),
      [](const ScannedCandidate& a, const ScannedCandidate& b) { return PlaceOf(a) < PlaceOf(b); });
}

std::string WhyNoShape(std::span<const double> values) {
  if (values.empty()) return "no rows";
  if (values.size() < 3) return "needs 3 rows, has " + std::to_string(values.size());
  double other = values[0];
  for (const double x : values) {
    if (x == values[0] || x == other) continue;
    if (other != values[0]) return "";
    other = x;
  }
  return other == values[0]
             ? "all " + std::to_string(values.size()) + " values are " + PlainNumber(other)
             : "only two values occur, which no re-expression brings into another shape";
}

template <class Lambda>
ReExpressionScan ScanAll(Scanner& scanner, std::span<const double> values,
                         const MeasureFacts& facts, bool given_predictors, Lambda lambda) {
  std::optional<double> box_cox;
  if (facts.least > 0) box_cox = lambda(scanner.all().powers(PowerFamily::kBoxCox));
  const std::optional<double> yeo_johnson = lambda(scanner.all().powers(PowerFamily::kYeoJohnson));
  ReExpressionScan scan;
  scan.measure = facts;
  for (const Candidate& candidate : CandidatesFor(values, facts, box_cox, yeo_johnson))
    scan.candidates.push_back(scanner.Scan(candidate));
  scan.given_predictors = given_predictors;
  Rank(scan.candidates, given_predictors);
  return scan;
}

}  // namespace

Result<ReExpressionScan> ScanColumn(std::span<const double> values) {
  const std::string why = WhyNoShape(values);
  if (!why.empty()) return Error{why};
  const ColumnSource design(true, {}, values);
  const MeasureFacts facts = FactsOfMeasure(values);
  Scanner scanner(values, facts, design);
  return ScanAll(scanner, values, facts, false,
                 [](const PowerResponse& response) { return EstimateLambda(response); });
}

Result<ReExpressionScan> ScanResponse(std::span<const double> y, const RowSource& design) {
  const std::string why = WhyNoShape(y);
  if (!why.empty()) return Error{why};
  const MeasureFacts facts = FactsOfMeasure(y);
  Scanner scanner(y, facts, design);
  const LeastSquares& fit = scanner.all().fit();
  if (fit.residual_df() <= 0)
    return Error{"needs " + Counted(fit.rank() + 1, "row") + ", has " + std::to_string(fit.rows)};
  for (const double r : RoundedFactor(fit.basis))
    if (!std::isfinite(r * r)) return Error{"numbers too large or too small to fit; rescale them"};
  return ScanAll(scanner, y, facts, fit.rank() > 1, [&](const PowerResponse& response) {
    const Result<double> lambda = EstimateLambda(response, design, fit);
    return lambda.ok() ? std::optional<double>(lambda.value()) : std::nullopt;
  });
}

}  // namespace ladderline
