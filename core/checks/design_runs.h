// The rows of a design as the rooms of this directory are shown them: run by run, columns measured
// from the centres of a basis.
#ifndef LADDERLINE_CORE_CHECKS_DESIGN_RUNS_H_
#define LADDERLINE_CORE_CHECKS_DESIGN_RUNS_H_

#include <algorithm>
#include <array>
#include <cmath>
#include <vector>

#include "core/checks/check_block.h"
#include "core/regression/centred_basis.h"
#include "core/regression/row_source.h"

namespace ladderline {

class DesignRuns {
 public:
  // The source has an intercept; the basis is one of its columns.
  DesignRuns(const RowSource& source, const CentredBasis& basis)
      : source_(source), block_(static_cast<Index>(source.columns().size())) {
    const std::size_t columns = source.columns().size();
    shift_.resize(columns);
    for (Index j = 1; j < basis.rank(); ++j) shift_[basis.kept[j]] = basis.centre[j];
    moved_.resize(columns * kCheckRows);
    std::fill_n(moved_.begin(), kCheckRows, 1.0);
    for (std::size_t c = 0; c < columns; ++c) x_.push_back(moved_.data() + c * kCheckRows);
  }

  // visit(run, first): x, shift, w and root_w of a run are set; its first row is row `first` of
  // all, a multiple of kCheckRows.
  template <class Visit>
  void ForEach(Visit visit) {
    CheckBlock run;
    run.x = x_;
    run.shift = shift_;
    for (Index b = 0; b < source_.block_count(); ++b) {
      source_.Fill(b, block_);
      for (Index first = 0; first < block_.rows; first += kCheckRows) {
        run.rows = std::min(kCheckRows, block_.rows - first);
        for (std::size_t c = 1; c < x_.size(); ++c) {
          const double* x = block_.x[c] + first;
          double* moved = moved_.data() + c * kCheckRows;
          for (Index i = 0; i < run.rows; ++i) moved[i] = x[i] - shift_[c];
        }
        if (block_.w != nullptr) {
          run.w = block_.w + first;
          for (Index i = 0; i < run.rows; ++i) root_w_[i] = std::sqrt(run.w[i]);
          run.root_w = root_w_.data();
        }
        visit(static_cast<const CheckBlock&>(run), b * kBlockRows + first);
      }
    }
  }

 private:
  const RowSource& source_;
  RowBlock block_;
  std::vector<double> shift_, moved_;
  std::vector<const double*> x_;
  std::array<double, kCheckRows> root_w_;
};

}  // namespace ladderline

#endif  // LADDERLINE_CORE_CHECKS_DESIGN_RUNS_H_
