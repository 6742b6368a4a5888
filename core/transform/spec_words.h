// A re-expression's spec as sentences have it.
#ifndef LADDERLINE_CORE_TRANSFORM_SPEC_WORDS_H_
#define LADDERLINE_CORE_TRANSFORM_SPEC_WORDS_H_

#include <string>

#include "core/transform/transform.h"

namespace ladderline {

// The spec with its numbers rounded to 6 significant digits: `log_offset 20.0992`. Where that would
// be no transform, as of a range whose ends round to one number, the spec as it is.
std::string SpecWords(const Transform& transform);

}  // namespace ladderline

#endif  // LADDERLINE_CORE_TRANSFORM_SPEC_WORDS_H_
