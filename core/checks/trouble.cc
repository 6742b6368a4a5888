#include "core/checks/trouble.h"

#include <algorithm>
#include <cmath>

namespace ladderline {
namespace {

// Sums over bins that are put together.
class Pool {
 public:
  void Add(const ResidualBin& bin) {
    if (bin.rows == 0) return;
    if (stretch_.rows == 0) stretch_.low = bin.fitted_low;
    stretch_.high = bin.fitted_high;
    const auto n = static_cast<double>(bin.rows);
    sum_ += n * bin.mean;
    stretch_.rows += bin.rows;
    if (bin.rows < 2) return;
    squares_ += (n - 1) * bin.sd * bin.sd;
    df_ += n - 1;
  }
  void Add(const Pool& other) {
    stretch_.high = other.stretch_.high;
    stretch_.rows += other.stretch_.rows;
    sum_ += other.sum_;
    squares_ += other.squares_;
    df_ += other.df_;
  }
  FittedStretch Whole() const {
    FittedStretch whole = stretch_;
    whole.mean = sum_ / static_cast<double>(stretch_.rows);
    whole.sd = std::sqrt(squares_ / df_);
    return whole;
  }
  std::int64_t rows() const { return stretch_.rows; }

 private:
  FittedStretch stretch_;
  double sum_ = 0, squares_ = 0, df_ = 0;
};

}  // namespace

std::vector<FittedStretch> Stretches(std::span<const ResidualBin> bins) {
  constexpr std::int64_t kLeastRows = 10;
  std::int64_t rows = 0;
  for (const ResidualBin& bin : bins) rows += bin.rows;
  const std::int64_t least = std::max(kLeastRows, rows / 10);
  std::vector<Pool> pools;
  Pool pool;
  for (const ResidualBin& bin : bins) {
    pool.Add(bin);
    if (pool.rows() < least) continue;
    pools.push_back(pool);
    pool = {};
  }
  if (pool.rows() > 0 && !pools.empty()) pools.back().Add(pool);
  std::vector<FittedStretch> stretches;
  for (const Pool& whole : pools) stretches.push_back(whole.Whole());
  return stretches;
}

SpreadChange SpreadChangeOf(const Model& model, const ResidualTests& tests) {
  SpreadChange change;
  const std::vector<FittedStretch> stretches = Stretches(model.residuals.bins);
  if (stretches.size() > 1) {
    const auto [narrowest, widest] =
        std::minmax_element(stretches.begin(), stretches.end(),
                            [](const auto& a, const auto& b) { return a.sd < b.sd; });
    change.narrowest = *narrowest;
    change.widest = *widest;
    if (widest->sd > 0) change.by_fitted = std::min(widest->sd / narrowest->sd, kMostSpread);
  }
  const TestFigures& test = tests.breusch_pagan;
  if (test.computed()) {
    const double beyond_chance = std::max(test.statistic - test.df, 0.0);
    const double moved = std::sqrt(beyond_chance / static_cast<double>(model.rows.fitted) *
                                   (tests.shape.excess_kurtosis + 2));
    // A variance cannot move by more than its mean; what is estimated can.
    constexpr double kMost = 0.99;
    const double c = std::min(moved, kMost);
    change.by_predictors = std::sqrt((1 + c) / (1 - c));
  }
  return change;
}

namespace {

// A spread seen in this many rows is known to about a sixth, 1 / √(2 (n − 1)); in a few rows the
// ratio of errors is mostly chance.
constexpr std::int64_t kRowsForASpread = 20;

// Rows behind a term: of the levels it speaks of.
std::int64_t RowsBehind(const Model& model, const ModelTerm& term) {
  std::int64_t rows = model.rows.fitted;
  for (const Factor& factor : term.factors) {
    if (factor.level < 0) continue;
    const ModelColumn& column = model.columns[static_cast<std::size_t>(factor.column)];
    rows = std::min(rows, column.levels[static_cast<std::size_t>(factor.level)].rows);
  }
  return rows;
}

ErrorShift ErrorShiftOf(const Model& model, std::int64_t least_rows) {
  ErrorShift shift;
  for (int j = 0; j < static_cast<int>(model.terms.size()); ++j) {
    const ModelTerm& term = model.terms[static_cast<std::size_t>(j)];
    if (term.factors.empty() || RowsBehind(model, term) < least_rows) continue;
    const ErrorShift here = {
        term.standard_error[static_cast<std::size_t>(ErrorKind::kHc2)] /
            term.standard_error[static_cast<std::size_t>(ErrorKind::kClassical)],
        j};
    if (here.ratio > 0 && std::isfinite(here.ratio) &&
        !(shift.term >= 0 && shift.size() >= here.size()))
      shift = here;
  }
  return shift;
}

}  // namespace

ErrorShift ErrorShiftOf(const Model& model) {
  const ErrorShift shift = ErrorShiftOf(model, kRowsForASpread);
  return shift.term >= 0 ? shift : ErrorShiftOf(model, 0);
}

Companion CompanionOf(const Model& model, int term) {
  Companion companion;
  const CentredBasis& basis = model.basis.fit;
  const auto place = std::find(basis.kept.begin(), basis.kept.end(), Index{term});
  if (place == basis.kept.end()) return companion;
  const Index from = basis.intercept ? 1 : 0;  // the row of R that belongs to the intercept
  const auto product = [&](Index a, Index b) {
    double sum = 0;
    for (Index i = from; i <= std::min(a, b); ++i)
      sum += basis.factor[static_cast<std::size_t>(PackedIndex(i, a))].value() *
             basis.factor[static_cast<std::size_t>(PackedIndex(i, b))].value();
    return sum;
  };
  const Index own = place - basis.kept.begin();
  const int column = model.terms[static_cast<std::size_t>(term)].factors[0].column;
  for (Index other = from; other < basis.rank(); ++other) {
    const auto j = static_cast<std::size_t>(basis.kept[static_cast<std::size_t>(other)]);
    if (other == own || model.terms[j].factors[0].column == column) continue;
    const double correlation =
        product(own, other) / std::sqrt(product(own, own) * product(other, other));
    if (!(std::abs(correlation) <= std::abs(companion.correlation)) && std::isfinite(correlation))
      companion = {static_cast<int>(j), correlation};
  }
  return companion;
}

}  // namespace ladderline
