#include "core/model/fit_checks.h"

#include "core/regression/collinearity.h"

namespace ladderline {

void FitChecks::See(const ResidualBlock& block) {
  double largest = figures_.largest_leverage;
  for (Index i = 0; i < block.rows; ++i) {
    if (block.leverage[i] <= largest) continue;
    largest = block.leverage[i];
    furthest_row_ = block.first_row + i;
  }
  figures_.largest_leverage = largest;
}

void FitChecks::Test(const RowSource& source, const LeastSquares& fit, const RawColumns& raw,
                     const ResidualSummary& pass, std::span<const double> residuals) {
  figures_.tests = TestResiduals(source, fit, residuals, set_.Order());
  figures_.exact = fit.exact;
  figures_.condition_number = ConditionNumber(fit.basis, raw);
  figures_.rows_decided_alone = static_cast<std::int64_t>(pass.decided_alone.size());
}

std::vector<Check> FitChecks::Findings(const Model& model) const {
  CheckFigures figures = figures_;
  const auto row = static_cast<std::size_t>(furthest_row_);
  figures.largest_leverage_key =
      set_.keys() == nullptr ? KeyValue(set_.OfferedNumber(row)) : set_.keys()->At(row);
  std::int64_t fewest = model.rows.fitted + 1;
  for (std::size_t c = 0; c < model.columns.size(); ++c) {
    const ModelColumn& column = model.columns[c];
    if (column.kind != ColumnKind::kCategory || column.role != ColumnRole::kPredictor) continue;
    for (std::size_t l = 0; l < column.levels.size(); ++l) {
      const CategoryLevel& level = column.levels[l];
      if (level.rows >= fewest ||
          set_.column(c).levels.CodeOf(level.text) != set_.column(c).codes[row])
        continue;
      fewest = level.rows;
      figures.furthest_column = static_cast<int>(c);
      figures.furthest_level = static_cast<int>(l);
    }
  }
  if (set_.order_column() >= 0)
    figures.order = set_.column(static_cast<std::size_t>(set_.order_column())).label.name;
  for (std::size_t c = 0; c < set_.size(); ++c) figures.left_out.push_back(set_.LeftOut(c));
  return ladderline::Findings(model, figures);
}

}  // namespace ladderline
