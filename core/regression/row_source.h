// The rows a regression reads: design columns, response and weights, in blocks, as often as needed.
//
// A fit reads every block two to four times and always in the order 0, 1, 2, …; a source must give
// the same bits each time. All numbers are finite and all weights above 0: rows that are missing
// something, lie outside a domain or have weight 0 are left out before this room sees them.
#ifndef LADDERLINE_CORE_REGRESSION_ROW_SOURCE_H_
#define LADDERLINE_CORE_REGRESSION_ROW_SOURCE_H_

#include <cstddef>
#include <cstdint>
#include <limits>
#include <memory>
#include <span>
#include <vector>

namespace ladderline {

using Index = std::ptrdiff_t;

// Every block but the last has this many rows, so that row i is row i % kBlockRows of block
// i / kBlockRows. Large enough to hide the cost of a call, small enough for a fast cache.
inline constexpr Index kBlockRows = 1024;

// What is known of a design column before any row is read.
struct DesignColumn {
  static constexpr int kEveryGroup = -1;

  // The column of ones. At most one column, and then the first.
  bool intercept = false;
  // Where the column is measured from inside the fit. NaN lets the fit take the (weighted) mean, or
  // 0 for a column that belongs to a group. Without an intercept every column is measured from 0,
  // whatever is written here.
  double centre = std::numeric_limits<double>::quiet_NaN();
  // A column that is 0 in all rows but those of one group (an indicator of a level, or a number
  // times one) may name that group: the fit then spends no time on its zeros.
  int group = kEveryGroup;
};

// One block, filled by the source. Columns are pointers, so that a source which keeps its rows in
// columns points at them without copying, and one which forms them points into the block's scratch.
class RowBlock {
 public:
  explicit RowBlock(Index columns) : x(columns), x_low(columns), scratch_(2 * columns + 2) {}

  Index rows = 0;                        // 1..kBlockRows
  std::vector<const double*> x;          // x[j][i]: column j, row i
  const double* y = nullptr;             // y[i]
  const double* w = nullptr;             // w[i] > 0; null without weights
  const std::uint16_t* group = nullptr;  // group[i] in 0..groups()-1; null without groups

  // Set by the reader when it computes in double-double. A source that can form columns more
  // accurately than a double then puts x[j][i] + x_low[j][i], |low| ≤ ulp/2; null means exact.
  bool wants_low = false;
  std::vector<const double*> x_low;

  // Set by a reader that needs no column of zeros and ones: the source may then leave x[j] null
  // where column j is 1 in the rows of its group and 0 in all others.
  bool may_omit_indicators = false;

  // Room for kBlockRows numbers, kept from call to call. Slots 0 .. 2·columns+1 are the source's to
  // use as it likes.
  double* Scratch(Index slot) {
    if (!scratch_[slot]) scratch_[slot] = std::make_unique<double[]>(kBlockRows);
    return scratch_[slot].get();
  }

 private:
  std::vector<std::unique_ptr<double[]>> scratch_;
};

class RowSource {
 public:
  virtual ~RowSource() = default;

  virtual std::int64_t rows() const = 0;
  virtual std::span<const DesignColumn> columns() const = 0;
  virtual bool has_weights() const { return false; }
  // Groups that columns may name (0: none). A row belongs to exactly one.
  virtual int groups() const { return 0; }
  // Sets rows, x, y, w, group, and x_low where it is wanted and known. `block` counts from 0.
  virtual void Fill(Index block, RowBlock& out) const = 0;

  Index block_count() const { return static_cast<Index>((rows() + kBlockRows - 1) / kBlockRows); }
  bool has_intercept() const { return !columns().empty() && columns().front().intercept; }
};

// Rows that lie in memory column by column: `x[j]` has as many numbers as `y`, `w` too or is empty.
// The numbers are not copied and must outlive the source.
class ColumnSource : public RowSource {
 public:
  // Columns of ones need no storage: an intercept's span may be empty.
  ColumnSource(std::vector<DesignColumn> columns, std::vector<std::span<const double>> x,
               std::span<const double> y, std::span<const double> w = {});
  // The common case: an intercept (or none) and then the given columns.
  ColumnSource(bool intercept, const std::vector<std::span<const double>>& x,
               std::span<const double> y, std::span<const double> w = {});
  // One group per row, for columns that name one.
  void SetGroups(int groups, std::span<const std::uint16_t> group);

  std::int64_t rows() const override { return static_cast<std::int64_t>(y_.size()); }
  std::span<const DesignColumn> columns() const override { return columns_; }
  bool has_weights() const override { return !w_.empty(); }
  int groups() const override { return groups_; }
  void Fill(Index block, RowBlock& out) const override;

 private:
  std::vector<DesignColumn> columns_;
  std::vector<std::span<const double>> x_;
  std::span<const double> y_, w_;
  int groups_ = 0;
  std::span<const std::uint16_t> group_;
};

}  // namespace ladderline

#endif  // LADDERLINE_CORE_REGRESSION_ROW_SOURCE_H_
