// The change of a model's fitted value when one raw input moves and the others are held.
//
//   held       numbers at the mean of their raw values, categories at their reference (without one,
//              at the commonest level), unless said otherwise
//   scale      a change on the response's transformed scale is a linear functional of the
//              coefficients: its estimate and standard error are exact
//   units      a change in original units is that of the typical value, back(fit to) − back(fit
//              from); its standard error is by the delta method, with gradient back'(f₂) x₂ −
//              back'(f₁) x₁ and back' = 1/(dz/dy)
//   moving     terms without an input that moves cancel, whatever they are: only a change in
//              original units of a curved response rests on all inputs
//   NaN        an estimate that rests on a coefficient left out as collinear, on an input outside
//              its domain, or has no way back; an error of a saturated fit, of a typical value held
//              at its domain's edge, of a direction no row tells of, and one that needs the
//              covariance of several terms under a kind of errors other than the classical and the
//              model's own
//   source     Casella & Berger, Statistical Inference, 2nd ed., 5.5.4 (delta method)
#ifndef LADDERLINE_CORE_EFFECTS_CONTRAST_H_
#define LADDERLINE_CORE_EFFECTS_CONTRAST_H_

#include <optional>
#include <span>
#include <vector>

#include "core/model/predict.h"

namespace ladderline {

// A raw input: a number, or a level of a category.
struct RawPlace {
  double number = kNaN;
  int level = -1;
};

// An input column set to a value other than where it would be held.
struct Setting {
  int column = 0;
  RawPlace place = {};
};

struct Change {
  double estimate = kNaN, error = kNaN;
};

// Where an input column is held.
RawPlace HeldPlace(const ModelColumn& column);

class Contrasts {
 public:
  // `predictor` must outlive this.
  Contrasts(const Predictor& predictor, ErrorKind errors);

  const Model& model() const { return model_; }
  // A row with every input where it is held, or set.
  PredictionRow RowAt(std::span<const Setting> settings) const;

  // For a step of 1 in z of a number that all its terms have at power 1.
  Change OnScalePerStep(int column, std::span<const Setting> others) const;
  Change OnScale(std::span<const Setting> from, std::span<const Setting> to) const;
  Change InUnits(std::span<const Setting> from, std::span<const Setting> to) const;
  // Whether an estimate between the two, or of the step, rests on a coefficient that was left out.
  bool RestsOnDropped(std::span<const Setting> from, std::span<const Setting> to) const;
  bool StepRestsOnDropped(int column, std::span<const Setting> others) const;

 private:
  // The row that gives the difference of the fits at two rows, NaN where a term that moves has an
  // input outside its domain.
  std::vector<double> Difference(const PredictionRow& from, const PredictionRow& to) const;
  std::vector<double> StepOf(int column, std::span<const Setting> others) const;
  Change Along(std::span<const double> functional) const;
  // Of the functional that gives the terms these factors.
  double Error(std::span<const double> functional) const;

  const Predictor& predictor_;
  const Model& model_;
  ErrorKind errors_;
  std::vector<size_t> input_of_;  // by column
  // Of the errors in use, in units of unit_; none: only errors of single coefficients are known.
  std::optional<Covariance> covariance_;
  double unit_ = 1;
};

}  // namespace ladderline

#endif  // LADDERLINE_CORE_EFFECTS_CONTRAST_H_
