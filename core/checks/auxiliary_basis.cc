#include "core/checks/auxiliary_basis.h"

#include <algorithm>
#include <array>

namespace ladderline {
namespace {

constexpr std::array<double, kBlockRows> kOnes = [] {
  std::array<double, kBlockRows> ones{};
  ones.fill(1);
  return ones;
}();

class AuxiliaryDesign final : public RowSource {
 public:
  explicit AuxiliaryDesign(const RowSource& source)
      : source_(source),
        added_(source.has_intercept() ? 0 : 1),
        columns_(source.columns().begin(), source.columns().end()),
        inner_(static_cast<Index>(source.columns().size())) {
    if (added_) columns_.insert(columns_.begin(), DesignColumn{.intercept = true});
  }

  std::int64_t rows() const override { return source_.rows(); }
  std::span<const DesignColumn> columns() const override { return columns_; }
  int groups() const override { return source_.groups(); }
  void Fill(Index block, RowBlock& out) const override {
    inner_.wants_low = out.wants_low;
    source_.Fill(block, inner_);
    out.rows = inner_.rows;
    if (added_) out.x[0] = kOnes.data();
    if (added_) out.x_low[0] = nullptr;
    std::copy(inner_.x.begin(), inner_.x.end(), out.x.begin() + added_);
    std::copy(inner_.x_low.begin(), inner_.x_low.end(), out.x_low.begin() + added_);
    out.y = inner_.y;
    out.w = nullptr;
    out.group = inner_.group;
  }

 private:
  const RowSource& source_;
  Index added_;
  std::vector<DesignColumn> columns_;
  mutable RowBlock inner_;  // the columns of the last block filled point into it
};

}  // namespace

CentredBasis AuxiliaryBasis(const RowSource& source, const LeastSquares& fit) {
  if (fit.basis.intercept && !fit.weighted) return fit.basis;
  return FitLeastSquares(AuxiliaryDesign(source), Extended::kNever).basis;
}

}  // namespace ladderline
