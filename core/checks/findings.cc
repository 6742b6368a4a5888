#include "core/checks/findings.h"

#include "core/checks/design_findings.h"
#include "core/checks/finding.h"
#include "core/checks/residual_findings.h"

namespace ladderline {

std::vector<Check> Findings(const Model& model, const CheckFigures& figures) {
  std::vector<Check> checks = ResidualFindings(model, figures);
  for (Check& check : DesignFindings(model, figures)) checks.push_back(std::move(check));
  return checks;
}

std::vector<Check> ShownChecks(const Model& model) {
  if (!model.checks.empty()) return model.checks;
  std::vector<Check> checks;
  for (const std::string_view name : kCheckNames) {
    SetNotComputed(model.checks_wanted ? "the model holds no checks" : "option checks is 'none'",
                   checks.emplace_back(CheckNamed(name)));
  }
  return checks;
}

}  // namespace ladderline
