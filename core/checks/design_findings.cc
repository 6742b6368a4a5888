#include "core/checks/design_findings.h"

#include <algorithm>
#include <cmath>
#include <string_view>
#include <utility>

#include "core/checks/finding.h"
#include "core/checks/findings.h"
#include "core/checks/trouble.h"
#include "core/support/prose.h"
#include "core/transform/spec_words.h"

namespace ladderline {
namespace {

// Condition number: moderate to strong dependence from 30 on, severe beyond 100 (Belsley, Kuh &
// Welsch, Regression Diagnostics, 1980, §3.2).
constexpr Bounds kCondition = {30, 100};
// Variance inflation: common practice.
constexpr Bounds kInflation = {5, 10};
// Cook's distance: 1 is common practice (Cook & Weisberg, Residuals and Influence, 1982); half of
// it is worth a look by our judgement.
constexpr Bounds kInfluence = {0.5, 1};
// Leverage: up to 0.2 safe, beyond 0.5 to be avoided (Huber, Robust Statistics, 1981, §7.2). Among
// few rows that is soon reached: it must also be three times the average, as is common practice.
constexpr Bounds kLeverage = {0.2, 0.5};
constexpr double kTimesAverage = 3;
// Fewer than 10 rows per term are few by a common rule of thumb (Harrell, Regression Modeling
// Strategies, 2001, §4.4); 5 is half of it.
constexpr double kFewRows = 10, kVeryFewRows = 5;
// Share of rows left out: under 5% of little consequence (Schafer, Stat. Methods Med. Res. 8,
// 1999); a fifth is our judgement.
constexpr Bounds kShareLeftOut = {0.05, 0.2};
// By how many sds the mean of the rows kept differs from that of all rows, as far as known: 0.1
// and 0.25 are common practice for groups that should be alike (Austin, Stat. Med. 28, 2009; Rubin,
// Health Serv. Outcomes Res. Methodol. 2, 2001).
constexpr Bounds kShift = {0.1, 0.25};
// Fewer rows left out have no mean worth telling. Our judgement.
constexpr std::int64_t kRowsForMean = 5;

// Findings that name a row: its key stands between the first two, and the third says the first
// without it.
struct KeyPlace {
  std::string_view before, after, instead;
};
constexpr std::string_view kPullsHardest = "The row that pulls hardest is ",
                           kFurthestOut = "The row furthest out by its predictors is ",
                           kDecides = " decides its own fitted value, ",
                           kDecide = " decide their own fitted value, for example ",
                           kWithoutIt = "; without it ", kOfLeverage = ": leverage ",
                           kRestsOnIt = ": a term rests on it alone.";
constexpr KeyPlace kKeyPlaces[] = {
    {kPullsHardest, kWithoutIt, "One row pulls hardest, which model_influence names"},
    {kFurthestOut, kOfLeverage, "One row is furthest out by its predictors"},
    {kDecides, kRestsOnIt, " decides its own fitted value"},
    {kDecide, kRestsOnIt, " decide their own fitted value, each for itself"},
};

constexpr const char* kNoTerms = "there are no terms beside the intercept";
constexpr const char* kNoColumns = "no column is left in the fit";

class Finder {
 public:
  Finder(const Model& model, const CheckFigures& figures) : model_(model), figures_(figures) {
    for (int j = 0; j < static_cast<int>(model.terms.size()); ++j) {
      const double here = Term(j).variance_inflation;
      int& worst = IsMade(j) ? worst_made_ : worst_;
      if (std::isfinite(here) && !(worst >= 0 && here <= Term(worst).variance_inflation)) worst = j;
    }
  }

  Check ConditionNumber() const {
    Check check = CheckNamed("condition_number");
    const double number = figures_.condition_number;
    if (!std::isfinite(number)) {
      SetNotComputed(kNoColumns, check);
      return check;
    }
    check.statistic = number;
    SetCondition(check);
    check.finding += Repeats();
    return check;
  }

  void SetCondition(Check& check) const {
    const double number = check.statistic;
    if (TroubleOf(number, kCondition) == Trouble::kNone) {
      check.finding = "The columns are well apart from each other.";
      return;
    }
    // Against the intercept a column far from 0 has a large number, which harms no slope.
    const Trouble trouble = worst_ < 0
                                ? Trouble::kNone
                                : std::min(TroubleOf(number, kCondition),
                                           TroubleOf(Term(worst_).variance_inflation, kInflation));
    SetTrouble(trouble, check);
    if (trouble == Trouble::kNone) {
      check.finding =
          worst_made_ < 0
              ? "The number is large as columns lie far from 0 beside their spread: a matter of "
                "the "
                "intercept alone."
              : "The number is large as powers and products go with their parts, and as columns "
                "lie far from 0 beside their spread: the fit allows for both.";
      return;
    }
    check.finding =
        "The columns nearly repeat each other: small changes of the data may move "
        "coefficients " +
        Rounded(number, 2) + " times as far.";
    check.remedy = "See variance_inflation, and leave out or combine what goes together.";
  }

  Check VarianceInflation() const {
    Check check = CheckNamed("variance_inflation");
    if (worst_ < 0 && worst_made_ < 0) {
      SetNotComputed(kNoTerms, check);
      return check;
    }
    const double inflation = worst_ < 0 ? 1 : Term(worst_).variance_inflation;
    const double made = worst_made_ < 0 ? 1 : Term(worst_made_).variance_inflation;
    check.statistic = std::max(inflation, made);
    const Trouble trouble = TroubleOf(inflation, kInflation);
    SetTrouble(trouble, check);
    if (trouble == Trouble::kNone) {
      check.finding = "No column goes so closely with the others that its limits suffer.";
    } else {
      const ModelColumn& column =
          model_.columns[static_cast<size_t>(Term(worst_).factors[0].column)];
      check.finding = "Limits of " + column.name + " are " + Rounded(std::sqrt(inflation), 2) +
                      " times as wide as if it went with no other column.";
      const Companion companion = CompanionOf(model_, worst_);
      if (companion.term >= 0) {
        check.finding += " It goes most closely with " + Term(companion.term).name +
                         " (correlation " + Rounded(companion.correlation, 2) + ").";
      }
      check.remedy = "Keep one of the two, or combine them; model_compare tells what is lost.";
    }
    if (TroubleOf(made, kInflation) != Trouble::kNone) {
      check.finding +=
          " Powers of a column go closely with each other, products with their parts, "
          "by their making (" +
          Term(worst_made_).name + " most): model_tests and model_effects take them together.";
    }
    check.finding += Repeats();
    return check;
  }

  Check CooksDistance() const {
    Check check = CheckNamed("cooks_distance");
    if (model_.influence.empty()) {
      const std::string_view why = figures_.tests.shape.jarque_bera.obstacle;
      SetNotComputed(rank() == 0   ? kNoColumns
                     : why.empty() ? "every row decides its own fitted value"
                                   : why,
                     check);
      return check;
    }
    const InfluentialCase& first = model_.influence.front();
    check.statistic = first.cooks_distance;
    // |Δb_j| / se_j ≤ √(k D), by Cauchy and Schwarz in orthonormal coordinates.
    const double most = std::sqrt(first.cooks_distance * static_cast<double>(rank()));
    const Trouble trouble = TroubleOf(first.cooks_distance, kInfluence);
    check.finding = std::string(kPullsHardest) + KeyText(first.key, model_) +
                    std::string(kWithoutIt) +
                    (trouble == Trouble::kNone ? "no term would move by more than "
                                               : "a term would move by up to ") +
                    Rounded(most, 2) + " times its standard error.";
    SetTrouble(trouble, check);
    if (trouble == Trouble::kNone) return check;
    const auto many = std::count_if(
        model_.influence.begin(), model_.influence.end(),
        [](const InfluentialCase& row) { return row.cooks_distance >= kInfluence.look; });
    if (many > 1) check.finding += " " + std::to_string(many) + " rows pull so hard.";
    check.remedy = "See model_influence(model), check the record, and fit once more without it.";
    return check;
  }

  Check Leverage() const {
    Check check = CheckNamed("leverage");
    if (rank() == 0) {
      SetNotComputed(kNoColumns, check);
      return check;
    }
    const double largest = figures_.largest_leverage;
    check.statistic = largest;
    if (model_.facts.residual_df == 0) {
      SetTrouble(Trouble::kProblem, check);
      check.finding = "Every row decides its own fitted value: there are as many terms as rows.";
      check.remedy = "Take in more rows, or leave columns out.";
      return check;
    }
    if (figures_.rows_decided_alone > 0) {
      SetTrouble(Trouble::kProblem, check);
      const bool one = figures_.rows_decided_alone == 1;
      check.finding = Counted(figures_.rows_decided_alone, "row") +
                      std::string(one ? kDecides : kDecide) +
                      KeyText(figures_.largest_leverage_key, model_) + std::string(kRestsOnIt);
      check.remedy = SingleRowRemedy();
      return check;
    }
    const double average = static_cast<double>(rank()) / static_cast<double>(model_.rows.fitted);
    check.finding = std::string(kFurthestOut) + KeyText(figures_.largest_leverage_key, model_) +
                    std::string(kOfLeverage) + Rounded(largest, 2) + ", where " +
                    Rounded(average, 2) + " is average.";
    if (largest < kTimesAverage * average) return check;
    const Trouble trouble = TroubleOf(largest, kLeverage);
    SetTrouble(trouble, check);
    if (trouble > Trouble::kNone) {
      const std::string rare = RareLevelRemedy();
      check.remedy = !rare.empty()
                         ? rare
                         : "Check the record; see whether the fit must reach so far out, or "
                           "whether another scale draws such values in.";
    }
    return check;
  }

  Check RowsPerTerm() const {
    Check check = CheckNamed("rows_per_term");
    const Index terms = rank() - (model_.basis.fit.intercept ? 1 : 0);
    if (terms <= 0) {
      SetNotComputed(kNoTerms, check);
      return check;
    }
    check.statistic = static_cast<double>(model_.rows.fitted) / static_cast<double>(terms);
    check.finding = Counted(model_.rows.fitted, "row") + " for " + Counted(terms, "term");
    if (check.statistic >= kFewRows) {
      check.finding += ".";
      return check;
    }
    SetTrouble(check.statistic < kVeryFewRows ? Trouble::kProblem : Trouble::kLook, check);
    check.finding += ": so few that the fit follows chance in part.";
    check.remedy = "Leave columns out, merge levels, or take in more rows.";
    return check;
  }

  Check RowsLeftOut() const {
    Check check = CheckNamed("rows_left_out");
    const std::int64_t offered = model_.rows.offered, left_out = offered - model_.rows.fitted;
    const double share = static_cast<double>(left_out) / static_cast<double>(offered);
    check.statistic = share;
    if (left_out == 0) {
      check.finding = "Every row was used.";
      return check;
    }
    check.finding = (model_.for_release() ? "About " : "") + std::to_string(left_out) + " of " +
                    model_.about() + Counted(offered, "row") + " (" + Percent(share) +
                    (left_out == 1 ? ") was" : ") were") + " left out: " + Reasons() + ".";
    size_t furthest = 0;
    for (size_t c = 1; c < model_.columns.size(); ++c)
      if (Apart(c) > Apart(furthest)) furthest = c;
    const double apart = Apart(furthest);
    if (apart > 0) {
      const ModelColumn& column = model_.columns[furthest];
      check.finding += " Where known, their mean of " + column.name + " is " +
                       ValueText(column, figures_.left_out[furthest].mean) +
                       ", that of the rows used " + ValueText(column, column.mean) + ".";
    }
    const Trouble trouble =
        std::max(TroubleOf(share, kShareLeftOut), TroubleOf(share * apart, kShift));
    SetTrouble(trouble, check);
    if (trouble > Trouble::kNone) check.remedy = LeftOutRemedy();
    return check;
  }

 private:
  const ModelTerm& Term(int j) const { return model_.terms[static_cast<size_t>(j)]; }
  Index rank() const { return model_.basis.fit.rank(); }

  bool IsMade(int j) const {
    const std::vector<Factor>& factors = Term(j).factors;
    if (factors.size() != 1) return factors.size() > 1;
    const int column = factors[0].column;
    if (model_.columns[static_cast<size_t>(column)].degree > 1) return true;
    return std::any_of(model_.columns.begin(), model_.columns.end(), [&](const ModelColumn& c) {
      return c.role == ColumnRole::kProduct && (c.parts[0] == column || c.parts[1] == column);
    });
  }

  // The terms that were left out of the fit, with what they repeat: ` age2 repeats age and was left
  // out.`; empty: none was.
  std::string Repeats() const {
    constexpr std::string_view kLeftOut = "left out: ";
    std::string text;
    int more = 0;
    for (const ModelTerm& term : model_.terms) {
      if (!std::isnan(term.coefficient) || term.factors.empty()) continue;
      if (!text.empty()) {
        ++more;
        continue;
      }
      const std::string note =
          term.note.starts_with(kLeftOut) ? term.note.substr(kLeftOut.size()) : term.note;
      text = " " + term.name + (note.starts_with("always") ? " is " : " ") + note +
             " and was left out";
    }
    if (more > 0)
      text += ", and so " + std::string(more == 1 ? "was " : "were ") + Counted(more, "more term");
    return text.empty() ? text : text + ".";
  }

  // Where the furthest row stands out by a level that few rows have: in a fit of levels alone a row
  // has leverage 1 / rows of its level, and half of what it has is the level's then (our
  // judgement). Empty: it stands out otherwise.
  std::string RareLevelRemedy() const {
    if (figures_.furthest_column < 0) return "";
    const ModelColumn& column = model_.columns[static_cast<size_t>(figures_.furthest_column)];
    const CategoryLevel& level = column.levels[static_cast<size_t>(figures_.furthest_level)];
    if (2 < figures_.largest_leverage * static_cast<double>(level.rows)) return "";
    return "Only " + Counted(level.rows, "row") + (level.rows == 1 ? " has " : " have ") +
           level.text + " in " + column.name +
           ": merge it with another level, or leave it out; another scale would not help.";
  }

  // What to make of levels that a single row has.
  std::string SingleRowRemedy() const {
    constexpr size_t kMost = 3;
    for (const ModelColumn& column : model_.columns) {
      std::string levels;
      size_t listed = 0;
      for (const CategoryLevel& level : column.levels) {
        if (level.rows != 1 || listed == kMost) continue;
        levels += (listed++ == 0 ? "" : ", ") + SqlText(level.text);
      }
      if (listed == 0) continue;
      return "Merge levels of " + column.name + " that have a single row, as in CASE WHEN … IN (" +
             levels + ") THEN 'other' ELSE … END.";
    }
    return "See whether the fit needs the column that this row stands for.";
  }

  // By how many sds of the rows kept the rows left out differ in a column; 0 where unknown.
  double Apart(size_t c) const {
    const ModelColumn& column = model_.columns[c];
    const NumbersLeftOut& out = figures_.left_out[c];
    const double apart = std::abs(out.mean - column.mean) / column.sd;
    return out.rows >= kRowsForMean && std::isfinite(apart) ? apart : 0;
  }

  std::string Reasons() const {
    constexpr size_t kMost = 3;
    std::vector<std::pair<std::int64_t, std::string>> reasons;
    const auto add = [&](std::int64_t rows, const std::string& what) {
      if (rows > 0)
        reasons.emplace_back(rows, what + " in " + model_.about() + std::to_string(rows));
    };
    for (const ModelColumn& column : model_.columns) {
      if (column.role == ColumnRole::kKey) continue;
      add(column.missing, column.name + " is missing");
      add(column.outside, column.name + (column.role == ColumnRole::kWeight
                                             ? " is 0"
                                             : " lies outside " + SpecWords(column.transform)));
    }
    std::stable_sort(reasons.begin(), reasons.end(),
                     [](const auto& a, const auto& b) { return a.first > b.first; });
    std::string text;
    for (size_t i = 0; i < std::min(kMost, reasons.size()); ++i)
      text += (i == 0 ? "" : "; ") + reasons[i].second;
    return text + (reasons.size() > kMost ? "; and others" : "");
  }

  std::string LeftOutRemedy() const {
    const std::string remedy =
        "See missing and outside in model_columns(model), and say which cases the fit speaks of";
    for (const ModelColumn& column : model_.columns) {
      if (column.outside > 0 && column.transform.spec() == "log_offset")
        return remedy + "; " + LabelOf(column, "log_offset 1") + " takes zeros in.";
    }
    return remedy + ".";
  }

  const Model& model_;
  const CheckFigures& figures_;
  // The terms with the largest variance inflation: of those that stand for themselves, and of
  // powers, products and their parts.
  int worst_ = -1, worst_made_ = -1;
};

}  // namespace

std::string FindingWithoutKey(const Check& check) {
  if (check.name != "cooks_distance" && check.name != "leverage") return check.finding;
  for (const KeyPlace& place : kKeyPlaces) {
    // A key may hold any text: the places are the first and the last of their kind.
    const size_t from = check.finding.find(place.before), to = check.finding.rfind(place.after);
    if (from == std::string::npos || to == std::string::npos || to < from) continue;
    return check.finding.substr(0, from) + std::string(place.instead) + check.finding.substr(to);
  }
  return check.finding;
}

std::vector<Check> DesignFindings(const Model& model, const CheckFigures& figures) {
  const Finder finder(model, figures);
  return {finder.ConditionNumber(), finder.VarianceInflation(), finder.CooksDistance(),
          finder.Leverage(),        finder.RowsPerTerm(),       finder.RowsLeftOut()};
}

}  // namespace ladderline
