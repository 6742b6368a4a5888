// What follows from the kind of errors that a result of a model speaks of.
#ifndef LADDERLINE_CORE_MODEL_MODEL_ERRORS_H_
#define LADDERLINE_CORE_MODEL_MODEL_ERRORS_H_

#include <string>

#include "core/model/model.h"

namespace ladderline {

// With fewer clusters, limits tend to be too narrow. Common practice names 20 to 50; Cameron &
// Miller, J. Human Resources 50 (2015), section VI.
inline constexpr std::int64_t kFewClusters = 40;

// The degrees of freedom of t: clusters − 1 for cluster errors, residual_df for all others.
double ErrorDf(const Model& model, ErrorKind kind);

// Whether a model can be asked for this kind: cluster errors need clusters, the robust ones must
// be in the model. A saturated model has no errors of any kind, and can be asked for all but those
// of clusters.
bool OffersErrors(const Model& model, ErrorKind kind);

// What a reader of errors of this kind must know; empty: nothing.
std::string ErrorNote(const Model& model, ErrorKind kind);

}  // namespace ladderline

#endif  // LADDERLINE_CORE_MODEL_MODEL_ERRORS_H_
