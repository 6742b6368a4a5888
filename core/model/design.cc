#include "core/model/design.h"

#include <algorithm>
#include <array>
#include <cassert>
#include <cmath>
#include <map>
#include <utility>

#include "core/support/double_double.h"

namespace ladderline {
namespace {

static_assert(Blocked<double>::kBlockRows % static_cast<std::size_t>(kBlockRows) == 0,
              "a design block then lies within one stored block while no row has left");

const double* Ones() {
  static const auto ones = [] {
    std::array<double, kBlockRows> values;
    values.fill(1);
    return values;
  }();
  return ones.data();
}

bool StandsAsItIs(const Transform& transform) {
  return transform.kind() == TransformKind::kIdentity ||
         transform.kind() == TransformKind::kDateDays;
}

// Slot of the low parts of design column j; those below are taken by columns, response and weight.
Index LowSlot(const RowBlock& block, Index j) { return static_cast<Index>(block.x.size()) + 2 + j; }

// What a column contributes to terms: itself, its powers, or its levels without `reference`.
struct Contribution {
  std::string name;
  Factor factor;
};
std::vector<Contribution> ContributionsOf(const ModelColumn& column, int index, int reference) {
  std::vector<Contribution> out;
  if (column.kind == ColumnKind::kCategory) {
    for (int level = 0; level < static_cast<int>(column.levels.size()); ++level) {
      if (level == reference) continue;
      out.push_back({column.name + " is " + column.levels[static_cast<size_t>(level)].text,
                     {.column = index, .level = level}});
    }
  } else if (column.kind == ColumnKind::kPolynomial) {
    for (int power = 1; power <= column.degree; ++power)
      out.push_back(
          {column.name + " power " + std::to_string(power), {.column = index, .power = power}});
  } else {
    out.push_back({column.name, {.column = index}});
  }
  return out;
}

std::int64_t CountOf(const ModelColumn& column, bool in_product) {
  switch (column.kind) {
    case ColumnKind::kCategory: {
      const auto levels = static_cast<std::int64_t>(column.levels.size());
      return levels - (levels > 0 && (in_product || column.reference >= 0) ? 1 : 0);
    }
    case ColumnKind::kPolynomial:
      return column.degree;
    default:
      return 1;
  }
}

}  // namespace

std::int64_t CountTerms(std::span<const ModelColumn> columns, bool intercept) {
  std::int64_t count = intercept ? 1 : 0;
  for (const ModelColumn& column : columns) {
    if (column.role == ColumnRole::kPredictor) count += CountOf(column, false);
    if (column.role == ColumnRole::kProduct) {
      count += CountOf(columns[static_cast<size_t>(column.parts[0])], true) *
               CountOf(columns[static_cast<size_t>(column.parts[1])], true);
    }
  }
  return count;
}

std::vector<ModelTerm> MakeTerms(std::span<const ModelColumn> columns, bool intercept) {
  std::vector<ModelTerm> terms;
  if (CountTerms(columns, intercept) > static_cast<std::int64_t>(kMostTerms)) return terms;
  if (intercept) terms.push_back({.name = "intercept"});
  for (int i = 0; i < static_cast<int>(columns.size()); ++i) {
    const ModelColumn& column = columns[static_cast<size_t>(i)];
    if (column.role == ColumnRole::kPredictor) {
      for (Contribution& part : ContributionsOf(column, i, column.reference))
        terms.push_back({.name = std::move(part.name), .factors = {part.factor}});
    } else if (column.role == ColumnRole::kProduct) {
      const auto parts_of = [&](int part) {
        const ModelColumn& of = columns[static_cast<size_t>(part)];
        return ContributionsOf(of, part, of.UsualLevel());
      };
      for (const Contribution& a : parts_of(column.parts[0])) {
        for (const Contribution& b : parts_of(column.parts[1]))
          terms.push_back({.name = a.name + " by " + b.name, .factors = {a.factor, b.factor}});
      }
    }
  }
  return terms;
}

PolynomialBasis BasisOf(const ModelColumn& column, bool intercept) {
  return PolynomialBasis(column.observed_low, column.observed_high, column.degree, intercept);
}

namespace {

// The raw columns of a design with polynomials.
class RawColumnMaker {
 public:
  RawColumnMaker(std::span<const ModelColumn> columns, std::span<const ModelTerm> terms)
      : terms_(terms), tables_(columns.size()), raw_(terms.size()) {
    const bool intercept = terms.front().factors.empty();
    for (size_t c = 0; c < columns.size(); ++c) {
      if (columns[c].kind != ColumnKind::kPolynomial) continue;
      const PolynomialBasis basis = BasisOf(columns[c], intercept);
      tables_[c] = {basis.InPowers(), basis.OfPowers(), basis.unit_exponent()};
    }
    for (size_t t = 0; t < terms.size(); ++t) place_[KeyOf(terms[t].factors)] = t;
    for (size_t t = 0; t < terms.size(); ++t) {
      Expand(t, &Tables::of_powers, [&](size_t source, DoubleDouble factor) {
        raw_[t].values.push_back({static_cast<Index>(source), factor});
      });
      Expand(t, &Tables::in_powers, [&](size_t power, DoubleDouble factor) {
        raw_[power].functional.push_back({static_cast<Index>(t), factor});
      });
      for (const Factor& factor : terms[t].factors)
        raw_[t].exponent += tables_[static_cast<size_t>(factor.column)].exponent * factor.power;
    }
  }

  RawColumns Make(std::span<const DroppedColumn> dropped) {
    // What one passes on may come to another that was dropped.
    for (size_t round = 0; round <= dropped.size(); ++round) {
      bool moved = false;
      for (auto column = dropped.rbegin(); column != dropped.rend(); ++column)
        moved = PassOn(*column) || moved;
      if (!moved) break;
    }
    for (RawColumn& column : raw_) {
      const std::vector<RawColumn::Part> parts = column.values;
      for (const RawColumn::Part& part : parts) {
        const auto gone = std::find_if(dropped.begin(), dropped.end(),
                                       [&](const auto& d) { return d.column == part.column; });
        if (gone == dropped.end()) continue;
        for (const Repeat& repeat : gone->repeats)
          column.values.push_back({repeat.column, part.factor * repeat.coefficient});
      }
    }
    return std::move(raw_);
  }

 private:
  using Table = std::vector<std::vector<DoubleDouble>>;
  struct Tables {  // of a polynomial; empty for other columns
    Table in_powers, of_powers;
    int exponent = 0;
  };
  using Key = std::vector<std::array<int, 3>>;

  static Key KeyOf(const std::vector<Factor>& factors) {
    Key key;
    for (const Factor& factor : factors) {
      if (factor.level >= 0 || factor.power > 0)
        key.push_back({factor.column, factor.level, factor.level < 0 ? factor.power : 0});
    }
    return key;
  }

  // Calls take(term, factor) for what term t comes to when each power in it is replaced by its row
  // of a table; the 0-th power is 1.
  template <class Take>
  void Expand(size_t t, Table Tables::*table, Take&& take) const {
    struct Sum {
      std::vector<Factor> factors;
      DoubleDouble coefficient;
    };
    std::vector<Sum> sums = {{terms_[t].factors, 1}};
    for (size_t f = 0; f < terms_[t].factors.size(); ++f) {
      const Factor& factor = terms_[t].factors[f];
      const Table& rows = tables_[static_cast<size_t>(factor.column)].*table;
      if (rows.empty()) continue;
      std::vector<Sum> next;
      for (const Sum& sum : sums) {
        for (int k = 0; k <= factor.power; ++k) {
          const DoubleDouble share =
              rows[static_cast<size_t>(factor.power)][static_cast<size_t>(k)];
          if (share.hi == 0) continue;
          next.push_back({sum.factors, sum.coefficient * share});
          next.back().factors[f].power = k;
        }
      }
      sums = std::move(next);
    }
    for (const Sum& sum : sums) {
      const auto place = place_.find(KeyOf(sum.factors));
      if (place != place_.end()) take(place->second, sum.coefficient);
    }
  }

  // The raw column is what its source column is, less lower powers, and its source column is what
  // it repeats: the share that columns kept have in it goes there. Whether there was any.
  bool PassOn(const DroppedColumn& dropped) {
    const auto t = static_cast<size_t>(dropped.column);
    std::vector<RawColumn::Part> carried;
    DoubleDouble leading = 1;
    for (const RawColumn::Part& part : raw_[t].functional) {
      if (part.column == dropped.column) {
        leading = part.factor;
      } else {
        carried.push_back(part);
      }
    }
    raw_[t].functional = {{dropped.column, leading}};
    const auto give = [&](size_t to, DoubleDouble share) {
      if (to == t) return;
      for (const RawColumn::Part& part : carried)
        raw_[to].functional.push_back({part.column, part.factor * share / leading});
    };
    Expand(t, &Tables::in_powers, [&](size_t to, DoubleDouble share) { give(to, -share); });
    for (const Repeat& repeat : dropped.repeats) {
      Expand(static_cast<size_t>(repeat.column), &Tables::in_powers,
             [&](size_t to, DoubleDouble share) { give(to, share * repeat.coefficient); });
    }
    return !carried.empty();
  }

  std::span<const ModelTerm> terms_;
  std::vector<Tables> tables_;  // by column
  std::map<Key, size_t> place_;
  RawColumns raw_;
};

}  // namespace

RawColumns MakeRawColumns(std::span<const ModelColumn> columns, std::span<const ModelTerm> terms,
                          std::span<const DroppedColumn> dropped) {
  const bool polynomial = std::any_of(columns.begin(), columns.end(), [](const auto& c) {
    return c.kind == ColumnKind::kPolynomial;
  });
  return polynomial ? RawColumnMaker(columns, terms).Make(dropped) : RawColumns();
}

DesignSource::Origin DesignSource::OriginOf(const Factor& factor) const {
  const auto c = static_cast<size_t>(factor.column);
  const ModelColumn& column = model_columns_[c];
  Origin origin{.column = factor.column};
  if (column.kind == ColumnKind::kPolynomial) origin.power = factor.power;
  if (factor.level >= 0) {
    const std::string& text = column.levels[static_cast<size_t>(factor.level)].text;
    origin.code = set_.column(c).levels.CodeOf(text);
  }
  return origin;
}

DesignSource::DesignSource(const ColumnSet& set, std::span<const ModelColumn> columns,
                           std::span<const ModelTerm> terms)
    : set_(set),
      model_columns_(columns),
      polynomial_of_(columns.size(), -1),
      group_scratch_(kBlockRows) {
  const bool intercept = !terms.empty() && terms.front().factors.empty();
  for (int i = 0; i < static_cast<int>(columns.size()); ++i) {
    const ModelColumn& column = columns[static_cast<size_t>(i)];
    if (column.role != ColumnRole::kPredictor) continue;
    if (column.kind == ColumnKind::kPolynomial) {
      polynomial_of_[static_cast<size_t>(i)] = static_cast<int>(polynomials_.size());
      polynomials_.push_back(BasisOf(column, intercept));
    }
    if (column.kind == ColumnKind::kCategory && static_cast<int>(column.levels.size()) > groups_) {
      group_column_ = i;
      groups_ = static_cast<int>(column.levels.size());
    }
  }
  if (group_column_ >= 0) {
    // Codes follow the order in which levels came, in earlier frames as well; groups must not.
    const LevelTable& table = set.column(static_cast<size_t>(group_column_)).levels;
    const auto& levels = columns[static_cast<size_t>(group_column_)].levels;
    group_of_code_.resize(table.codes());
    for (size_t level = 0; level < levels.size(); ++level)
      group_of_code_[table.CodeOf(levels[level].text)] = static_cast<std::uint16_t>(level);
  }
  for (const ModelTerm& term : terms) {
    DesignColumn design;
    design.intercept = term.factors.empty();
    std::array<Origin, 2> origins;
    bool indicator = !term.factors.empty();
    assert(term.factors.size() <= 2);
    for (size_t i = 0; i < term.factors.size(); ++i) {
      origins[i] = OriginOf(term.factors[i]);
      indicator = indicator && origins[i].code >= 0;
      if (origins[i].code >= 0 && origins[i].column == group_column_)
        design.group = group_of_code_[static_cast<size_t>(origins[i].code)];
    }
    if (indicator && design.group == DesignColumn::kEveryGroup) design.centre = 0;
    origins_.push_back(origins);
    design_.push_back(design);
  }
  const Transform& transform = columns[0].transform;
  if (!StandsAsItIs(transform)) {
    response_.reserve(static_cast<std::size_t>(rows()));
    const Blocked<double>& raw = set.column(0).numbers;
    for (std::size_t b = 0; b < raw.blocks(); ++b) {
      const std::size_t done = response_.size();
      response_.resize(done + raw.block(b).size());
      transform.ForwardBlock(raw.block(b).data(), response_.data() + done, raw.block(b).size());
    }
  }
}

const double* DesignSource::Numbers(int column, std::size_t first, std::size_t n,
                                    double* scratch) const {
  const ColumnSet::Column& source = set_.column(static_cast<size_t>(column));
  const Transform& transform = model_columns_[static_cast<size_t>(column)].transform;
  const double* raw = Gather(source.numbers, first, n, scratch);
  if (source.role == ColumnRole::kWeight || StandsAsItIs(transform)) return raw;
  transform.ForwardBlock(raw, scratch, n);
  return scratch;
}

void DesignSource::Indicator(const Origin& origin, std::size_t first, std::size_t n,
                             double* out) const {
  const auto& codes = set_.column(static_cast<size_t>(origin.column)).codes;
  const std::uint16_t* values = Gather(codes, first, n, group_scratch_.data());
  for (std::size_t i = 0; i < n; ++i) out[i] = values[i] == origin.code ? 1.0 : 0.0;
}

const double* DesignSource::Values(const Origin& origin, std::size_t first, std::size_t n,
                                   double* scratch) const {
  if (origin.power > 0) {
    const double* x =
        Gather(set_.column(static_cast<size_t>(origin.column)).numbers, first, n, scratch);
    for (std::size_t i = 0; i < n; ++i) scratch[i] = BasisAt(origin).Value(x[i], origin.power);
    return scratch;
  }
  if (origin.code < 0) return Numbers(origin.column, first, n, scratch);
  Indicator(origin, first, n, scratch);
  return scratch;
}

const PolynomialBasis& DesignSource::BasisAt(const Origin& origin) const {
  return polynomials_[static_cast<size_t>(polynomial_of_[static_cast<size_t>(origin.column)])];
}

// Design columns j … j + degree − 1.
void DesignSource::FillPolynomial(Index j, std::size_t first, RowBlock& out) const {
  const Origin& origin = origins_[static_cast<size_t>(j)][0];
  const auto column = static_cast<size_t>(origin.column);
  const PolynomialBasis& basis = BasisAt(origin);
  const auto n = static_cast<std::size_t>(out.rows);
  std::array<double, kBlockRows> gathered;
  const double* x = Gather(set_.column(column).numbers, first, n, gathered.data());
  std::array<double*, kHighestDegree> high, low;
  for (int k = 0; k < basis.degree(); ++k) {
    const auto place = static_cast<size_t>(j + k);
    out.x[place] = high[static_cast<size_t>(k)] = out.Scratch(j + k);
    if (out.wants_low)
      out.x_low[place] = low[static_cast<size_t>(k)] = out.Scratch(LowSlot(out, j + k));
  }
  if (out.wants_low) {
    basis.FillExtended(x, n, high.data(), low.data());
  } else {
    basis.Fill(x, n, high.data());
  }
}

void DesignSource::FillProduct(Index j, std::size_t first, RowBlock& out) const {
  const auto& [a, b] = origins_[static_cast<size_t>(j)];
  const auto n = static_cast<std::size_t>(out.rows);
  double* product = out.Scratch(j);
  std::array<double, kBlockRows> scratch;
  if (!out.wants_low) {
    const double* x = Values(a, first, n, product);
    const double* y = Values(b, first, n, scratch.data());
    for (std::size_t i = 0; i < n; ++i) product[i] = x[i] * y[i];
  } else {
    double* low = out.Scratch(LowSlot(out, j));
    const auto extended = [&](const Origin& origin, double* values) {
      return origin.power > 0
                 ? Gather(set_.column(static_cast<size_t>(origin.column)).numbers, first, n, values)
                 : Values(origin, first, n, values);
    };
    const auto value = [&](const Origin& origin, double x) {
      return origin.power > 0 ? BasisAt(origin).ValueExtended(x, origin.power) : DoubleDouble(x);
    };
    const double* x = extended(a, product);
    const double* y = extended(b, scratch.data());
    for (std::size_t i = 0; i < n; ++i) {
      const DoubleDouble exact = value(a, x[i]) * value(b, y[i]);
      product[i] = exact.hi;
      // Beyond the range of an exact product the low part is not worth a NaN.
      low[i] = std::isfinite(exact.lo) ? exact.lo : 0;
    }
    out.x_low[static_cast<size_t>(j)] = low;
  }
  out.x[static_cast<size_t>(j)] = product;
}

void DesignSource::FillResponse(Index block, RowBlock& out) const {
  const auto first = static_cast<std::size_t>(block * kBlockRows);
  const std::size_t n =
      std::min(static_cast<std::size_t>(kBlockRows), static_cast<std::size_t>(rows()) - first);
  const auto terms = static_cast<Index>(origins_.size());
  out.rows = static_cast<Index>(n);
  out.y = response_.empty() ? Numbers(0, first, n, out.Scratch(terms)) : response_.data() + first;
  out.w = has_weights() ? Numbers(set_.weight_column(), first, n, out.Scratch(terms + 1)) : nullptr;
}

void DesignSource::Fill(Index block, RowBlock& out) const {
  FillResponse(block, out);
  if (response_factor_ != 1) {
    double* divided = out.Scratch(static_cast<Index>(origins_.size()));
    for (Index i = 0; i < out.rows; ++i) divided[i] = out.y[i] * response_factor_;
    out.y = divided;
  }
  const auto first = static_cast<std::size_t>(block * kBlockRows);
  const auto n = static_cast<std::size_t>(out.rows);
  for (Index j = 0; j < static_cast<Index>(origins_.size()); ++j) {
    const auto& [origin, second] = origins_[static_cast<size_t>(j)];
    if (origin.column < 0) {
      out.x[static_cast<size_t>(j)] = Ones();
    } else if (second.column >= 0) {
      FillProduct(j, first, out);
    } else if (origin.power == 0) {
      out.x[static_cast<size_t>(j)] = Values(origin, first, n, out.Scratch(j));
    } else if (origin.power == 1) {
      FillPolynomial(j, first, out);
    }
  }
  out.group = nullptr;
  if (group_column_ >= 0) {
    const std::uint16_t* codes = Gather(set_.column(static_cast<size_t>(group_column_)).codes,
                                        first, n, group_scratch_.data());
    for (std::size_t i = 0; i < n; ++i) group_scratch_[i] = group_of_code_[codes[i]];
    out.group = group_scratch_.data();
  }
}

}  // namespace ladderline
