#include "core/regression/residual_pass.h"

#include <algorithm>
#include <array>
#include <cmath>
#include <limits>
#include <numeric>
#include <span>
#include <utility>

#include "core/regression/column_kernels.h"
#include "core/regression/double_double_columns.h"
#include "core/regression/row_parts.h"
#include "core/regression/rows_by_group.h"

namespace ladderline {
namespace {

constexpr double kNaN = std::numeric_limits<double>::quiet_NaN();

// 1 − h of a row that decides its own fitted value. Rounding in h is a few 1e-16 times the
// condition of the basis, and badly conditioned bases are worked in double-double; data this far
// out cannot be told from a row of leverage 1.
constexpr double kDecidedAlone = 1e-10;

// Rows that are worked on at a time: a few columns of them stay in the first-level cache. A
// multiple of kStep; rows that are missing in the last step are zeros, which add nothing anywhere.
constexpr Index kTileRows = 256;
constexpr Index kStep = 8;
static_assert(kTileRows % DoubleDoubleColumns::kRows == 0 && kTileRows % kStep == 0);

constexpr std::size_t kMeats = 3;  // hc0, hc2, hc3

// Up to kTileRows rows of one part, column by column, kTileRows apart.
struct Tile {
  explicit Tile(Index columns) : d(columns * kTileRows), q(columns * kTileRows) {}

  Index rows = 0;    // in use
  Index padded = 0;  // rows, rounded up to a multiple of kStep
  std::vector<double> d, q;
  double root_weight[kTileRows], e[kTileRows], h[kTileRows];

  double* D(Index j) { return d.data() + j * kTileRows; }
  double* Q(Index j) { return q.data() + j * kTileRows; }
};

class Pass {
  // Σ f q q' over the rows of a part, packed, in its own coordinates.
  using Meats = std::array<std::vector<DoubleDouble>, kMeats>;

 public:
  Pass(const RowSource& source, const LeastSquares& fit, const ResidualOptions& options)
      : source_(source),
        fit_(fit),
        basis_(fit.basis),
        options_(options),
        parts_(MakeRowParts(source, fit.basis)),
        meats_(parts_.size()),
        tile_(std::max<Index>(1, basis_.rank())),
        extended_(basis_.extended ? basis_.rank() + 1 : 0),
        by_group_(parts_.size() > 1 ? source.groups() : 0) {
    std::iota(in_order_, in_order_ + kBlockRows, 0);
    if (basis_.extended) {
      for (Index j = 0; j < basis_.rank(); ++j)
        reciprocal_.push_back(DoubleDouble(1) / basis_.factor[PackedIndex(j, j)]);
    }
    if (options_.robust) {
      for (std::size_t p = 0; p < parts_.size(); ++p)
        for (std::vector<DoubleDouble>& meat : meats_[p]) meat.resize(PackedSize(parts_[p].size()));
    }
    wants_influence_ =
        options_.influential_rows > 0 && fit_.residual_df() > 0 && !fit_.exact && fit_.rank() > 0;
  }

  ResidualSummary Run() {
    RowBlock block(basis_.columns);
    block.wants_low = basis_.extended;
    block.may_omit_indicators = parts_.size() > 1;
    for (Index b = 0; b < source_.block_count(); ++b) {
      source_.Fill(b, block);
      first_row_ = static_cast<std::int64_t>(b) * kBlockRows;
      if (parts_.size() == 1) {
        WorkRows(block, {in_order_, static_cast<std::size_t>(block.rows)}, 0);
      } else {
        by_group_.Sort(block);
        for (std::size_t g = 0; g < parts_.size(); ++g) WorkRows(block, by_group_.rows(g), g);
      }
      if (options_.visit) options_.visit({first_row_, block.rows, residual_, leverage_});
    }
    Finish();
    return std::move(summary_);
  }

 private:
  // `rows` of the block belong to part p.
  void WorkRows(const RowBlock& block, std::span<const Index> rows, std::size_t p) {
    for (std::size_t first = 0; first < rows.size(); first += kTileRows) {
      row_ = rows.data() + first;
      tile_.rows = std::min(kTileRows, static_cast<Index>(rows.size() - first));
      WorkTile(block, parts_[p], meats_[p]);
    }
  }

  void WorkTile(const RowBlock& block, const RowPart& part, Meats& meats) {
    tile_.padded = (tile_.rows + kStep - 1) / kStep * kStep;
    if (basis_.extended) {
      ProjectExtended(block);
    } else {
      Load(block, part);
      Project(part);
    }
    for (Index i = 0; i < tile_.rows; ++i) {
      residual_[row_[i]] = tile_.e[i];
      leverage_[row_[i]] = tile_.h[i];
    }
    Summarise(block, part, meats);
  }

  // d := √w (x − c), and e := √w (y − β_0) − Σ β d.
  void Load(const RowBlock& block, const RowPart& part) {
    const Index n = tile_.rows;
    double* root = tile_.root_weight;
    for (Index i = 0; i < n; ++i) root[i] = block.w == nullptr ? 1 : std::sqrt(block.w[row_[i]]);
    const DoubleDouble level = basis_.intercept ? basis_.coefficient.front() : DoubleDouble();
    for (Index i = 0; i < n; ++i) tile_.e[i] = root[i] * ((block.y[row_[i]] - level.hi) - level.lo);
    for (Index j = 0; j < part.size(); ++j) {
      const Index position = part.columns[j];
      const double* x = block.x[basis_.kept[position]];
      double* d = tile_.D(j);
      const double centre = basis_.centre[position];
      if (x == nullptr) {
        std::fill_n(d, n, 1.0);
      } else if (parts_.size() == 1) {
        x += row_[0];
        for (Index i = 0; i < n; ++i) d[i] = x[i] - centre;
      } else {
        for (Index i = 0; i < n; ++i) d[i] = x[row_[i]] - centre;
      }
      if (block.w != nullptr) {
        for (Index i = 0; i < n; ++i) d[i] *= root[i];
      }
      std::fill(d + n, d + tile_.padded, 0.0);
      if (basis_.intercept && position == 0) continue;
      SubtractMultiple(basis_.coefficient[position].hi, d, tile_.e, n);
    }
    std::fill(tile_.e + n, tile_.e + tile_.padded, 0.0);
  }

  // q := W d, h := ‖q‖².
  void Project(const RowPart& part) {
    constexpr Index kPairs = kStep / 2;
    for (Index first = 0; first < tile_.padded; first += kStep) {
      Pair h[kPairs] = {};
      const double* w = part.projection.data();
      for (Index i = 0; i < part.size(); ++i) {
        Pair q[kPairs] = {};
        for (Index j = 0; j <= i; ++j, ++w) {
          const Pair factor = Both(*w);
          const double* d = tile_.D(j) + first;
          for (Index l = 0; l < kPairs; ++l) q[l] += factor * LoadPair(d + 2 * l);
        }
        double* out = tile_.Q(i) + first;
        for (Index l = 0; l < kPairs; ++l) {
          StorePair(out + 2 * l, q[l]);
          h[l] += q[l] * q[l];
        }
      }
      for (Index l = 0; l < kPairs; ++l) StorePair(tile_.h + first + 2 * l, h[l]);
    }
  }

  // The same in double-double, rounded at the end; rows are those of the whole design in order.
  void ProjectExtended(const RowBlock& block) {
    const Index rank = basis_.rank();
    for (Index first = 0; first < tile_.rows; first += DoubleDoubleColumns::kRows) {
      const Index n = std::min(DoubleDoubleColumns::kRows, tile_.rows - first);
      const Index row = row_[first];
      extended_.Set(rank, block.y + row, nullptr, {}, n);
      for (Index j = 0; j < rank; ++j) {
        const Index column = basis_.kept[j];
        const double* low = block.x_low[column];
        extended_.Set(j, block.x[column] + row, low == nullptr ? nullptr : low + row,
                      {basis_.centre[j], 1}, n);
        extended_.SubtractMultiple(rank, basis_.coefficient[j], extended_, j);
      }
      extended_.SolveTransposed(rank, basis_.factor.data(), reciprocal_.data());
      for (Index i = 0; i < n; ++i) {
        const double root = block.w == nullptr ? 1 : std::sqrt(block.w[row + i]);
        double h = 0;
        for (Index j = 0; j < rank; ++j) {
          const double q = root * extended_.at(j, i).value();
          tile_.Q(j)[first + i] = q;
          h += q * q;
        }
        tile_.e[first + i] = root * extended_.at(rank, i).value();
        tile_.h[first + i] = h;
        tile_.root_weight[first + i] = root;
      }
    }
    for (Index i = tile_.rows; i < tile_.padded; ++i) {
      for (Index j = 0; j < rank; ++j) tile_.Q(j)[i] = 0;
      tile_.e[i] = tile_.h[i] = 0;
    }
  }

  void Summarise(const RowBlock& block, const RowPart& part, Meats& meats) {
    double f[kMeats][kTileRows];
    double rss = 0, press = 0;
    for (Index i = 0; i < tile_.padded; ++i) {
      const double rest = 1 - tile_.h[i];
      const double inverse = rest > kDecidedAlone ? 1 / rest : 0;
      f[0][i] = tile_.e[i] * tile_.e[i];
      f[1][i] = f[0][i] * inverse;
      f[2][i] = f[1][i] * inverse;
    }
    for (Index i = 0; i < tile_.rows; ++i) {
      rss += f[0][i];
      press += f[2][i];
      const double h = tile_.h[i];
      summary_.max_leverage = std::max(summary_.max_leverage, h);
      if (block.w == nullptr) {
        summary_.max_unit_leverage = summary_.max_leverage;
      } else {
        summary_.max_unit_leverage = std::max(summary_.max_unit_leverage, h / block.w[row_[i]]);
      }
      if (!(1 - h > kDecidedAlone)) {
        std::vector<double> q(part.size());
        for (Index j = 0; j < part.size(); ++j) q[j] = tile_.Q(j)[i];
        summary_.decided_alone.push_back(part.Whole(q));
      } else if (wants_influence_ && f[2][i] * h > least_listed_) {
        List(f[2][i] * h, i);
      }
    }
    residual_ss_ += rss;
    press_ += press;
    if (options_.robust) AddMeats(f, part.size(), meats);
  }

  // Σ f q q' over the tile.
  void AddMeats(const double (&f)[kMeats][kTileRows], Index size, Meats& meats) {
    double scaled[kMeats][kTileRows];
    for (Index a = 0; a < size; ++a) {
      const double* qa = tile_.Q(a);
      for (std::size_t kind = 0; kind < kMeats; ++kind)
        for (Index i = 0; i < tile_.padded; ++i) scaled[kind][i] = f[kind][i] * qa[i];
      Index b = 0;
      for (; b + 1 <= a; b += 2) AddProducts<2>(scaled, a, b, meats);
      if (b <= a) AddProducts<1>(scaled, a, b, meats);
    }
  }

  // Adds Σ scaled · q_b for `kColumns` columns from b on: four running sums each.
  template <Index kColumns>
  void AddProducts(const double (&scaled)[kMeats][kTileRows], Index a, Index b, Meats& meats) {
    Pair sums[kMeats][kColumns][2] = {};
    const double* q[kColumns];
    for (Index c = 0; c < kColumns; ++c) q[c] = tile_.Q(b + c);
    for (Index i = 0; i < tile_.padded; i += 4) {
      for (Index half = 0; half < 2; ++half) {
        for (Index c = 0; c < kColumns; ++c) {
          const Pair right = LoadPair(q[c] + i + 2 * half);
          for (std::size_t kind = 0; kind < kMeats; ++kind)
            sums[kind][c][half] += LoadPair(scaled[kind] + i + 2 * half) * right;
        }
      }
    }
    for (std::size_t kind = 0; kind < kMeats; ++kind) {
      for (Index c = 0; c < kColumns; ++c) {
        const Pair sum = sums[kind][c][0] + sums[kind][c][1];
        meats[kind][PackedIndex(b + c, a)] += sum[0] + sum[1];
      }
    }
  }

  static bool Before(const InfluentialRow& a, const InfluentialRow& b) {
    return a.cooks_distance != b.cooks_distance ? a.cooks_distance > b.cooks_distance
                                                : a.row < b.row;
  }

  // cooks_distance and studentized_residual hold their raw parts until the pass is over.
  void List(double cooks_part, Index i) {
    std::vector<InfluentialRow>& list = summary_.influential;
    const InfluentialRow next{first_row_ + row_[i], cooks_part, tile_.h[i], tile_.e[i]};
    list.insert(std::upper_bound(list.begin(), list.end(), next, Before), next);
    if (static_cast<Index>(list.size()) > options_.influential_rows) list.pop_back();
    if (static_cast<Index>(list.size()) == options_.influential_rows)
      least_listed_ = list.back().cooks_distance;
  }

  void Finish() {
    summary_.residual_ss = residual_ss_.value();
    summary_.press = press_.value();
    for (InfluentialRow& row : summary_.influential) {
      const double e = row.studentized_residual;
      row.studentized_residual =
          StudentizedResidual(e, row.leverage, fit_.residual_ss, fit_.residual_df());
      row.cooks_distance =
          CooksDistance(e, row.leverage, fit_.residual_ss, fit_.residual_df(), fit_.rank());
    }
    if (!options_.robust) return;
    std::vector<double>* const totals[kMeats] = {&summary_.hc0, &summary_.hc2, &summary_.hc3};
    for (std::size_t kind = 0; kind < kMeats; ++kind) {
      totals[kind]->assign(PackedSize(basis_.rank()), 0);
      for (std::size_t p = 0; p < parts_.size(); ++p)
        parts_[p].AddWhole(meats_[p][kind], *totals[kind]);
    }
  }

  const RowSource& source_;
  const LeastSquares& fit_;
  const CentredBasis& basis_;
  const ResidualOptions& options_;
  std::vector<RowPart> parts_;
  std::vector<Meats> meats_;  // per part
  Tile tile_;
  DoubleDoubleColumns extended_;
  std::vector<DoubleDouble> reciprocal_;
  RowsByGroup by_group_;
  Index in_order_[kBlockRows];
  bool wants_influence_ = false;
  double least_listed_ = -1;

  std::int64_t first_row_ = 0;    // of the block at work
  const Index* row_ = in_order_;  // of the tile's rows, within the block
  double residual_[kBlockRows];   // of the block, in row order
  double leverage_[kBlockRows];
  DoubleDouble residual_ss_, press_;
  ResidualSummary summary_;
};

}  // namespace

ResidualSummary PassResiduals(const RowSource& source, const LeastSquares& fit,
                              const ResidualOptions& options) {
  return Pass(source, fit, options).Run();
}

double StudentizedResidual(double residual, double leverage, double residual_ss,
                           std::int64_t residual_df) {
  const double rest = 1 - leverage;
  if (!(rest > kDecidedAlone) || residual_df < 2) return kNaN;
  const double others = residual_ss - residual * residual / rest;
  return residual / std::sqrt(rest * std::max(others, 0.0) / static_cast<double>(residual_df - 1));
}

double CooksDistance(double residual, double leverage, double residual_ss, std::int64_t residual_df,
                     Index rank) {
  const double rest = 1 - leverage;
  if (!(rest > kDecidedAlone) || residual_df < 1) return kNaN;
  const double variance = residual_ss / static_cast<double>(residual_df);
  return residual * residual * leverage / (rest * rest * static_cast<double>(rank) * variance);
}

}  // namespace ladderline
