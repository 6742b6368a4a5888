#include "core/model/model_errors.h"

#include <algorithm>
#include <cmath>

namespace ladderline {
namespace {

bool Holds(const Model& model, ErrorKind kind) {
  const auto i = static_cast<std::size_t>(kind);
  return std::any_of(model.terms.begin(), model.terms.end(),
                     [&](const ModelTerm& term) { return !std::isnan(term.standard_error[i]); });
}

}  // namespace

double ErrorDf(const Model& model, ErrorKind kind) {
  if (kind != ErrorKind::kCluster) return model.facts.residual_df;
  return static_cast<double>(model.clusters - 1);
}

bool OffersErrors(const Model& model, ErrorKind kind) {
  if (kind == ErrorKind::kCluster) return model.clusters > 0;
  return kind == model.errors || Holds(model, kind) || !Holds(model, ErrorKind::kClassical);
}

std::string ErrorNote(const Model& model, ErrorKind kind) {
  if (kind != ErrorKind::kCluster) return "";
  if (model.clusters < 2) return "all rows are of one cluster: no cluster errors";
  if (model.clusters >= kFewClusters) return "";
  return "only " + std::to_string(model.clusters) + " clusters: limits may be too narrow";
}

}  // namespace ladderline
