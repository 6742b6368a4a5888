// Questions about single rows put to a fitted model: fitted values, limits, residuals, leverage.
//
// A Predictor resolves once per model what a row costs nothing to be asked afterwards. Rows are
// given as raw inputs, one per input column in the order of the model's columns; Resolve turns them
// into a PredictionRow, about which all questions are asked. A row with an input that is missing,
// outside its transform's domain, or a level never seen has no answers: every number is NaN, and
// Note says why.
//
//   scale     FittedScale, ScaleLimits and Residual are on the transformed scale of the response,
//             the rest in original units
//   limits    fit ± t · standard error, the model's own kind of errors and their degrees of freedom
//             (model_errors.h); for a case √(variance + residual_sd²). Carried back to original
//             units, low ≤ high also for decreasing transforms, held at the domain's edge as
//             ModelColumn::BackHeld says; NaN for a limit without a way back, and for a saturated
//             fit
//   weight    of the row, above 0: leverage, studentized residual and Cook's distance are those of
//             a row scaled by √weight
//   cost      FittedTypical O(terms), about 10 ns per input; what needs leverage O(terms²)
#ifndef LADDERLINE_CORE_MODEL_PREDICT_H_
#define LADDERLINE_CORE_MODEL_PREDICT_H_

#include <span>
#include <string>
#include <string_view>
#include <vector>

#include "core/model/model.h"
#include "core/model/polynomial_basis.h"

namespace ladderline {

// A raw value as it comes from outside. Number columns take numbers; categories and dates
// (date_days) take text.
struct Input {
  enum class Kind : unsigned char { kMissing, kNumber, kText };
  Kind kind = Kind::kMissing;
  double number = 0;
  std::string_view text = {};
};

enum class InputStanding : unsigned char { kUsable, kMissing, kOutside, kNeverSeen };

// Inputs as the model's terms take them; kept from row to row to save allocations.
struct PredictionRow {
  struct Value {
    double number = 0;  // transformed; unused for a category
    int level = -1;     // of a category
    InputStanding standing = InputStanding::kMissing;
  };
  std::vector<Value> values;
  bool usable = false;
};

struct Interval {
  double low = kNaN, high = kNaN;
};

class Predictor {
 public:
  // `model` is fitted, not refused.
  explicit Predictor(Model model);

  const Model& model() const { return model_; }
  size_t input_count() const { return inputs_.size(); }
  const ModelColumn& input(size_t i) const { return model_.columns[inputs_[i]]; }
  // Whether input i is read as text.
  bool TakesText(size_t i) const { return plans_[i].kind >= InputKind::kDate; }

  // `inputs` has input_count() elements.
  void Resolve(std::span<const Input> inputs, PredictionRow& row) const;

  // The row as the basis takes it: the product of its factors for every term (1 for the intercept).
  // `row` is usable, or what is outside its domain is NaN there.
  std::vector<double> DesignRow(const PredictionRow& row) const;

  double FittedScale(const PredictionRow& row) const;
  double FittedTypical(const PredictionRow& row) const;
  double FittedMean(const PredictionRow& row) const;

  Interval TypicalLimits(const PredictionRow& row, double level) const;
  Interval MeanLimits(const PredictionRow& row, double level) const;
  Interval CaseLimits(const PredictionRow& row, double level) const;

  // `y` is a raw response; one that the response's transform does not take gives NaN.
  double Residual(const PredictionRow& row, double y) const;
  double Leverage(const PredictionRow& row, double weight = 1) const;
  double StudentizedResidual(const PredictionRow& row, double y, double weight = 1) const;
  double CooksDistance(const PredictionRow& row, double y, double weight = 1) const;

  // Empty when the row is usable and inside what was fitted; else the reasons, joined by `; `.
  // `row` is what `inputs` resolved to.
  std::string Note(std::span<const Input> inputs, const PredictionRow& row) const;
  // Whether a limit at `level` is NaN in original units though the row has one on the transformed
  // scale, in words; else empty.
  std::string LimitNote(const PredictionRow& row, double level) const;

 private:
  // fit = constant_ + Σ category offsets + Σ slope (x − centre) + Σ slope (p_power(x) − centre) +
  // Σ slope (product − centre)
  struct NumberPart {
    size_t input;
    int power;
    double centre, slope;
  };
  struct CategoryPart {
    size_t input;
    std::vector<double> offsets;  // by level
  };
  struct PolynomialPart {
    size_t input;
    PolynomialBasis basis;
    std::vector<NumberPart> powers;  // slope (p_power − centre)
  };
  struct ProductPart {
    size_t term;
    double centre, slope;
  };

  InputStanding Resolve(size_t i, const Input& given, PredictionRow::Value& value) const;
  double TermValue(const ModelTerm& term, const PredictionRow& row) const;
  std::vector<double> CoordinatesOf(const PredictionRow& row) const;
  // The mean of cases at z on the model's scale, near the fitted value `fit`.
  double MeanAt(double z, double fit) const;
  double ScaleError(const PredictionRow& row) const;
  Interval ScaleLimits(const PredictionRow& row, double level, bool of_case) const;
  template <class Back>
  Interval CarryBack(const Interval& limits, Back&& back) const;
  double Critical(double level, bool of_case) const;
  bool NeedsExtendedSum() const;

  // What Resolve has to know of an input, close together.
  enum class InputKind : unsigned char { kIdentity, kTransform, kDate, kCategory };
  struct InputPlan {
    InputKind kind;
    Transform transform;
  };

  Model model_;
  std::vector<size_t> inputs_;  // columns
  std::vector<InputPlan> plans_;
  std::vector<size_t> input_of_;    // by column
  std::vector<int> polynomial_of_;  // by column: index into polynomials_, or −1
  double constant_ = 0;
  std::vector<NumberPart> numbers_;
  std::vector<CategoryPart> categories_;
  std::vector<PolynomialPart> polynomials_;
  std::vector<ProductPart> products_;
  // Terms cancel so far that a plain sum would lose digits.
  bool extended_ = false;
  // The level asked for last, of the fit and of a case: the same for every row of a query.
  struct KnownCritical {
    double level = kNaN, critical = kNaN;
  };
  mutable KnownCritical known_[2];
};

// A raw value of a column for a reader: shortest decimal, a date for date_days.
std::string RawValueText(const ModelColumn& column, double value);

}  // namespace ladderline

#endif  // LADDERLINE_CORE_MODEL_PREDICT_H_
