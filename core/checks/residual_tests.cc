#include "core/checks/residual_tests.h"

#include <algorithm>
#include <array>
#include <cassert>
#include <cmath>
#include <optional>
#include <string_view>
#include <vector>

#include "core/checks/auxiliary_basis.h"
#include "core/checks/blocked_sum.h"
#include "core/checks/breusch_godfrey.h"
#include "core/checks/breusch_pagan.h"
#include "core/checks/check_block.h"
#include "core/checks/durbin_watson.h"
#include "core/checks/reset.h"
#include "core/checks/white.h"

namespace ladderline {
namespace {

constexpr std::array<double, kCheckRows> kOnes = [] {
  std::array<double, kCheckRows> ones{};
  ones.fill(1);
  return ones;
}();

// Root mean square; by the largest residual, so that squares neither overflow nor vanish.
double RootMeanSquare(std::span<const double> residuals) {
  double size = 0;
  for (const double e : residuals) size = std::max(size, std::abs(e));
  if (!(size > 0)) return 0;
  const auto n = static_cast<Index>(residuals.size());
  const double* e = residuals.data();
  const double scale = 1 / size;
  const double squares = BlockedSum(n, [=](Index i) { return (e[i] * scale) * (e[i] * scale); });
  return size * std::sqrt(squares / static_cast<double>(n));
}

// Where fitted values are measured from and in what unit; a unit of 0 says that all are the same.
struct FittedScale {
  double mean = 0, unit = 0;

  explicit FittedScale(const LeastSquares& fit) : mean(fit.y_mean) {
    // A fitted value is known to a rounding of the response.
    constexpr double kRounding = 1e-13, kNothing = 1e-10;
    const double total = std::sqrt(fit.total_ss / fit.weight_sum);
    const double spread = std::sqrt(std::max(fit.total_ss - fit.residual_ss, 0.0) / fit.weight_sum);
    if (spread > kRounding * std::abs(mean) + kNothing * total) unit = spread;
  }
};

// Cuts the rows into runs and shows each to its visitor as a CheckBlock.
class Reader {
 public:
  Reader(const RowSource& source, const CentredBasis& auxiliary, std::span<const double> residuals,
         std::span<const Index> order, const FittedScale& fitted)
      : source_(source),
        block_(static_cast<Index>(source.columns().size())),
        offset_(source.has_intercept() ? 0 : 1),
        residuals_(residuals),
        scale_(1 / RootMeanSquare(residuals)),
        fitted_scale_(fitted),
        shift_(source.columns().size() + offset_),
        x_(shift_.size(), kOnes.data()),
        moved_(shift_.size() * kCheckRows) {
    for (Index j = 1; j < auxiliary.rank(); ++j) shift_[auxiliary.kept[j]] = auxiliary.centre[j];
    if (!order.empty()) KeepLagged(order);
  }

  template <class Visit>
  void Read(Visit visit) {
    for (Index b = 0; b < source_.block_count(); ++b) {
      source_.Fill(b, block_);
      for (Index first = 0; first < block_.rows; first += kCheckRows) {
        Set(b * kBlockRows + first, first);
        visit(run_);
      }
    }
  }

 private:
  void KeepLagged(std::span<const Index> order) {
    assert(order.size() == residuals_.size());
    lagged_.resize(order.size());
    for (std::size_t t = 1; t < order.size(); ++t)
      lagged_[order[t]] = residuals_[order[t - 1]] * scale_;
  }

  // `row` of all rows, which is row `first` of the block.
  void Set(Index row, Index first) {
    const Index n = std::min(kCheckRows, block_.rows - first);
    run_.rows = n;
    for (std::size_t c = 1; c < x_.size(); ++c) {
      const double* x = block_.x[c - offset_] + first;
      const double shift = shift_[c];
      double* moved = moved_.data() + c * kCheckRows;
      for (Index i = 0; i < n; ++i) moved[i] = x[i] - shift;
      x_[c] = moved;
    }
    const double* e = residuals_.data() + row;
    for (Index i = 0; i < n; ++i) residual_[i] = e[i] * scale_;
    for (Index i = 0; i < n; ++i) spread_[i] = residual_[i] * residual_[i] - 1;
    SetFitted(first, e);
    if (lagged_.empty()) {
      before_[0] = row == 0 ? 0 : e[-1] * scale_;
      for (Index i = 1; i < n; ++i) before_[i] = residual_[i - 1];
    }
    run_.x = x_;
    run_.shift = shift_;
    run_.residual = residual_.data();
    run_.spread = spread_.data();
    run_.lagged = lagged_.empty() ? before_.data() : lagged_.data() + row;
    run_.fitted = fitted_.data();
  }

  void SetFitted(Index first, const double* e) {
    const Index n = run_.rows;
    const double* y = block_.y + first;
    run_.w = run_.root_w = nullptr;
    if (block_.w != nullptr) {
      run_.w = block_.w + first;
      for (Index i = 0; i < n; ++i) root_w_[i] = std::sqrt(run_.w[i]);
      run_.root_w = root_w_.data();
    }
    if (fitted_scale_.unit == 0) {
      fitted_.fill(0);
      return;
    }
    const double mean = fitted_scale_.mean, factor = 1 / fitted_scale_.unit;
    if (run_.root_w == nullptr) {
      for (Index i = 0; i < n; ++i) fitted_[i] = ((y[i] - mean) - e[i]) * factor;
    } else {
      for (Index i = 0; i < n; ++i) fitted_[i] = ((y[i] - mean) - e[i] / root_w_[i]) * factor;
    }
  }

  const RowSource& source_;
  RowBlock block_;
  Index offset_;
  std::span<const double> residuals_;
  double scale_;
  FittedScale fitted_scale_;
  std::vector<double> shift_;
  std::vector<const double*> x_;
  std::vector<double> moved_;
  std::vector<double> lagged_;  // only when an order is given
  std::array<double, kCheckRows> residual_, spread_, before_, fitted_, root_w_;
  CheckBlock run_;
};

ResidualTests NoTests(std::string_view why) {
  ResidualTests tests;
  const TestFigures none = TestFigures::Not(why);
  tests.breusch_pagan = tests.white = tests.reset = tests.breusch_godfrey = none;
  tests.shape.jarque_bera = tests.shape.shapiro_wilk = none;
  return tests;
}

}  // namespace

ResidualTests TestResiduals(const RowSource& source, const LeastSquares& fit,
                            std::span<const double> residuals, std::span<const Index> order) {
  assert(static_cast<std::int64_t>(residuals.size()) == source.rows());
  if (fit.residual_df() == 0)
    return NoTests("there are as many terms as rows, so that no residuals are left");
  if (fit.exact || !(fit.residual_ss > 0))
    return NoTests("the fit is exact, so that no residuals are left");

  const CentredBasis auxiliary = AuxiliaryBasis(source, fit);
  const FittedScale fitted(fit);
  BreuschPagan breusch_pagan(auxiliary);
  White white(auxiliary, fit.rows);
  std::optional<Reset> reset;
  if (fitted.unit > 0) reset.emplace(fit, fitted.mean / fitted.unit);
  BreuschGodfrey breusch_godfrey(fit);
  Reader(source, auxiliary, residuals, order, fitted).Read([&](const CheckBlock& run) {
    breusch_pagan.Add(run);
    white.Add(run);
    if (reset) reset->Add(run);
    breusch_godfrey.Add(run);
  });

  ResidualTests tests;
  tests.breusch_pagan = breusch_pagan.Finish(fit.rows);
  tests.white = white.Finish();
  tests.white_by_fitted = white.by_fitted();
  tests.reset = reset ? reset->Finish() : TestFigures::Not("all fitted values are the same");
  if (reset) tests.reset_move = reset->Move();
  tests.shape = ResidualShapeOf(residuals);
  tests.durbin_watson = DurbinWatson(residuals, order);
  tests.breusch_godfrey = breusch_godfrey.Finish();
  tests.lag_correlation = breusch_godfrey.LagCorrelation();
  return tests;
}

}  // namespace ladderline
