#include "core/effects/contrast.h"

#include <algorithm>
#include <cmath>

#include "core/effects/reading.h"

namespace ladderline {
namespace {

bool UsesDropped(const Model& model, std::span<const double> functional) {
  for (size_t j = 0; j < functional.size(); ++j) {
    if (functional[j] != 0 && std::isnan(model.terms[j].coefficient)) return true;
  }
  return false;
}

bool HasNaN(std::span<const double> functional) {
  return std::any_of(functional.begin(), functional.end(), [](double x) { return std::isnan(x); });
}

}  // namespace

Contrasts::Contrasts(const Predictor& predictor, ErrorKind errors)
    : predictor_(predictor),
      model_(predictor.model()),
      errors_(errors),
      input_of_(model_.columns.size()) {
  size_t inputs = 0;
  for (size_t c = 0; c < model_.columns.size(); ++c) {
    if (model_.columns[c].IsInput()) input_of_[c] = inputs++;
  }
  if (errors == ErrorKind::kClassical) {
    covariance_.emplace().scale = 1;
    unit_ = model_.facts.residual_sd;
  } else if (errors == model_.errors) {
    covariance_ = model_.basis.robust;
  }
}

RawPlace HeldPlace(const ModelColumn& column) {
  if (column.kind != ColumnKind::kCategory) return {.number = column.mean};
  return {.level = column.UsualLevel()};
}

PredictionRow Contrasts::RowAt(std::span<const Setting> settings) const {
  PredictionRow row;
  row.values.resize(predictor_.input_count());
  row.usable = true;
  for (int c = 0; c < static_cast<int>(model_.columns.size()); ++c) {
    const ModelColumn& column = model_.columns[static_cast<size_t>(c)];
    if (!column.IsInput()) continue;
    RawPlace place = HeldPlace(column);
    for (const Setting& setting : settings) {
      if (setting.column == c) place = setting.place;
    }
    PredictionRow::Value& value = row.values[input_of_[static_cast<size_t>(c)]];
    value.standing = InputStanding::kUsable;
    value.level = place.level;
    if (column.kind == ColumnKind::kCategory) continue;
    value.number = column.transform.Forward(place.number);
    if (std::isnan(value.number)) {
      value.standing = InputStanding::kOutside;
      row.usable = false;
    }
  }
  return row;
}

double Contrasts::Error(std::span<const double> functional) const {
  if (!(model_.facts.residual_df > 0)) return kNaN;
  if (covariance_) {
    std::vector<double> coordinates(static_cast<size_t>(model_.basis.fit.rank()));
    Coordinates(model_.basis.fit, functional, coordinates);
    return unit_ * StandardError(*covariance_, coordinates);
  }
  double error = 0;
  int used = 0;
  for (size_t j = 0; j < functional.size(); ++j) {
    if (functional[j] == 0) continue;
    // Powers of a polynomial are not the columns that the functional speaks of.
    if (HasPower(model_.terms[j], model_.columns)) return kNaN;
    error = std::abs(functional[j]) * model_.terms[j].standard_error[static_cast<size_t>(errors_)];
    ++used;
  }
  return used > 1 ? kNaN : error;
}

std::vector<double> Contrasts::Difference(const PredictionRow& from,
                                          const PredictionRow& to) const {
  const std::vector<double> first = predictor_.DesignRow(from);
  std::vector<double> difference = predictor_.DesignRow(to);
  for (size_t j = 0; j < difference.size(); ++j) {
    const std::vector<Factor>& factors = model_.terms[j].factors;
    const bool moves = std::any_of(factors.begin(), factors.end(), [&](const Factor& factor) {
      const size_t input = input_of_[static_cast<size_t>(factor.column)];
      const PredictionRow::Value &a = from.values[input], &b = to.values[input];
      const bool both_outside = std::isnan(a.number) && std::isnan(b.number);
      return a.level != b.level || (a.number != b.number && !both_outside);
    });
    difference[j] = moves ? difference[j] - first[j] : 0;
  }
  return difference;
}

std::vector<double> Contrasts::StepOf(int column, std::span<const Setting> others) const {
  PredictionRow first = RowAt(others), second = first;
  first.values[input_of_[static_cast<size_t>(column)]].number = 0;
  second.values[input_of_[static_cast<size_t>(column)]].number = 1;
  return Difference(first, second);
}

Change Contrasts::OnScalePerStep(int column, std::span<const Setting> others) const {
  return Along(StepOf(column, others));
}

Change Contrasts::Along(std::span<const double> functional) const {
  if (HasNaN(functional) || UsesDropped(model_, functional)) return {};
  return {Estimate(model_.basis.fit, functional), Error(functional)};
}

Change Contrasts::OnScale(std::span<const Setting> from, std::span<const Setting> to) const {
  return Along(Difference(RowAt(from), RowAt(to)));
}

Change Contrasts::InUnits(std::span<const Setting> from, std::span<const Setting> to) const {
  const Transform& transform = model_.response().transform;
  if (IsStraight(transform)) {
    const double slope = transform.Slope(model_.response().median);
    const Change change = OnScale(from, to);
    return {change.estimate / slope, change.error / std::abs(slope)};
  }
  const PredictionRow first = RowAt(from), second = RowAt(to);
  if (!first.usable || !second.usable) return {};
  if (UsesDropped(model_, Difference(first, second))) return {};
  const std::vector<double> x1 = predictor_.DesignRow(first), x2 = predictor_.DesignRow(second);
  const double y1 = predictor_.FittedTypical(first), y2 = predictor_.FittedTypical(second);
  Change change{.estimate = y2 - y1};
  const bool held = y1 != transform.Back(predictor_.FittedScale(first)) ||
                    y2 != transform.Back(predictor_.FittedScale(second));
  if (held) return change;
  const double g1 = 1 / transform.Slope(y1), g2 = 1 / transform.Slope(y2);
  std::vector<double> gradient(x1.size());
  for (size_t j = 0; j < gradient.size(); ++j) gradient[j] = g2 * x2[j] - g1 * x1[j];
  change.error = Error(gradient);
  return change;
}

bool Contrasts::RestsOnDropped(std::span<const Setting> from, std::span<const Setting> to) const {
  return UsesDropped(model_, Difference(RowAt(from), RowAt(to)));
}

bool Contrasts::StepRestsOnDropped(int column, std::span<const Setting> others) const {
  return UsesDropped(model_, StepOf(column, others));
}

}  // namespace ladderline
