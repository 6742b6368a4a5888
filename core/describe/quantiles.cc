#include "core/describe/quantiles.h"

#include <algorithm>
#include <array>
#include <cassert>
#include <cmath>
#include <cstdint>
#include <limits>
#include <map>
#include <unordered_map>

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

// A value that makes up more than 1/kAtomShare of the sample gets an interval of its own, where
// counting is enough.
constexpr size_t kAtomShare = 256;

// Values classified at a time: small enough for the first-level cache.
constexpr size_t kChunk = 256;

size_t SizeOf(const BlockedColumn& column) {
  size_t n = 0;
  for (size_t b = 0; b < column.blocks(); ++b) n += column.block(b).size();
  return n;
}

// Scrambles a counter, so that the sample does not fall in step with a period of the data.
// Source: Steele, Lea & Flood, "Fast splittable pseudorandom number generators" (2014).
std::uint64_t Scramble(std::uint64_t counter) {
  std::uint64_t z = (counter + 1) * 0x9e3779b97f4a7c15;
  z = (z ^ (z >> 30)) * 0xbf58476d1ce4e5b9;
  z = (z ^ (z >> 27)) * 0x94d049bb133111eb;
  return z ^ (z >> 31);
}

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

// Brackets around the places of ascending ranks in the sample, open-ended where they leave it.
std::vector<Bracket> BracketsAround(std::span<const size_t> ranks, size_t n,
                                    std::vector<double>& sample, double reach) {
  const auto m = static_cast<double>(sample.size());
  std::vector<Bracket> places;
  std::vector<size_t> ends;
  for (const size_t rank : ranks) {
    const double p = static_cast<double>(rank) / static_cast<double>(n);
    const double margin = reach * (std::sqrt(m * p * (1 - p)) + 1);
    places.push_back({std::floor(m * p - margin), std::ceil(m * p + margin)});
    for (const double place : {places.back().low, places.back().high})
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

// The line, cut at both ends of each bracket and on both sides of an end that is frequent.
class Partition {
 public:
  // From `low` to below the next interval's `low`.
  struct Interval {
    double low;
    bool atom = false;       // holds no value but `low`
    bool collected = false;  // values are kept
    size_t count = 0;
    std::vector<double> values = {};
  };

  Partition(std::span<const Bracket> brackets, std::span<const double> sample) {
    std::map<double, bool> cuts{{-kInfinity, false}};  // where an interval begins; whether an atom
    for (const Bracket& bracket : brackets) {
      for (const double end : {bracket.low, bracket.high}) {
        const auto times = static_cast<size_t>(std::count(sample.begin(), sample.end(), end));
        if (times * kAtomShare > sample.size()) {
          cuts[end] = true;
          cuts.emplace(std::nextafter(end, kInfinity), false);
        }
      }
      cuts.emplace(bracket.low, false);
      cuts.emplace(std::nextafter(bracket.high, kInfinity), false);
    }
    for (const auto& [low, atom] : cuts) {
      const bool wanted =
          std::any_of(brackets.begin(), brackets.end(),
                      [low = low](const Bracket& b) { return b.low <= low && low <= b.high; });
      intervals_.push_back({.low = low, .atom = atom, .collected = wanted && !atom});
    }
    // The search tree level by level: node k's children are 2k and 2k + 1, the root is 1.
    while ((size_t{1} << depth_) < intervals_.size()) ++depth_;
    const size_t leaves = size_t{1} << depth_;
    tree_.assign(leaves, kNaN);  // no value reaches a NaN, so that padding ends every search
    for (int level = 0; level < depth_; ++level) {
      const size_t first = size_t{1} << level, stride = leaves / first;
      for (size_t node = 0; node < first; ++node) {
        const size_t interval = node * stride + stride / 2;
        if (interval < intervals_.size()) tree_[first + node] = intervals_[interval].low;
      }
    }
  }

  void Add(std::span<const double> values) {
    for (size_t i = 0; i < values.size(); i += kChunk)
      AddChunk(values.subspan(i, std::min(kChunk, values.size() - i)));
  }

  std::vector<Interval>& intervals() { return intervals_; }

 private:
  void AddChunk(std::span<const double> values) {
    // The whole chunk goes down level by level: no branch, and no step waits for another value's.
    std::array<std::uint32_t, kChunk> node;
    node.fill(1);
    for (int level = 0; level < depth_; ++level)
      for (size_t i = 0; i < values.size(); ++i)
        node[i] = 2 * node[i] + static_cast<std::uint32_t>(values[i] >= tree_[node[i]]);
    const auto leaves = static_cast<std::uint32_t>(tree_.size());
    for (size_t i = 0; i < values.size(); ++i) {
      Interval& interval = intervals_[node[i] - leaves];
      ++interval.count;
      if (interval.collected) interval.values.push_back(values[i]);
    }
  }

  std::vector<Interval> intervals_;
  int depth_ = 0;
  std::vector<double> tree_;
};

}  // namespace

std::vector<double> OrderStatistics(const BlockedColumn& column, std::span<const size_t> ranks) {
  const size_t n = SizeOf(column);
  // Bracketing 3 ranks in a sample of m collects about 8 n / √m values; this m balances the two.
  const auto m = static_cast<size_t>(3 * std::pow(static_cast<double>(n), 2.0 / 3));
  std::vector<double> sample = SampleOf(column, n, n <= kFewValues ? 0 : m);

  std::map<size_t, double> found;
  std::vector<size_t> open(ranks.begin(), ranks.end());
  std::sort(open.begin(), open.end());
  open.erase(std::unique(open.begin(), open.end()), open.end());
  assert(open.empty() || open.back() < n);
  for (double reach = kFirstReach; !open.empty(); reach *= kWidening) {
    Partition partition(BracketsAround(open, n, sample, reach), sample);
    for (size_t b = 0; b < column.blocks(); ++b) partition.Add(column.block(b));

    std::vector<size_t> missed;
    size_t below = 0;
    auto next = open.begin();
    for (Partition::Interval& interval : partition.intervals()) {
      std::vector<size_t> inside;
      for (; next != open.end() && *next < below + interval.count; ++next)
        inside.push_back(*next - below);
      if (interval.atom) {
        for (const size_t rank : inside) found[below + rank] = interval.low;
      } else if (interval.collected) {
        Select(interval.values, inside,
               [&](size_t rank, double value) { found[below + rank] = value; });
      } else {
        for (const size_t rank : inside) missed.push_back(below + rank);
      }
      below += interval.count;
    }
    open = std::move(missed);
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
