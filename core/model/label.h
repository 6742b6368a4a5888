// The label reader: constant text that names a value of a model and says what it is.
//
//   label     = name [ "(" unit ")" ] [ "|" word { argument } ]
//   name, argument = plain text without `|`, `(`, `)` or `"` (an argument also without blanks),
//               or text in double quotes, a double quote in it doubled
//   word      = a role, a transform's name, or `option`
//
// `cost (EUR) | log_offset 1`, `trade | category "Roof (flat)"`, `intercept | option`.
#ifndef LADDERLINE_CORE_MODEL_LABEL_H_
#define LADDERLINE_CORE_MODEL_LABEL_H_

#include <optional>
#include <string>
#include <string_view>

#include "core/support/result.h"
#include "core/transform/transform.h"

namespace ladderline {

struct Label {
  enum class Word {
    kNone,       // nothing after the name
    kNumber,     // a number as it stands
    kTransform,  // a transform spec
    kCategory,
    kWeight,
    kExposure,
    kCluster,
    kKey,
    kOrder,
    kPresent,
    kPolynomial,
    kProduct,
    kOption
  };
  std::string name;
  std::string unit;
  Word word = Word::kNone;
  Transform transform;  // kTransform
  // kTransform whose arguments are to be estimated from the rows: its kind; `transform` is then the
  // identity.
  std::optional<TransformKind> estimated;
  std::string reference;       // kCategory
  bool has_reference = false;  // kCategory
  int degree = 0;              // kPolynomial: 1..20
  std::string part_a, part_b;  // kProduct: names of other labels
};

// Reads a label. The error is a whole clause without the function's name, and names the label:
// `label 'age | sqrt' has an unknown word 'sqrt'; known are …`.
Result<Label> ReadLabel(std::string_view text);

// A name as a label writes it: quoted where it must be.
std::string QuotedName(std::string_view name);

}  // namespace ladderline

#endif  // LADDERLINE_CORE_MODEL_LABEL_H_
