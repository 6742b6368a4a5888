#include "core/regression/least_squares.h"

#include <algorithm>
#include <cmath>
#include <limits>
#include <utility>

#include "core/regression/column_kernels.h"
#include "core/regression/column_scaling.h"
#include "core/regression/extended_pass.h"
#include "core/regression/fold_rows.h"
#include "core/regression/householder.h"
#include "core/regression/triangle_solve.h"

namespace ladderline {
namespace {

constexpr double kNaN = std::numeric_limits<double>::quiet_NaN();
constexpr double kUnitRoundoff = 0x1p-53;

double Length(const double* x, Index n) { return std::sqrt(Dot(x, x, n)); }

// Lengths of a column as the fit sees it and of its raw numbers, both in scaled units.
struct Lengths {
  double centred = 0;
  double raw = 0;

  // What rounding can leave of a column that truly is a combination of others; `this` sums the
  // lengths of all that take part. A value may be off by its own rounding and by that of the
  // operations that formed it: 2 units in the last place of the raw numbers, root mean square. The
  // reflections add a few units of the centred ones, for any number of rows (triangles are merged
  // pairwise). Between 50 and 1e6 rows exact repeats were seen to leave 0.01 to 0.1 of the whole,
  // raw tenth powers of numbers in −9..−3 to leave 1e5 times as much.
  double RoundingError() const { return kUnitRoundoff * (4 * raw + 32 * centred); }

  void Add(double factor, const Lengths& other) {
    centred += std::abs(factor) * other.centred;
    raw += std::abs(factor) * other.raw;
  }
};

// The least squares solution in scaled, centred columns.
struct ScaledFit {
  std::vector<Index> kept;
  std::vector<Lengths> lengths;  // per kept column
  std::vector<double> factor;    // packed
  std::vector<double> effect;
  std::vector<double> coefficient;
  Lengths y_lengths;
  double residual_length = 0;
  std::vector<DroppedColumn> dropped;  // coefficients scaled, centred
};

// Decides the rank in column order. `triangle` is the factor of all columns and the response.
class RankDecision {
 public:
  RankDecision(std::vector<double> triangle, const ColumnScaling& scaling, bool intercept)
      : width_(static_cast<Index>(scaling.x.size()) + 1), a_(width_ * width_) {
    for (Index j = 0; j < width_; ++j)
      std::copy_n(triangle.data() + PackedIndex(0, j), j + 1, Column(j));
    // Raw numbers differ from centred ones by a multiple of the intercept's column, which the
    // triangle has as its first axis. The ones themselves are exact.
    for (Index j = 0; j < width_; ++j) {
      const ColumnScaling::Column& column = j + 1 < width_ ? scaling.x[j] : scaling.y;
      const double* r = Column(j);
      Lengths length{Length(r, j + 1), 0};
      if (!intercept) {
        length.raw = length.centred;
      } else if (j > 0) {
        length.raw = std::hypot(r[0] + column.scaled_centre() * Column(0)[0], Length(r + 1, j));
      }
      lengths_.push_back(length);
    }
  }

  ScaledFit Run() {
    for (Index j = 0; j + 1 < width_; ++j) Decide(j);
    const double* y = Column(width_ - 1);
    const Index rank = Rank();
    fit_.effect.assign(y, y + rank);
    fit_.coefficient = fit_.effect;
    SolveUpper(fit_.factor, rank, fit_.coefficient.data());
    fit_.y_lengths = lengths_.back();
    fit_.residual_length = Length(y + rank, width_ - rank);
    return std::move(fit_);
  }

 private:
  double* Column(Index j) { return a_.data() + j * width_; }
  Index Rank() const { return static_cast<Index>(fit_.kept.size()); }

  void Decide(Index j) {
    const Index rank = Rank();
    double* column = Column(j);
    double* rest = column + rank;
    const Index below = j - rank;  // rows that earlier dropped columns left unreduced

    std::vector<double> combination(column, column + rank);
    SolveUpper(fit_.factor, rank, combination.data());
    Lengths involved = lengths_[j];
    for (Index i = 0; i < rank; ++i) involved.Add(combination[i], fit_.lengths[i]);
    if (Length(rest, below + 1) <= involved.RoundingError()) {
      DroppedColumn dropped{j, {}};
      for (Index i = 0; i < rank; ++i) dropped.repeats.push_back({fit_.kept[i], combination[i]});
      fit_.dropped.push_back(std::move(dropped));
      return;
    }

    const Reflection reflection(rest[0], rest + 1, below);
    rest[0] = reflection.image;
    if (!reflection.identity()) {
      for (Index c = j + 1; c < width_; ++c)
        reflection.Apply(rest + 1, below, Column(c) + rank, Column(c) + rank + 1);
    }
    if (rest[0] < 0) {
      for (Index c = j; c < width_; ++c) Column(c)[rank] = -Column(c)[rank];
    }
    fit_.kept.push_back(j);
    fit_.lengths.push_back(lengths_[j]);
    fit_.factor.insert(fit_.factor.end(), column, column + rank + 1);
  }

  Index width_;
  std::vector<double> a_;         // width × width, columns one after the other
  std::vector<Lengths> lengths_;  // of all columns, the response last
  ScaledFit fit_;
};

// LeastSquares::predicted_error, to first order: with columns and response perturbed by one
// rounding, an estimate L b with a = R^-T L moves by
//   ‖a‖ (‖y‖ + Σ ‖x_j‖ |b_j|) + ‖e‖ Σ |R^-1 a|_j ‖x_j‖    and ‖a‖ by    Σ |R^-1 a|_j ‖x_j‖,
// in units of the rounding. The raw intercept, b_0 − Σ c_j b_j, also collects that of its terms.
//   source  Higham, Accuracy and Stability of Numerical Algorithms, 2nd ed., §20.1
double PredictError(const ScaledFit& fit, const ColumnScaling& scaling, bool intercept,
                    double residual_sd) {
  const Index rank = static_cast<Index>(fit.kept.size());
  const std::vector<double> inverse = InvertUpper(fit.factor, rank);
  double solution_size = fit.y_lengths.centred;
  for (Index j = 0; j < rank; ++j)
    solution_size += fit.lengths[j].centred * std::abs(fit.coefficient[j]);

  double worst = 0;
  std::vector<double> a(rank), spread(rank);
  const auto judge = [&](double estimate, double estimate_rounding, double length_rounding) {
    for (Index i = 0; i < rank; ++i) {
      spread[i] = 0;
      for (Index j = i; j < rank; ++j) spread[i] += inverse[PackedIndex(i, j)] * a[j];
    }
    double moved = 0;
    for (Index j = 0; j < rank; ++j) moved += std::abs(spread[j]) * fit.lengths[j].centred;
    const double length = Length(a.data(), rank);
    const double error = length * solution_size + fit.residual_length * moved + estimate_rounding;
    const double yardstick = std::max(std::abs(estimate), 0.01 * residual_sd * length);
    worst = std::max({worst, error / yardstick, (moved + length_rounding) / length});
  };
  for (Index i = intercept ? 1 : 0; i < rank; ++i) {
    for (Index j = 0; j < rank; ++j) a[j] = j < i ? 0 : inverse[PackedIndex(i, j)];
    judge(fit.coefficient[i], 0, 0);
  }
  if (intercept && rank > 0) {
    for (Index j = 0; j < rank; ++j) a[j] = inverse[PackedIndex(0, j)];
    double estimate = fit.coefficient[0] + scaling.y.scaled_centre();
    double estimate_rounding = std::abs(estimate);
    double length_rounding = 0;
    for (Index i = 1; i < rank; ++i) {
      const double centre = scaling.x[fit.kept[i]].scaled_centre();
      for (Index j = i; j < rank; ++j) a[j] -= centre * inverse[PackedIndex(i, j)];
      estimate -= centre * fit.coefficient[i];
      estimate_rounding += std::abs(centre * fit.coefficient[i]);
      length_rounding += std::abs(centre) * std::abs(inverse[PackedIndex(i, i)]);
    }
    judge(estimate, estimate_rounding, length_rounding);
  }
  return kUnitRoundoff * worst;
}

bool WantsExtended(Extended extended, double predicted_error, std::int64_t rows, Index rank) {
  if (extended != Extended::kMeasured) return extended == Extended::kAlways;
  const double cost = static_cast<double>(rows) * static_cast<double>(rank * rank);
  const double bearable = cost <= 2e4 ? 1e-13 : cost <= 2e8 ? 1e-10 : 1e-7;
  return !(predicted_error <= bearable);
}

DoubleDouble Times(DoubleDouble x, double power_of_two) {
  return {x.hi * power_of_two, x.lo * power_of_two};
}

// Raw coefficients of the columns that a dropped one repeats. Its own centre and theirs make up the
// share of the intercept.
void Unscale(DroppedColumn& dropped, const std::vector<Lengths>& kept_lengths,
             const ColumnScaling& scaling, bool intercept) {
  constexpr double kShare = 1e-6;
  double longest = 0;
  for (std::size_t i = 0; i < dropped.repeats.size(); ++i)
    longest = std::max(longest, std::abs(dropped.repeats[i].coefficient) * kept_lengths[i].raw);
  const ColumnScaling::Column& self = scaling.x[dropped.column];
  DoubleDouble constant = self.centre;
  double constant_terms = std::abs(self.centre);
  std::vector<Repeat> repeats;
  for (std::size_t i = 0; i < dropped.repeats.size(); ++i) {
    const auto [column, scaled] = dropped.repeats[i];
    const double raw = scaled * (scaling.x[column].factor / self.factor);
    if (intercept && i == 0) {
      constant += raw;
      constant_terms += std::abs(raw);
      continue;
    }
    constant -= TwoProduct(raw, scaling.x[column].centre);
    constant_terms += std::abs(raw * scaling.x[column].centre);
    if (std::abs(scaled) * kept_lengths[i].raw > kShare * longest) repeats.push_back({column, raw});
  }
  if (intercept && std::abs(constant.value()) > kShare * constant_terms)
    repeats.insert(repeats.begin(), {0, constant.value()});
  dropped.repeats = std::move(repeats);
}

}  // namespace

double LeastSquares::residual_sd() const {
  if (residual_df() <= 0) return kNaN;
  return std::sqrt(residual_ss / static_cast<double>(residual_df()));
}

LeastSquares FitLeastSquares(const RowSource& source, Extended extended) {
  const bool intercept = source.has_intercept();
  const ColumnScaling scaling = MeasureColumns(source);
  const ScaledFit scaled = RankDecision(FoldRows(source, scaling), scaling, intercept).Run();
  const Index rank = static_cast<Index>(scaled.kept.size());

  LeastSquares fit;
  fit.rows = source.rows();
  fit.weighted = source.has_weights();
  fit.weight_sum = scaling.weight_sum;
  fit.log_weight_sum = scaling.log_weight_sum;

  ExtendedSolution solution{{scaled.factor.begin(), scaled.factor.end()},
                            {scaled.coefficient.begin(), scaled.coefficient.end()},
                            {scaled.effect.begin(), scaled.effect.end()},
                            TwoProduct(scaled.residual_length, scaled.residual_length)};
  const std::int64_t residual_df = fit.rows - rank;
  if (residual_df == 0) solution.residual_ss = 0;
  if (rank > 0) {
    const double residual_sd =
        residual_df > 0 ? scaled.residual_length / std::sqrt(static_cast<double>(residual_df)) : 0;
    fit.predicted_error = PredictError(scaled, scaling, intercept, residual_sd);
    if (WantsExtended(extended, fit.predicted_error, fit.rows, rank)) {
      fit.basis.extended =
          PassExtended(source, scaling, scaled.kept, scaled.factor, scaled.coefficient, solution);
    }
  }
  if (residual_df == 0) solution.residual_ss = 0;

  // Back to the units of the data; every factor is a power of two.
  const double root_weight_factor = std::sqrt(scaling.weight_factor);
  const double y_factor = scaling.y.factor * root_weight_factor;
  CentredBasis& basis = fit.basis;
  basis.columns = static_cast<Index>(scaling.x.size());
  basis.intercept = intercept;
  basis.kept = scaled.kept;
  basis.factor.resize(solution.factor.size());
  for (Index j = 0; j < rank; ++j) {
    const ColumnScaling::Column& column = scaling.x[basis.kept[j]];
    basis.centre.push_back(column.centre);
    basis.coefficient.push_back(Times(solution.coefficient[j], column.factor / scaling.y.factor));
    for (Index i = 0; i <= j; ++i) {
      basis.factor[PackedIndex(i, j)] =
          Times(solution.factor[PackedIndex(i, j)], 1 / (column.factor * root_weight_factor));
    }
    fit.effect.push_back(solution.effect[j].value() / y_factor);
  }

  DoubleDouble total_ss = solution.residual_ss;
  for (Index i = intercept ? 1 : 0; i < rank; ++i)
    total_ss += solution.effect[i] * solution.effect[i];
  fit.residual_ss = solution.residual_ss.value() / y_factor / y_factor;
  fit.total_ss = total_ss.value() / y_factor / y_factor;
  fit.flat_response = std::sqrt(total_ss.value()) <= scaled.y_lengths.RoundingError();
  Lengths involved = scaled.y_lengths;
  for (Index j = 0; j < rank; ++j) involved.Add(scaled.coefficient[j], scaled.lengths[j]);
  fit.exact = std::sqrt(solution.residual_ss.value()) <= involved.RoundingError();

  fit.y_mean = scaling.y_mean;
  if (intercept && rank > 0) {
    const DoubleDouble above_centre = solution.effect[0] / solution.factor[0];
    fit.y_mean = (above_centre / scaling.y.factor + scaling.y.centre).value();
    basis.coefficient[0] += scaling.y.centre;
  }

  fit.dropped = scaled.dropped;
  for (DroppedColumn& dropped : fit.dropped) Unscale(dropped, scaled.lengths, scaling, intercept);
  return fit;
}

}  // namespace ladderline
