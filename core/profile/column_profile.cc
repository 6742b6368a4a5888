#include "core/profile/column_profile.h"

#include <algorithm>

#include "core/elementary/elementary.h"
#include "core/support/double_double.h"

namespace ladderline {
namespace {

// Sums over rows of the transformed value z and its derivatives z', z''.
struct Sums {
  enum { kZ, kZ1, kZ2, kZZ, kZZ1, kZ1Z1, kZZ2, kCount };
};

constexpr double kLogTwoPi = 1.8378770664093454836;

// Larger data are searched from the λ of a systematic sample of at least half this size: its error,
// about a hundredth of λ's natural unit, leaves two passes over all rows.
constexpr size_t kSampleRows = 1 << 14;

// Adds one block's sums: in two lanes and short stretches, so that rounding does not pile up where
// few values repeat, and always in the same order.
void AddBlock(const PowerResponse::Block& block, size_t count, DoubleDouble* totals) {
  constexpr size_t kStretch = 32;
  double sums[Sums::kCount] = {};
  for (size_t first = 0; first < count; first += kStretch) {
    const size_t end = std::min(count, first + kStretch);
    double lanes[Sums::kCount][2] = {};
    const auto add = [&](size_t i, int lane) {
      const double z = block.value[i], z1 = block.slope[i], z2 = block.curvature[i];
      lanes[Sums::kZ][lane] += z;
      lanes[Sums::kZ1][lane] += z1;
      lanes[Sums::kZ2][lane] += z2;
      lanes[Sums::kZZ][lane] += z * z;
      lanes[Sums::kZZ1][lane] += z * z1;
      lanes[Sums::kZ1Z1][lane] += z1 * z1;
      lanes[Sums::kZZ2][lane] += z * z2;
    };
    size_t i = first;
    for (; i + 1 < end; i += 2) {
      add(i, 0);
      add(i + 1, 1);
    }
    if (i < end) add(i, 0);
    for (int sum = 0; sum < Sums::kCount; ++sum) sums[sum] += lanes[sum][0] + lanes[sum][1];
  }
  for (int sum = 0; sum < Sums::kCount; ++sum) totals[sum] += sums[sum];
}

}  // namespace

ProfilePoint ColumnProfileAt(const PowerResponse& response, double lambda) {
  const PowerResponse::Transformed transformed = response.At(lambda);
  DoubleDouble totals[Sums::kCount];
  PowerResponse::Block block;
  for (size_t first = 0; first < response.rows();) {
    const size_t count = transformed.Fill(first, block);
    AddBlock(block, count, totals);
    first += count;
  }
  const double n = static_cast<double>(response.rows());
  const auto centred = [&](int product, int a, int b) {
    return (totals[product] - totals[a] * totals[b] / n).value();
  };
  const double squares = centred(Sums::kZZ, Sums::kZ, Sums::kZ);
  const double slope = centred(Sums::kZZ1, Sums::kZ, Sums::kZ1);
  const double slope_slope =
      centred(Sums::kZ1Z1, Sums::kZ1, Sums::kZ1) + centred(Sums::kZZ2, Sums::kZ, Sums::kZ2);
  const double ratio = slope / squares;
  return {-n / 2 * (1 + kLogTwoPi + Log(squares / n)) + transformed.log_jacobian(),
          transformed.log_jacobian_slope() - n * ratio,
          -n * (slope_slope / squares - 2 * ratio * ratio)};
}

ProfileMaximum MaximiseColumnProfile(const PowerResponse& response) {
  const auto maximise = [](const PowerResponse& rows, double start) {
    return MaximiseProfile([&](double lambda) { return ColumnProfileAt(rows, lambda); }, start,
                           1 / rows.spread());
  };
  // The logarithm, or YJ's identity, where nothing better is known.
  double start = response.family() == PowerFamily::kBoxCox ? 0 : 1;
  if (response.rows() > 2 * kSampleRows) {
    const PowerResponse sample = response.Thinned(response.rows() / kSampleRows);
    if (!sample.IsConstant()) start = maximise(sample, start).lambda;
  }
  return maximise(response, start);
}

}  // namespace ladderline
