#include "core/release/term_map.h"

#include <algorithm>
#include <array>
#include <cmath>
#include <map>
#include <string_view>
#include <utility>

#include "core/model/design.h"
#include "core/model/polynomial_basis.h"

namespace ladderline {
namespace {

// Column, level or −1, power or 0.
using FactorPlace = std::array<int, 3>;
using TermPlace = std::vector<FactorPlace>;  // in the order of the term's factors
using Sum = std::vector<std::pair<TermPlace, DoubleDouble>>;

class Mapper {
 public:
  Mapper(const Model& old, std::span<const ModelColumn> columns,
         std::span<const std::vector<int>> places)
      : old_(old), columns_(columns), places_(places) {
    for (size_t t = 0; t < old.terms.size(); ++t) {
      TermPlace place;
      for (const Factor& factor : old.terms[t].factors) place.push_back(PlaceOf(factor));
      term_[place] = t;
    }
  }

  Result<std::vector<RawColumn::Part>> Map(const ModelTerm& term) const {
    Sum sum = {{{}, 1}};
    for (const Factor& factor : term.factors) {
      const Sum expanded = InOld(factor, term.factors.size() > 1);
      Sum next;
      for (const auto& [place, times] : sum) {
        for (const auto& [more, share] : expanded) {
          TermPlace joined = place;
          joined.insert(joined.end(), more.begin(), more.end());
          next.emplace_back(std::move(joined), times * share);
        }
      }
      sum = std::move(next);
    }
    std::map<size_t, DoubleDouble> shares;
    for (const auto& [place, times] : sum) {
      const auto found = term_.find(place);
      if (found == term_.end()) {
        return Error{"the product " + term.name + " has parts that are no terms of their own"};
      }
      shares[found->second] += times;
    }
    std::map<Index, DoubleDouble> kept;
    for (const auto& [t, share] : shares) {
      const ModelTerm& of = old_.terms[t];
      if (of.factors.empty() || !std::isnan(of.coefficient)) {
        kept[static_cast<Index>(t)] += share;
        continue;
      }
      if (of.repeats.empty() && of.note != kAlwaysZero)
        return Error{"what collinear terms repeat is not known"};
      for (const Repeat& repeat : of.repeats) kept[repeat.column] += share * repeat.coefficient;
    }
    std::vector<RawColumn::Part> parts;
    for (const auto& [t, share] : kept) {
      if (share.hi != 0) parts.push_back({t, share});
    }
    return parts;
  }

 private:
  static constexpr std::string_view kAlwaysZero = "left out: always 0";

  FactorPlace PlaceOf(const Factor& factor) const {
    const bool power = columns_[static_cast<size_t>(factor.column)].kind == ColumnKind::kPolynomial;
    return {factor.column, factor.level, power ? factor.power : 0};
  }

  // A factor of a new term as a sum of those of old ones; the empty place is 1.
  Sum InOld(const Factor& factor, bool in_product) const {
    const auto c = static_cast<size_t>(factor.column);
    const ModelColumn &was = old_.columns[c], &is = columns_[c];
    if (is.kind == ColumnKind::kPolynomial) {
      const bool intercept = old_.intercept;
      const auto shares = BasisOf(is, intercept).In(BasisOf(was, intercept));
      const auto& share = shares[static_cast<size_t>(factor.power)];
      Sum sum;
      for (int k = 0; k < static_cast<int>(share.size()); ++k) {
        if (share[static_cast<size_t>(k)].hi == 0) continue;
        TermPlace place;
        if (k > 0) place.push_back({factor.column, -1, k});
        sum.emplace_back(std::move(place), share[static_cast<size_t>(k)]);
      }
      return sum;
    }
    if (factor.level < 0) return {{{PlaceOf(factor)}, 1}};
    const int left_out = in_product ? was.UsualLevel() : was.reference;
    Sum sum;
    std::vector<int> others;
    bool whole = false;  // the level without a term is among those put together
    for (int level = 0; level < static_cast<int>(was.levels.size()); ++level) {
      const int place = places_[c].empty() ? level : places_[c][static_cast<size_t>(level)];
      if (place != factor.level) {
        others.push_back(level);
      } else if (level == left_out) {
        whole = true;
      } else {
        sum.push_back({{{factor.column, level, 0}}, 1});
      }
    }
    if (!whole) return sum;
    // One, less the levels that stand elsewhere.
    sum = {{{}, 1}};
    for (const int level : others) sum.push_back({{{factor.column, level, 0}}, -1});
    return sum;
  }

  const Model& old_;
  std::span<const ModelColumn> columns_;
  std::span<const std::vector<int>> places_;
  std::map<TermPlace, size_t> term_;
};

}  // namespace

Result<TermMap> MapTerms(const Model& old, std::span<const ModelColumn> columns,
                         std::span<const std::vector<int>> places,
                         std::span<const ModelTerm> terms) {
  const Mapper mapper(old, columns, places);
  TermMap map;
  for (const ModelTerm& term : terms) {
    Result<std::vector<RawColumn::Part>> parts = mapper.Map(term);
    if (!parts.ok()) return Error{parts.error()};
    map.push_back(std::move(parts).value());
  }
  return map;
}

}  // namespace ladderline
