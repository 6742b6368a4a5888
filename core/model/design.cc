#include "core/model/design.h"

#include <algorithm>
#include <array>
#include <cassert>

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

}  // namespace

std::vector<ModelTerm> MakeTerms(std::span<const ModelColumn> columns, bool intercept) {
  std::vector<ModelTerm> terms;
  if (intercept) terms.push_back({.name = "intercept"});
  for (int i = 0; i < static_cast<int>(columns.size()); ++i) {
    const ModelColumn& column = columns[static_cast<size_t>(i)];
    if (column.role != ColumnRole::kPredictor) continue;
    if (column.kind == ColumnKind::kCategory) {
      for (int level = 0; level < static_cast<int>(column.levels.size()); ++level) {
        if (level == column.reference) continue;
        terms.push_back(
            {.name = column.name + " is " + column.levels[static_cast<size_t>(level)].text,
             .factors = {{.column = i, .level = level}}});
      }
    } else {
      terms.push_back({.name = column.name, .factors = {{.column = i}}});
    }
  }
  return terms;
}

DesignSource::DesignSource(const ColumnSet& set, std::span<const ModelColumn> columns,
                           std::span<const ModelTerm> terms)
    : set_(set), model_columns_(columns), group_scratch_(kBlockRows) {
  for (int i = 0; i < static_cast<int>(columns.size()); ++i) {
    const ModelColumn& column = columns[static_cast<size_t>(i)];
    if (column.role != ColumnRole::kPredictor || column.kind != ColumnKind::kCategory) continue;
    // Codes are thinly used after a moving frame has held too many levels.
    const std::size_t codes = set.column(static_cast<size_t>(i)).levels.codes();
    if (codes <= 2 * kMostLevels && static_cast<int>(codes) > groups_) {
      group_column_ = i;
      groups_ = static_cast<int>(codes);
    }
  }
  for (const ModelTerm& term : terms) {
    DesignColumn design;
    Origin origin;
    if (term.factors.empty()) {
      design.intercept = true;
    } else {
      assert(term.factors.size() == 1);
      const Factor& factor = term.factors[0];
      origin.column = factor.column;
      if (factor.level >= 0) {
        const auto c = static_cast<size_t>(factor.column);
        const std::string& text = columns[c].levels[static_cast<size_t>(factor.level)].text;
        origin.code = set.column(c).levels.CodeOf(text);
        if (factor.column == group_column_) {
          design.group = origin.code;
        } else {
          design.centre = 0;
        }
      }
    }
    origins_.push_back(origin);
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
    const Origin& origin = origins_[static_cast<size_t>(j)];
    const double*& x = out.x[static_cast<size_t>(j)];
    if (origin.column < 0) {
      x = Ones();
    } else if (origin.code < 0) {
      x = Numbers(origin.column, first, n, out.Scratch(j));
    } else {
      Indicator(origin, first, n, out.Scratch(j));
      x = out.Scratch(j);
    }
  }
  out.group = group_column_ < 0 ? nullptr
                                : Gather(set_.column(static_cast<size_t>(group_column_)).codes,
                                         first, n, group_scratch_.data());
}

}  // namespace ladderline
