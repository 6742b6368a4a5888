#include "core/report/cautions.h"

#include <algorithm>
#include <cmath>
#include <cstdint>

#include "core/checks/findings.h"
#include "core/effects/reading.h"
#include "core/effects/sentences.h"
#include "core/model/model_errors.h"
#include "core/support/prose.h"

namespace ladderline {
namespace {

// A list that a reader takes in; the rest is counted.
constexpr size_t kMostNamed = 5;

class Cautions {
 public:
  explicit Cautions(const Model& model) : model_(model) {}

  std::vector<std::string> All() {
    RowsLeftOut();
    FitItself();
    LeftOutTerms();
    ColumnsOfOneLevel();
    FewRowsForTerms();
    SmallLevels();
    Errors();
    Checks();
    Totals();
    Weights();
    Keys();
    Release();
    Always();
    return std::move(cautions_);
  }

 private:
  void Add(std::string caution) { cautions_.push_back(std::move(caution)); }

  bool HasCategory() const {
    return std::any_of(model_.columns.begin(), model_.columns.end(), [](const ModelColumn& c) {
      return c.role == ColumnRole::kPredictor && c.kind == ColumnKind::kCategory;
    });
  }

  void RowsLeftOut() {
    const std::int64_t left_out = model_.rows.offered - model_.rows.fitted;
    if (left_out == 0) return;
    const double share = static_cast<double>(left_out) / static_cast<double>(model_.rows.offered);
    Add((model_.for_release() ? "About " : "") + Counted(left_out, "row") + " of the " +
        std::to_string(model_.rows.offered) + " offered (" + Percent(share) + ") " +
        (left_out == 1 ? "was" : "were") + " left out: " + LeftOutPhrase(model_) +
        ". The figures speak of the others only, which may differ from those left out.");
  }

  void FitItself() {
    const ModelFacts& facts = model_.facts;
    if (!(facts.residual_df > 0)) {
      Add("There are as many terms as rows: the fit repeats the rows, its figures have no limits, "
          "and nothing about it can be checked.");
    } else if (model_.rows.fitted < kFewRows) {
      Add("Only " + Counted(model_.rows.fitted, "row") +
          " were fitted. Such figures are unstable and "
          "may point at a person: do not quote them.");
    } else if (std::isnan(facts.log_likelihood)) {
      Add("The columns give " + model_.response().name +
          " exactly: see whether one of them was computed from it.");
    }
  }

  void LeftOutTerms() {
    std::vector<std::string> names;
    for (const ModelTerm& term : model_.terms) {
      if (std::isnan(term.coefficient)) names.push_back(term.name);
    }
    if (names.empty()) return;
    Add("Left out of the fit, since other columns say the same: " + Listed(names, kMostNamed) +
        ". That is no sign that " + (names.size() == 1 ? "it does" : "they do") + " not matter.");
  }

  void ColumnsOfOneLevel() {
    for (const ModelColumn& column : model_.columns) {
      if (column.kind != ColumnKind::kCategory || column.levels.size() != 1) continue;
      Add(column.name + " is '" + column.levels[0].text +
          "' in every row fitted, so that nothing goes with it. If that is no value of it: a "
          "column's name in double quotes that is misspelt is read as text.");
    }
  }

  void FewRowsForTerms() {
    const auto terms = static_cast<double>(model_.basis.fit.rank()) - (model_.intercept ? 1 : 0);
    const auto rows = static_cast<double>(model_.rows.fitted);
    if (terms < 1 || !(rows / terms < kRowsPerTerm)) return;
    Add("There are only " + Rounded(rows / terms, 2) + " rows for each term (" +
        Counted(model_.rows.fitted, "row") + ", " +
        Counted(static_cast<std::int64_t>(terms), "term") +
        " besides the intercept): in other rows the figures could come out quite differently.");
  }

  void SmallLevels() {
    for (const ModelColumn& column : model_.columns) {
      if (column.kind != ColumnKind::kCategory || column.role != ColumnRole::kPredictor) continue;
      std::vector<std::string> names;
      for (const CategoryLevel& level : column.levels) {
        if (level.rows < kFewRows) names.push_back(level.text);
      }
      if (names.empty()) continue;
      Add("Fewer than " + std::to_string(kFewRows) + " rows stand for " +
          Listed(names, kMostNamed) + " in " + column.name +
          ". Such figures are unstable and may point at a person: do not quote them, and hide "
          "small cells as your rules require.");
    }
  }

  void Errors() {
    const std::string note = ErrorNote(model_, model_.errors);
    if (!note.empty()) Add("On the errors of this fit: " + note + ".");
  }

  void Checks() {
    if (!model_.checks_wanted)
      Add("The fit was not checked: its checks were switched off when it was made.");
    for (const Check& check : model_.checks) {
      // Told above, with their reasons.
      if (check.name == "rows_left_out" || check.name == "rows_per_term") continue;
      if (check.status == "problem") Add("Check " + check.name + ": " + FindingWithoutKey(check));
    }
  }

  void Totals() {
    const Transform& transform = model_.response().transform;
    if (IsStraight(transform)) return;
    Add("Typical values of " + model_.response().name +
        " are middle values, and middles do not add up: for totals and averages use fitted_mean.");
  }

  void Weights() {
    for (const ModelColumn& column : model_.columns) {
      if (column.role == ColumnRole::kWeight) {
        Add("Rows count by " + column.name +
            ", taken as the precision of each: the figures are not those of a plain average over "
            "rows.");
      }
    }
  }

  void Keys() {
    if (model_.influence.empty()) return;
    for (const ModelColumn& column : model_.columns) {
      if (column.role == ColumnRole::kKey) {
        Add("The model's text, and what its checks found, may name the " + column.name +
            " of up to " +
            Counted(static_cast<std::int64_t>(model_.influence.size()), "single row") +
            ", and every level with its count: keep it where the records may be.");
      }
    }
  }

  void Release() {
    if (!model_.for_release()) return;
    const std::string floor = Counted(model_.release_floor, "row");
    std::vector<std::string> merged;
    std::int64_t categories = 0;
    for (const ModelColumn& column : model_.columns) {
      if (column.kind != ColumnKind::kCategory || column.role != ColumnRole::kPredictor) continue;
      ++categories;
      if (column.merged >= 0) {
        merged.push_back(column.levels[static_cast<size_t>(column.merged)].text + " in " +
                         column.name);
      }
    }
    Add("Made for release: no single rows, ranges rounded, rows left out counted in steps of " +
        std::to_string(model_.release_floor) + ". " +
        (merged.empty() ? "No level has fewer than " + floor + "."
                        : "Levels of fewer than " + floor + " were put together (" +
                              Listed(merged) + "), and the fit is that of these levels; what " +
                              "checks found in the residuals is of the fit before."));
    const bool by_points = model_.smearing.kind == Smearing::Kind::kMoments ||
                           model_.smearing.kind == Smearing::Kind::kPoints;
    if (by_points && model_.smearing.points.empty()) {
      Add("Means in original units are left out, totals with them: they rest on the largest "
          "residuals, which are those of few rows.");
    }
    if (categories > 1) {
      Add("The model's text holds how its columns go together, from which the number of rows that "
          "share levels of two columns can be worked out, be it small: where that must not be "
          "known, give away tables and pages made from the text, not the text.");
    }
  }

  void Always() {
    Add("A regression shows what goes together. It does not show what causes what, and holding "
        "other columns fixed allows for those columns only, not for what was never recorded.");
    if (HasCategory()) {
      Add("The figure of a category is a difference after allowing for the other columns. It is "
          "not "
          "a league table, and says nothing of how well anyone works.");
    }
    Add("Results for groups or areas describe these, not the persons in them.");
    Add("Figures from a handful of cases are unstable and may identify people.");
    Add("Cases still open have no final duration or cost, and the long ones are missing longest.");
    Add("The fit speaks of the ranges it was made from (model_columns lists them); beyond them it "
        "is a guess, and fit_note says so.");
    Add("Decisions about people need someone accountable and the law of the place. A fitted value "
        "is neither.");
  }

  const Model& model_;
  std::vector<std::string> cautions_;
};

}  // namespace

std::string LeftOutPhrase(const Model& model) {
  std::string phrase;
  std::int64_t reasons = 0;
  const auto add = [&](const ModelColumn& column, const char* what, std::int64_t rows) {
    if (rows == 0) return;
    reasons += rows;
    phrase +=
        (phrase.empty() ? "" : ", ") + column.name + what + model.about() + std::to_string(rows);
  };
  for (const ModelColumn& column : model.columns) {
    add(column, " is missing in ", column.missing);
    add(column,
        column.role == ColumnRole::kWeight ? " is 0 in " : " is outside its re-expression in ",
        column.outside);
  }
  if (reasons > model.rows.offered - model.rows.fitted)
    phrase += " (some rows for more than one reason)";
  return phrase;
}

std::vector<std::string> CautionsOf(const Model& model) { return Cautions(model).All(); }

}  // namespace ladderline
