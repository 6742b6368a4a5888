#include "core/scan/normal_shape.h"

#include <algorithm>

#include "core/describe/moments.h"
#include "core/normality/anderson_darling.h"
#include "core/normality/normal_scores.h"

namespace ladderline {

NormalShape NormalShapes::Of(std::span<const double> values, std::vector<double> sample) {
  PowerSums<4> sums;
  for (const double x : values) sums.Add(x);
  const CentralSums central = sums.Summarise();

  std::sort(sample.begin(), sample.end());
  const std::size_t n = sample.size();
  if (scores_.size() != n) {
    scores_.resize(n);
    for (std::size_t i = 0; i < n; ++i) scores_[i] = NormalScore(i + 1, n);
  }
  CoSums pairs;
  for (std::size_t i = 0; i < n; ++i) pairs.Add({sample[i], scores_[i]});
  return {.skewness = Skewness(central),
          .excess_kurtosis = ExcessKurtosis(central),
          .normal_correlation = Correlation(pairs.Summarise()),
          .normal_p = AndersonDarling(sample).p_value};
}

}  // namespace ladderline
