#include "core/effects/effects.h"

#include <algorithm>
#include <cmath>
#include <set>

#include "core/effects/reading.h"
#include "core/elementary/elementary.h"
#include "core/model/model_errors.h"
#include "core/support/distributions.h"

namespace ladderline {
namespace {

// A step of 1% on the logarithm: up for the distance above an edge, down for that below one, so
// that x rises either way.
constexpr double kStep = 0.01;

class Effects {
 public:
  Effects(const Predictor& predictor, double level, ErrorKind errors)
      : contrasts_(predictor, errors),
        model_(predictor.model()),
        critical_(StudentTCritical(level, ErrorDf(model_, errors))),
        response_log_(LogFormOf(model_.response().transform)),
        response_straight_(IsStraight(model_.response().transform)) {}

  std::vector<Effect> All() {
    const int columns = static_cast<int>(model_.columns.size());
    for (int c = 0; c < columns; ++c) {
      if (IsPredictor(c)) AddColumn(c, std::nullopt);
    }
    for (int c = 0; c < columns; ++c) {
      if (!IsPredictor(c)) continue;
      for (const int partner : PartnersOf(model_, c)) {
        for (const RawPlace& place : OtherPlaces(partner)) AddColumn(c, Setting{partner, place});
      }
    }
    return std::move(effects_);
  }

 private:
  const ModelColumn& Column(int c) const { return model_.columns[static_cast<size_t>(c)]; }
  bool IsPredictor(int c) const { return Column(c).role == ColumnRole::kPredictor; }

  // Between which values a number is read.
  struct Reach {
    EffectStep step;
    double low, high;
  };
  static Reach ReachOf(const ModelColumn& column) {
    if (column.upper_quartile > column.lower_quartile)
      return {EffectStep::kQuartiles, column.lower_quartile, column.upper_quartile};
    return {EffectStep::kRange, column.observed_low, column.observed_high};
  }

  std::vector<RawPlace> OtherPlaces(int c) const {
    const ModelColumn& column = Column(c);
    std::vector<RawPlace> places;
    if (column.kind != ColumnKind::kCategory) {
      const Reach reach = ReachOf(column);
      places.push_back({.number = reach.low});
      if (reach.high > reach.low) places.push_back({.number = reach.high});
      return places;
    }
    const int held = HeldPlace(column).level;
    for (int level = 0; level < static_cast<int>(column.levels.size()); ++level) {
      if (level != held) places.push_back({.level = level});
    }
    return places;
  }

  // Whether every term the column is in has it at power 1.
  bool IsLinearInTerms(int c) const {
    for (const ModelTerm& term : model_.terms) {
      for (const Factor& factor : term.factors) {
        if (factor.column == c && factor.power != 1) return false;
      }
    }
    return true;
  }

  void AddColumn(int c, const std::optional<Setting>& partner) {
    const ModelColumn& column = Column(c);
    Effect blank{.column = c, .partner = partner};
    if (column.kind == ColumnKind::kCategory) return AddLevels(blank);
    AddSteps(blank);
    blank.kind = EffectKind::kQuartiles;
    AddAcross(blank);
    if (!IsLinearInTerms(c) && column.lower_quartile < column.median &&
        column.median < column.upper_quartile) {
      AddBetween(blank, EffectStep::kToMedian, column.lower_quartile, column.median);
      AddBetween(blank, EffectStep::kFromMedian, column.median, column.upper_quartile);
    }
  }

  void AddSteps(Effect effect) {
    const ModelColumn& column = Column(effect.column);
    const std::optional<LogForm> log = LogFormOf(column.transform);
    const bool one_step = IsLinearInTerms(effect.column) && (log || IsStraight(column.transform));
    effect.kind = EffectKind::kPercent;
    if (!one_step) {
      if (response_log_) AddAcross(effect);
      return;
    }
    if (!response_log_ && !(log && response_straight_)) return;
    effect.from.number = column.median;
    // The same step as the rule of thumb has it, in steps of z.
    double share = 1;
    if (log) {
      effect.step = EffectStep::kOnePercent;
      effect.to.number = log->At((1 + log->sign * kStep) * log->Distance(column.median));
      share = kStep / std::abs(Log1p(log->sign * kStep));
    } else {
      effect.step = EffectStep::kOneUnit;
      effect.to.number = column.median + 1;
    }
    const Change change = StepChange(effect, log);
    Effect rule = effect;
    rule.kind = EffectKind::kRuleOfThumb;
    if (response_log_) {
      SetPercent(change, effect);
      rule.unit = EffectUnit::kPercent;
      Set({100 * response_log_->factor * share * change.estimate,
           100 * std::abs(response_log_->factor) * share * change.error},
          rule);
    } else {
      const double slope = model_.response().transform.Slope(model_.response().median);
      Set({change.estimate / slope, change.error / std::abs(slope)}, effect);
      Set({share * effect.effect, share * change.error / std::abs(slope)}, rule);
    }
    rule.exact = effect.effect;
    effects_.push_back(effect);
    effects_.push_back(rule);
  }

  // The change of a step on the scale. Where it starts makes no difference, but to its rounding:
  // it is taken as the step itself times what the fit changes by for a step of z of 1.
  Change StepChange(Effect& effect, const std::optional<LogForm>& log) const {
    const Transform& transform = Column(effect.column).transform;
    const double step = log ? Log1p(log->sign * kStep) / log->factor
                            : transform.Slope(Column(effect.column).median);
    const Change change = contrasts_.OnScalePerStep(effect.column, Partner(effect));
    effect.left_out = contrasts_.StepRestsOnDropped(effect.column, Partner(effect));
    return {step * change.estimate, std::abs(step) * change.error};
  }

  void AddAcross(const Effect& effect) {
    const Reach reach = ReachOf(Column(effect.column));
    AddBetween(effect, reach.step, reach.low, reach.high);
  }

  void AddBetween(Effect effect, EffectStep step, double from, double to) {
    effect.step = step;
    effect.from.number = from;
    effect.to.number = to;
    Measure(effect);
  }

  void AddLevels(Effect effect) {
    const ModelColumn& column = Column(effect.column);
    effect.kind = EffectKind::kLevel;
    effect.from = HeldPlace(column);
    for (int level = 0; level < static_cast<int>(column.levels.size()); ++level) {
      if (level == effect.from.level) continue;
      effect.to.level = level;
      Measure(effect);
    }
  }

  static std::vector<Setting> Partner(const Effect& effect) {
    if (!effect.partner) return {};
    return {*effect.partner};
  }

  // The effect between two places.
  void Measure(Effect effect) {
    std::vector<Setting> from = Partner(effect), to = from;
    from.push_back({effect.column, effect.from});
    to.push_back({effect.column, effect.to});
    effect.left_out = contrasts_.RestsOnDropped(from, to);
    if (effect.step != EffectStep::kNone && effect.from.number == effect.to.number) {
      // A change of 0 ± 0 would read as one that was found.
    } else if (effect.kind != EffectKind::kQuartiles && response_log_) {
      SetPercent(contrasts_.OnScale(from, to), effect);
    } else {
      Set(contrasts_.InUnits(from, to), effect);
      // Limits by the delta method may tell another direction than those they approximate.
      const Change change = contrasts_.OnScale(from, to);
      if (std::isfinite(change.error)) effect.open = IsOpen(change);
    }
    effects_.push_back(effect);
  }

  bool IsOpen(const Change& change) const {
    return std::abs(change.estimate) < critical_ * change.error;
  }

  void Set(const Change& change, Effect& effect) const {
    effect.open = IsOpen(change);
    effect.effect = change.estimate;
    effect.low = change.estimate - critical_ * change.error;
    effect.high = change.estimate + critical_ * change.error;
  }

  void SetPercent(const Change& change, Effect& effect) const {
    effect.unit = EffectUnit::kPercent;
    Set({response_log_->factor * change.estimate, std::abs(response_log_->factor) * change.error},
        effect);
    for (double* figure : {&effect.effect, &effect.low, &effect.high})
      *figure = 100 * Expm1(*figure);
  }

  Contrasts contrasts_;
  const Model& model_;
  double critical_;
  std::optional<LogForm> response_log_;
  bool response_straight_;
  std::vector<Effect> effects_;
};

}  // namespace

std::vector<int> PartnersOf(const Model& model, int column) {
  std::set<int> partners;
  for (const ModelTerm& term : model.terms) {
    const auto has = [&](const Factor& factor) { return factor.column == column; };
    if (std::none_of(term.factors.begin(), term.factors.end(), has)) continue;
    for (const Factor& factor : term.factors) {
      if (factor.column != column) partners.insert(factor.column);
    }
  }
  return {partners.begin(), partners.end()};
}

std::string EffectColumnName(const Model& model, const Effect& effect) {
  std::string name = model.columns[static_cast<size_t>(effect.column)].name;
  if (effect.partner)
    name += " by " + model.columns[static_cast<size_t>(effect.partner->column)].name;
  return name;
}

std::vector<Effect> EffectsOf(const Predictor& predictor, double level, ErrorKind errors) {
  return Effects(predictor, level, errors).All();
}

}  // namespace ladderline
