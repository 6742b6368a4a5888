#include "core/profile/response_profile.h"

#include <algorithm>
#include <array>
#include <cmath>
#include <limits>
#include <string>
#include <vector>

#include "core/checks/design_runs.h"
#include "core/checks/projection_sums.h"
#include "core/elementary/elementary.h"
#include "core/regression/chosen_rows.h"
#include "core/regression/column_kernels.h"
#include "core/regression/triangle_solve.h"
#include "core/support/double_double.h"
#include "core/support/prose.h"

// Symbols: z the transformed response, z1 and z2 its derivatives in λ; d the design columns about
// their centres, R their triangular factor, c = R^-T Σ w d z the coordinates of z.
namespace ladderline {
namespace {

constexpr double kNaN = std::numeric_limits<double>::quiet_NaN();
constexpr double kUnitRoundoff = 0x1p-53;
constexpr double kLogTwoPi = 1.8378770664093454836;
constexpr int kMostDerivatives = 2;

static_assert(PowerResponse::kBlock % kCheckRows == 0);

// Loss of digits in a share of unexplained squares from which the second pass is taken.
constexpr double kLoss = 1e-11;

// Residuals that are no more than so many roundings of the response are taken for none.
constexpr double kRoundings = 64;

// As for columns (column_profile.cc): longer data start from the λ of a sample.
constexpr std::size_t kSampleRows = 1 << 14;

// Where the search looks first: the plain powers, at which exact fits are met with, and enough
// others to cover the range.
constexpr double kFirstLook[] = {-5, -4, -3, -2, -1, -0.5, 0, 1.0 / 3, 0.5, 1, 2, 3, 4, 5};

// By how much R^-T can blow up a rounding of each column: ‖ |R^-T| (column lengths) ‖.
double Amplification(const std::vector<double>& factor, Index rank) {
  const std::vector<double> inverse = InvertUpper(factor, rank);
  double squares = 0;
  for (Index i = 0; i < rank; ++i) {
    double row = 0;
    for (Index j = 0; j <= i; ++j) {
      const double* column = factor.data() + PackedIndex(0, j);
      row += std::abs(inverse[PackedIndex(j, i)]) * std::sqrt(Dot(column, column, j + 1));
    }
    squares += row * row;
  }
  return std::sqrt(squares);
}

double InnerProduct(const std::vector<double>& a, const std::vector<double>& b) {
  return Dot(a.data(), b.data(), static_cast<Index>(a.size()));
}

}  // namespace

// Of z and its derivatives, or of what given linear functions leave of them.
struct ResponseProfile::Projected {
  enum { kZZ, kZZ1, kZ1Z1, kZZ2, kProducts };
  DoubleDouble products[kProducts];
  std::array<std::vector<double>, kMostDerivatives + 1> coordinates;

  // A product less what the columns explain of it.
  double Left(int product, int a, int b) const {
    return (products[product] - InnerProduct(coordinates[a], coordinates[b])).value();
  }
};

ResponseProfile::ResponseProfile(const PowerResponse& response, const RowSource& design,
                                 const LeastSquares& fit)
    : response_(response),
      design_(design),
      fit_(fit),
      factor_(RoundedFactor(fit.basis)),
      amplification_(Amplification(factor_, fit.rank())) {}

ResponseProfile::Projected ResponseProfile::Pass(const PowerResponse::Transformed& transformed,
                                                 int derivatives,
                                                 const std::vector<double>* fitted) const {
  constexpr int kColumns = kMostDerivatives + 1;
  const CentredBasis& basis = fit_.basis;
  const int columns = derivatives + 1;
  std::vector<ProjectionSums> sums(static_cast<std::size_t>(columns), ProjectionSums(basis));
  Projected out;
  PowerResponse::Block block;
  double rest[kColumns][kCheckRows], weighted[kColumns][kCheckRows];
  DesignRuns(design_, basis).ForEach([&](const CheckBlock& run, Index first) {
    const Index offset = first % static_cast<Index>(PowerResponse::kBlock), n = run.rows;
    if (offset == 0) transformed.Fill(static_cast<std::size_t>(first), block);
    const double* z[kColumns] = {block.value + offset, block.slope + offset,
                                 block.curvature + offset};
    const double* u[kColumns];  // √w times √w z
    for (int k = 0; k < columns; ++k) {
      if (fitted != nullptr) {
        std::copy_n(z[k], n, rest[k]);
        for (Index j = 0; j < basis.rank(); ++j)
          SubtractMultiple(fitted[k][j], run.x[basis.kept[j]], rest[k], n);
        z[k] = rest[k];
      }
      u[k] = z[k];
      if (run.w != nullptr) {
        for (Index i = 0; i < n; ++i) weighted[k][i] = run.w[i] * z[k][i];
        u[k] = weighted[k];
      }
      sums[k].Add(run, u[k]);
    }
    out.products[Projected::kZZ] += Dot(u[0], z[0], n);
    if (derivatives >= 1) out.products[Projected::kZZ1] += Dot(u[0], z[1], n);
    if (derivatives >= 2) {
      out.products[Projected::kZ1Z1] += Dot(u[1], z[1], n);
      out.products[Projected::kZZ2] += Dot(u[0], z[2], n);
    }
  });
  for (int k = 0; k < columns; ++k) out.coordinates[k] = sums[k].Coordinates();
  return out;
}

ResponseProfile::Point ResponseProfile::At(double lambda, int derivatives) const {
  const PowerResponse::Transformed transformed = response_.At(lambda);
  Projected sums = Pass(transformed, derivatives, nullptr);
  const double first = sums.coordinates[0][0];
  const double total =
      (sums.products[Projected::kZZ] - TwoProduct(first, first)).value();  // about the mean
  double squares = sums.Left(Projected::kZZ, 0, 0);
  const double size = sums.products[Projected::kZZ].value();
  if (!(kUnitRoundoff * amplification_ * size <= kLoss * squares)) {
    for (int k = 0; k <= derivatives; ++k)
      SolveUpper(factor_, fit_.rank(), sums.coordinates[k].data());
    sums = Pass(transformed, derivatives, sums.coordinates.data());
    squares = sums.Left(Projected::kZZ, 0, 0);
  }
  // Keeps logarithm and quotients finite where nothing at all is left.
  squares = std::max(squares, kUnitRoundoff * kUnitRoundoff * total);

  const double n = static_cast<double>(fit_.rows);
  Point point{{.log_likelihood = -n / 2 * (1 + kLogTwoPi + Log(squares / n)) +
                                 fit_.log_weight_sum / 2 + transformed.log_jacobian(),
               .score = kNaN,
               .score_slope = kNaN},
              squares,
              squares / total};
  if (derivatives >= 1) {
    const double ratio = sums.Left(Projected::kZZ1, 0, 1) / squares;
    point.profile.score = transformed.log_jacobian_slope() - n * ratio;
    if (derivatives >= 2) {
      const double slopes = sums.Left(Projected::kZ1Z1, 1, 1) + sums.Left(Projected::kZZ2, 0, 2);
      point.profile.score_slope = -n * (slopes / squares - 2 * ratio * ratio);
    }
  }
  return point;
}

bool ResponseProfile::InRange() const { return std::isfinite(amplification_); }

bool ResponseProfile::IsExact(double unexplained) const {
  // A positive value's rounding is one of its logarithm, beside the spread of which it counts.
  const double rounding = kRoundings * kUnitRoundoff * (1 + 1 / response_.spread());
  const double share = std::min(rounding, 1e-6);
  return unexplained <= share * share;
}

namespace {

struct Maximum {
  double lambda;
  bool at_limit = false, exact = false;
  ResponseProfile::Point top = {};
  double unit = 0;  // of λ, over which the likelihood changes its shape
};

// The residual sum of squares is nearly a parabola S + a (λ − m)², and the likelihood changes its
// shape over √(S/a): a small part of what a column's does where the predictors explain much.
double ShapeUnit(const ResponseProfile& profile, double lambda, const ProfilePoint& top) {
  const double n = static_cast<double>(profile.response().rows());
  const double ratio = (profile.response().At(lambda).log_jacobian_slope() - top.score) / n;
  const double bend = 2 * ratio * ratio - top.score_slope / n;
  const double of_column = 1 / profile.response().spread();
  return bend > 0 ? std::min(of_column, 1 / std::sqrt(bend)) : of_column;
}

// nullopt: fitted exactly at more than one power, and so at all.
std::optional<double> BestFirstLook(const ResponseProfile& profile) {
  double best = 0, best_likelihood = -std::numeric_limits<double>::infinity();
  int exact = 0;
  for (const double lambda : kFirstLook) {
    const ResponseProfile::Point point = profile.At(lambda, 0);
    if (profile.IsExact(point.unexplained)) ++exact;
    if (point.profile.log_likelihood > best_likelihood) {
      best_likelihood = point.profile.log_likelihood;
      best = lambda;
    }
  }
  if (exact > 1) return std::nullopt;
  return best;
}

Maximum Climb(const ResponseProfile& profile, double start) {
  Maximum maximum{.lambda = start, .unit = 1 / profile.response().spread()};
  const auto climb = [&] {
    const ProfileMaximum found = MaximiseProfile(
        [&](double lambda) { return profile.At(lambda, 2).profile; }, maximum.lambda, maximum.unit);
    maximum.lambda = found.lambda;
    maximum.at_limit = found.at_limit;
    maximum.top = profile.At(found.lambda, 2);
  };
  climb();
  const double unit = ShapeUnit(profile, maximum.lambda, maximum.top.profile);
  constexpr double kMuchFiner = 0.1;
  const bool again = unit < kMuchFiner * maximum.unit;
  maximum.unit = unit;
  if (again) climb();
  return maximum;
}

// The λ near `lambda` at which the residuals are smallest; there they are a quadratic function of
// λ, where the likelihood has a pole.
double LeastResiduals(const ResponseProfile& profile, double lambda) {
  constexpr int kSteps = 6;  // Newton's method doubles the digits
  const double n = static_cast<double>(profile.response().rows());
  for (int i = 0; i < kSteps; ++i) {
    const ResponseProfile::Point point = profile.At(lambda, 2);
    const double jacobian_slope = profile.response().At(lambda).log_jacobian_slope();
    const double ratio = (jacobian_slope - point.profile.score) / n;
    const double curvature = 2 * ratio * ratio - point.profile.score_slope / n;
    if (!(curvature > 0)) break;
    lambda = std::clamp(lambda - ratio / curvature, kLeastLambda, kLargestLambda);
  }
  return lambda;
}

std::optional<Maximum> FindMaximum(const ResponseProfile& profile) {
  const PowerResponse& response = profile.response();
  std::optional<double> start;
  if (response.rows() > 2 * kSampleRows) {
    const std::size_t stride = response.rows() / kSampleRows;
    const PowerResponse sample = response.Thinned(stride);
    std::vector<Index> rows;
    for (std::size_t i = 0; i < response.rows(); i += stride) rows.push_back(static_cast<Index>(i));
    const ChosenRows design(profile.design(), std::move(rows));
    const LeastSquares fit = FitLeastSquares(design, Extended::kNever);
    if (!sample.IsConstant() && fit.residual_df() > 0) {
      const ResponseProfile of_sample(sample, design, fit);
      const std::optional<double> look = BestFirstLook(of_sample);
      if (look) {
        start = of_sample.IsExact(of_sample.At(*look, 0).unexplained)
                    ? *look
                    : Climb(of_sample, *look).lambda;
      }
    }
  }
  if (!start) start = BestFirstLook(profile);
  if (!start) return std::nullopt;
  if (profile.IsExact(profile.At(*start, 0).unexplained))
    return Maximum{.lambda = *start, .exact = true};

  const Maximum maximum = Climb(profile, *start);
  constexpr double kNearlyExact = 1e-8;
  if (maximum.top.unexplained < kNearlyExact) {
    const double lambda = LeastResiduals(profile, maximum.lambda);
    if (profile.IsExact(profile.At(lambda, 0).unexplained))
      return Maximum{.lambda = lambda, .exact = true};
  }
  return maximum;
}

// What both results share: the reasons why there is none, and the maximum.
template <class Answer>
auto WithMaximum(const PowerResponse& response, const RowSource& design, const LeastSquares& fit,
                 Answer answer)
    -> Result<decltype(answer(std::declval<const ResponseProfile&>(), Maximum{}))> {
  if (fit.residual_df() <= 0) {
    return Error{"needs " + Counted(fit.rank() + 1, "row") + ", has " + std::to_string(fit.rows)};
  }
  if (response.IsConstant()) return Error{"all values of the response are equal"};
  const ResponseProfile profile(response, design, fit);
  const Error out_of_range{"numbers too large or too small to fit; rescale them"};
  if (!profile.InRange()) return out_of_range;
  const std::optional<Maximum> maximum = FindMaximum(profile);
  if (!maximum) return Error{"the predictors fit the response exactly at every power"};
  if (!maximum->exact && !std::isfinite(maximum->top.profile.log_likelihood)) return out_of_range;
  return answer(profile, *maximum);
}

}  // namespace

Result<LambdaProfile> ProfileLambda(const PowerResponse& response, const RowSource& design,
                                    double level) {
  const auto answer = [&](const ResponseProfile& profile, const Maximum& maximum) {
    if (maximum.exact) return ExactLambdaProfile(response, maximum.lambda, level);
    const auto at = [&](int derivatives) {
      return [&profile, derivatives](double lambda) {
        return profile.At(lambda, derivatives).profile;
      };
    };
    return MakeLambdaProfile(response, {maximum.lambda, maximum.at_limit}, maximum.top.profile,
                             at(1), at(0), level, maximum.unit);
  };
  return WithMaximum(response, design, FitLeastSquares(design), answer);
}

Result<double> EstimateLambda(const PowerResponse& response, const RowSource& design) {
  return EstimateLambda(response, design, FitLeastSquares(design));
}

Result<double> EstimateLambda(const PowerResponse& response, const RowSource& design,
                              const LeastSquares& fit) {
  return WithMaximum(response, design, fit,
                     [](const ResponseProfile&, const Maximum& maximum) { return maximum.lambda; });
}

}  // namespace ladderline
