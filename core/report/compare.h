// Which of two fits of the same response in the same rows serves better, in figures and words.
//
//   refused    models that are refused or speak of different responses, different families or
//              different rows (their digests differ, or one has none): every figure NaN, `test` and
//              `preferred` empty, `reading` says why
//   nested     under one transform of the response, every column of the one is in the other too, as
//              the same re-expression of the same values, with powers and products term by term and
//              the reference level of a category being of no account: partial F, classical,
//              F = ((S₁ − S₂)/(df₁ − df₂)) / (S₂/df₂) with S the residual sums of squares. NaN with
//              p = 0 where only the larger fit is exact, NaN without p where both are
//   values     a model keeps no rows. That columns of one name hold the same values is judged from
//              their range, quartiles, mean, sd and counts of levels, from the correlation of each
//              term with the response, and from S, which more columns cannot make larger. All of
//              these agree in some cases where values differ
//   criteria   AIC and BIC on the original scale of the response, so that different transforms
//              compare; on the transformed one where both have the same and a logarithm of the
//              Jacobian is infinite (a square root at 0)
//   preferred  the one that AIC and BIC both favour by more than 2 (common practice: less says
//              little); else neither
//   source     Burnham & Anderson, Model Selection and Multimodel Inference, 2nd ed., 2.6
#ifndef LADDERLINE_CORE_REPORT_COMPARE_H_
#define LADDERLINE_CORE_REPORT_COMPARE_H_

#include <string>

#include "core/model/model.h"

namespace ladderline {

struct Comparison {
  std::string test = {};  // `partial F`, or empty
  double statistic = kNaN, df1 = kNaN, df2 = kNaN, p_value = kNaN;
  double aic_difference = kNaN, bic_difference = kNaN;  // second minus first
  std::string preferred = {};                           // `first`, `second`, `neither`
  std::string reading = {};                             // sentences
};

Comparison Compare(const Model& first, const Model& second);

}  // namespace ladderline

#endif  // LADDERLINE_CORE_REPORT_COMPARE_H_
