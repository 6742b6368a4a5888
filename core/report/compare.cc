#include "core/report/compare.h"

#include <algorithm>
#include <cmath>
#include <limits>
#include <map>
#include <set>
#include <tuple>
#include <utility>
#include <vector>

#include "core/effects/sentences.h"
#include "core/effects/wording.h"
#include "core/report/term_key.h"
#include "core/support/distributions.h"
#include "core/support/prose.h"
#include "core/transform/spec_words.h"

namespace ladderline {
namespace {

// By how much a criterion must differ to be worth following.
constexpr double kWorthFollowing = 2;

// Means and sds of the same values added up in another order.
constexpr double kSameSum = 1e-9;

bool Near(double a, double b, double scale) {
  return a == b || (std::isnan(a) && std::isnan(b)) || std::abs(a - b) <= kSameSum * scale;
}

bool SameValues(const ModelColumn& a, const ModelColumn& b) {
  if (a.kind == ColumnKind::kCategory || b.kind == ColumnKind::kCategory) {
    return a.kind == b.kind &&
           std::equal(a.levels.begin(), a.levels.end(), b.levels.begin(), b.levels.end(),
                      [](const CategoryLevel& x, const CategoryLevel& y) {
                        return x.text == y.text && x.rows == y.rows;
                      });
  }
  const double scale = std::max(std::abs(a.observed_low), std::abs(a.observed_high));
  return Near(a.observed_low, b.observed_low, 0) && Near(a.observed_high, b.observed_high, 0) &&
         Near(a.lower_quartile, b.lower_quartile, scale) &&
         Near(a.upper_quartile, b.upper_quartile, scale) && Near(a.mean, b.mean, scale) &&
         Near(a.sd, b.sd, scale);
}

const ModelColumn* FindColumn(const Model& model, const std::string& name) {
  for (const ModelColumn& column : model.columns) {
    if (column.name == name) return &column;
  }
  return nullptr;
}

// What the terms of one kind multiply: powers of numbers by name, whole categories. The intercept
// is the empty part.
using Part = std::set<std::pair<std::string, int>>;
Part PartOf(const Model& model, const ModelTerm& term) {
  Part part;
  for (const Factor& factor : term.factors) {
    part.insert({model.columns[static_cast<size_t>(factor.column)].name,
                 factor.level < 0 ? factor.power : 0});
  }
  return part;
}

std::set<Part> PartsOf(const Model& model) {
  std::set<Part> parts;
  for (const ModelTerm& term : model.terms) {
    const Part part = PartOf(model, term);
    parts.insert(part);
    // All indicators of a category add up to the intercept.
    if (part.size() == 1 && FindColumn(model, part.begin()->first)->reference < 0 &&
        part.begin()->second == 0)
      parts.insert(Part());
  }
  return parts;
}

// Whether every fit of `small` is one of `large` too.
bool Contains(const Model& large, const Model& small) {
  const std::set<Part> there = PartsOf(large);
  for (const ModelTerm& term : small.terms) {
    if (std::isnan(term.coefficient)) continue;
    const Part part = PartOf(small, term);
    if (!there.contains(part)) return false;
    for (const auto& factor : part) {
      const ModelColumn& a = *FindColumn(small, factor.first);
      const ModelColumn& b = *FindColumn(large, factor.first);
      if (a.transform != b.transform || !SameValues(a, b)) return false;
      if (factor.second != 0 || b.reference < 0 || a.reference == b.reference) continue;
      // Other levels are left out: the same space only beside what the category multiplies.
      Part rest = part;
      rest.erase(factor);
      if (!there.contains(rest)) return false;
    }
  }
  return true;
}

bool IsExact(const Model& model) { return std::isnan(model.facts.log_likelihood); }

// Fits of nearly dependent columns in another order agree to some seven digits; those of other
// values hardly ever do.
constexpr double kSameFit = 1e-6;

// Of a figure whose parts are so many times as large as itself; 64 roundings of each.
double Slack(double times) {
  return kSameFit + 64 * std::numeric_limits<double>::epsilon() * times;
}

// A figure with the rounding it may carry.
struct Judged {
  double value = 0, slack = 0;
};

// How each term goes with the response in the rows fitted, as a correlation (without an intercept
// the cosine): X'Wy = R'(Rβ), divided by both lengths.
std::map<TermKey, Judged> TermCorrelations(const Model& model) {
  const CentredBasis& fit = model.basis.fit;
  const Index rank = fit.rank(), first = fit.intercept ? 1 : 0;
  std::vector<double> lengths(static_cast<size_t>(rank)), response(static_cast<size_t>(rank));
  // What the terms add to the response, before they cancel.
  double parts = first < rank && fit.intercept
                     ? std::abs(fit.factor[0].value() * fit.coefficient[0].value())
                     : 0;
  for (Index j = first; j < rank; ++j) {
    double& length = lengths[static_cast<size_t>(j)];
    const double beta = fit.coefficient[static_cast<size_t>(j)].value();
    for (Index i = first; i <= j; ++i) {
      const double r = fit.factor[static_cast<size_t>(PackedIndex(i, j))].value();
      length = std::hypot(length, r);
      response[static_cast<size_t>(i)] += r * beta;
    }
    parts += length * std::abs(beta);
  }
  double length = model.facts.residual_sd * std::sqrt(model.facts.residual_df);
  if (!std::isfinite(length)) length = 0;  // saturated
  for (const double part : response) length = std::hypot(length, part);
  std::map<TermKey, Judged> correlations;
  for (Index j = first; j < rank; ++j) {
    double sum = 0;
    for (Index i = first; i <= j; ++i) {
      const double r = fit.factor[static_cast<size_t>(PackedIndex(i, j))].value();
      sum += (r / lengths[static_cast<size_t>(j)]) * (response[static_cast<size_t>(i)] / length);
    }
    const auto term = static_cast<size_t>(fit.kept[static_cast<size_t>(j)]);
    correlations[KeyOf(model, model.terms[term])] = {sum, Slack(parts / length)};
  }
  return correlations;
}

bool CorrelationsAgree(const Model& first, const Model& second) {
  if (first.basis.fit.intercept != second.basis.fit.intercept) return true;
  const std::map<TermKey, Judged> other = TermCorrelations(second);
  for (const auto& [key, a] : TermCorrelations(first)) {
    const auto b = other.find(key);
    if (b != other.end() && std::abs(a.value - b->second.value) > a.slack + b->second.slack)
      return false;
  }
  return true;
}

// S of one model over S of another: through the sds, whose squares may leave the range of a double.
double ResidualRatio(const Model& of, const Model& to) {
  const double sds = of.facts.residual_sd / to.facts.residual_sd;
  return sds * sds * (of.facts.residual_df / to.facts.residual_df);
}

// Whether the residuals of `large` may be those of a fit in all columns of `small` and more.
bool FitsAsWell(const Model& large, const Model& small) {
  if (IsExact(large)) return true;
  const ModelColumn& y = large.response();
  const double reach = std::max(std::abs(y.transform.Forward(y.observed_low)),
                                std::abs(y.transform.Forward(y.observed_high)));
  return !(ResidualRatio(small, large) < 1 - Slack(reach / large.facts.residual_sd));
}

std::string Why(const Model& model, const char* which) {
  return std::string("the ") + which + " model was refused (" + model.reason + ")";
}

bool HasKey(const Model& model) {
  return std::any_of(model.columns.begin(), model.columns.end(),
                     [](const ModelColumn& c) { return c.role == ColumnRole::kKey; });
}

// Why the two cannot be compared; empty when they can.
std::string Obstacle(const Model& first, const Model& second) {
  if (first.refused()) return Why(first, "first");
  if (second.refused()) return Why(second, "second");
  if (first.family != second.family)
    return "the first is of the family " + first.family + ", the second " + second.family;
  if (first.response().name != second.response().name)
    return "the first speaks of " + first.response().name + ", the second of " +
           second.response().name;
  if (first.digest.empty() || second.digest.empty())
    return "one of the two does not say which rows it was fitted to";
  if (first.digest != second.digest) {
    if (first.rows.fitted != second.rows.fitted) {
      return "the two were fitted to different rows, the first to " +
             std::to_string(first.rows.fitted) + " and the second to " +
             std::to_string(second.rows.fitted) +
             "; to use the same, mark the columns that only one uses as present in the other";
    }
    if (HasKey(first) != HasKey(second)) {
      return std::string("the ") + (HasKey(first) ? "first" : "second") +
             " has a key, the other not; give both the same key";
    }
    return "the two were fitted to different rows, or rows with other keys or weights";
  }
  return "";
}

std::string PValue(double p) {
  if (p < 0.001) return "p below 0.001";
  return "p = " + Rounded(p, 2);
}

// The criteria, second minus first, on one scale; NaN where there is none.
std::pair<double, double> Criteria(const Model& first, const Model& second, bool same_scale) {
  const ModelFacts &a = first.facts, &b = second.facts;
  const double aic = b.aic_original - a.aic_original, bic = b.bic_original - a.bic_original;
  if (std::isfinite(aic) || !same_scale) return {aic, bic};
  return {b.aic - a.aic, b.bic - a.bic};
}

std::string Preferred(double aic, double bic) {
  if (aic < -kWorthFollowing && bic < -kWorthFollowing) return "second";
  if (aic > kWorthFollowing && bic > kWorthFollowing) return "first";
  return "neither";
}

std::string CriteriaSentence(double aic, double bic, const std::string& preferred) {
  if (!std::isfinite(aic) || !std::isfinite(bic)) {
    return " A value at the very edge of its transform leaves one of them without a likelihood on "
           "the original scale: AIC and BIC do not compare them.";
  }
  const auto size = [](double x) { return Rounded(std::abs(x), 3); };
  if (preferred == "neither") {
    return " AIC differs by " + Rounded(aic, 3) + " and BIC by " + Rounded(bic, 3) +
           " (second less first): they do not settle on one of the two.";
  }
  return " AIC is lower for the " + preferred + " by " + size(aic) + ", BIC by " + size(bic) + ".";
}

std::string MissSentence(const Model& first, const Model& second) {
  const double a = first.facts.median_absolute_error, b = second.facts.median_absolute_error;
  if (!std::isfinite(a) || !std::isfinite(b)) return "";
  const std::string unit = ResponseUnit(first);
  return " Half of the rows lie within " + DifferenceAmount(Rounded(a, 3), unit) +
         " of what the first says, and within " + DifferenceAmount(Rounded(b, 3), unit) +
         " of what the second says.";
}

std::string OtherErrors(const Model& first, const Model& second) {
  if (first.errors == second.errors) return "";
  const auto name = [](const Model& model) {
    return std::string(kErrorKindNames[static_cast<size_t>(model.errors)]);
  };
  return "; only their errors differ, and so do limits (" + name(first) + " in the first, " +
         name(second) + " in the second)";
}

std::string Transformed(const Model& model) {
  const Transform& transform = model.response().transform;
  return transform == Transform() ? "as it is" : "by " + SpecWords(transform);
}

}  // namespace

Comparison Compare(const Model& first, const Model& second) {
  Comparison comparison;
  if (const std::string obstacle = Obstacle(first, second); !obstacle.empty()) {
    comparison.reading = "Not compared: " + obstacle + ".";
    return comparison;
  }
  std::string reading = "Both were fitted to the same " + Counted(first.rows.fitted, "row");
  if (!HasKey(first) || !HasKey(second))
    reading += ", as far as response and weight tell (without a key nothing else is compared)";
  reading += ".";

  const bool same_scale = first.response().transform == second.response().transform;
  const bool first_named = same_scale && Contains(second, first);
  const bool second_named = same_scale && Contains(first, second);
  const bool same_values = CorrelationsAgree(first, second) &&
                           (!first_named || FitsAsWell(second, first)) &&
                           (!second_named || FitsAsWell(first, second));
  const bool first_in_second = first_named && same_values;
  const bool second_in_first = second_named && same_values;
  if (first_in_second && second_in_first) {
    reading +=
        " They are one and the same fit, in the same columns" + OtherErrors(first, second) + ".";
  } else if (first_in_second || second_in_first) {
    const Model& small = first_in_second ? first : second;
    const Model& large = first_in_second ? second : first;
    const char* larger = first_in_second ? "second" : "first";
    const char* smaller = first_in_second ? "first" : "second";
    const double df = small.facts.residual_df - large.facts.residual_df;
    reading += std::string(" The ") + larger + " has all that the " + smaller + " has, and " +
               Counted(static_cast<std::int64_t>(df), "term") + " more.";
    if (df > 0 && large.facts.residual_df > 0) {
      comparison.test = "partial F";
      comparison.df1 = df;
      comparison.df2 = large.facts.residual_df;
      if (!IsExact(large)) {
        // Below 0 by rounding at most: FitsAsWell.
        const double gain = std::max(ResidualRatio(small, large) - 1, 0.0);
        comparison.statistic = gain * (comparison.df2 / df);
        comparison.p_value = FUpperTail(comparison.statistic, df, comparison.df2);
        reading += " Test that these add nothing: F = " + Rounded(comparison.statistic, 3) +
                   " on " + PlainNumber(df) + " and " + PlainNumber(comparison.df2) +
                   " degrees of freedom, " + PValue(comparison.p_value);
        reading += large.errors == ErrorKind::kClassical && small.errors == ErrorKind::kClassical
                       ? "."
                       : " (classical: it takes residuals of even spread for granted).";
      } else if (!IsExact(small)) {
        comparison.p_value = 0;
      }
    }
  } else if (first_named || second_named) {
    reading +=
        " Columns of one name hold different values in the two, so that no test of one against the "
        "other applies.";
  } else if (same_scale) {
    reading +=
        " Neither has all the columns of the other, so that no test of one against the other "
        "applies.";
  } else {
    reading += " The response enters the first " + Transformed(first) + ", the second " +
               Transformed(second) + "; likelihoods are on its original scale.";
  }

  std::tie(comparison.aic_difference, comparison.bic_difference) =
      Criteria(first, second, same_scale);
  comparison.preferred = Preferred(comparison.aic_difference, comparison.bic_difference);
  if (!(first_in_second && second_in_first)) {
    if (IsExact(first) || IsExact(second)) {
      reading += std::string(" The ") +
                 (IsExact(first) && IsExact(second) ? "fits of both are"
                  : IsExact(first)                  ? "first fit is"
                                                    : "second fit is") +
                 " exact, so that likelihoods do not compare.";
    } else {
      reading += CriteriaSentence(comparison.aic_difference, comparison.bic_difference,
                                  comparison.preferred);
    }
    if (first.clusters > 0 || second.clusters > 0) {
      reading +=
          " All of this takes rows as independent of each other, which rows of one cluster may not "
          "be.";
    }
    reading += MissSentence(first, second);
  }
  comparison.reading = reading;
  return comparison;
}

}  // namespace ladderline
