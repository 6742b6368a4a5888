#include "core/checks/residual_shape.h"

#include <algorithm>
#include <vector>

#include "core/describe/moments.h"
#include "core/normality/jarque_bera.h"
#include "core/normality/shapiro_wilk.h"
#include "core/support/systematic_sample.h"

namespace ladderline {
namespace {

TestFigures FiguresOf(const NormalityTest& normality) {
  if (normality.note != nullptr) return TestFigures::Not(normality.note);
  TestFigures test;
  test.statistic = normality.statistic;
  test.p_value = normality.p_value;
  return test;
}

}  // namespace

ResidualShape ResidualShapeOf(std::span<const double> residuals) {
  PowerSums<4> sums;
  for (const double residual : residuals) sums.Add(residual);
  const CentralSums central = sums.Summarise();
  std::vector<double> sample = SystematicSample(residuals, kShapiroWilkMostRows);
  std::sort(sample.begin(), sample.end());

  ResidualShape shape;
  shape.skewness = Skewness(central);
  shape.excess_kurtosis = ExcessKurtosisPop(central);
  shape.jarque_bera = FiguresOf(JarqueBera(central));
  if (shape.jarque_bera.computed()) shape.jarque_bera.df = 2;
  shape.shapiro_wilk = FiguresOf(ShapiroWilk(sample));
  shape.shapiro_wilk_rows = static_cast<std::int64_t>(sample.size());
  return shape;
}

}  // namespace ladderline
