#include "core/model/predict.h"

#include <algorithm>
#include <array>
#include <cassert>
#include <cmath>
#include <optional>
#include <utility>

#include "core/model/column_summary.h"
#include "core/model/design.h"
#include "core/model/model_errors.h"
#include "core/regression/residual_pass.h"
#include "core/support/distributions.h"
#include "core/support/text.h"
#include "core/transform/calendar.h"
#include "core/transform/spec_words.h"

namespace ladderline {
namespace {

// Terms that add up to a hundred times the largest response seen cost a plain sum two digits.
constexpr double kMostCancellation = 100;

// A fitted row's own leverage comes out a few units in the last place above the stored largest.
constexpr double kLeverageSlack = 1 + 1e-9;

int LevelOf(const std::vector<CategoryLevel>& levels, std::string_view text) {
  const auto found = std::lower_bound(
      levels.begin(), levels.end(), text,
      [](const CategoryLevel& level, std::string_view t) { return level.text < t; });
  return found != levels.end() && found->text == text ? static_cast<int>(found - levels.begin())
                                                      : -1;
}

std::string LevelMeant(const ModelColumn& column, std::string_view text) {
  const CategoryLevel* alike = LevelAlike(column, text);
  if (alike != nullptr) return " (there is '" + Excerpt(alike->text, 60) + "')";
  if (column.merged < 0) return "";
  return " (levels of few rows stand under '" +
         Excerpt(column.levels[static_cast<size_t>(column.merged)].text, 60) + "')";
}

}  // namespace

std::string RawValueText(const ModelColumn& column, double value) {
  if (column.IsDate()) {
    if (const std::optional<std::string> date = DateOfDays(std::nearbyint(value))) return *date;
  }
  return NumberText(value);
}

Predictor::Predictor(Model model) : model_(std::move(model)) {
  assert(!model_.refused());
  input_of_.resize(model_.columns.size());
  std::vector<int> category_of(model_.columns.size(), -1);
  polynomial_of_.assign(model_.columns.size(), -1);
  for (size_t c = 0; c < model_.columns.size(); ++c) {
    const ModelColumn& column = model_.columns[c];
    if (!column.IsInput()) continue;
    input_of_[c] = inputs_.size();
    if (column.kind == ColumnKind::kCategory) {
      category_of[c] = static_cast<int>(categories_.size());
      categories_.push_back({inputs_.size(), std::vector<double>(column.levels.size())});
    }
    if (column.kind == ColumnKind::kPolynomial) {
      polynomial_of_[c] = static_cast<int>(polynomials_.size());
      polynomials_.push_back({inputs_.size(), BasisOf(column, model_.intercept), {}});
    }
    const InputKind kind = column.kind == ColumnKind::kCategory ? InputKind::kCategory
                           : column.IsDate()                    ? InputKind::kDate
                           : column.transform == Transform()    ? InputKind::kIdentity
                                                                : InputKind::kTransform;
    plans_.push_back({kind, column.transform});
    inputs_.push_back(c);
  }

  const CentredBasis& basis = model_.basis.fit;
  DoubleDouble constant;
  for (size_t k = 0; k < basis.kept.size(); ++k) {
    const auto j = static_cast<size_t>(basis.kept[k]);
    const std::vector<Factor>& factors = model_.terms[j].factors;
    const DoubleDouble beta = basis.coefficient[k];
    const double slope = beta.value(), centre = basis.centre[k];
    if (factors.empty()) {
      constant += beta;
    } else if (factors.size() > 1) {
      products_.push_back({j, centre, slope});
    } else if (const auto c = static_cast<size_t>(factors[0].column); polynomial_of_[c] >= 0) {
      polynomials_[static_cast<size_t>(polynomial_of_[c])].powers.push_back(
          {input_of_[c], factors[0].power, centre, slope});
    } else if (factors[0].level < 0) {
      numbers_.push_back({input_of_[c], factors[0].power, centre, slope});
    } else {
      categories_[static_cast<size_t>(category_of[c])]
          .offsets[static_cast<size_t>(factors[0].level)] = slope;
      constant -= beta * centre;
    }
  }
  constant_ = constant.value();
  extended_ = NeedsExtendedSum();
}

bool Predictor::NeedsExtendedSum() const {
  const ModelColumn& y = model_.response();
  double terms = std::abs(constant_);
  for (const NumberPart& part : numbers_) {
    const ModelColumn& column = input(part.input);
    const auto reach = [&](double raw) {
      return std::abs(part.slope * (column.transform.Forward(raw) - part.centre));
    };
    terms += std::max(reach(column.observed_low), reach(column.observed_high));
  }
  for (const PolynomialPart& part : polynomials_) {  // |p| ≤ 1 over the range seen
    for (const NumberPart& power : part.powers)
      terms += std::abs(power.slope) * (1 + std::abs(power.centre));
  }
  for (const CategoryPart& part : categories_) {
    double most = 0;
    for (const double offset : part.offsets) most = std::max(most, std::abs(offset));
    terms += most;
  }
  const double seen = std::max(std::abs(y.transform.Forward(y.observed_low)),
                               std::abs(y.transform.Forward(y.observed_high)));
  return !(terms <= kMostCancellation * seen);
}

void Predictor::Resolve(std::span<const Input> inputs, PredictionRow& row) const {
  assert(inputs.size() == inputs_.size());
  row.values.resize(inputs_.size());
  bool usable = true;
  for (size_t i = 0; i < inputs.size(); ++i) {
    const InputStanding standing = Resolve(i, inputs[i], row.values[i]);
    row.values[i].standing = standing;
    usable = usable && standing == InputStanding::kUsable;
  }
  row.usable = usable;
}

InputStanding Predictor::Resolve(size_t i, const Input& given, PredictionRow::Value& value) const {
  if (given.kind == Input::Kind::kMissing) return InputStanding::kMissing;
  switch (plans_[i].kind) {
    case InputKind::kIdentity:
      value.number = given.number;
      break;
    case InputKind::kTransform:
      value.number = plans_[i].transform.Forward(given.number);
      if (std::isnan(value.number)) return InputStanding::kOutside;
      break;
    case InputKind::kDate: {
      const std::optional<int> days = DaysOfDate(given.text);
      value.number = days.value_or(0);
      if (!days) return InputStanding::kOutside;
      break;
    }
    case InputKind::kCategory:
      value.level = LevelOf(input(i).levels, given.text);
      if (value.level < 0) return InputStanding::kNeverSeen;
      break;
  }
  return InputStanding::kUsable;
}

double Predictor::TermValue(const ModelTerm& term, const PredictionRow& row) const {
  double product = 1;
  for (const Factor& factor : term.factors) {
    const PredictionRow::Value& value = row.values[input_of_[static_cast<size_t>(factor.column)]];
    const int polynomial = polynomial_of_[static_cast<size_t>(factor.column)];
    if (polynomial >= 0) {
      product *=
          polynomials_[static_cast<size_t>(polynomial)].basis.Value(value.number, factor.power);
    } else if (factor.level < 0) {
      product *= value.number;
    } else if (factor.level != value.level) {
      return 0;
    }
  }
  return product;
}

std::vector<double> Predictor::DesignRow(const PredictionRow& row) const {
  std::vector<double> design;
  design.reserve(model_.terms.size());
  for (const ModelTerm& term : model_.terms) design.push_back(TermValue(term, row));
  return design;
}

std::vector<double> Predictor::CoordinatesOf(const PredictionRow& row) const {
  std::vector<double> coordinates(model_.basis.fit.kept.size());
  Coordinates(model_.basis.fit, DesignRow(row), coordinates);
  return coordinates;
}

double Predictor::FittedScale(const PredictionRow& row) const {
  if (!row.usable) return kNaN;
  if (extended_) return Estimate(model_.basis.fit, DesignRow(row));
  double fit = constant_;
  for (const CategoryPart& part : categories_)
    fit += part.offsets[static_cast<size_t>(row.values[part.input].level)];
  for (const NumberPart& part : numbers_)
    fit += part.slope * (row.values[part.input].number - part.centre);
  for (const PolynomialPart& part : polynomials_) {
    std::array<double, kHighestDegree> values;
    part.basis.Values(row.values[part.input].number, values.data());
    for (const NumberPart& power : part.powers)
      fit += power.slope * (values[static_cast<size_t>(power.power - 1)] - power.centre);
  }
  for (const ProductPart& part : products_)
    fit += part.slope * (TermValue(model_.terms[part.term], row) - part.centre);
  return fit;
}

double Predictor::FittedTypical(const PredictionRow& row) const {
  const double fit = FittedScale(row);
  return model_.response().BackHeld(fit, fit);
}

double Predictor::FittedMean(const PredictionRow& row) const {
  const double fit = FittedScale(row);
  return MeanAt(fit, fit);
}

double Predictor::MeanAt(double z, double fit) const {
  const ModelColumn& y = model_.response();
  // The points of a smearing lie on one side of zero, which may be the wrong one.
  if (y.transform.IsReciprocal() && std::isnan(y.BackHeld(z, fit))) return kNaN;
  return SmearedMean(model_.smearing, y.transform, z);
}

double Predictor::Leverage(const PredictionRow& row, double weight) const {
  if (!row.usable) return kNaN;
  double square = 0;
  for (const double a : CoordinatesOf(row)) square += a * a;
  return weight * square;
}

double Predictor::ScaleError(const PredictionRow& row) const {
  if (!row.usable) return kNaN;
  if (model_.basis.robust) return StandardError(*model_.basis.robust, CoordinatesOf(row));
  return model_.facts.residual_sd * std::sqrt(Leverage(row));
}

// The scatter of a case is judged from all residuals, whatever few clusters tell of the fit.
double Predictor::Critical(double level, bool of_case) const {
  KnownCritical& known = known_[of_case ? 1 : 0];
  if (level != known.level) {
    const double df = of_case ? model_.facts.residual_df : ErrorDf(model_, model_.errors);
    known = {level, StudentTCritical(level, df)};
  }
  return known.critical;
}

Interval Predictor::ScaleLimits(const PredictionRow& row, double level, bool of_case) const {
  double error = ScaleError(row);
  if (of_case) {
    // Squares of tiny or huge errors would leave the range of a double.
    const double s = model_.facts.residual_sd, ratio = error / s;
    if (s != 0) error = s * std::sqrt(1 + ratio * ratio);
  }
  const double fit = FittedScale(row), reach = Critical(level, of_case) * error;
  return {fit - reach, fit + reach};
}

template <class Back>
Interval Predictor::CarryBack(const Interval& limits, Back&& back) const {
  const Interval carried = {back(limits.low), back(limits.high)};
  return model_.response().transform.Decreasing() ? Interval{carried.high, carried.low} : carried;
}

Interval Predictor::TypicalLimits(const PredictionRow& row, double level) const {
  const double fit = FittedScale(row);
  return CarryBack(ScaleLimits(row, level, false),
                   [&](double z) { return model_.response().BackHeld(z, fit); });
}

Interval Predictor::CaseLimits(const PredictionRow& row, double level) const {
  const double fit = FittedScale(row);
  return CarryBack(ScaleLimits(row, level, true),
                   [&](double z) { return model_.response().BackHeld(z, fit); });
}

Interval Predictor::MeanLimits(const PredictionRow& row, double level) const {
  const double fit = FittedScale(row);
  return CarryBack(ScaleLimits(row, level, false), [&](double z) { return MeanAt(z, fit); });
}

double Predictor::Residual(const PredictionRow& row, double y) const {
  const Transform& transform = model_.response().transform;
  return transform.Returns(y) ? transform.Forward(y) - FittedScale(row) : kNaN;
}

// Residuals in units of their sd, whose sum of squares is the degrees of freedom.
double Predictor::StudentizedResidual(const PredictionRow& row, double y, double weight) const {
  const double df = model_.facts.residual_df;
  return ladderline::StudentizedResidual(
      std::sqrt(weight) * (Residual(row, y) / model_.facts.residual_sd), Leverage(row, weight), df,
      static_cast<std::int64_t>(df));
}

double Predictor::CooksDistance(const PredictionRow& row, double y, double weight) const {
  const double df = model_.facts.residual_df;
  return ladderline::CooksDistance(
      std::sqrt(weight) * (Residual(row, y) / model_.facts.residual_sd), Leverage(row, weight), df,
      static_cast<std::int64_t>(df), model_.basis.fit.rank());
}

std::string Predictor::LimitNote(const PredictionRow& row, double level) const {
  const ModelColumn& y = model_.response();
  const double fit = FittedScale(row);
  if (std::isnan(y.BackHeld(fit, fit))) return "";  // Note says so
  for (const bool of_case : {false, true}) {
    const Interval limits = ScaleLimits(row, level, of_case);
    for (const double z : {limits.low, limits.high}) {
      if (std::isfinite(z) && std::isnan(y.BackHeld(z, fit)))
        return "a limit has no way back through " + SpecWords(y.transform);
    }
  }
  return "";
}

std::string Predictor::Note(std::span<const Input> inputs, const PredictionRow& row) const {
  std::string note;
  const auto add = [&](const std::string& reason) { note += (note.empty() ? "" : "; ") + reason; };
  for (size_t i = 0; i < inputs_.size(); ++i) {
    const ModelColumn& column = input(i);
    std::string given;
    if (inputs[i].kind == Input::Kind::kNumber) given = NumberText(inputs[i].number);
    if (inputs[i].kind == Input::Kind::kText)
      given.append("'").append(Excerpt(inputs[i].text, 60)).append("'");
    switch (row.values[i].standing) {
      case InputStanding::kMissing:
        add(column.name + " is missing");
        break;
      case InputStanding::kNeverSeen:
        add(column.name + " " + given + " was never seen" + LevelMeant(column, inputs[i].text));
        break;
      case InputStanding::kOutside:
        add(column.name + " " + given +
            (column.IsDate() ? " is no date as YYYY-MM-DD"
                             : " lies outside the domain of " + SpecWords(column.transform)));
        break;
      case InputStanding::kUsable: {
        if (column.kind == ColumnKind::kCategory) break;
        const double raw = column.IsDate() ? row.values[i].number : inputs[i].number;
        if (raw < column.observed_low || raw > column.observed_high) {
          add(column.name + " " + RawValueText(column, raw) + " lies outside " +
              RawValueText(column, column.observed_low) + " to " +
              RawValueText(column, column.observed_high));
        }
        break;
      }
    }
  }
  if (!row.usable) return note;
  const Transform& transform = model_.response().transform;
  const double fit = FittedScale(row);
  const double typical = model_.response().BackHeld(fit, fit);
  if (std::isnan(typical)) {
    add("the fitted value has no way back through " + SpecWords(transform));
  } else if (typical != transform.Back(fit)) {
    add("the fitted value lies outside the range of " + SpecWords(transform) +
        " and is held at its edge");
  }
  if (note.empty() && Leverage(row) > kLeverageSlack * model_.basis.largest_leverage)
    add("unusual combination: leverage above any fitted row");
  return note;
}

}  // namespace ladderline
