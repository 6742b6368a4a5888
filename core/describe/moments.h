// The figures that sums of powers and products of deviations give.
//
// NaN stands for a figure that the rows do not give: none, too few, without spread, or beyond the
// range of a double. `samp` figures divide by n - 1 and need 2 rows, `pop` figures divide by n.
//   accuracy  a few units in the last place of the exact figure of the rows as doubles
//   source    variance and the regression figures: ISO/IEC 9075-2; skewness and kurtosis: Joanes &
//             Gill, "Comparing measures of sample skewness and kurtosis", The Statistician 47
//             (1998)
#ifndef LADDERLINE_CORE_DESCRIBE_MOMENTS_H_
#define LADDERLINE_CORE_DESCRIBE_MOMENTS_H_

#include "core/describe/co_sums.h"
#include "core/describe/power_sums.h"

namespace ladderline {

double Sum(const CentralSums& s);
double Mean(const CentralSums& s);
// The mean in the sums' own unit, 2^-shift, to about 32 digits of the data's distance from 0.
DoubleDouble PreciseMean(const CentralSums& s);
double VarianceSamp(const CentralSums& s);
double VariancePop(const CentralSums& s);
double StdDevSamp(const CentralSums& s);
double StdDevPop(const CentralSums& s);
// (x - mean) / sd (samp), for an x within the range of the rows or near it.
double ZScore(double x, const CentralSums& s);

// NaN without spread. From order 3 on.
double SkewnessPop(const CentralSums& s);  // g1 = m3 / m2^1.5, n >= 1
double Skewness(const CentralSums& s);     // G1 = g1 √(n(n-1)) / (n-2), n >= 3
// From order 4 on.
double ExcessKurtosisPop(const CentralSums& s);  // g2 = m4 / m2² - 3, n >= 1
double ExcessKurtosis(const CentralSums& s);     // G2 = ((n+1) g2 + 6)(n-1) / ((n-2)(n-3)), n >= 4

double CovarianceSamp(const CentralCoSums& s);
double CovariancePop(const CentralCoSums& s);
double Correlation(const CentralCoSums& s);      // within -1..1; NaN when either is flat
double RegressionSlope(const CentralCoSums& s);  // NaN when x is flat, as the next two
double RegressionIntercept(const CentralCoSums& s);
double RegressionR2(const CentralCoSums& s);  // 1 when only y is flat
double RegressionAverageX(const CentralCoSums& s);
double RegressionAverageY(const CentralCoSums& s);
double RegressionSxx(const CentralCoSums& s);  // sums of squares and products about the means
double RegressionSyy(const CentralCoSums& s);
double RegressionSxy(const CentralCoSums& s);

}  // namespace ladderline

#endif  // LADDERLINE_CORE_DESCRIBE_MOMENTS_H_
