#include "core/describe/quantiles.h"

#include <algorithm>
#include <array>
#include <cassert>
#include <cmath>
#include <cstdint>
#include <limits>
#include <map>
#include <unordered_map>

#include "core/support/hash.h"

namespace ladderline {
namespace {

constexpr double kInfinity = std::numeric_limits<double>::infinity();
constexpr double kNaN = std::numeric_limits<double>::quiet_NaN();

// Below this many values a copy and a selection cost less than a sample and a pass.
constexpr size_t kFewValues = 4096;

// Brackets reach this many standard errors of a sample rank to either side: one in some thousand
// passes then has to be repeated. Each repetition widens them.
constexpr double kFirstReach = 3;
constexpr double kWidening = 4;

// A value that makes up more than 1/kAtomShare of the sample is counted rather than kept.
constexpr size_t kAtomShare = 256;

// Values classified at a time: small enough for the first-level cache.
constexpr size_t kChunk = 256;

size_t SizeOf(const BlockedColumn& column) {
  size_t n = 0;
  for (size_t b = 0; b < column.blocks(); ++b) n += column.block(b).size();
  return n;
}

// Scrambles a counter, so that the sample does not fall in step with a period of the data.
std::uint64_t Scramble(std::uint64_t counter) { return Mix((counter + 1) * 0x9e3779b97f4a7c15); }

// One value out of each of m stretches of equal length.
std::vector<double> SampleOf(const BlockedColumn& column, size_t n, size_t m) {
  std::vector<double> sample;
  sample.reserve(m);
  const double stretch = static_cast<double>(n) / static_cast<double>(m);
  const auto place = [&](size_t i) {
    const auto begin = static_cast<size_t>(stretch * static_cast<double>(i));
    const auto end = static_cast<size_t>(stretch * static_cast<double>(i + 1));
    return std::min(begin + static_cast<size_t>(Scramble(i)) % std::max<size_t>(end - begin, 1),
                    n - 1);
  };
  size_t passed = 0;
  for (size_t b = 0; b < column.blocks() && sample.size() < m; ++b) {
    const std::span<const double> values = column.block(b);
    for (size_t at; sample.size() < m && (at = place(sample.size())) < passed + values.size();)
      sample.push_back(values[at - passed]);
    passed += values.size();
  }
  return sample;
}

// Visits the values of the given ascending ranks, by repeated selection; reorders `values`.
template <class Visit>
void Select(std::vector<double>& values, std::span<const size_t> ranks, Visit&& visit) {
  auto begin = values.begin();
  for (const size_t rank : ranks) {
    const auto at = values.begin() + static_cast<std::ptrdiff_t>(rank);
    std::nth_element(begin, at, values.end());
    visit(rank, *at);
    begin = at + 1;
  }
}

// A closed interval whose values are wanted.
struct Bracket {
  double low, high;
};

// Brackets around the places of ascending ranks in the sample, open-ended where they leave it. They
// are ascending, too, and do not overlap: ranks that are near each other share one.
std::vector<Bracket> BracketsAround(std::span<const size_t> ranks, size_t n,
                                    std::vector<double>& sample, double reach) {
  const auto m = static_cast<double>(sample.size());
  std::vector<Bracket> places;
  std::vector<size_t> ends;
  for (const size_t rank : ranks) {
    const double p = static_cast<double>(rank) / static_cast<double>(n);
    const double margin = reach * (std::sqrt(m * p * (1 - p)) + 1);
    const Bracket place = {std::floor(m * p - margin), std::ceil(m * p + margin)};
    if (!places.empty() && place.low <= places.back().high) {
      places.back().high = std::max(places.back().high, place.high);
    } else {
      places.push_back(place);
    }
  }
  for (const Bracket& b : places) {
    for (const double place : {b.low, b.high})
      if (place >= 0 && place < m) ends.push_back(static_cast<size_t>(place));
  }
  std::sort(ends.begin(), ends.end());
  ends.erase(std::unique(ends.begin(), ends.end()), ends.end());
  std::unordered_map<size_t, double> value_at;
  Select(sample, ends, [&](size_t place, double value) { value_at[place] = value; });
  for (Bracket& b : places) {
    b.low = b.low < 0 ? -kInfinity : value_at[static_cast<size_t>(b.low)];
    b.high = b.high >= m ? kInfinity : value_at[static_cast<size_t>(b.high)];
  }
  return places;
}

// The line in buckets of equal width between the outermost ends of the brackets: all values are
// counted, and those kept whose bucket reaches into a bracket. A value that is frequent is counted
// instead of kept.
class Buckets {
 public:
  Buckets(std::span<const Bracket> brackets, std::span<const double> sample) {
    double low = kInfinity, high = -kInfinity;
    for (const Bracket& bracket : brackets) {
      for (const double end : {bracket.low, bracket.high}) {
        if (!std::isfinite(end)) continue;
        low = std::min(low, end);
        high = std::max(high, end);
      }
    }
    if (low <= high) {
      low_ = low;
      // The half keeps `high` out of the bucket for what lies beyond. Above 0 even where the width
      // overflows, so that an infinite distance stays one.
      scale_ = std::max((kInner - 0.5) / (high - low), std::numeric_limits<double>::denorm_min());
    }
    atoms_.fill(kNaN);
    for (const Bracket& bracket : brackets) {
      const size_t last = bracket.high == kInfinity ? kAll - 1 : Of(bracket.high);
      for (size_t b = bracket.low == -kInfinity ? 0 : Of(bracket.low); b <= last; ++b) kept_[b] = 1;
      for (const double end : {bracket.low, bracket.high}) {
        const auto times = static_cast<size_t>(std::count(sample.begin(), sample.end(), end));
        if (times * kAtomShare <= sample.size()) continue;
        atoms_[Of(end)] = end;
        has_atoms_ = true;
      }
    }
  }

  void Add(std::span<const double> values) {
    for (size_t i = 0; i < values.size(); i += kChunk) {
      const auto chunk = values.subspan(i, std::min(kChunk, values.size() - i));
      has_atoms_ ? AddChunk<true>(chunk) : AddChunk<false>(chunk);
    }
  }

  // Visits the values of those ascending ranks that lie in brackets, and returns the others.
  template <class Visit>
  std::vector<size_t> Find(std::span<const size_t> ranks, Visit&& visit) {
    std::vector<size_t> missed, among_kept, wanted;
    size_t below = 0, not_kept = 0;  // values in earlier buckets; those of them that were not kept
    auto next = ranks.begin();
    for (size_t b = 0; b < kAll; ++b) {
      const size_t up_to = below + counts_[b];
      const size_t atoms = atom_counts_[b];
      const size_t first_atom = atoms == 0 ? up_to : not_kept + KeptBelow(atoms_[b]);
      for (; next != ranks.end() && *next < up_to; ++next) {
        if (kept_[b] == 0) {
          missed.push_back(*next);
        } else if (*next >= first_atom && *next < first_atom + atoms) {
          visit(*next, atoms_[b]);
        } else {
          among_kept.push_back(*next - not_kept - (*next < first_atom ? 0 : atoms));
          wanted.push_back(*next);
        }
      }
      not_kept += kept_[b] == 0 ? counts_[b] : atoms;
      below = up_to;
    }
    const std::vector<double> found = KeptAt(among_kept, below);
    for (size_t i = 0; i < wanted.size(); ++i) visit(wanted[i], found[i]);
    return missed;
  }

 private:
  static constexpr size_t kInner = 1024;      // tables that stay in the first-level cache
  static constexpr size_t kAll = kInner + 2;  // and what lies beyond either end

  // Never falls as v rises, whatever is rounded or overflows; a NaN, of 0 times an infinity, comes
  // only where all brackets end at v, and shares the first bucket with what lies below.
  static std::int32_t Place(double v, double low, double scale) {
    double place = (v - low) * scale + 1;
    place = place > 0 ? place : 0;
    place = place < double{kAll - 1} ? place : double{kAll - 1};
    return static_cast<std::int32_t>(place);
  }
  size_t Of(double v) const { return static_cast<size_t>(Place(v, low_, scale_)); }

  size_t KeptBelow(double limit) const {
    return static_cast<size_t>(
        std::count_if(values_.begin(), values_.end(), [limit](double v) { return v < limit; }));
  }

  // The kept values of ascending ranks among them; `added` values were added in all. Few were kept,
  // unless nearly all lie in one place.
  std::vector<double> KeptAt(std::span<const size_t> ranks, size_t added) {
    if (values_.size() > kFewValues && values_.size() < added / 2)
      return OrderStatistics(SpanColumn(values_), ranks);
    std::vector<double> found;
    Select(values_, ranks, [&](size_t, double value) { found.push_back(value); });
    return found;
  }

  template <bool kAtoms>
  void AddChunk(std::span<const double> values) {
    std::array<std::int32_t, kChunk> bucket;
    const double low = low_, scale = scale_;
    const size_t n = values.size();
    for (size_t i = 0; i < n; ++i) bucket[i] = Place(values[i], low, scale);
    // Every value is written, and the place moves on only where it is to stay: no branch.
    std::array<double, kChunk> stay;
    size_t staying = 0;
    for (size_t i = 0; i < n; ++i) {
      const auto b = static_cast<size_t>(bucket[i]);
      ++counts_[b];
      stay[staying] = values[i];
      if constexpr (kAtoms) {
        const bool atom = values[i] == atoms_[b];
        atom_counts_[b] += atom;
        staying += kept_[b] & !atom;
      } else {
        staying += kept_[b];
      }
    }
    values_.insert(values_.end(), stay.begin(),
                   stay.begin() + static_cast<std::ptrdiff_t>(staying));
  }

  double low_ = 0, scale_ = 1;
  std::array<size_t, kAll> counts_ = {}, atom_counts_ = {};
  std::array<unsigned char, kAll> kept_ = {};
  std::array<double, kAll> atoms_;  // the frequent value of each bucket; NaN: none
  bool has_atoms_ = false;
  std::vector<double> values_;
};

std::vector<double> CopyOf(const BlockedColumn& column, size_t n) {
  std::vector<double> copy;
  copy.reserve(n);
  for (size_t b = 0; b < column.blocks(); ++b) {
    const std::span<const double> values = column.block(b);
    copy.insert(copy.end(), values.begin(), values.end());
  }
  return copy;
}

}  // namespace

std::vector<double> OrderStatistics(const BlockedColumn& column, std::span<const size_t> ranks) {
  const size_t n = SizeOf(column);
  std::vector<size_t> open(ranks.begin(), ranks.end());
  std::sort(open.begin(), open.end());
  open.erase(std::unique(open.begin(), open.end()), open.end());
  assert(open.empty() || open.back() < n);
  std::map<size_t, double> found;
  const auto find = [&](size_t rank, double value) { found[rank] = value; };

  std::vector<double> sample;
  if (n <= kFewValues) {
    sample = CopyOf(column, n);
    Select(sample, open, find);
    open.clear();
  } else {
    // Bracketing 3 ranks in a sample of m keeps about 8 n / √m values; this m balances the two.
    sample = SampleOf(column, n, static_cast<size_t>(std::pow(static_cast<double>(n), 2.0 / 3)));
  }
  for (double reach = kFirstReach; !open.empty(); reach *= kWidening) {
    Buckets buckets(BracketsAround(open, n, sample, reach), sample);
    for (size_t b = 0; b < column.blocks(); ++b) buckets.Add(column.block(b));
    open = buckets.Find(open, find);
  }

  std::vector<double> answers;
  for (const size_t rank : ranks) answers.push_back(found[rank]);
  return answers;
}

QuantilePlace PlaceOf(size_t n, double probability) {
  assert(n > 0 && probability >= 0 && probability <= 1);
  const double place = static_cast<double>(n - 1) * probability;
  const double lower = std::floor(place);
  return {static_cast<size_t>(lower), place - lower};
}

double Interpolate(double low, double high, double fraction) {
  return fraction == 0 || low == high ? low : std::lerp(low, high, fraction);
}

double OrderedQuantile(std::span<const double> ascending, double probability) {
  const QuantilePlace place = PlaceOf(ascending.size(), probability);
  return Interpolate(ascending[place.lower],
                     ascending[std::min(place.lower + 1, ascending.size() - 1)], place.fraction);
}

size_t DiscreteRank(size_t n, double probability) {
  assert(n > 0 && probability >= 0 && probability <= 1);
  const auto rows = static_cast<double>(n);
  auto rank = static_cast<size_t>(std::ceil(probability * rows));
  // The product may be rounded to either side of a whole number.
  while (rank > 1 && static_cast<double>(rank - 1) / rows >= probability) --rank;
  while (static_cast<double>(rank) / rows < probability) ++rank;
  return rank == 0 ? 0 : rank - 1;
}

std::vector<double> Quantiles(const BlockedColumn& column, std::span<const double> probabilities) {
  const size_t n = SizeOf(column);
  if (n == 0) return std::vector<double>(probabilities.size(), kNaN);
  std::vector<size_t> ranks;
  for (const double p : probabilities) {
    const size_t lower = PlaceOf(n, p).lower;
    ranks.push_back(lower);
    ranks.push_back(std::min(lower + 1, n - 1));
  }
  const std::vector<double> values = OrderStatistics(column, ranks);
  std::vector<double> answers;
  for (size_t i = 0; i < probabilities.size(); ++i)
    answers.push_back(
        Interpolate(values[2 * i], values[2 * i + 1], PlaceOf(n, probabilities[i]).fraction));
  return answers;
}

}  // namespace ladderline
