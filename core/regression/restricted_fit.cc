#include "core/regression/restricted_fit.h"

#include <algorithm>
#include <cassert>
#include <cmath>
#include <limits>
#include <type_traits>

#include "core/regression/column_kernels.h"
#include "core/regression/triangle_solve.h"

namespace ladderline {
namespace {

double Value(double number) { return number; }
double Value(DoubleDouble number) { return number.value(); }
double Root(double square) { return std::sqrt(square); }
DoubleDouble Root(DoubleDouble square) { return Sqrt(square); }
template <class Number>
Number Rounded(DoubleDouble number) {
  if constexpr (std::is_same_v<Number, double>) {
    return number.value();
  } else {
    return number;
  }
}

// θ and R T, both without the intercept's coordinate, columns of `rows` numbers.
struct System {
  Index rows = 0, columns = 0;
  std::vector<DoubleDouble> matrix, response;
  std::vector<double> sizes;  // of each column's largest part
};

struct Solution {
  std::vector<Index> kept;                          // of the system's columns
  std::vector<DoubleDouble> triangle, coefficient;  // packed; one per column kept
  std::vector<std::vector<double>> shares;  // of those kept in each column dropped, in their order
  std::vector<double> q, effect;
  double rest = 0;  // ‖θ‖² that the columns do not reach
};

// Units in the last place that orthogonalising may leave of a column that repeats others.
constexpr double kRankUnits = 64;
constexpr double kUnit = std::numeric_limits<double>::epsilon();

// Gram and Schmidt, each column twice: orthogonal to working precision where columns are not
// dependent to that precision. Columns are taken in units near their own size, so that squares stay
// in range.
template <class Number>
Solution Solve(const System& system, double rounding) {
  const double cut =
      std::max(rounding, kRankUnits * (std::is_same_v<Number, double> ? kUnit : kUnit * kUnit));
  const Index rows = system.rows;
  std::vector<Number> q, triangle;
  std::vector<int> exponents;
  Solution solution;
  const auto dot = [rows](const Number* a, const Number* b) {
    Number sum = 0;
    for (Index i = 0; i < rows; ++i) sum += a[i] * b[i];
    return sum;
  };
  const auto scaled = [](const DoubleDouble& x, int exponent) {
    return DoubleDouble(std::ldexp(x.hi, exponent), std::ldexp(x.lo, exponent));
  };
  for (Index c = 0; c < system.columns; ++c) {
    const double size = system.sizes[static_cast<std::size_t>(c)];
    const int exponent = SizeExponent(&size, 1);
    std::vector<Number> v(static_cast<std::size_t>(rows));
    for (Index i = 0; i < rows; ++i) {
      v[static_cast<std::size_t>(i)] =
          Rounded<Number>(scaled(system.matrix[static_cast<std::size_t>(c * rows + i)], -exponent));
    }
    const auto kept = static_cast<Index>(solution.kept.size());
    std::vector<Number> shares(static_cast<std::size_t>(kept));
    for (int pass = 0; pass < 2; ++pass) {
      for (Index j = 0; j < kept; ++j) {
        const Number* other = q.data() + j * rows;
        const Number share = dot(other, v.data());
        shares[static_cast<std::size_t>(j)] += share;
        for (Index i = 0; i < rows; ++i)
          v[static_cast<std::size_t>(i)] = v[static_cast<std::size_t>(i)] - share * other[i];
      }
    }
    const Number length = Root(dot(v.data(), v.data()));
    if (!(Value(length) > cut * std::ldexp(size, -exponent))) {
      SolveUpper(triangle, kept, shares.data());
      std::vector<double>& told = solution.shares.emplace_back();
      for (std::size_t j = 0; j < shares.size(); ++j)
        told.push_back(std::ldexp(Value(shares[j]), exponent - exponents[j]));
      continue;
    }
    for (Index i = 0; i < rows; ++i) q.push_back(v[static_cast<std::size_t>(i)] / length);
    triangle.insert(triangle.end(), shares.begin(), shares.end());
    triangle.push_back(length);
    exponents.push_back(exponent);
    solution.kept.push_back(c);
  }
  const auto columns = static_cast<Index>(solution.kept.size());
  std::vector<Number> theta, effect;
  for (const DoubleDouble& x : system.response) theta.push_back(Rounded<Number>(x));
  for (Index k = 0; k < columns; ++k) {
    const Number* v = q.data() + k * rows;
    effect.push_back(dot(v, theta.data()));
    for (Index i = 0; i < rows; ++i) {
      theta[static_cast<std::size_t>(i)] =
          theta[static_cast<std::size_t>(i)] - effect.back() * v[i];
    }
  }
  solution.rest = Value(dot(theta.data(), theta.data()));
  for (const Number& x : effect) solution.effect.push_back(Value(x));
  SolveUpper(triangle, columns, effect.data());
  for (const Number& x : q) solution.q.push_back(Value(x));
  for (Index k = 0; k < columns; ++k) {
    const int exponent = exponents[static_cast<std::size_t>(k)];
    solution.coefficient.push_back(
        scaled(DoubleDouble(effect[static_cast<std::size_t>(k)]), -exponent));
    for (Index i = 0; i <= k; ++i) {
      solution.triangle.push_back(
          scaled(DoubleDouble(triangle[static_cast<std::size_t>(PackedIndex(i, k))]), exponent));
    }
  }
  return solution;
}

}  // namespace

RestrictedFit Restrict(const CentredBasis& basis,
                       std::span<const std::vector<RawColumn::Part>> columns, double rounding) {
  const Index rank = basis.rank(), fixed = basis.intercept ? 1 : 0;
  std::vector<Index> place(static_cast<std::size_t>(basis.columns), -1);
  for (Index i = 0; i < rank; ++i)
    place[static_cast<std::size_t>(basis.kept[static_cast<std::size_t>(i)])] = i;
  const auto r = [&](Index i, Index j) {
    return basis.factor[static_cast<std::size_t>(PackedIndex(i, j))];
  };
  std::vector<double> lengths;  // of the old columns, about their centres
  for (Index j = 0; j < rank; ++j) {
    double length = 0;
    for (Index i = fixed; i <= j; ++i) length = std::hypot(length, r(i, j).hi);
    lengths.push_back(length);
  }

  // The columns of R T at their own centres.
  System system;
  system.rows = rank - fixed;
  std::vector<Index> source;            // of each, the new source column
  std::vector<double> centre;           // of each
  std::vector<DoubleDouble> first_row;  // of each, the intercept's coordinate
  for (Index c = fixed; c < static_cast<Index>(columns.size()); ++c) {
    std::vector<DoubleDouble> column(static_cast<std::size_t>(rank));
    DoubleDouble constant;
    double size = 0;
    for (const RawColumn::Part& part : columns[static_cast<std::size_t>(c)]) {
      const Index j = place[static_cast<std::size_t>(part.column)];
      assert(j >= 0);
      if (basis.intercept && j == 0) {
        constant += part.factor;
        continue;
      }
      if (basis.intercept) constant += part.factor * basis.centre[static_cast<std::size_t>(j)];
      size = std::max(size, std::abs(part.factor.hi) * lengths[static_cast<std::size_t>(j)]);
      for (Index i = 0; i <= j; ++i) column[static_cast<std::size_t>(i)] += part.factor * r(i, j);
    }
    source.push_back(c);
    system.sizes.push_back(size);
    double mean = 0;
    if (basis.intercept) {
      mean = DoubleDouble(constant + column[0] / r(0, 0)).value();
      first_row.push_back(column[0] + (constant - mean) * r(0, 0));
    }
    centre.push_back(mean);
    system.matrix.insert(system.matrix.end(), column.begin() + fixed, column.end());
    ++system.columns;
  }
  DoubleDouble level;  // of the old fit in the intercept's coordinate, beside its own coefficient
  system.response.resize(static_cast<std::size_t>(system.rows));
  for (Index j = fixed; j < rank; ++j) {
    const DoubleDouble beta = basis.coefficient[static_cast<std::size_t>(j)];
    if (basis.intercept) level += r(0, j) * beta;
    for (Index i = fixed; i <= j; ++i)
      system.response[static_cast<std::size_t>(i - fixed)] += r(i, j) * beta;
  }
  const Solution solution = rank <= kExtendedRank ? Solve<DoubleDouble>(system, rounding)
                                                  : Solve<double>(system, rounding);

  RestrictedFit out;
  out.added_ss = solution.rest;
  CentredBasis& fresh = out.basis;
  fresh.columns = static_cast<Index>(columns.size());
  fresh.intercept = basis.intercept;
  fresh.extended = basis.extended && rank <= kExtendedRank;
  const auto slopes = static_cast<Index>(solution.kept.size());
  const auto at = [](const auto& numbers, Index i) { return numbers[static_cast<std::size_t>(i)]; };
  if (basis.intercept) {
    for (Index k = 0; k < slopes; ++k)
      level -= at(first_row, at(solution.kept, k)) * at(solution.coefficient, k);
    fresh.kept.push_back(0);
    fresh.centre.push_back(0);
    fresh.coefficient.push_back(basis.coefficient[0] + level / r(0, 0));
    fresh.factor.push_back(r(0, 0));
    out.effect.push_back(DoubleDouble(r(0, 0) * fresh.coefficient[0]).value());
  }
  for (Index k = 0; k < slopes; ++k) {
    const Index c = at(solution.kept, k);
    fresh.kept.push_back(at(source, c));
    fresh.centre.push_back(at(centre, c));
    fresh.coefficient.push_back(at(solution.coefficient, k));
    if (basis.intercept) fresh.factor.push_back(at(first_row, c));
    for (Index i = 0; i <= k; ++i) fresh.factor.push_back(at(solution.triangle, PackedIndex(i, k)));
  }
  if (!fresh.extended) {
    for (DoubleDouble& number : fresh.factor) number = number.value();
  }
  out.effect.insert(out.effect.end(), solution.effect.begin(), solution.effect.end());
  out.coordinates.resize(static_cast<std::size_t>(rank * fresh.rank()));
  if (basis.intercept) out.coordinates[0] = 1;
  for (Index k = 0; k < slopes; ++k) {
    std::copy_n(solution.q.begin() + k * system.rows, system.rows,
                out.coordinates.begin() + (k + fixed) * rank + fixed);
  }

  std::size_t next = 0;
  for (Index c = 0; c < system.columns; ++c) {
    if (std::binary_search(solution.kept.begin(), solution.kept.end(), c)) continue;
    DroppedColumn& dropped = out.dropped.emplace_back();
    dropped.column = at(source, c);
    const std::vector<double>& shares = solution.shares[next++];
    double constant = at(centre, c);
    for (Index k = 0; k < static_cast<Index>(shares.size()); ++k) {
      constant -= at(shares, k) * at(centre, at(solution.kept, k));
      dropped.repeats.push_back({at(source, at(solution.kept, k)), at(shares, k)});
    }
    if (basis.intercept) dropped.repeats.push_back({0, constant});
    std::erase_if(dropped.repeats, [](const Repeat& repeat) { return repeat.coefficient == 0; });
  }
  return out;
}

Covariance Restrict(const Covariance& covariance, const RestrictedFit& fit, double unknown) {
  const Index fresh = fit.basis.rank();
  const Index rank = static_cast<Index>(fit.coordinates.size()) / fresh;
  const auto q = [&](Index k) { return fit.coordinates.data() + k * rank; };
  Covariance out;
  out.scale = covariance.scale;
  out.exponent = covariance.exponent;
  for (Index k = 0; k < fresh && !covariance.matrix.empty(); ++k) {
    std::vector<double> moved(static_cast<std::size_t>(rank));  // M q_k
    for (Index j = 0; j < rank; ++j) {
      const double* column = covariance.matrix.data() + PackedIndex(0, j);
      for (Index i = 0; i <= j; ++i) {
        moved[static_cast<std::size_t>(i)] += column[i] * q(k)[j];
        if (i < j) moved[static_cast<std::size_t>(j)] += column[i] * q(k)[i];
      }
    }
    for (Index i = 0; i <= k; ++i) out.matrix.push_back(Dot(q(i), moved.data(), rank));
  }
  // Rounding leaves a few 1e-16 of a direction that the new columns do not reach.
  constexpr double kReached = 1e-8;
  for (const std::vector<double>& direction : covariance.unknown) {
    std::vector<double> seen;
    for (Index k = 0; k < fresh; ++k) seen.push_back(Dot(q(k), direction.data(), rank));
    const double length = std::sqrt(Dot(seen.data(), seen.data(), fresh));
    if (length < kReached) continue;
    const double share = std::ldexp(unknown / covariance.scale, -2 * covariance.exponent);
    if (std::isfinite(share) && !out.matrix.empty()) {
      for (Index k = 0; k < fresh; ++k)
        for (Index i = 0; i <= k; ++i)
          out.matrix[static_cast<std::size_t>(PackedIndex(i, k))] +=
              share * seen[static_cast<std::size_t>(i)] * seen[static_cast<std::size_t>(k)];
      continue;
    }
    for (double& number : seen) number /= length;
    out.unknown.push_back(std::move(seen));
  }
  return out;
}

}  // namespace ladderline
