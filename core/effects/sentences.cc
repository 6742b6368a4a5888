#include "core/effects/sentences.h"

#include <algorithm>
#include <cmath>

#include "core/effects/reading.h"
#include "core/effects/wording.h"
#include "core/model/model_errors.h"
#include "core/support/prose.h"
#include "core/transform/spec_words.h"

namespace ladderline {
namespace {

// A raw value that is named, not measured: enough digits to recognise it.
std::string Named(const ModelColumn& column, double value) {
  return column.IsDate() ? RawValueText(column, value) : Rounded(value, 6);
}

std::string MeanText(const ModelColumn& column) {
  if (column.IsDate()) return RawValueText(column, column.mean);
  return Amount(Rounded(column.mean, 4), column.unit);
}

std::string WithUnit(const ModelColumn& column, double value) {
  return Amount(Named(column, value), column.unit);
}

// `dwellings + 1`, `cost + 20 EUR`, `101 − inspection score`: what a logarithm is taken of.
std::string DistancePhrase(const ModelColumn& column, const LogForm& log) {
  const std::string edge = Amount(Rounded(std::abs(log.edge), 6), column.unit);
  if (log.sign < 0) return (log.edge < 0 ? "−" : "") + edge + " − " + column.name;
  if (log.edge == 0) return column.name;
  return column.name + (log.edge < 0 ? " + " : " − ") + edge;
}

bool HasEdge(const LogForm& log) { return log.edge != 0 || log.sign < 0; }

bool IsOutside(const ModelColumn& column, const RawPlace& place) {
  return column.kind != ColumnKind::kCategory && std::isnan(column.transform.Forward(place.number));
}

class Sentence {
 public:
  Sentence(const Model& model, const Effect& effect, double level, ErrorKind errors)
      : model_(model),
        effect_(effect),
        level_(level),
        errors_(errors),
        column_(model.columns[static_cast<size_t>(effect.column)]),
        response_(model.response()),
        column_log_(LogFormOf(column_.transform)),
        response_log_(LogFormOf(response_.transform)),
        place_(RoundingPlace(effect.high - effect.low, effect.effect)) {}

  std::string Text() const {
    if (effect_.step == EffectStep::kNone) {
      for (const int level : {effect_.to.level, effect_.from.level}) {
        if (LevelRows(level) < kFewRows) return FewRows(level);
      }
    }
    if (effect_.partner && effect_.partner->place.level >= 0) {
      const Setting& partner = *effect_.partner;
      const ModelColumn& other = model_.columns[static_cast<size_t>(partner.column)];
      const CategoryLevel& at = other.levels[static_cast<size_t>(partner.place.level)];
      if (at.rows < kFewRows) return FewRows(other, at);
    }
    if (model_.rows.fitted < kFewRows) {
      return "Only " + Rows(model_.rows.fitted) + " " + (model_.rows.fitted == 1 ? "was" : "were") +
             " fitted: too few for a figure of " + column_.name + " that could be quoted.";
    }
    if (effect_.left_out) {
      return "No figure for " + column_.name +
             ": it repeats other columns and was left out of the fit; model_terms says which.";
    }
    if (effect_.step >= EffectStep::kQuartiles && effect_.from.number == effect_.to.number) {
      return "All values of " + column_.name + " are " + WithUnit(column_, effect_.from.number) +
             ", so there is no step between them to read.";
    }
    if (!std::isfinite(effect_.effect)) return "No figure for " + column_.name + ": " + Reason();
    std::string text = Where();
    const bool rule = effect_.kind == EffectKind::kRuleOfThumb;
    if (rule) text += text.empty() ? "As a rule of thumb, " : "as a rule of thumb, ";
    text += Moved() + " goes with " + (rule && !IsNothing() ? "about " : "") +
            Size(effect_.effect) + LimitsPhrase() + HeldPhrase() + RowsPhrase();
    return text + Additions() + ".";
  }

  // The pieces of a sentence about all levels of a category.
  bool HasFigure() const {
    return LevelRows(effect_.to.level) >= kFewRows && LevelRows(effect_.from.level) >= kFewRows &&
           std::isfinite(effect_.effect);
  }
  std::string Opening() const {
    return Where() + "against " + LevelText(effect_.from.level) + " in " + column_.name +
           HeldPhrase() + ", ";
  }
  std::string First() const {
    const std::string amount = AmountAtMedian(), size = Size(effect_.effect);
    return LevelText(effect_.to.level) + " goes with " +
           (amount.empty() ? size + " (" + LimitsWords()
                           : amount + AtMedianPhrase() + " (" + size + ", " + LimitsWords()) +
           ")";
  }
  std::string Further() const {
    const std::string amount = AmountAtMedian();
    const std::string size =
        IsNothing() ? "much the same" : Magnitude(effect_.effect) + " " + Direction(effect_.effect);
    const std::string limits = HasLimits() ? Limits() : "";
    if (!amount.empty()) {
      return LevelText(effect_.to.level) + " with " + amount + " (" + size +
             (limits.empty() ? "" : ", ") + limits + ")";
    }
    return LevelText(effect_.to.level) + " with " + size +
           (limits.empty() ? "" : " (" + limits + ")");
  }
  bool IsOpen() const { return HasLimits() && effect_.open; }
  std::string LevelText(int level) const { return column_.levels[static_cast<size_t>(level)].text; }

 private:
  std::int64_t LevelRows(int level) const {
    return column_.levels[static_cast<size_t>(level)].rows;
  }
  static std::string Rows(std::int64_t n) { return Counted(n, "row"); }

  std::string FewRows(int level) const {
    return FewRows(column_, column_.levels[static_cast<size_t>(level)]);
  }
  std::string FewRows(const ModelColumn& column, const CategoryLevel& level) const {
    return "Only " + Rows(level.rows) + " of the " + std::to_string(model_.rows.fitted) +
           " fitted " + (level.rows == 1 ? "has " : "have ") + level.text + " in " + column.name +
           ": too few for a figure that could be quoted.";
  }

  std::string EndsPhrase() const {
    switch (effect_.step) {
      case EffectStep::kRange:
        return "largest and least value";
      case EffectStep::kToMedian:
        return "median and lower quartile";
      case EffectStep::kFromMedian:
        return "upper quartile and median";
      default:
        return "upper and lower quartile";
    }
  }

  // Why there is no effect.
  std::string Reason() const {
    for (const RawPlace& place : {effect_.from, effect_.to}) {
      if (IsOutside(column_, place)) return OutsidePhrase(column_, place);
    }
    const std::vector<int> partners = PartnersOf(model_, effect_.column);
    const bool whole_fit =
        effect_.unit == EffectUnit::kResponse && !IsStraight(response_.transform);
    for (int c = 0; c < static_cast<int>(model_.columns.size()); ++c) {
      const ModelColumn& other = model_.columns[static_cast<size_t>(c)];
      const bool matters =
          whole_fit || std::find(partners.begin(), partners.end(), c) != partners.end();
      if (c == effect_.column || !other.IsInput() || !matters) continue;
      if (effect_.partner && effect_.partner->column == c) {
        if (IsOutside(other, effect_.partner->place))
          return OutsidePhrase(other, effect_.partner->place);
      } else if (IsOutside(other, HeldPlace(other))) {
        return "other columns are held at their means, and " +
               OutsidePhrase(other, HeldPlace(other));
      }
    }
    if (whole_fit) return "the fitted value has no way back to original units there.";
    return "it leaves the range of numbers.";
  }
  static std::string OutsidePhrase(const ModelColumn& column, const RawPlace& place) {
    return column.name + " at " + WithUnit(column, place.number) + " lies outside the domain of " +
           SpecWords(column.transform) + ".";
  }

  // `Where trade is Damp, `: the partners of a product, which the figure depends on.
  std::string Where() const {
    std::string places;
    for (const int partner : PartnersOf(model_, effect_.column)) {
      const ModelColumn& other = model_.columns[static_cast<size_t>(partner)];
      const bool set = effect_.partner && effect_.partner->column == partner;
      std::string place;
      if (other.kind == ColumnKind::kCategory) {
        const int level = set ? effect_.partner->place.level : HeldPlace(other).level;
        place = other.levels[static_cast<size_t>(level)].text;
      } else {
        place =
            set ? WithUnit(other, effect_.partner->place.number) : "its mean of " + MeanText(other);
      }
      places += (places.empty() ? "With " : " and ") + other.name + " at " + place;
    }
    return places.empty() ? places : places + ", ";
  }

  std::string OfColumn() const {
    return column_.unit.empty() || column_.IsDate() ? " in " + column_.name : " of " + column_.name;
  }

  std::string Moved() const {
    switch (effect_.step) {
      case EffectStep::kNone:
        return column_.levels[static_cast<size_t>(effect_.to.level)].text + " rather than " +
               column_.levels[static_cast<size_t>(effect_.from.level)].text + " in " + column_.name;
      case EffectStep::kOneUnit:
        if (column_.IsDate()) return "1 day later in " + column_.name;
        if (column_.unit.empty()) return "1 more in " + column_.name;
        if (IsPercent(column_.unit)) return "1 percentage point more of " + column_.name;
        return "1 more " + Singular(column_.unit) + " of " + column_.name;
      case EffectStep::kOnePercent:
        return (column_log_->sign > 0 ? "1% more in " : "1% less in ") +
               DistancePhrase(column_, *column_log_);
      default:
        return Named(column_, effect_.to.number) + " rather than " +
               WithUnit(column_, effect_.from.number) + OfColumn() + " (its " + EndsPhrase() + ")";
    }
  }

  const char* Direction(double figure) const {
    const bool date = effect_.unit == EffectUnit::kResponse && response_.IsDate();
    return date ? (figure < 0 ? "earlier" : "later") : figure < 0 ? "less" : "more";
  }
  std::string Magnitude(double figure) const { return InUnit(RoundedTo(std::abs(figure), place_)); }
  std::string InUnit(const std::string& number) const {
    return effect_.unit == EffectUnit::kPercent ? number + "%"
                                                : DifferenceAmount(number, ResponseUnit(model_));
  }

  // What a percent or an amount is of.
  std::string Of() const {
    if (effect_.unit == EffectUnit::kPercent && HasEdge(*response_log_))
      return DistancePhrase(response_, *response_log_);
    return ResponsePhrase(model_);
  }

  bool IsNothing() const { return RoundedTo(effect_.effect, place_) == "0"; }

  // `0.61% more in typical cost`
  std::string Size(double figure) const {
    if (IsNothing()) return "much the same " + Of();
    return Magnitude(figure) + " " + Direction(figure) + " in " + Of();
  }

  bool HasLimits() const { return std::isfinite(effect_.low) && std::isfinite(effect_.high); }

  std::string LimitsPhrase() const { return " (" + LimitsWords() + ")"; }
  std::string LimitsWords() const {
    if (HasLimits()) {
      std::string text = LevelPhrase(level_) + " limits ";
      if (errors_ != ErrorKind::kClassical)
        text += "by " + std::string(kErrorKindNames[static_cast<size_t>(errors_)]) + " errors ";
      return text + Limits();
    }
    const auto classical = static_cast<size_t>(ErrorKind::kClassical);
    const bool saturated = std::none_of(
        model_.terms.begin(), model_.terms.end(),
        [&](const ModelTerm& term) { return std::isfinite(term.standard_error[classical]); });
    if (saturated) return "no limits: as many terms as rows";
    if (errors_ != ErrorKind::kClassical && errors_ != model_.errors) {
      return "no limits: " + std::string(kErrorKindNames[static_cast<size_t>(errors_)]) +
             " errors of several terms at once need a fit with that option";
    }
    const std::string note = ErrorNote(model_, errors_);
    return note.empty() ? "no limits can be given here" : "no limits: " + note;
  }

  // `40 to 51 EUR more`
  std::string Limits() const {
    const bool both_sides = effect_.low < 0 && effect_.high > 0;
    if (effect_.open && both_sides) {
      return EndOnItsSide(effect_.low) + " " + Direction(effect_.low) + " to " +
             EndOnItsSide(effect_.high) + " " + Direction(effect_.high);
    }
    const bool below = effect_.effect < 0;
    // 0 where limits in original units do not agree with those that decide on the direction.
    const double near = effect_.open || both_sides ? 0 : below ? effect_.high : effect_.low;
    const double far = below ? effect_.low : effect_.high;
    return RoundedTo(std::abs(near), place_) + (effect_.unit == EffectUnit::kPercent ? "%" : "") +
           " to " + Magnitude(far) + " " + Direction(effect_.effect);
  }

  // A limit with a direction is not 0, however far away the other one is.
  std::string EndOnItsSide(double figure) const {
    const std::string number = RoundedTo(std::abs(figure), place_);
    return InUnit(number == "0" ? Rounded(std::abs(figure), 1) : number);
  }

  // Where the other columns stand matters to a change in original units under a curved response.
  std::string HeldPhrase() const {
    std::vector<int> moved = {effect_.column};
    if (effect_.partner) moved.push_back(effect_.partner->column);
    const std::string places = HeldPlaces(model_, moved);
    if (places.empty()) return "";
    std::string text = ", other columns held fixed";
    if (effect_.unit == EffectUnit::kPercent || IsStraight(response_.transform)) return text;
    return text + " at their " + places;
  }

  std::string RowsPhrase() const {
    const std::string fitted = Rows(model_.rows.fitted) + " fitted";
    if (effect_.step != EffectStep::kNone) return ", in the " + fitted;
    return ", in " + std::to_string(LevelRows(effect_.to.level)) + " and " +
           std::to_string(LevelRows(effect_.from.level)) + " of the " + fitted;
  }

  std::string Additions() const {
    std::string text;
    if (effect_.kind == EffectKind::kRuleOfThumb && std::isfinite(effect_.exact)) {
      const int place = RoundingPlace(0, effect_.exact);
      text += "; the exact figure is " + InUnit(RoundedTo(std::abs(effect_.exact), place)) + " " +
              Direction(effect_.exact);
    }
    if (effect_.kind == EffectKind::kPercent) text += AtMedianOfColumn() + AtMedianOfResponse();
    if (effect_.kind == EffectKind::kLevel) text += AtMedianOfResponse();
    if (effect_.step == EffectStep::kOneUnit && column_.observed_high - column_.observed_low < 1) {
      text += "; a whole 1 is more than the range seen, " + Named(column_, column_.observed_low) +
              " to " + Named(column_, column_.observed_high);
    }
    if (IsOpen()) text += "; these rows do not settle in which direction";
    return text;
  }

  std::string AtMedianOfColumn() const {
    if (effect_.step != EffectStep::kOnePercent || !std::isfinite(effect_.to.number)) return "";
    if (!HasEdge(*column_log_) && !IsPercent(column_.unit)) return "";
    return "; at the median of " + column_.name + " that is " + Named(column_, effect_.to.number) +
           " rather than " + WithUnit(column_, effect_.from.number);
  }

  // Of a sum, or of what is itself a percent, the percent alone does not say how much it is.
  std::string AtMedianOfResponse() const {
    const std::string amount = AmountAtMedian();
    return amount.empty() ? "" : ";" + AtMedianPhrase() + " that is " + amount;
  }
  std::string AtMedianPhrase() const {
    return " at the median " + response_.name + " of " + WithUnit(response_, response_.median);
  }
  // `0.39 EUR more`; empty where the percent says enough, or it comes to nothing.
  std::string AmountAtMedian() const {
    if (effect_.unit != EffectUnit::kPercent) return "";
    if (!HasEdge(*response_log_) && !IsPercent(response_.unit)) return "";
    const double median = response_.median, distance = response_log_->Distance(median);
    const double amount = response_log_->sign * distance * (effect_.effect / 100);
    const double width = distance * ((effect_.high - effect_.low) / 100);
    if (!std::isfinite(amount)) return "";
    const std::string size = RoundedTo(std::abs(amount), RoundingPlace(width, amount));
    if (size == "0") return "";
    return DifferenceAmount(size, response_.unit) + (amount < 0 ? " less" : " more");
  }

  const Model& model_;
  const Effect& effect_;
  double level_;
  ErrorKind errors_;
  const ModelColumn& column_;
  const ModelColumn& response_;
  std::optional<LogForm> column_log_, response_log_;
  int place_;
};

// Of more levels than this a reader is told the ends.
constexpr size_t kMostLevelsTold = 10;

}  // namespace

std::string LevelsSentence(const Model& model, std::span<const Effect> effects, double level,
                           ErrorKind errors) {
  std::vector<const Effect*> told;
  std::vector<std::string> untold;
  for (const Effect& effect : effects) {
    const Sentence sentence(model, effect, level, errors);
    if (sentence.HasFigure()) {
      told.push_back(&effect);
    } else {
      untold.push_back(sentence.LevelText(effect.to.level));
    }
  }
  if (told.size() < 2) {
    std::string text;
    for (const Effect& effect : effects)
      text += (text.empty() ? "" : " ") + EffectSentence(model, effect, level, errors);
    return text;
  }
  std::sort(told.begin(), told.end(),
            [](const Effect* a, const Effect* b) { return a->effect > b->effect; });
  const size_t figures = told.size();
  if (figures > kMostLevelsTold)
    told.erase(told.begin() + kMostLevelsTold / 2, told.end() - kMostLevelsTold / 2);
  std::vector<std::string> parts, open;
  for (const Effect* effect : told) {
    const Sentence sentence(model, *effect, level, errors);
    parts.push_back(parts.empty() ? sentence.First() : sentence.Further());
    if (sentence.IsOpen()) open.push_back(sentence.LevelText(effect->to.level));
  }
  std::string text = Sentence(model, *told[0], level, errors).Opening() + Listed(parts);
  text[0] = text[0] == 'a' ? 'A' : text[0];
  text += ", in the " + Counted(model.rows.fitted, "row") + " fitted";
  if (told.size() < figures)
    text += "; these are the ends of " + std::to_string(figures) + " levels";
  if (!open.empty()) {
    text += "; these rows do not settle in which direction for " +
            (open.size() == told.size() ? "any of these" : Listed(open));
  }
  if (!untold.empty()) {
    text +=
        "; for " + Listed(untold) +
        (untold.size() == 1 ? " there is no figure to quote" : " there are no figures to quote");
  }
  return text + ".";
}

std::string ScalePhrase(const ModelColumn& column) {
  if (const std::optional<LogForm> log = LogFormOf(column.transform)) {
    const std::string distance = DistancePhrase(column, *log);
    return log->sign < 0 ? "the reflected logarithm of " + distance
                         : "the logarithm of " + distance;
  }
  switch (column.transform.kind()) {
    case TransformKind::kIdentity:
    case TransformKind::kDateDays:
      return column.name;
    case TransformKind::kSqrtOffset:
      if (column.transform.arguments()[0] == 0) return "the square root of " + column.name;
      [[fallthrough]];
    default:
      return column.name + " by " + SpecWords(column.transform);
  }
}

std::string ResponsePhrase(const Model& model) {
  const bool straight = IsStraight(model.response().transform);
  return (straight ? "average " : "typical ") + model.response().name;
}

std::string HeldPlaces(const Model& model, std::span<const int> without) {
  bool numbers = false, references = false, commonest = false;
  for (int c = 0; c < static_cast<int>(model.columns.size()); ++c) {
    const ModelColumn& column = model.columns[static_cast<size_t>(c)];
    if (!column.IsInput() || std::find(without.begin(), without.end(), c) != without.end())
      continue;
    (column.kind != ColumnKind::kCategory ? numbers
     : column.reference >= 0              ? references
                                          : commonest) = true;
  }
  std::vector<std::string> places;
  if (numbers) places.push_back("means");
  if (references) places.push_back("reference levels");
  if (commonest) places.push_back("commonest levels");
  return Listed(places);
}

std::string ResponseUnit(const Model& model) {
  return model.response().IsDate() ? "days" : model.response().unit;
}

std::string LevelPhrase(double level) { return Rounded(100 * level, 6) + "%"; }

std::string EffectSentence(const Model& model, const Effect& effect, double level,
                           ErrorKind errors) {
  return Sentence(model, effect, level, errors).Text();
}

}  // namespace ladderline
