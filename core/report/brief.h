// One page about a model for people who have to act on it.
#ifndef LADDERLINE_CORE_REPORT_BRIEF_H_
#define LADDERLINE_CORE_REPORT_BRIEF_H_

#include <string>

#include "core/model/predict.h"

namespace ladderline {

// Markdown, in the order in which it is read: what was fitted to which cases, what was left out and
// why, what goes with the response (effects as sentences, with the model's own errors and level),
// how close the fit comes in original units, what the checks found and what to try, cautions.
// Names and levels are escaped, so that they show as they are.
std::string BriefOf(const Predictor& predictor);

// The same of a refused model: that there is none, and why.
std::string BriefOfRefused(const Model& model);

}  // namespace ladderline

#endif  // LADDERLINE_CORE_REPORT_BRIEF_H_
