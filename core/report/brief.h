// One page about a model for people who have to act on it.
#ifndef LADDERLINE_CORE_REPORT_BRIEF_H_
#define LADDERLINE_CORE_REPORT_BRIEF_H_

#include <span>
#include <string>
#include <vector>

#include "core/model/predict.h"

namespace ladderline {

// A piece of the page, its text as it is to be shown.
struct BriefBlock {
  enum class Kind { kTitle, kHeading, kParagraph, kBullet };
  Kind kind;
  std::string text;
};

// In the order in which it is read: what was fitted to which cases, what was left out and why, what
// goes with the response (effects as sentences, with the model's own errors and level), how close
// the fit comes in original units, what the checks found and what to try, cautions.
std::vector<BriefBlock> BriefOf(const Predictor& predictor);

// The same of a refused model: that there is none, and why.
std::vector<BriefBlock> BriefOfRefused(const Model& model);

// As a text of its own, the title at level 1. Text is escaped, so that names show as they are.
std::string BriefMarkdown(std::span<const BriefBlock> blocks);

// As a part of a page: the title at level 2, the headings at level 3.
std::string BriefHtml(std::span<const BriefBlock> blocks);

}  // namespace ladderline

#endif  // LADDERLINE_CORE_REPORT_BRIEF_H_
