#include "core/release/released_checks.h"

#include <algorithm>
#include <cmath>
#include <string>

#include "core/checks/design_findings.h"
#include "core/checks/finding.h"
#include "core/checks/findings.h"
#include "core/model/design.h"
#include "core/regression/collinearity.h"
#include "core/release/coarse.h"

namespace ladderline {
namespace {

constexpr const char* kWhoHasRecords = "Whoever has the full model can see which row it is.";

// What the triangle and the counts tell.
std::vector<Check> FoundAnew(const Model& model) {
  std::vector<DroppedColumn> dropped;
  for (size_t j = 0; j < model.terms.size(); ++j) {
    if (!model.terms[j].factors.empty() && std::isnan(model.terms[j].coefficient))
      dropped.push_back({static_cast<Index>(j), model.terms[j].repeats});
  }
  CheckFigures figures;
  figures.condition_number =
      ConditionNumber(model.basis.fit, MakeRawColumns(model.columns, model.terms, dropped));
  figures.left_out.resize(model.columns.size());
  std::vector<Check> checks = DesignFindings(model, figures);
  std::erase_if(checks, [](const Check& check) {
    return check.name == "cooks_distance" || check.name == "leverage";
  });
  return checks;
}

// Speaks of the residuals as a whole, which putting a few rows together hardly changes.
bool IsOfResiduals(const Check& check) {
  return check.name != "cooks_distance" && check.name != "leverage";
}

// White's test names a term, which may be that of a level that is no more.
void LeaveOutTerms(const Model& old, const Model& fresh, Check& check) {
  for (const ModelTerm& term : old.terms) {
    const bool stays = std::any_of(fresh.terms.begin(), fresh.terms.end(),
                                   [&](const ModelTerm& other) { return other.name == term.name; });
    const std::string named = " (" + term.name + ")";
    const size_t at = stays ? std::string::npos : check.finding.find(named);
    if (at != std::string::npos) check.finding.erase(at, named.size());
  }
}

void LeaveOutRows(Check& check) {
  if (check.name == "cooks_distance" || check.name == "leverage") {
    const bool named = check.finding != FindingWithoutKey(check);
    check.finding = FindingWithoutKey(check);
    constexpr std::string_view kWhere = ", which model_influence names";
    if (const size_t at = check.finding.find(kWhere); at != std::string::npos)
      check.finding.erase(at, kWhere.size());
    constexpr std::string_view kMore = " rows pull so hard.";
    if (const size_t at = check.finding.find(kMore); at != std::string::npos)
      check.finding.erase(check.finding.rfind(' ', at - 1));
    if (named || !check.remedy.empty()) check.remedy = kWhoHasRecords;
    check.statistic = Coarse(check.statistic, check.statistic, 2, Towards::kNearest);
  }
  if (check.name == "residual_skewness") {
    constexpr std::string_view kEnds = " side: the ";
    if (const size_t at = check.finding.find(kEnds); at != std::string::npos)
      check.finding = check.finding.substr(0, at) + " side.";
  }
}

}  // namespace

std::vector<Check> ReleasedChecks(const Model& old, const Model& fresh, bool merged) {
  const std::vector<Check> anew = FoundAnew(fresh);
  std::vector<Check> checks;
  for (const Check& check : old.checks) {
    const auto found = std::find_if(anew.begin(), anew.end(),
                                    [&](const Check& c) { return c.name == check.name; });
    if (found != anew.end()) {
      checks.push_back(*found);
    } else if (merged && !IsOfResiduals(check)) {
      checks.push_back(CheckNamed(check.name));
      SetNotComputed(
          "levels of few rows were put together for release, and the rows are not at "
          "hand; the full model has it",
          checks.back());
    } else {
      checks.push_back(check);
      LeaveOutRows(checks.back());
      if (merged) {
        LeaveOutTerms(old, fresh, checks.back());
        for (double* figure : {&checks.back().statistic, &checks.back().p_value})
          *figure = Coarse(*figure, std::abs(*figure), 3, Towards::kNearest);
      }
    }
  }
  return checks;
}

}  // namespace ladderline
