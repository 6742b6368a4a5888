#include "core/transform/spec_words.h"

#include <cmath>
#include <vector>

#include "core/support/prose.h"
#include "core/support/text.h"

namespace ladderline {

std::string SpecWords(const Transform& transform) {
  // A base left out is e, which has to stay itself to be left out again.
  constexpr double kE = 2.718281828459045;
  std::vector<double> rounded;
  for (const double argument : transform.arguments())
    rounded.push_back(argument == kE ? argument
                                     : ParseNumber(Rounded(argument, 6)).value_or(argument));
  return Transform::TryMake(transform.kind(), rounded).value_or(transform).spec();
}

}  // namespace ladderline
