#include "core/model/smearing.h"

#include <algorithm>
#include <cassert>
#include <cmath>
#include <limits>
#include <utility>

#include "core/elementary/elementary.h"
#include "core/support/double_double.h"

namespace ladderline {
namespace {

constexpr double kNaN = std::numeric_limits<double>::quiet_NaN();

// Above, the binomial terms of a mean grow so steeply that points serve as well.
constexpr int kMostMoments = 12;

constexpr std::size_t kGroups = 25;

// Rows summed in plain doubles before the sum joins a double-double: a million rows then cost no
// more digits than this many.
constexpr std::size_t kBlock = 256;

double FiniteOrNaN(double value) { return std::isfinite(value) ? value : kNaN; }

double Power(double x, int n) {
  double power = 1;
  for (; n > 0; --n) power *= x;
  return power;
}

// The way back of a log: rate · z is the exponent, `edge` what x nears as exp → 0.
struct LogBack {
  double rate, edge;
};
LogBack LogBackOf(const Transform& response) {
  const auto a = response.arguments();
  switch (response.kind()) {
    case TransformKind::kLogOffset:
      return {Log(a[1]), -a[0]};
    case TransformKind::kLogReflected:
      return {-1, a[0]};
    default:
      assert(response.kind() == TransformKind::kBoxCox);
      return {1, -a[1]};
  }
}

// back(z) = (alpha + beta z)^n − offset; n = 0 where the way back is no whole power.
struct PowerBack {
  int n = 0;
  double alpha = 0, beta = 1, offset = 0;
};
PowerBack PowerBackOf(const Transform& response) {
  const auto whole = [](double p) {
    const double n = 1 / p;
    return n >= 1 && n <= kMostMoments && n == std::nearbyint(n) ? static_cast<int>(n) : 0;
  };
  const auto a = response.arguments();
  switch (response.kind()) {
    case TransformKind::kSqrtOffset:
      return {2, 0, 1, a[0]};
    case TransformKind::kPowerOf:
      return {whole(a[0]), 0, 1, 0};
    case TransformKind::kBoxCox:
      return {a[0] == 0 ? 0 : whole(a[0]), 1, a[0], a[1]};
    default:
      return {};
  }
}

// Weighted means of `count` functions of the residuals: `terms(e, n, out)` writes those of n
// residuals into out[function · kBlock + row].
template <class Terms>
std::vector<double> Means(std::span<const double> residuals, std::span<const double> weights,
                          std::size_t count, Terms&& terms) {
  std::vector<DoubleDouble> sums(count);
  std::vector<double> block(count * kBlock);
  DoubleDouble weight_sum;
  for (std::size_t start = 0; start < residuals.size(); start += kBlock) {
    const std::size_t n = std::min(kBlock, residuals.size() - start);
    terms(&residuals[start], n, block.data());
    const double* w = weights.empty() ? nullptr : &weights[start];
    for (std::size_t k = 0; k < count; ++k) {
      const double* term = &block[k * kBlock];
      double sum = 0;
      for (std::size_t i = 0; i < n; ++i) sum += w == nullptr ? term[i] : w[i] * term[i];
      sums[k] += sum;
    }
    double sum = w == nullptr ? static_cast<double>(n) : 0;
    for (std::size_t i = 0; w != nullptr && i < n; ++i) sum += w[i];
    weight_sum += sum;
  }
  std::vector<double> means;
  for (const DoubleDouble sum : sums) means.push_back(FiniteOrNaN((sum / weight_sum).value()));
  return means;
}

// A residual with its weight, sorted by both so that the order is one.
using Weighted = std::pair<double, double>;
double ResidualOf(double row) { return row; }
double ResidualOf(const Weighted& row) { return row.first; }
double WeightOf(double) { return 1; }
double WeightOf(const Weighted& row) { return row.second; }

// Two points with the weight, mean, variance and third central moment of sorted rows.
template <class Row>
void AppendGroup(std::span<const Row> rows, std::vector<double>& points) {
  const auto append = [&](double e, double weight) {
    points.push_back(e);
    points.push_back(weight);
  };
  if (rows.size() <= 2) {
    for (const Row& row : rows) append(ResidualOf(row), WeightOf(row));
    return;
  }
  const double low = ResidualOf(rows.front()), high = ResidualOf(rows.back());
  double weight = 0, mean = 0, variance = 0, third = 0;
  for (const Row& row : rows) weight += WeightOf(row);
  for (const Row& row : rows) mean += WeightOf(row) * (ResidualOf(row) - low);
  mean = low + mean / weight;
  for (const Row& row : rows) {
    const double d = ResidualOf(row) - mean, square = WeightOf(row) * d * d;
    variance += square;
    third += square * d;
  }
  variance /= weight;
  third /= weight;
  if (!(variance > 0)) {
    append(std::clamp(mean, low, high), weight);
    return;
  }
  // Distances x1 < 0 < x2 from the mean with x1 + x2 = third / variance and x1 x2 = −variance.
  const double lean = third / variance / 2;
  const double half = std::sqrt(lean * lean + variance);
  const double x1 = lean > 0 ? -variance / (lean + half) : lean - half;
  const double x2 = lean > 0 ? lean + half : variance / (half - lean);
  append(std::clamp(mean + x1, low, high), weight * (x2 / (x2 - x1)));
  append(std::clamp(mean + x2, low, high), weight * (-x1 / (x2 - x1)));
}

template <class Row>
std::vector<double> PointsOf(std::vector<Row> rows) {
  std::sort(rows.begin(), rows.end());
  std::vector<double> points;
  const std::span<const Row> all(rows);
  for (std::size_t group = 0; group < kGroups; ++group) {
    const std::size_t begin = rows.size() * group / kGroups;
    const std::size_t end = rows.size() * (group + 1) / kGroups;
    AppendGroup(all.subspan(begin, end - begin), points);
  }
  return points;
}

std::vector<double> Points(std::span<const double> residuals, std::span<const double> weights) {
  if (weights.empty()) return PointsOf(std::vector<double>(residuals.begin(), residuals.end()));
  std::vector<Weighted> rows(residuals.size());
  for (std::size_t i = 0; i < rows.size(); ++i) rows[i] = {residuals[i], weights[i]};
  return PointsOf(std::move(rows));
}

double MeanOfPoints(const std::vector<double>& points, const Transform& response, double fit) {
  double sum = 0, weight_sum = 0;
  for (std::size_t i = 0; i + 1 < points.size(); i += 2) {
    sum += points[i + 1] * response.BackHeld(fit + points[i], fit);
    weight_sum += points[i + 1];
  }
  return sum / weight_sum;
}

}  // namespace

Smearing::Kind SmearingKindOf(const Transform& response) {
  switch (response.kind()) {
    case TransformKind::kIdentity:
    case TransformKind::kZScore:
    case TransformKind::kRescale:
    case TransformKind::kCenter:
    case TransformKind::kDateDays:
      return Smearing::Kind::kNone;
    case TransformKind::kYeoJohnson:
      return response.arguments()[0] == 1 ? Smearing::Kind::kNone : Smearing::Kind::kPoints;
    case TransformKind::kLogOffset:
    case TransformKind::kLogReflected:
      return Smearing::Kind::kFactor;
    case TransformKind::kAsinhScaled:
      return Smearing::Kind::kHyperbolic;
    case TransformKind::kBoxCox:
      if (response.arguments()[0] == 0) return Smearing::Kind::kFactor;
      [[fallthrough]];
    default:
      return PowerBackOf(response).n > 0 ? Smearing::Kind::kMoments : Smearing::Kind::kPoints;
  }
}

std::size_t SmearingValueCount(const Transform& response) {
  switch (SmearingKindOf(response)) {
    case Smearing::Kind::kFactor:
      return 1;
    case Smearing::Kind::kHyperbolic:
      return 2;
    case Smearing::Kind::kMoments:
      return 1 + static_cast<std::size_t>(PowerBackOf(response).n);
    default:
      return 0;
  }
}

Smearing MakeSmearing(const Transform& response, std::span<const double> residuals,
                      std::span<const double> weights) {
  assert(weights.empty() || weights.size() == residuals.size());
  Smearing smearing;
  smearing.kind = SmearingKindOf(response);
  switch (smearing.kind) {
    case Smearing::Kind::kNone:
      break;
    case Smearing::Kind::kFactor: {
      const double rate = LogBackOf(response).rate;
      smearing.values =
          Means(residuals, weights, 1, [&](const double* e, std::size_t n, double* out) {
            for (std::size_t i = 0; i < n; ++i) out[i] = rate * e[i];
            ExpBlock(out, out, n);
          });
      break;
    }
    case Smearing::Kind::kHyperbolic: {
      const double theta = response.arguments()[0];
      smearing.values =
          Means(residuals, weights, 2, [&](const double* e, std::size_t n, double* out) {
            for (std::size_t i = 0; i < n; ++i) out[i] = theta * e[i];
            for (std::size_t i = 0; i < n; ++i) out[kBlock + i] = Sinh(out[i]);
            ExpBlock(out, out, n);
            for (std::size_t i = 0; i < n; ++i) out[i] = (out[i] + 1 / out[i]) / 2;
          });
      break;
    }
    case Smearing::Kind::kMoments: {
      const PowerBack back = PowerBackOf(response);
      double least = residuals.empty() ? kNaN : std::numeric_limits<double>::infinity();
      smearing.values = Means(residuals, weights, static_cast<std::size_t>(back.n),
                              [&](const double* e, std::size_t n, double* out) {
                                for (std::size_t i = 0; i < n; ++i) {
                                  out[i] = back.beta * e[i];
                                  least = std::min(least, out[i]);
                                }
                                for (int k = 1; k < back.n; ++k, out += kBlock) {
                                  for (std::size_t i = 0; i < n; ++i)
                                    out[kBlock + i] = out[i] * (back.beta * e[i]);
                                }
                              });
      smearing.values.insert(smearing.values.begin(), least);
      smearing.points = Points(residuals, weights);
      break;
    }
    case Smearing::Kind::kPoints:
      smearing.points = Points(residuals, weights);
      break;
  }
  return smearing;
}

Smearing CoarseSmearing(const Smearing& smearing, std::int64_t rows, std::int64_t floor) {
  Smearing coarse = smearing;
  if (coarse.kind == Smearing::Kind::kMoments) coarse.values[0] = kNaN;
  std::vector<Weighted> all;
  for (std::size_t i = 0; i + 1 < smearing.points.size(); i += 2)
    all.emplace_back(smearing.points[i], smearing.points[i + 1]);
  std::sort(all.begin(), all.end());
  // Twice the floor, since the points of a group stand for unequal shares of its rows.
  const auto groups = static_cast<std::size_t>(
      std::clamp<std::int64_t>(rows / (2 * floor), 1, static_cast<std::int64_t>(kGroups)));
  if (groups < kGroups) {
    coarse.points.clear();
    for (std::size_t group = 0; group < groups && !all.empty(); ++group) {
      const std::size_t begin = all.size() * group / groups;
      const std::size_t end = all.size() * (group + 1) / groups;
      AppendGroup(std::span<const Weighted>(all).subspan(begin, end - begin), coarse.points);
    }
  }
  // Moments may leave the range of a double, or a share of a weight vanish in it.
  bool sound = true;
  for (std::size_t i = 0; i + 1 < coarse.points.size(); i += 2)
    sound = sound && std::isfinite(coarse.points[i]) && coarse.points[i + 1] > 0 &&
            std::isfinite(coarse.points[i + 1]);
  if (!sound) coarse.points.clear();
  return coarse;
}

Smearing ScaledSmearing(const Smearing& smearing, double factor) {
  Smearing scaled = smearing;
  std::vector<double>& values = scaled.values;
  switch (smearing.kind) {
    case Smearing::Kind::kNone:
      break;
    case Smearing::Kind::kFactor:
      values[0] = Exp(factor * factor * Log(values[0]));
      break;
    case Smearing::Kind::kHyperbolic:
      values[0] = 1 + (values[0] - 1) * factor * factor;
      values[1] *= factor * factor * factor;
      break;
    case Smearing::Kind::kMoments: {
      values[0] *= factor;
      double power = 1;
      for (std::size_t k = 1; k < values.size(); ++k) values[k] *= power *= factor;
      break;
    }
    case Smearing::Kind::kPoints:
      break;
  }
  for (std::size_t i = 0; i < scaled.points.size(); i += 2) scaled.points[i] *= factor;
  return scaled;
}

double SmearedMean(const Smearing& smearing, const Transform& response, double fit) {
  switch (smearing.kind) {
    case Smearing::Kind::kNone:
      return response.Back(fit);
    case Smearing::Kind::kFactor: {
      const double factor = smearing.values[0], edge = LogBackOf(response).edge;
      return FiniteOrNaN(factor * response.Back(fit) + (1 - factor) * edge);
    }
    case Smearing::Kind::kHyperbolic: {
      const double theta = response.arguments()[0], t = theta * fit, e = Exp(t);
      return FiniteOrNaN((Sinh(t) * smearing.values[0] + (e + 1 / e) / 2 * smearing.values[1]) /
                         theta);
    }
    case Smearing::Kind::kMoments: {
      const PowerBack back = PowerBackOf(response);
      const double u = back.alpha + back.beta * fit;
      if (!(u + smearing.values[0] >= 0)) break;
      double mean = Power(u, back.n), binomial = 1;
      for (int k = 1; k <= back.n; ++k) {
        binomial = binomial * (back.n - k + 1) / k;
        mean += binomial * Power(u, back.n - k) * smearing.values[static_cast<std::size_t>(k)];
      }
      return FiniteOrNaN(mean - back.offset);
    }
    case Smearing::Kind::kPoints:
      break;
  }
  return FiniteOrNaN(MeanOfPoints(smearing.points, response, fit));
}

}  // namespace ladderline
