#include "core/report/difference.h"

#include <algorithm>
#include <cmath>
#include <limits>
#include <map>
#include <optional>
#include <set>
#include <tuple>
#include <utility>

#include "core/effects/reading.h"
#include "core/effects/sentences.h"
#include "core/effects/wording.h"
#include "core/model/model_errors.h"
#include "core/report/term_key.h"
#include "core/support/distributions.h"
#include "core/support/prose.h"
#include "core/support/text.h"

namespace ladderline {
namespace {

constexpr double kSame = 1e-9;

const ModelColumn* FindColumn(const Model& model, const std::string& name) {
  for (const ModelColumn& column : model.columns) {
    if (column.name == name) return &column;
  }
  return nullptr;
}

const ModelColumn* WeightsOf(const Model& model) {
  for (const ModelColumn& column : model.columns) {
    if (column.role == ColumnRole::kWeight) return &column;
  }
  return nullptr;
}

// The weight of an average case; 1 without weights. NaN: not known exactly.
double AverageWeight(const Model& model) {
  const ModelColumn* weights = WeightsOf(model);
  if (weights == nullptr) return 1;
  return model.for_release() ? kNaN : weights->mean;
}

bool IsSame(double before, double after) {
  return std::abs(after - before) <= kSame * std::abs(before);
}

// Both in as few significant digits, from 3 on, as tell them apart, if they are not the same.
std::pair<std::string, std::string> ToldApart(double a, double b) {
  constexpr int kDigits = 3;
  int digits = kDigits;
  while (digits < std::numeric_limits<double>::max_digits10 && !IsSame(a, b) &&
         Rounded(a, digits) == Rounded(b, digits))
    ++digits;
  return {Rounded(a, digits), Rounded(b, digits)};
}

// z of one straight re-expression from z of another: shift + slope · z.
struct Line {
  double shift = 0, slope = 1;
};
std::optional<Line> LineFrom(const ModelColumn& of, const ModelColumn& to) {
  if (of.transform == to.transform) return Line{};
  if (!IsStraight(of.transform) || !IsStraight(to.transform) || of.IsDate() != to.IsDate())
    return std::nullopt;
  const double x = of.mean;
  const double slope = to.transform.Slope(x) / of.transform.Slope(x);
  const double shift = to.transform.Forward(x) - slope * of.transform.Forward(x);
  if (!std::isfinite(slope) || !std::isfinite(shift)) return std::nullopt;
  return Line{shift, slope};
}

// A coefficient of the new fit in the terms of the old one. NaN: it rests on a term left out of the
// new fit.
struct Coefficient {
  double value = 0;
  const ModelTerm* term = nullptr;  // the term it is, if it is one
};

class Changes {
 public:
  Changes(const Model& before, const Model& after) : before_(before), after_(after) {}

  std::vector<Difference> All() {
    if (const std::string why = Obstacle(); !why.empty()) {
      const bool refused = before_.refused() || after_.refused();
      Add({.status = refused ? "refused" : "not comparable",
           .sentence = "Not compared: " + why + "."});
      return std::move(rows_);
    }
    Response();
    Options();
    for (const ModelColumn& old : before_.columns) Column(old);
    Figures();
    if (!apart_) Terms();
    return std::move(rows_);
  }

 private:
  void Add(Difference row) { rows_.push_back(std::move(row)); }
  void Setting(const std::string& term, std::string sentence) {
    Add({.term = term, .status = "changed", .sentence = std::move(sentence)});
  }

  std::string Obstacle() const {
    if (before_.refused()) return "the old model was refused (" + before_.reason + ")";
    if (after_.refused()) return "the new model was refused (" + after_.reason + ")";
    const std::string &old_name = before_.response().name, &new_name = after_.response().name;
    if (old_name != new_name)
      return "the old model speaks of " + old_name + ", the new one of " + new_name;
    if (before_.family != after_.family)
      return "the old model is of the family " + before_.family + ", the new one " + after_.family;
    return "";
  }

  // How a column enters, new and old, with arguments as far as a reader needs them.
  static std::string Entering(const ModelColumn& fresh, const ModelColumn& old) {
    constexpr int kDigits = 6;
    const auto scale = [](const Transform& transform) {
      return transform == Transform() ? "as it is" : "by " + transform.spec();
    };
    const auto rounded = [](const Transform& transform) {
      const std::string spec = transform.spec();  // without arguments at their defaults
      const auto given = static_cast<size_t>(std::count(spec.begin(), spec.end(), ' '));
      std::vector<double> arguments;
      for (const double argument : transform.arguments().first(given))
        arguments.push_back(ParseNumber(Rounded(argument, kDigits)).value_or(argument));
      return Transform::TryMake(transform.kind(), arguments).value_or(transform);
    };
    const Transform is = rounded(fresh.transform), was = rounded(old.transform);
    return fresh.name + " enters " + scale(is == was ? fresh.transform : is) + " now, " +
           scale(is == was ? old.transform : was) + " before";
  }
  static std::string Unit(const ModelColumn& column) {
    return column.unit.empty() ? "no unit" : column.unit;
  }
  // A number that the rows decided: what to write so that the next fit keeps it.
  static std::string Advice(const ModelColumn& old, const ModelColumn& fresh) {
    if (old.transform.kind() != fresh.transform.kind() || fresh.note.empty()) return "";
    return "; to compare, write " + old.transform.spec() + " in the label of both";
  }

  void Response() {
    const ModelColumn &old = before_.response(), &fresh = after_.response();
    if (old.unit != fresh.unit) {
      apart_ = true;
      Setting(old.name, old.name + " is in " + Unit(fresh) + " now, in " + Unit(old) +
                            " before: the coefficients are in another unit and are not compared.");
    }
    const std::optional<Line> line = LineFrom(fresh, old);
    const bool shifts = line && line->shift != 0;
    if (old.transform == fresh.transform) return;
    const std::string entered = Entering(fresh, old);
    if (!line || (shifts && !(before_.intercept && after_.intercept))) {
      apart_ = true;
      Setting(old.name, entered + ": the coefficients are on another scale and are not compared" +
                            Advice(old, fresh) + ".");
      return;
    }
    response_ = *line;
    Setting(old.name, entered + ": the new coefficients are written on the old scale.");
  }

  // The columns that have a role, by name.
  static std::string Named(const Model& model, ColumnRole role) {
    std::vector<std::string> names;
    for (const ModelColumn& column : model.columns) {
      if (column.role == role) names.push_back(column.name);
    }
    return names.empty() ? "none" : Listed(names);
  }

  void Options() {
    if (before_.intercept != after_.intercept) {
      apart_ = true;
      Setting("intercept", std::string("The ") + (after_.intercept ? "old" : "new") +
                               " fit has no intercept: the coefficients are not compared.");
    }
    if (before_.errors != after_.errors) {
      Setting("errors", "Limits are by " +
                            std::string(kErrorKindNames[static_cast<size_t>(after_.errors)]) +
                            " errors now, by " +
                            std::string(kErrorKindNames[static_cast<size_t>(before_.errors)]) +
                            " errors before; the coefficients do not depend on them.");
    }
    if (before_.level != after_.level) {
      Setting("level", "Limits are at " + LevelPhrase(after_.level) + " now, at " +
                           LevelPhrase(before_.level) + " before.");
    }
    for (const ColumnRole role : {ColumnRole::kWeight, ColumnRole::kExposure, ColumnRole::kCluster,
                                  ColumnRole::kOrder, ColumnRole::kPresent}) {
      const std::string old = Named(before_, role), fresh = Named(after_, role);
      if (old == fresh) continue;
      const std::string word(kColumnRoleNames[static_cast<size_t>(role)]);
      Setting(word, "The columns for " + word + ": " + fresh + " now, " + old + " before.");
    }
  }

  // A predictor that is in both: whether its terms mean the same, or can be made to.
  void Column(const ModelColumn& old) {
    const ModelColumn* fresh = FindColumn(after_, old.name);
    if (fresh == nullptr || fresh->role != ColumnRole::kPredictor ||
        old.role != ColumnRole::kPredictor)
      return;
    const std::string& name = old.name;
    const auto blocked = [&](const std::string& what) {
      blocked_.insert(name);
      Setting(name, what + ": its terms are not compared" + Advice(old, *fresh) + ".");
    };
    if (old.kind != fresh->kind) {
      return blocked(name + " is a " + std::string(kColumnKindNames[size_t(fresh->kind)]) +
                     " now, a " + std::string(kColumnKindNames[size_t(old.kind)]) + " before");
    }
    if (old.unit != fresh->unit)
      return blocked(name + " is in " + Unit(*fresh) + " now, in " + Unit(old) + " before");
    if (old.kind == ColumnKind::kCategory) return Category(old, *fresh, blocked);
    if (old.degree != fresh->degree) {
      other_powers_.insert(name);
      Setting(name, name + " has powers up to " + std::to_string(fresh->degree) + " now, up to " +
                        std::to_string(old.degree) +
                        " before: the lower ones allow for other powers than they did and are not "
                        "compared.");
    }
    if (old.transform == fresh->transform) return;
    const std::optional<Line> line = LineFrom(old, *fresh);
    const std::string entered = Entering(*fresh, old);
    if (!line || (line->shift != 0 && !before_.intercept)) return blocked(entered);
    lines_[name] = *line;
    Setting(name, entered + ": the new coefficients are written in the old numbers.");
  }

  template <class Blocked>
  void Category(const ModelColumn& old, const ModelColumn& fresh, const Blocked& blocked) {
    const auto reference = [](const ModelColumn& column) -> std::string {
      return column.reference < 0 ? "" : column.levels[static_cast<size_t>(column.reference)].text;
    };
    const std::string was = reference(old), is = reference(fresh);
    if ((old.reference < 0) != (fresh.reference < 0)) {
      return blocked(old.name +
                     (fresh.reference < 0
                          ? " has a term for every level now, against " + was + " before"
                          : " is told against " + is + " now, had a term for every level before"));
    }
    const std::string usual = LeftOut(old, InProduct(before_, old));
    const bool known = std::any_of(fresh.levels.begin(), fresh.levels.end(),
                                   [&](const CategoryLevel& l) { return l.text == usual; });
    if (!usual.empty() && !known) {
      return blocked("no row has " + usual + " in " + old.name +
                     " any more, against which it was told before");
    }
    if (was == is) return;
    Setting(old.name, old.name + " is told against " + is + " now, against " + was +
                          " before: the new coefficients are written against " + was + ".");
  }

  static bool InProduct(const Model& model, const ModelColumn& column) {
    return std::any_of(model.columns.begin(), model.columns.end(), [&](const ModelColumn& c) {
      return c.role == ColumnRole::kProduct &&
             (&model.columns[static_cast<size_t>(c.parts[0])] == &column ||
              &model.columns[static_cast<size_t>(c.parts[1])] == &column);
    });
  }
  // The level that has no term, alone or in a product; empty: every level has one.
  static std::string LeftOut(const ModelColumn& column, bool in_product) {
    const int level = in_product ? column.UsualLevel() : column.reference;
    return level < 0 ? "" : column.levels[static_cast<size_t>(level)].text;
  }

  void Figure(const char* name, double before, double after, const std::string& sentence) {
    const double change = after - before;
    Add({.term = name,
         .before = before,
         .after = after,
         .change = change,
         .status = IsSame(before, after) ? "same" : "changed",
         .sentence = sentence});
  }

  void Figures() {
    const auto rows = [&](const char* name, const char* what, std::int64_t before,
                          std::int64_t after) {
      Figure(name, static_cast<double>(before), static_cast<double>(after),
             std::string(what) + ": " + std::to_string(before) + " before, " +
                 std::to_string(after) + " now.");
    };
    rows("rows_fitted", "Rows fitted", before_.rows.fitted, after_.rows.fitted);
    rows("rows_left_out", "Rows left out", before_.rows.offered - before_.rows.fitted,
         after_.rows.offered - after_.rows.fitted);
    const ModelFacts &old = before_.facts, &fresh = after_.facts;
    if (!apart_) ResidualSd();
    if (before_.response().unit == after_.response().unit) {
      const std::string unit = ResponseUnit(before_);
      const double was = old.median_absolute_error, is = fresh.median_absolute_error;
      if (std::isfinite(was) && std::isfinite(is)) {
        const auto [was_told, is_told] = ToldApart(was, is);
        Figure("median_absolute_error", was, is,
               "Half of the rows lie within " + DifferenceAmount(was_told, unit) +
                   " of their fitted value before, " + DifferenceAmount(is_told, unit) + " now.");
      }
    }
    // Of the variation of one scale; a straight one for another is the same variation.
    if (!apart_ && before_.intercept && std::isfinite(old.r_squared) &&
        std::isfinite(fresh.r_squared)) {
      std::string was = Percent(old.r_squared), is = Percent(fresh.r_squared);
      if (was == is && !IsSame(old.r_squared, fresh.r_squared)) {
        std::tie(was, is) = ToldApart(100 * old.r_squared, 100 * fresh.r_squared);
        was += "%";
        is += "%";
      }
      Figure("r_squared", old.r_squared, fresh.r_squared,
             "The columns go with " + was + " of the variation before, " + is + " now.");
    }
  }

  // Under weights it is that of a case of weight 1, whatever that may be: told is that of a case of
  // average weight, which is the same for weights in other units.
  void ResidualSd() {
    const double was_weight = AverageWeight(before_), is_weight = AverageWeight(after_);
    const double was = before_.facts.residual_sd / std::sqrt(was_weight),
                 is = after_.facts.residual_sd * std::abs(response_.slope) / std::sqrt(is_weight);
    const std::string what = "Residual standard deviation";
    if (std::isnan(was_weight) || std::isnan(is_weight)) {
      return Add({.term = "residual_sd",
                  .status = "not comparable",
                  .sentence =
                      what + " is not compared: it goes by the scale of the weights, which a model "
                             "for release does not tell exactly."});
    }
    if (!std::isfinite(was) || !std::isfinite(is)) return;
    const bool weighted = WeightsOf(before_) != nullptr || WeightsOf(after_) != nullptr;
    const auto [was_told, is_told] = ToldApart(was, is);
    Figure("residual_sd", was, is,
           what + (weighted ? " of a case of average weight: " : ": ") + was_told + " before, " +
               is_told + " now.");
  }

  // ---- Terms ----

  bool IsBlocked(const TermKey& key) const {
    return std::any_of(key.begin(), key.end(), [&](const FactorKey& factor) {
      return blocked_.contains(std::get<0>(factor));
    });
  }

  // A factor of the new fit as a sum of factors of the old one; the empty key is 1.
  using Sum = std::vector<std::pair<TermKey, double>>;
  Sum InOldFactors(const FactorKey& factor, bool in_product) const {
    const auto& [name, power, level] = factor;
    const ModelColumn* old = FindColumn(before_, name);
    if (old == nullptr) return {{{factor}, 1}};
    if (old->kind == ColumnKind::kCategory) {
      if (level != LeftOut(*old, in_product)) return {{{factor}, 1}};
      Sum sum = {{{}, 1}};
      for (const CategoryLevel& other : FindColumn(after_, name)->levels) {
        if (other.text != level) sum.push_back({{{name, 0, other.text}}, -1});
      }
      return sum;
    }
    const auto line = lines_.find(name);
    if (line == lines_.end()) return {{{factor}, 1}};
    Sum sum = {{{factor}, line->second.slope}};
    if (line->second.shift != 0) sum.push_back({{}, line->second.shift});
    return sum;
  }

  // All coefficients of the new fit, by the terms of the old one.
  std::map<TermKey, Coefficient> InOldTerms() const {
    std::map<TermKey, Coefficient> found;
    const auto add = [&](const TermKey& key, double value, const ModelTerm* term) {
      const auto [place, first] = found.try_emplace(key);
      place->second.value += value;
      place->second.term = first ? term : nullptr;
    };
    for (const ModelTerm& term : after_.terms) {
      const TermKey key = KeyOf(after_, term);
      if (IsBlocked(key)) continue;
      Sum product = {{{}, 1}};
      for (const FactorKey& factor : key) {
        Sum next;
        for (const auto& [part, times] : product) {
          for (const auto& [more, weight] : InOldFactors(factor, key.size() > 1)) {
            TermKey joined = part;
            joined.insert(more.begin(), more.end());
            next.push_back({std::move(joined), times * weight});
          }
        }
        product = std::move(next);
      }
      const bool alone = product.size() == 1 && product[0].second == 1 && response_.slope == 1;
      for (const auto& [part, times] : product)
        add(part, times * response_.slope * term.coefficient, alone ? &term : nullptr);
    }
    if (response_.shift != 0) add({}, response_.shift, nullptr);
    // Without an intercept a constant is one for all levels of the category that has a term for
    // each.
    if (const auto constant = found.find({}); !after_.intercept && constant != found.end()) {
      const double value = constant->second.value;
      found.erase(constant);
      for (const ModelColumn& column : after_.columns) {
        if (column.kind != ColumnKind::kCategory || column.role != ColumnRole::kPredictor ||
            column.reference >= 0 || blocked_.contains(column.name))
          continue;
        for (const CategoryLevel& level : column.levels)
          add({{column.name, 0, level.text}}, value, nullptr);
      }
    }
    return found;
  }

  // The name of a term that stands in neither model: a level against the old reference.
  std::string NameOf(const TermKey& key) const {
    for (const Model* model : {&before_, &after_}) {
      for (const ModelTerm& term : model->terms) {
        if (KeyOf(*model, term) == key) return term.name;
      }
    }
    std::string name;
    for (const ModelColumn& column : before_.columns) {
      for (const auto& [of, power, level] : key) {
        if (of != column.name) continue;
        name += (name.empty() ? "" : " by ") + of;
        if (!level.empty()) name += " is " + level;
        if (column.kind == ColumnKind::kPolynomial) name += " power " + std::to_string(power);
      }
    }
    return name;
  }

  void Terms() {
    const std::map<TermKey, Coefficient> fresh = InOldTerms();
    std::set<TermKey> told;
    for (const ModelTerm& term : before_.terms) {
      const TermKey key = KeyOf(before_, term);
      if (IsBlocked(key)) continue;
      told.insert(key);
      const auto found = fresh.find(key);
      if (found == fresh.end()) {
        Gone(term, "");
      } else {
        Compare(term, found->second, key.empty());
      }
    }
    for (const ModelTerm& term : after_.terms) {
      const TermKey key = KeyOf(after_, term);
      if (const auto found = fresh.find(key); found != fresh.end() && told.insert(key).second)
        New(term.name, found->second);
    }
    for (const auto& [key, coefficient] : fresh) {
      if (told.insert(key).second) New(NameOf(key), coefficient);
    }
  }

  void Gone(const ModelTerm& term, const std::string& why) {
    Add({.term = term.name,
         .before = term.coefficient,
         .status = "gone",
         .sentence = "No longer in the fit, " + term.name + why +
                     ": the other terms allow for it no more."});
  }

  void New(const std::string& name, const Coefficient& fresh) {
    if (std::isnan(fresh.value)) {
      if (fresh.term == nullptr) return;
      return Add(
          {.term = name,
           .status = "new",
           .sentence = "New term, " + name + ": no coefficient (" + fresh.term->note + ")."});
    }
    std::string sentence = "New term, " + name + ": ";
    const Interval limits = fresh.term == nullptr ? Interval{} : LimitsOf(after_, *fresh.term);
    const int place = RoundingPlace(limits.high - limits.low, fresh.value);
    sentence += RoundedTo(fresh.value, place);
    if (std::isfinite(limits.low)) {
      sentence += " (" + LevelPhrase(after_.level) + " limits " + RoundedTo(limits.low, place) +
                  " to " + RoundedTo(limits.high, place) + ")";
    }
    Add({.term = name,
         .after = fresh.value,
         .status = "new",
         .sentence = sentence + "; the other terms now allow for it."});
  }

  struct Interval {
    double low = kNaN, high = kNaN;
  };
  static Interval LimitsOf(const Model& model, const ModelTerm& term) {
    const double error = term.standard_error[static_cast<size_t>(model.errors)];
    const double reach = StudentTCritical(model.level, ErrorDf(model, model.errors)) * error;
    return {term.coefficient - reach, term.coefficient + reach};
  }

  void Compare(const ModelTerm& old, const Coefficient& fresh, bool intercept) {
    const double before = old.coefficient, after = fresh.value;
    if (std::isnan(before) && std::isnan(after)) {
      return Add({.term = old.name,
                  .status = "same",
                  .sentence = "No coefficient in either fit: " + old.name + "."});
    }
    if (std::isnan(before)) return New(old.name, fresh);
    if (std::isnan(after)) {
      if (fresh.term != nullptr) return Gone(old, " (" + fresh.term->note + ")");
      return NotComparable(old, "a term of the new fit that it would rest on was left out");
    }
    if (StandsForOthers(old))
      return NotComparable(old, "it stands for levels of few rows, which may be others now");
    if (HasOtherPowers(old)) return NotComparable(old, "it allows for other powers than it did");
    if (intercept && !blocked_.empty())
      return NotComparable(old, "it is where all columns are 0, and some are on another scale");
    Difference row = {.term = old.name, .before = before, .after = after, .change = after - before};
    const Interval limits = LimitsOf(before_, old);
    const int place = RoundingPlace(limits.high - limits.low, before);
    const std::string values =
        old.name + ": " + RoundedTo(before, place) + " before, " + RoundedTo(after, place) + " now";
    if (std::abs(row.change) <= kSame * std::max(std::abs(before), std::abs(after))) {
      row.status = "same";
      row.sentence = values + ".";
      return Add(std::move(row));
    }
    if (!std::isfinite(limits.low)) {
      row.status = "not comparable";
      row.sentence =
          values + "; the old fit gave it no limits, by which to say whether that is much.";
      return Add(std::move(row));
    }
    const bool inside = limits.low <= after && after <= limits.high;
    row.status = inside ? "steady" : "moved";
    row.sentence = values + ", " + (inside ? "inside" : "outside") + " the " +
                   LevelPhrase(before_.level) + " limits of the old fit (" +
                   RoundedTo(limits.low, place) + " to " + RoundedTo(limits.high, place) + ")";
    if ((before < 0) != (after < 0) && before != 0 && after != 0)
      row.sentence += "; its sign is the other one now";
    if (!inside) row.sentence += ". The fits may share rows: a yardstick, no test";
    row.sentence += ".";
    Add(std::move(row));
  }

  // Whether a power of a column that had other powers before is among its factors.
  bool HasOtherPowers(const ModelTerm& term) const {
    return std::any_of(term.factors.begin(), term.factors.end(), [&](const Factor& factor) {
      return other_powers_.contains(before_.columns[static_cast<size_t>(factor.column)].name);
    });
  }

  // Whether a level that merging for release made is among its factors.
  bool StandsForOthers(const ModelTerm& term) const {
    return std::any_of(term.factors.begin(), term.factors.end(), [&](const Factor& factor) {
      const ModelColumn& column = before_.columns[static_cast<size_t>(factor.column)];
      const ModelColumn* fresh = FindColumn(after_, column.name);
      if (factor.level < 0 || fresh == nullptr) return false;
      const std::string& text = column.levels[static_cast<size_t>(factor.level)].text;
      return column.merged == factor.level ||
             (fresh->merged >= 0 && fresh->levels[static_cast<size_t>(fresh->merged)].text == text);
    });
  }

  void NotComparable(const ModelTerm& old, const std::string& why) {
    Add({.term = old.name,
         .before = old.coefficient,
         .status = "not comparable",
         .sentence = "Not compared, " + old.name + ": " + why + "."});
  }

  const Model& before_;
  const Model& after_;
  std::vector<Difference> rows_;
  bool apart_ = false;                  // no coefficient compares
  Line response_;                       // the old scale from the new one
  std::set<std::string> blocked_;       // columns whose terms do not compare
  std::set<std::string> other_powers_;  // polynomials of another degree now
  std::map<std::string, Line> lines_;   // the new scale of a column from the old one
};

}  // namespace

std::vector<Difference> DifferencesOf(const Model& before, const Model& after) {
  return Changes(before, after).All();
}

}  // namespace ladderline
