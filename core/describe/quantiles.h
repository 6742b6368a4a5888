// Exact order statistics and percentiles of a long column, without copying or sorting it.
//
// A deterministic sample brackets each wanted rank, one pass over the column counts what lies below
// each bracket and collects what lies inside, and selection among the collected values gives the
// exact answer. Where a rank falls outside its bracket, the pass is repeated with wider ones, up to
// the whole column, so that the answer never depends on luck; only the cost does.
//   cost    usually one pass and O(n^(2/3)) extra values (about 5% of a million rows for three
//           quartiles); never more than one copy of the column
//   source  Floyd & Rivest, "Expected time bounds for selection", CACM 18 (1975)
#ifndef LADDERLINE_CORE_DESCRIBE_QUANTILES_H_
#define LADDERLINE_CORE_DESCRIBE_QUANTILES_H_

#include <cstddef>
#include <span>
#include <vector>

namespace ladderline {

// A column as its holder keeps it: a number of blocks of any sizes, empty ones included.
// A span need only stay valid until the next call of block() on the same object, so that a holder
// may unpack or transform into a scratch block.
class BlockedColumn {
 public:
  virtual ~BlockedColumn() = default;
  virtual std::size_t blocks() const = 0;
  virtual std::span<const double> block(std::size_t index) const = 0;
};

// A column that lies in one piece.
class SpanColumn final : public BlockedColumn {
 public:
  explicit SpanColumn(std::span<const double> values) : values_(values) {}
  std::size_t blocks() const override { return 1; }
  std::span<const double> block(std::size_t) const override { return values_; }

 private:
  std::span<const double> values_;
};

// percentile_cont: the value at place 1 + (n - 1)p among the values in order, interpolated.
//   probabilities  each in 0..1, in any order, repeats allowed; the answers come in their order
//   domain         no NaN among the values; an infinity is a value like any other, but
//                  interpolation between two different infinities gives NaN
//   empty          NaN for each probability; one row or a constant column: that value
std::vector<double> Quantiles(const BlockedColumn& column, std::span<const double> probabilities);

// The values of given ranks, rank 0 being the least. Ranks below n, in any order, repeats allowed.
std::vector<double> OrderStatistics(const BlockedColumn& column,
                                    std::span<const std::size_t> ranks);

// Where percentile_cont reads among n >= 1 values in order: `fraction` of the way (0 <= fraction
// < 1) from the value of rank `lower` to the next; fraction is 0 at the last.
struct QuantilePlace {
  std::size_t lower;
  double fraction;
};
QuantilePlace PlaceOf(std::size_t n, double probability);
// The value there: exactly `low` where both are equal or fraction is 0, never outside low..high.
double Interpolate(double low, double high, double fraction);

// percentile_cont of one or more values that lie in order.
double OrderedQuantile(std::span<const double> ascending, double probability);

// percentile_disc: the first rank whose share of rows at or below, (rank + 1)/n, reaches
// `probability`, both as doubles, so that 0.07 of 100 rows is the 7th. n >= 1.
std::size_t DiscreteRank(std::size_t n, double probability);

}  // namespace ladderline

#endif  // LADDERLINE_CORE_DESCRIBE_QUANTILES_H_
