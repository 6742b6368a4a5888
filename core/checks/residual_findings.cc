#include "core/checks/residual_findings.h"

#include <algorithm>
#include <cmath>
#include <utility>

#include "core/checks/finding.h"
#include "core/checks/trouble.h"
#include "core/model/label.h"
#include "core/support/prose.h"
#include "core/transform/spec_words.h"

namespace ladderline {
namespace {

// What chance makes less often than this is not put down to chance. Common practice.
constexpr double kChance = 0.05;
// The ratio of the widest to the narrowest spread. That the largest sd be less than twice the
// smallest is common practice where groups are compared; three times is our judgement.
constexpr Bounds kSpread = {2, 3};
// The factor by which errors move. Limits said to hold 95% of the time, but too narrow by 1.2, hold
// 2 Φ(1.96 / 1.2) − 1 = 90% of the time; by 1.5, 81%.
constexpr Bounds kErrors = {1.2, 1.5};
// How far the powers of RESET move fitted values, in residual sds. Effects called small and medium
// by Cohen, Statistical Power Analysis (1988), §9.2, have f² = 0.02 and 0.15, and move² is
// f² / (1 + f²). Common practice.
constexpr Bounds kBend = {0.14, 0.36};
// Skewness of residuals: beyond 1 common practice calls it strong (Bulmer, Principles of
// Statistics, 1979); 2 is the bound of Curran, West & Finch, Psychol. Methods 1 (1996).
constexpr Bounds kSkewness = {1, 2};
// Excess kurtosis: 3 is that of the double exponential law, 7 the bound of the same.
constexpr Bounds kKurtosis = {3, 7};
// 1 − W: the share of the residuals' spread that does not follow a normal law. Our judgement.
constexpr Bounds kNotNormal = {0.05, 0.1};
// Correlation of neighbouring residuals r; the statistic of Durbin and Watson is near 2 − 2 r, and
// common practice is at ease between 1.5 and 2.5 and alarmed below 1 and above 3.
constexpr Bounds kNeighbours = {0.25, 0.5};

// Two stretches of 10 rows (trouble.h).
constexpr std::int64_t kRowsForStretches = 20;

constexpr std::string_view kTooFewForShape = "there are fewer than 3 rows";
constexpr const char* kByChance = " Chance alone makes as much.";

std::string Times(double ratio) {
  return ratio >= kMostSpread ? "over 1000 times" : Rounded(ratio, 2) + " times";
}

Check NotComputed(std::string_view name, std::string_view why) {
  Check check = CheckNamed(name);
  SetNotComputed(why, check);
  return check;
}

bool ByChance(const TestFigures& test) { return !(test.p_value < kChance); }

class Finder {
 public:
  Finder(const Model& model, const CheckFigures& figures)
      : model_(model), figures_(figures), tests_(figures.tests) {}

  Check Spread() const {
    const TestFigures& test = tests_.breusch_pagan;
    Check check = CheckNamed("breusch_pagan", test);
    if (!test.computed()) {
      if (figures_.exact && model_.facts.residual_df > 0)
        check.remedy = "See whether a predictor is the response itself, or was made from it.";
      return check;
    }
    const SpreadChange change = SpreadChangeOf(model_, tests_);
    const bool known = !std::isnan(change.by_fitted);
    const bool identity = model_.response().transform == Transform();
    const std::string residuals =
        identity ? "Residuals" : "Residuals of " + SpecWords(model_.response().transform);
    if (known) {
      check.finding = residuals + " are spread " + Times(change.by_fitted) +
                      " as widely around a fitted value of " + FittedText(change.widest) +
                      " as around " + FittedText(change.narrowest);
      if (!ByChance(test)) {
        check.finding += ".";
      } else {
        check.finding += TroubleOf(change.by_fitted, kSpread) == Trouble::kNone
                             ? ": chance alone makes as much."
                             : ", though so few rows around them make as much by chance.";
      }
    } else {
      check.finding = model_.rows.fitted < kRowsForStretches
                          ? "Too few rows to see how widely residuals are spread along the fit."
                          : "Fitted values lie too close together to see how widely residuals are "
                            "spread along the fit.";
      if (ByChance(test)) check.finding += " The test sees no more than chance makes.";
    }
    if (ByChance(test)) return check;
    Trouble trouble = TroubleOf(std::fmax(change.by_fitted, change.by_predictors), kSpread);
    if (trouble > TroubleOf(change.by_fitted, kSpread)) {
      check.finding += " Along the predictors the spread varies more: about " +
                       Times(change.by_predictors) + " as wide at one end as at the other.";
    }
    if (trouble == Trouble::kNone) return check;
    if (robust()) {
      trouble = Trouble::kLook;
      check.finding +=
          " The model's errors (" + Errors() + ") allow for that; limits for a single case do not.";
    }
    SetTrouble(trouble, check);
    const bool grows = known && change.widest.middle() > change.narrowest.middle();
    check.remedy = SpreadRemedy(grows);
    return check;
  }

  Check White() const {
    const TestFigures& test = tests_.white;
    Check check = CheckNamed("white", test);
    if (!test.computed()) return check;
    const ErrorShift shift = ErrorShiftOf(model_);
    if (shift.term < 0) {
      check.finding = "No term has errors that could be compared.";
    } else {
      check.finding = "Errors that allow for uneven spread " +
                      std::string(shift.ratio < 1 ? "come down to " : "go up to ") +
                      Times(shift.ratio) + " the classical ones (" +
                      model_.terms[static_cast<size_t>(shift.term)].name + ").";
    }
    if (tests_.white_by_fitted) {
      check.finding +=
          " Tested by the fitted value and its square: there are too many products of columns.";
    }
    if (ByChance(test)) {
      check.finding += " The test sees no more than chance makes.";
      return check;
    }
    const Trouble trouble = TroubleOf(shift.size(), kErrors);
    if (trouble == Trouble::kNone) return check;
    if (robust()) {
      check.finding += " The model's errors (" + Errors() + ") allow for that.";
      return check;
    }
    SetTrouble(trouble, check);
    check.remedy = "Take errors that hold under uneven spread: 'errors | option', 'hc3'.";
    return check;
  }

  Check Bend() const {
    const TestFigures& test = tests_.reset;
    Check check = CheckNamed("reset", test);
    if (!test.computed()) return check;
    if (std::isinf(test.statistic)) {
      check.statistic = kNaN;
      check.finding = "With squares and cubes of the fitted value the fit would be exact.";
      check.remedy = BendRemedy();
      SetTrouble(Trouble::kProblem, check);
      return check;
    }
    check.finding = "Squares and cubes of the fitted value would move it by typically " +
                    Rounded(tests_.reset_move, 2) + " of the residuals' sd.";
    if (ByChance(test)) {
      check.finding += kByChance;
      return check;
    }
    const Trouble trouble = TroubleOf(tests_.reset_move, kBend);
    if (trouble == Trouble::kNone) return check;
    SetTrouble(trouble, check);
    const std::vector<FittedStretch> stretches = Stretches(model_.residuals.bins);
    if (stretches.size() >= 3) {
      const auto in_sds = [&](const FittedStretch& stretch) {
        return Rounded(stretch.mean / model_.facts.residual_sd, 2);
      };
      check.finding += " Residuals average " + in_sds(stretches.front()) + ", " +
                       in_sds(stretches[stretches.size() / 2]) + " and " +
                       in_sds(stretches.back()) +
                       " sds where fitted values are low, middling and high.";
    }
    check.remedy = BendRemedy();
    return check;
  }

  Check JarqueBera() const {
    const ResidualShape& shape = tests_.shape;
    Check check = CheckNamed("jarque_bera", shape.jarque_bera);
    if (!shape.jarque_bera.computed()) return check;
    if (std::isnan(shape.skewness)) return NotComputed("jarque_bera", kTooFewForShape);
    check.finding = "Residuals have skewness " + Rounded(shape.skewness, 2) +
                    " and excess kurtosis " + Rounded(shape.excess_kurtosis, 2) +
                    "; a normal law has 0 and 0.";
    JudgeShape(shape.jarque_bera,
               std::max(TroubleOf(std::abs(shape.skewness), kSkewness),
                        TroubleOf(shape.excess_kurtosis, kKurtosis)),
               check);
    return check;
  }

  Check ShapiroWilk() const {
    const ResidualShape& shape = tests_.shape;
    const TestFigures& test = shape.shapiro_wilk;
    Check check = CheckNamed("shapiro_wilk", test);
    if (!test.computed()) return check;
    check.finding = "A normal law accounts for " + Rounded(100 * test.statistic, 3) +
                    "% of how the residuals are spread.";
    if (shape.shapiro_wilk_rows < model_.rows.fitted) {
      check.finding +=
          " Seen in " + std::to_string(shape.shapiro_wilk_rows) + " rows, evenly spaced among all.";
    }
    JudgeShape(test, TroubleOf(1 - test.statistic, kNotNormal), check);
    return check;
  }

  Check Skewness() const {
    const ResidualShape& shape = tests_.shape;
    Check check = CheckNamed("residual_skewness");
    if (std::isnan(shape.skewness)) {
      const TestFigures& test = shape.jarque_bera;
      return NotComputed("residual_skewness", test.computed() ? kTooFewForShape : test.obstacle);
    }
    check.statistic = shape.skewness;
    const auto n = static_cast<double>(model_.rows.fitted);
    // The sd of G1 under a normal law: Joanes & Gill, The Statistician 47 (1998).
    const double error = std::sqrt(6 * n * (n - 1) / ((n - 2) * (n + 1) * (n + 3)));
    if (std::abs(shape.skewness) <= 2 * error) {
      check.finding = "Residuals lean to neither side by more than chance makes.";
      return check;
    }
    const bool high = shape.skewness > 0;
    check.finding = std::string("Residuals lean to the ") + (high ? "high" : "low") +
                    " side: the " + (high ? "largest" : "smallest") + " is " + Furthest(high) +
                    " sds from the fit, the " + (high ? "smallest " : "largest ") +
                    Furthest(!high) + ".";
    const Trouble trouble = TroubleOf(std::abs(shape.skewness), kSkewness);
    SetTrouble(trouble, check);
    if (trouble == Trouble::kNone) return check;
    const std::string drawn_in = high ? DrawnIn() : "";
    check.remedy = OtherScale() + drawn_in + ".";
    return check;
  }

  Check DurbinWatson() const {
    Check check = CheckNamed("durbin_watson");
    if (std::isnan(tests_.durbin_watson)) {
      const TestFigures& test = tests_.breusch_godfrey;
      SetNotComputed(test.computed() ? "there are too few rows" : test.obstacle, check);
      return check;
    }
    check.statistic = tests_.durbin_watson;
    check.finding = "Residuals of neighbouring rows have correlation " +
                    Rounded(tests_.lag_correlation, 2) + ", " + Order() + ".";
    if (figures_.order.empty())
      check.finding += " A column with the role order would say which rows are neighbours.";
    JudgeNeighbours(check);
    return check;
  }

  Check BreuschGodfrey() const {
    const TestFigures& test = tests_.breusch_godfrey;
    Check check = CheckNamed("breusch_godfrey", test);
    if (!test.computed()) return check;
    const double r = tests_.lag_correlation;
    check.finding = std::string(ByChance(test) ? "Chance alone makes as much of neighbours"
                                : r < 0        ? "Neighbours fall on opposite sides of the fit"
                                : TroubleOf(r, kNeighbours) > Trouble::kNone
                                    ? "Neighbouring rows go together"
                                    : "Neighbouring rows go together a little") +
                    " (correlation of residuals " + Rounded(r, 2) + ", " + Order() + ").";
    JudgeNeighbours(check);
    return check;
  }

 private:
  bool robust() const { return model_.errors != ErrorKind::kClassical; }
  std::string Errors() const {
    return std::string(kErrorKindNames[static_cast<size_t>(model_.errors)]);
  }
  std::string Order() const {
    return figures_.order.empty() ? "in the order the rows came"
                                  : "in the order of " + figures_.order;
  }

  // The middle of a stretch in original units.
  std::string FittedText(const FittedStretch& stretch) const {
    const ModelColumn& response = model_.response();
    const double value = response.BackHeld(stretch.middle(), stretch.middle());
    if (!std::isfinite(value)) return Rounded(stretch.middle(), 3) + " on the fitted scale";
    return ValueText(response, value);
  }

  // A number as it stands.
  static bool IsPlain(const ModelColumn& column) {
    return column.kind == ColumnKind::kNumber && column.transform == Transform();
  }

  // What to do about the scale of the response, without a full stop.
  std::string OtherScale() const {
    if (model_.response().IsDate())
      return "Look for a column that goes with these residuals";
    return "Let re_expression_scan(" + SqlText(QuotedName(model_.response().name)) +
           ", …), with the model's other labels and values after it, look for a scale";
  }

  // What a response that spreads or leans to the high side may be written as, to follow OtherScale;
  // empty: nothing comes to mind. A one added to zeros would put them far below all others; an
  // offset that evens them out is found where they are fewer than half.
  std::string DrawnIn() const {
    const ModelColumn& y = model_.response();
    const bool square_root = y.transform.kind() == TransformKind::kSqrtOffset;
    if (!(IsPlain(y) || square_root) || y.observed_low < 0) return "";
    if (y.observed_low > 0) return "; " + LabelOf(y, "log_offset") + " is the first to try";
    return y.median > 0 ? "; " + LabelOf(y, "log_offset auto") + " keeps zeros" : "";
  }

  std::string SpreadRemedy(bool grows) const {
    std::string remedy;
    if (grows) remedy = OtherScale() + DrawnIn();
    if (!robust()) {
      remedy += (remedy.empty() ? "Take" : "; or keep the scale and take") +
                std::string(" errors that hold all the same: 'errors | option', 'hc3'");
    }
    return (remedy.empty() ? "Look for a column that goes with the spread" : remedy) + ".";
  }

  // Of predictors as they stand, the one that leans most to the high side may want a logarithm; any
  // other a curve.
  std::string BendRemedy() const {
    constexpr double kLeans = 1.5;  // upper half of the middle rows against their lower half
    const ModelColumn* leaning = nullptr;
    const ModelColumn* plain = nullptr;
    double most = kLeans;
    for (const ModelColumn& column : model_.columns) {
      if (column.role != ColumnRole::kPredictor || !IsPlain(column)) continue;
      if (plain == nullptr) plain = &column;
      const double lean =
          (column.upper_quartile - column.median) / (column.median - column.lower_quartile);
      if (column.observed_low > 0 && lean > most) {
        most = lean;
        leaning = &column;
      }
    }
    if (leaning != nullptr) return "Try " + LabelOf(*leaning, "log_offset") + " as a predictor.";
    if (plain != nullptr) return "Try " + LabelOf(*plain, "polynomial 2") + " as a predictor.";
    return OtherScale() + ".";
  }

  static void JudgeShape(const TestFigures& test, Trouble trouble, Check& check) {
    if (ByChance(test)) check.finding += kByChance;
    if (ByChance(test) || trouble == Trouble::kNone) return;
    SetTrouble(trouble, check);
    check.remedy =
        "Coefficients can do without a normal law, limits for a single case cannot: read these "
        "with care. See residual_skewness and cooks_distance.";
  }

  // How many residual sds the largest or smallest residual is away.
  std::string Furthest(bool largest) const {
    const std::vector<double>& quantiles = model_.residuals.quantiles;
    const double residual = largest ? quantiles.back() : quantiles.front();
    return Rounded(std::abs(residual) / model_.facts.residual_sd, 2);
  }

  void JudgeNeighbours(Check& check) const {
    const TestFigures& test = tests_.breusch_godfrey;
    if (test.computed() && ByChance(test)) return;
    Trouble trouble = TroubleOf(std::abs(tests_.lag_correlation), kNeighbours);
    // Rows as they came may be in no order at all.
    if (figures_.order.empty()) trouble = std::min(trouble, Trouble::kLook);
    SetTrouble(trouble, check);
    if (trouble == Trouble::kNone) return;
    check.remedy =
        model_.clusters > 0
            ? "See that rows which go together are in one cluster; or add a column for time."
            : "Add a column for what neighbours share, such as a date; or say what groups them "
              "by a label like 'district | cluster'.";
  }

  const Model& model_;
  const CheckFigures& figures_;
  const ResidualTests& tests_;
};

}  // namespace

std::vector<Check> ResidualFindings(const Model& model, const CheckFigures& figures) {
  const Finder finder(model, figures);
  return {finder.Spread(),      finder.White(),    finder.Bend(),         finder.JarqueBera(),
          finder.ShapiroWilk(), finder.Skewness(), finder.DurbinWatson(), finder.BreuschGodfrey()};
}

}  // namespace ladderline
