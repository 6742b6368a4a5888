#include "core/regression/fit_facts.h"

#include <limits>
#include <numbers>

#include "core/elementary/elementary.h"
#include "core/support/distributions.h"

namespace ladderline {

FitFacts FactsOf(const LeastSquares& fit) {
  constexpr double kNaN = std::numeric_limits<double>::quiet_NaN();
  const double rows = static_cast<double>(fit.rows);
  const double df = static_cast<double>(fit.residual_df());
  const Index fixed = fit.basis.intercept && fit.rank() > 0 ? 1 : 0;  // not under test
  const bool saturated = fit.residual_df() <= 0;

  FitFacts facts;
  facts.residual_df = fit.residual_df();
  facts.residual_sd = fit.residual_sd();

  facts.r_squared = facts.adjusted_r_squared = kNaN;
  facts.f = facts.f_p = kNaN;
  facts.f_df1 = static_cast<double>(fit.rank() - fixed);
  facts.f_df2 = df;
  if (!fit.flat_response) {
    double explained = 0;
    for (Index i = fixed; i < fit.rank(); ++i) explained += fit.effect[i] * fit.effect[i];
    facts.r_squared = explained / fit.total_ss;
    if (!saturated) {
      facts.adjusted_r_squared =
          1 - fit.residual_ss / df * (rows - static_cast<double>(fixed)) / fit.total_ss;
      if (facts.f_df1 > 0) {
        facts.f = fit.exact ? std::numeric_limits<double>::infinity()
                            : explained / facts.f_df1 / (fit.residual_ss / df);
        facts.f_p = FUpperTail(facts.f, facts.f_df1, df);
      }
    }
  }

  facts.log_likelihood = facts.aic = facts.bic = kNaN;
  if (!saturated && !fit.exact) {
    facts.log_likelihood =
        0.5 *
        (fit.log_weight_sum - rows * (Log(2 * std::numbers::pi) + Log(fit.residual_ss / rows) + 1));
    const double parameters = static_cast<double>(fit.rank() + 1);
    facts.aic = -2 * facts.log_likelihood + 2 * parameters;
    facts.bic = -2 * facts.log_likelihood + Log(rows) * parameters;
  }
  return facts;
}

}  // namespace ladderline
