#include "ext/model_text.h"

#include <algorithm>
#include <charconv>
#include <cmath>
#include <numbers>
#include <set>
#include <span>
#include <utility>
#include <vector>

#include "core/elementary/elementary.h"
#include "core/model/fit.h"
#include "core/support/distributions.h"
#include "core/support/text.h"
#include "ext/json.h"
#include "ext/packed_numbers.h"

namespace ladderline {
namespace {

// A fact of ModelFacts and its key, in the order of writing; `derived` gives its value where it
// follows from others.
struct FactKey {
  const char* key;
  double ModelFacts::*fact;
  double (*derived)(const Model&) = nullptr;
};

double Parameters(const Model& model) { return static_cast<double>(model.basis.fit.rank()) + 1; }
double Slopes(const Model& model) {
  return static_cast<double>(model.basis.fit.rank()) - (model.intercept ? 1 : 0);
}
double Aic(const Model& model, double log_likelihood) {
  return -2 * log_likelihood + 2 * Parameters(model);
}
double Bic(const Model& model, double log_likelihood) {
  return -2 * log_likelihood + Log(static_cast<double>(model.rows.fitted)) * Parameters(model);
}

constexpr FactKey kFactKeys[] = {
    {"residual_df", &ModelFacts::residual_df},
    {"residual_sd", &ModelFacts::residual_sd},
    {"median_absolute_error", &ModelFacts::median_absolute_error},
    {"r_squared", &ModelFacts::r_squared},
    {"adjusted_r_squared", &ModelFacts::adjusted_r_squared,
     [](const Model& m) {
       const double total_df = m.facts.residual_df + Slopes(m);
       return 1 - (1 - m.facts.r_squared) * total_df / m.facts.residual_df;
     }},
    {"f_df1", &ModelFacts::f_df1, Slopes},
    {"f_df2", &ModelFacts::f_df2, [](const Model& m) { return m.facts.residual_df; }},
    {"f", &ModelFacts::f,
     [](const Model& m) {
       const ModelFacts& facts = m.facts;
       return facts.r_squared / facts.f_df1 / ((1 - facts.r_squared) / facts.f_df2);
     }},
    {"f_p", &ModelFacts::f_p,
     [](const Model& m) { return FUpperTail(m.facts.f, m.facts.f_df1, m.facts.f_df2); }},
    {"log_likelihood", &ModelFacts::log_likelihood,
     [](const Model& m) {
       const auto rows = static_cast<double>(m.rows.fitted);
       const double spread = 2 * Log(m.facts.residual_sd);
       return -0.5 * rows * (Log(2 * std::numbers::pi * m.facts.residual_df / rows) + spread + 1);
     }},
    {"aic", &ModelFacts::aic, [](const Model& m) { return Aic(m, m.facts.log_likelihood); }},
    {"bic", &ModelFacts::bic, [](const Model& m) { return Bic(m, m.facts.log_likelihood); }},
    {"log_likelihood_original", &ModelFacts::log_likelihood_original},
    {"aic_original", &ModelFacts::aic_original,
     [](const Model& m) { return Aic(m, m.facts.log_likelihood_original); }},
    {"bic_original", &ModelFacts::bic_original,
     [](const Model& m) { return Bic(m, m.facts.log_likelihood_original); }},
    {"press", &ModelFacts::press},
};

// Whether a figure need not be written: it is what others say, to rounding.
bool Follows(double figure, double derived) {
  if (std::isnan(figure) || std::isnan(derived)) return std::isnan(figure) && std::isnan(derived);
  return figure == derived ||
         (std::isfinite(derived) &&
          std::abs(figure - derived) <= 1e-12 * std::max(std::abs(figure), std::abs(derived)));
}

bool IsKept(const Model& model, size_t term) {
  return (model.intercept && term == 0) || !std::isnan(model.terms[term].coefficient);
}

// The test of a column by the t of its only coefficient; NaN where it has none or several.
ColumnTest TestOfOne(const Model& model, int column, int parameters) {
  ColumnTest test{.column = column, .parameters = parameters};
  for (size_t j = 0; parameters == 1 && j < model.terms.size(); ++j) {
    const ModelTerm& term = model.terms[j];
    if (ColumnOf(term, model.columns) != column || !IsKept(model, j)) continue;
    const double t = term.coefficient / term.standard_error[0], s = model.facts.residual_sd;
    test.f = t * t;
    test.sum_of_squares = test.f * s * s;
    test.p_value = StudentTTwoSided(t, model.facts.residual_df);
  }
  return test;
}

// Cook's distance by the studentized residual (external) t and the leverage h.
double CooksDistanceOf(const Model& model, double t, double h) {
  const double df = model.facts.residual_df;
  const double internal = t * t * df / (df - 1 + t * t);
  return internal * h / (1 - h) / static_cast<double>(model.basis.fit.rank());
}

// The term's factors where the text has none.
const ModelColumn* ColumnOfTerm(const std::vector<ModelColumn>& columns, const std::string& name) {
  for (const ModelColumn& column : columns) {
    if (column.name == name && column.IsInput() && column.kind != ColumnKind::kCategory)
      return &column;
  }
  return nullptr;
}

bool HasPolynomial(const Model& model) {
  return std::any_of(model.terms.begin(), model.terms.end(),
                     [&](const ModelTerm& term) { return HasPower(term, model.columns); });
}

// Edge i of the bins of the fitted values: bins[i] ends at edge i + 1.
double BinEdge(double low, double high, size_t i, size_t bins) {
  return i == bins ? high
                   : low + static_cast<double>(i) * ((high - low) / static_cast<double>(bins));
}

// Keys of a term's standard errors, by ErrorKind.
constexpr std::array<const char*, kErrorKinds> kErrorKeys = {
    "standard_error", "hc0", "hc1", "hc2", "hc3", "cluster"};

constexpr std::array<std::string_view, 4> kCheckStatus = {"fine", "look", "problem",
                                                          "not computed"};

constexpr int kMostExponent = 2200;  // between the ends of the range of a double

constexpr double kExactIntegers = 9007199254740992.0;  // 2^53

// ---- Writing ----

// Whole numbers without a point; NaN and infinities as null.
Json NumberJson(double number) {
  if (!std::isfinite(number)) return nullptr;
  if (number == std::nearbyint(number) && std::abs(number) < kExactIntegers &&
      !(number == 0 && std::signbit(number)))
    return static_cast<std::int64_t>(number);
  return number;
}

Json RoundedJson(double number, int digits) {
  if (!std::isfinite(number)) return nullptr;
  char text[64];
  const auto end =
      std::to_chars(text, text + sizeof text, number, std::chars_format::scientific, digits - 1)
          .ptr;
  double rounded = number;
  std::from_chars(text, end, rounded);
  return NumberJson(rounded);
}

Json NumbersJson(std::span<const double> numbers) {
  Json out = Json::array();
  for (const double number : numbers) out.push_back(NumberJson(number));
  return out;
}

void PutNumber(Json& out, const char* key, double number) {
  if (!std::isnan(number)) out[key] = NumberJson(number);
}
void PutText(Json& out, const char* key, const std::string& text) {
  if (!text.empty()) out[key] = text;
}
template <class T>
void PutUnless(Json& out, const char* key, const T& value, const T& otherwise) {
  if (value != otherwise) out[key] = value;
}

Json ColumnJson(const ModelColumn& column) {
  Json out;
  out["name"] = column.name;
  PutText(out, "unit", column.unit);
  if (column.role != ColumnRole::kPredictor)
    out["role"] = kColumnRoleNames[static_cast<size_t>(column.role)];
  if (column.kind != ColumnKind::kNumber)
    out["kind"] = kColumnKindNames[static_cast<size_t>(column.kind)];
  PutUnless(out, "transform", column.transform.spec(), std::string("identity"));
  PutUnless(out, "degree", column.degree, 0);
  if (column.role == ColumnRole::kProduct)
    out["parts"] = Json::array(column.parts[0], column.parts[1]);
  if (!std::isnan(column.observed_low)) {
    out["values"] = NumbersJson(std::array{column.observed_low, column.lower_quartile,
                                           column.median, column.upper_quartile,
                                           column.observed_high, column.mean, column.sd});
  }
  for (const CategoryLevel& level : column.levels)
    out["levels"].push_back(Json::array(level.text, level.rows));
  PutUnless(out, "reference", column.reference, -1);
  PutUnless(out, "reference_given", column.reference_given, false);
  PutUnless<std::int64_t>(out, "missing", column.missing, 0);
  PutUnless<std::int64_t>(out, "outside", column.outside, 0);
  PutText(out, "note", column.note);
  return out;
}

Json TermJson(const ModelTerm& term, const Model& model) {
  Json out;
  out["name"] = term.name;
  const bool is_column = term.factors.size() == 1 && term.factors[0].level < 0 &&
                         term.factors[0].power == 1 &&
                         ColumnOfTerm(model.columns, term.name) ==
                             &model.columns[static_cast<size_t>(term.factors[0].column)];
  if (!term.factors.empty() && !is_column) {
    Json factors = Json::array();
    for (const Factor& factor : term.factors) {
      factors.push_back(factor.level < 0 ? Json::array(factor.column, factor.power)
                                         : Json::array(factor.column, 0, factor.level));
    }
    out["factors"] = std::move(factors);
  }
  out["coefficient"] = NumberJson(term.coefficient);
  PutNumber(out, kErrorKeys[0], term.standard_error[0]);
  constexpr int kRobustDigits = 14;
  for (size_t kind = 1; kind < kErrorKinds; ++kind) {
    if (!std::isnan(term.standard_error[kind]))
      out[kErrorKeys[kind]] = RoundedJson(term.standard_error[kind], kRobustDigits);
  }
  if (HasPower(term, model.columns)) PutNumber(out, "variance_inflation", term.variance_inflation);
  PutText(out, "note", term.note);
  return out;
}

Json FactsJson(const Model& model) {
  Json out = Json::object();
  for (const FactKey& key : kFactKeys) {
    const double fact = model.facts.*key.fact;
    if (key.derived == nullptr) {
      PutNumber(out, key.key, fact);
    } else if (!Follows(fact, key.derived(model))) {
      out[key.key] = NumberJson(fact);
    }
  }
  return out;
}

Json TestJson(const ColumnTest& test, const Model& model) {
  double inflation = kNaN;
  for (const ModelTerm& term : model.terms) {
    if (ColumnOf(term, model.columns) == test.column && std::isnan(inflation) &&
        !HasPower(term, model.columns))
      inflation = term.variance_inflation;
  }
  Json out = Json::array(test.column, test.parameters, NumberJson(inflation));
  const ColumnTest one = TestOfOne(model, test.column, test.parameters);
  if (!(Follows(test.sum_of_squares, one.sum_of_squares) && Follows(test.f, one.f) &&
        Follows(test.p_value, one.p_value))) {
    for (const double figure : {test.sum_of_squares, test.f, test.p_value})
      out.push_back(NumberJson(figure));
  }
  return out;
}

Json ResidualsJson(const ModelResiduals& residuals) {
  constexpr int kQuantileDigits = 9, kBinDigits = 7;
  Json out = Json::object();
  for (const double quantile : residuals.quantiles)
    out["quantiles"].push_back(RoundedJson(quantile, kQuantileDigits));
  if (residuals.bins.empty()) return out;
  out["fitted"] =
      NumbersJson(std::array{residuals.bins.front().fitted_low, residuals.bins.back().fitted_high});
  for (const ResidualBin& bin : residuals.bins) {
    out["bins"].push_back(
        Json::array(bin.rows, RoundedJson(bin.mean, kBinDigits), RoundedJson(bin.sd, kBinDigits)));
  }
  return out;
}

Json CheckJson(const Check& check) {
  Json out;
  out["name"] = check.name;
  out["status"] = check.status;
  PutNumber(out, "statistic", check.statistic);
  PutNumber(out, "df", check.df);
  PutNumber(out, "p_value", check.p_value);
  PutText(out, "finding", check.finding);
  PutText(out, "remedy", check.remedy);
  return out;
}

// High and low parts, packed; low parts that are all 0 are left out unless `always_low`.
void PutPacked(Json& out, const char* key, const char* low_key,
               std::span<const DoubleDouble> numbers, bool always_low) {
  std::vector<double> high, low;
  bool has_low = always_low;
  for (const DoubleDouble number : numbers) {
    high.push_back(number.hi);
    low.push_back(number.lo);
    has_low = has_low || number.lo != 0;
  }
  if (key != nullptr) out[key] = PackNumbers(high);
  if (has_low) out[low_key] = PackNumbers(low);
}

Json BasisJson(const Basis& basis, bool with_slopes) {
  const CentredBasis& fit = basis.fit;
  Json out;
  out["centre"] = PackNumbers(fit.centre);
  std::span<const DoubleDouble> slopes = fit.coefficient;
  if (fit.intercept) {
    out["origin"] = NumbersJson(std::array{slopes[0].hi, slopes[0].lo});
    slopes = slopes.subspan(1);
  }
  PutPacked(out, with_slopes ? "slope" : nullptr, "slope_low", slopes, false);
  PutPacked(out, "factor", "factor_low", fit.factor, fit.extended);
  if (basis.robust) {
    Json& robust = out["robust"];
    robust["scale"] = NumberJson(basis.robust->scale);
    PutUnless(robust, "exponent", basis.robust->exponent, 0);
    if (!basis.robust->matrix.empty()) robust["matrix"] = PackNumbers(basis.robust->matrix);
    for (const std::vector<double>& direction : basis.robust->unknown)
      robust["unknown"].push_back(PackNumbers(direction));
  }
  PutNumber(out, "largest_leverage", basis.largest_leverage);
  return out;
}

Json KeyJson(const KeyValue& key) {
  return std::visit(
      [](const auto& value) -> Json {
        if constexpr (std::is_same_v<std::decay_t<decltype(value)>, std::monostate>)
          return nullptr;
        else
          return value;
      },
      key);
}

Json CaseJson(const InfluentialCase& row, const Model& model) {
  constexpr int kDigits = 11;
  Json out = Json::array(KeyJson(row.key), RoundedJson(row.leverage, kDigits),
                         RoundedJson(row.studentized_residual, kDigits));
  if (!Follows(row.cooks_distance, CooksDistanceOf(model, row.studentized_residual, row.leverage)))
    out.push_back(NumberJson(row.cooks_distance));
  return out;
}

// ---- Reading ----

// What is wrong with a text; caught by ModelFromText.
struct Unsound {
  std::string what;
};

[[noreturn]] void Refuse(const std::string& place, const std::string& what) {
  throw Unsound{place + " " + what};
}

double ReadNumber(const Json& json, const std::string& place) {
  if (json.is_null()) return kNaN;
  if (!json.is_number()) Refuse(place, "must be a number or null");
  return json.get<double>();
}

double ReadFinite(const Json& json, const std::string& place) {
  const double number = ReadNumber(json, place);
  if (std::isnan(number)) Refuse(place, "must be a number");
  return number;
}

std::int64_t ReadInteger(const Json& json, const std::string& place, std::int64_t least,
                         std::int64_t most) {
  const bool fits = json.is_number_integer();
  const std::int64_t number = fits ? json.get<std::int64_t>() : 0;
  if (!fits || number < least || number > most) {
    Refuse(place, most == std::numeric_limits<std::int64_t>::max()
                      ? "must be a whole number from " + std::to_string(least)
                      : "must be a whole number in " + std::to_string(least) + ".." +
                            std::to_string(most));
  }
  return number;
}

std::string ReadText(const Json& json, const std::string& place) {
  if (!json.is_string()) Refuse(place, "must be text");
  return json.get<std::string>();
}

const Json& ReadArray(const Json& json, const std::string& place) {
  if (!json.is_array()) Refuse(place, "must be an array");
  return json;
}

std::string At(const std::string& place, size_t i) { return place + "[" + std::to_string(i) + "]"; }

template <size_t n>
size_t ReadWord(const Json& json, const std::string& place,
                const std::array<std::string_view, n>& words) {
  const std::string text = ReadText(json, place);
  const auto found = std::find(words.begin(), words.end(), text);
  if (found == words.end()) Refuse(place, "has the unknown word '" + Excerpt(text, 40) + "'");
  return static_cast<size_t>(found - words.begin());
}

std::vector<double> ReadPacked(const Json& json, const std::string& place) {
  std::optional<std::vector<double>> numbers = UnpackNumbers(ReadText(json, place));
  if (!numbers) Refuse(place, "must be packed numbers");
  for (const double number : *numbers) {
    if (!std::isfinite(number)) Refuse(place, "must hold finite numbers");
  }
  return *std::move(numbers);
}

// An object whose keys are taken one by one; what is left at the end is unknown.
class Object {
 public:
  Object(const Json& json, std::string place) : json_(json), place_(std::move(place)) {
    if (!json.is_object()) Refuse(place_.empty() ? "it" : place_, "must be an object");
  }

  // The value of a key, or null where it is absent.
  const Json* Find(const char* key) {
    const Json* value = json_.Find(key);
    if (value != nullptr) known_.emplace_back(key);
    return value;
  }
  const Json& Get(const char* key) {
    const Json* value = Find(key);
    if (value == nullptr) Refuse(place_.empty() ? "it" : place_, "lacks " + std::string(key));
    return *value;
  }
  std::string Place(const char* key) const { return place_.empty() ? key : place_ + "." + key; }

  double Number(const char* key) {
    const Json* value = Find(key);
    return value == nullptr ? kNaN : ReadNumber(*value, Place(key));
  }
  std::string Text(const char* key) {
    const Json* value = Find(key);
    return value == nullptr ? std::string() : ReadText(*value, Place(key));
  }
  bool Flag(const char* key, bool otherwise) {
    const Json* value = Find(key);
    if (value == nullptr) return otherwise;
    if (!value->is_boolean()) Refuse(Place(key), "must be true or false");
    return value->get<bool>();
  }
  std::int64_t Integer(const char* key, std::int64_t otherwise, std::int64_t least,
                       std::int64_t most) {
    const Json* value = Find(key);
    return value == nullptr ? otherwise : ReadInteger(*value, Place(key), least, most);
  }
  std::int64_t Count(const char* key) {
    return Integer(key, 0, 0, std::numeric_limits<std::int64_t>::max());
  }
  template <size_t n>
  size_t Word(const char* key, size_t otherwise, const std::array<std::string_view, n>& words) {
    const Json* value = Find(key);
    return value == nullptr ? otherwise : ReadWord(*value, Place(key), words);
  }
  // Calls read(element, place) for each element of an array, if the key is there.
  template <class Read>
  void Each(const char* key, Read&& read) {
    const Json* value = Find(key);
    if (value == nullptr) return;
    size_t i = 0;
    for (const Json& element : ReadArray(*value, Place(key))) read(element, At(Place(key), i++));
  }
  std::vector<double> Numbers(const char* key) {
    std::vector<double> numbers;
    Each(key, [&](const Json& element, const std::string& place) {
      numbers.push_back(ReadNumber(element, place));
    });
    return numbers;
  }
  std::vector<double> Finite(const char* key, size_t count) {
    std::vector<double> numbers;
    Each(key, [&](const Json& element, const std::string& place) {
      numbers.push_back(ReadFinite(element, place));
    });
    CheckSize(key, numbers.size(), count);
    return numbers;
  }
  // Finite packed numbers under a key; `count` of them unless that is kAnyCount.
  static constexpr size_t kAnyCount = std::numeric_limits<size_t>::max();
  std::vector<double> Packed(const char* key, size_t count) {
    std::vector<double> numbers = ReadPacked(Get(key), Place(key));
    if (count != kAnyCount) CheckSize(key, numbers.size(), count);
    return numbers;
  }
  void CheckSize(const char* key, size_t size, size_t count) const {
    if (size != count) {
      Refuse(Place(key),
             "must hold " + std::to_string(count) + " values, has " + std::to_string(size));
    }
  }

  void Done() const {
    for (const Json::Member& member : json_.members()) {
      if (std::find(known_.begin(), known_.end(), member.key) == known_.end())
        Refuse(place_.empty() ? "it" : place_, "has the unknown key " + Excerpt(member.key, 40));
    }
  }

 private:
  const Json& json_;
  std::string place_;
  std::vector<std::string> known_;
};

const Json& Tuple(const Json& json, const std::string& place, size_t size) {
  if (!json.is_array() || json.size() != size)
    Refuse(place, "must be an array of " + std::to_string(size));
  return json;
}

// Numbers that do not fall, NaN apart.
void CheckRising(std::span<const double> numbers, const std::string& place) {
  for (size_t i = 1; i < numbers.size(); ++i) {
    if (numbers[i] < numbers[i - 1]) Refuse(place, "must not fall");
  }
}

ModelColumn ReadColumn(const Json& json, const std::string& place) {
  Object in(json, place);
  ModelColumn column;
  column.name = ReadText(in.Get("name"), in.Place("name"));
  if (column.name.empty()) Refuse(in.Place("name"), "must not be empty");
  column.unit = in.Text("unit");
  column.role = static_cast<ColumnRole>(
      in.Word("role", static_cast<size_t>(ColumnRole::kPredictor), kColumnRoleNames));
  column.kind = static_cast<ColumnKind>(in.Word("kind", 0, kColumnKindNames));
  if (const Json* spec = in.Find("transform")) {
    const Result<SpecReading> reading = Transform::ReadSpec(ReadText(*spec, in.Place("transform")));
    if (!reading.ok()) Refuse(in.Place("transform"), "is no spec: " + reading.error());
    if (reading.value().needs_estimate()) Refuse(in.Place("transform"), "lacks its arguments");
    column.transform = *reading.value().transform;
  }
  const bool polynomial = column.kind == ColumnKind::kPolynomial;
  column.degree =
      static_cast<int>(in.Integer("degree", 0, polynomial ? 1 : 0, polynomial ? 20 : 0));
  if (polynomial && column.degree == 0) Refuse(place, "lacks degree");
  if (column.role == ColumnRole::kProduct) {
    const Json& parts = Tuple(in.Get("parts"), in.Place("parts"), 2);
    for (size_t i = 0; i < 2; ++i) {
      column.parts[i] = static_cast<int>(
          ReadInteger(parts[i], in.Place("parts"), 1, std::numeric_limits<int>::max()));
    }
  }
  if (const Json* values = in.Find("values")) {
    const std::string where = in.Place("values");
    Tuple(*values, where, 7);
    std::array<double, 5> order;
    for (size_t i = 0; i < order.size(); ++i) order[i] = ReadFinite((*values)[i], where);
    CheckRising(order, where);
    column.observed_low = order[0];
    column.lower_quartile = order[1];
    column.median = order[2];
    column.upper_quartile = order[3];
    column.observed_high = order[4];
    column.mean = ReadNumber((*values)[5], where);
    column.sd = ReadNumber((*values)[6], where);
    if (column.sd < 0) Refuse(where, "must not have a negative sd");
  }
  in.Each("levels", [&](const Json& element, const std::string& where) {
    const Json& level = Tuple(element, where, 2);
    column.levels.push_back(
        {ReadText(level[0], where),
         ReadInteger(level[1], where, 0, std::numeric_limits<std::int64_t>::max())});
    if (column.levels.size() > 1 && column.levels.end()[-2].text >= column.levels.back().text)
      Refuse(where, "is out of byte order");
  });
  const bool category = column.kind == ColumnKind::kCategory;
  if (!column.levels.empty() && !category) Refuse(in.Place("levels"), "belong to a category");
  if (column.levels.size() > kMostLevels) Refuse(in.Place("levels"), "are too many");
  column.reference = static_cast<int>(
      in.Integer("reference", -1, -1, static_cast<std::int64_t>(column.levels.size()) - 1));
  column.reference_given = in.Flag("reference_given", false);
  column.missing = in.Count("missing");
  column.outside = in.Count("outside");
  column.note = in.Text("note");
  in.Done();
  return column;
}

Factor ReadFactor(const Json& json, const std::string& place,
                  const std::vector<ModelColumn>& columns) {
  ReadArray(json, place);
  if (json.empty()) Refuse(place, "must name a column");
  Factor factor;
  factor.column = static_cast<int>(
      ReadInteger(json[0], place, 1, static_cast<std::int64_t>(columns.size()) - 1));
  const ModelColumn& column = columns[static_cast<size_t>(factor.column)];
  if (!column.IsInput()) Refuse(place, "must name an input column");
  if (column.kind == ColumnKind::kCategory) {
    Tuple(json, place, 3);
    ReadInteger(json[1], place, 0, 0);
    factor.level = static_cast<int>(
        ReadInteger(json[2], place, 0, static_cast<std::int64_t>(column.levels.size()) - 1));
  } else {
    Tuple(json, place, 2);
    factor.power = static_cast<int>(ReadInteger(json[1], place, 1, std::max(column.degree, 1)));
  }
  return factor;
}

ModelTerm ReadTerm(const Json& json, const std::string& place, bool is_intercept,
                   const std::vector<ModelColumn>& columns) {
  Object in(json, place);
  ModelTerm term;
  term.name = ReadText(in.Get("name"), in.Place("name"));
  in.Each("factors", [&](const Json& element, const std::string& where) {
    term.factors.push_back(ReadFactor(element, where, columns));
  });
  if (is_intercept != term.factors.empty()) {
    if (is_intercept) Refuse(in.Place("factors"), "must not be there for the intercept");
    const ModelColumn* column = ColumnOfTerm(columns, term.name);
    if (column == nullptr) Refuse(place, "lacks factors");
    term.factors.push_back({.column = static_cast<int>(column - columns.data())});
  }
  term.coefficient = in.Number("coefficient");
  for (size_t kind = 0; kind < kErrorKinds; ++kind) {
    term.standard_error[kind] = in.Number(kErrorKeys[kind]);
    if (term.standard_error[kind] < 0) Refuse(in.Place(kErrorKeys[kind]), "must not be negative");
  }
  if (!is_intercept && ColumnOf(term, columns) < 0)
    Refuse(in.Place("factors"), "are those of no column");
  if (HasPower(term, columns)) term.variance_inflation = in.Number("variance_inflation");
  term.note = in.Text("note");
  in.Done();
  return term;
}

void ReadFacts(const Json& json, Model& model) {
  Object in(json, "facts");
  ModelFacts& facts = model.facts;
  for (const FactKey& key : kFactKeys) {
    const Json* fact = in.Find(key.key);
    if (fact != nullptr) {
      facts.*key.fact = ReadNumber(*fact, in.Place(key.key));
    } else if (key.derived != nullptr) {
      facts.*key.fact = key.derived(model);
    }
  }
  if (std::isnan(facts.residual_df)) Refuse("facts", "lacks residual_df");
  for (const double df : {facts.residual_df, facts.f_df1, facts.f_df2}) {
    if (!std::isnan(df) && !(df >= 0 && df <= kExactIntegers && df == std::nearbyint(df)))
      Refuse("facts", "must have whole degrees of freedom");
  }
  if (facts.residual_sd < 0) Refuse("facts.residual_sd", "must not be negative");
  in.Done();
}

void ReadTest(const Json& json, const std::string& place, Model& model) {
  if (!json.is_array() || (json.size() != 3 && json.size() != 6))
    Refuse(place, "must be an array of 3 or 6");
  const int column = static_cast<int>(
      ReadInteger(json[0], place, 1, static_cast<std::int64_t>(model.columns.size()) - 1));
  const auto parameters = static_cast<int>(ReadInteger(json[1], place, 0, kMostTerms));
  const double inflation = ReadNumber(json[2], place);
  for (size_t j = 0; j < model.terms.size(); ++j) {
    ModelTerm& term = model.terms[j];
    if (ColumnOf(term, model.columns) == column && IsKept(model, j) &&
        !HasPower(term, model.columns))
      term.variance_inflation = inflation;
  }
  ColumnTest test = TestOfOne(model, column, parameters);
  if (json.size() == 6) {
    test.sum_of_squares = ReadNumber(json[3], place);
    test.f = ReadNumber(json[4], place);
    test.p_value = ReadNumber(json[5], place);
  }
  model.tests.push_back(test);
}

Check ReadCheck(const Json& json, const std::string& place) {
  Object in(json, place);
  Check check;
  check.name = ReadText(in.Get("name"), in.Place("name"));
  check.status = kCheckStatus[ReadWord(in.Get("status"), in.Place("status"), kCheckStatus)];
  check.statistic = in.Number("statistic");
  check.df = in.Number("df");
  check.p_value = in.Number("p_value");
  check.finding = in.Text("finding");
  check.remedy = in.Text("remedy");
  in.Done();
  return check;
}

ModelResiduals ReadResiduals(const Json& json) {
  Object in(json, "residuals");
  ModelResiduals residuals;
  if (in.Find("quantiles") != nullptr) {
    residuals.quantiles = in.Finite("quantiles", kResidualProbabilities.size());
    CheckRising(residuals.quantiles, "residuals.quantiles");
  }
  in.Each("bins", [&](const Json& element, const std::string& place) {
    Tuple(element, place, 3);
    residuals.bins.push_back(
        {.rows = ReadInteger(element[0], place, 0, std::numeric_limits<std::int64_t>::max()),
         .mean = ReadNumber(element[1], place),
         .sd = ReadNumber(element[2], place)});
  });
  const size_t bins = residuals.bins.size();
  if (bins > 0) {
    in.Get("fitted");
    const std::vector<double> fitted = in.Finite("fitted", 2);
    CheckRising(fitted, "residuals.fitted");
    for (size_t i = 0; i < bins; ++i) {
      residuals.bins[i].fitted_low = BinEdge(fitted[0], fitted[1], i, bins);
      residuals.bins[i].fitted_high = BinEdge(fitted[0], fitted[1], i + 1, bins);
    }
  }
  in.Done();
  return residuals;
}

Smearing ReadSmearing(const Json* json, const Transform& response) {
  static const Json kNothing = Json::object();
  Object in(json == nullptr ? kNothing : *json, "smearing");
  Smearing smearing;
  smearing.kind = static_cast<Smearing::Kind>(in.Word("kind", 0, kSmearingKindNames));
  if (smearing.kind != SmearingKindOf(response))
    Refuse("smearing.kind", "does not suit the response's transform");
  smearing.values = in.Numbers("values");
  in.CheckSize("values", smearing.values.size(), SmearingValueCount(response));
  if (in.Find("points") != nullptr) smearing.points = in.Packed("points", Object::kAnyCount);
  if (smearing.points.size() % 2 != 0) Refuse("smearing.points", "must be pairs");
  for (size_t i = 0; i < smearing.points.size(); i += 2) {
    if (!(smearing.points[i + 1] > 0)) Refuse("smearing.points", "must have weights above 0");
  }
  in.Done();
  return smearing;
}

KeyValue ReadKey(const Json& json, const std::string& place) {
  if (json.is_null()) return {};
  if (json.is_string()) return json.get<std::string>();
  if (json.is_number_integer()) return json.get<std::int64_t>();
  if (!json.is_number()) Refuse(place, "must begin with a key: null, a number or text");
  return json.get<double>();
}

InfluentialCase ReadCase(const Json& json, const std::string& place, const Model& model) {
  if (!json.is_array() || (json.size() != 3 && json.size() != 4))
    Refuse(place, "must be an array of 3 or 4");
  InfluentialCase row{.key = ReadKey(json[0], place),
                      .leverage = ReadNumber(json[1], place),
                      .studentized_residual = ReadNumber(json[2], place)};
  row.cooks_distance = json.size() == 4
                           ? ReadNumber(json[3], place)
                           : CooksDistanceOf(model, row.studentized_residual, row.leverage);
  return row;
}

Covariance ReadCovariance(const Json& json, size_t rank) {
  Object in(json, "basis.robust");
  Covariance covariance;
  covariance.scale = ReadNumber(in.Get("scale"), in.Place("scale"));
  if (covariance.scale < 0) Refuse(in.Place("scale"), "must not be negative");
  if (const Json* exponent = in.Find("exponent")) {
    covariance.exponent = static_cast<int>(
        ReadInteger(*exponent, in.Place("exponent"), -kMostExponent, kMostExponent));
  }
  if (in.Find("matrix") != nullptr)
    covariance.matrix =
        in.Packed("matrix", static_cast<size_t>(PackedSize(static_cast<Index>(rank))));
  in.Each("unknown", [&](const Json& element, const std::string& place) {
    covariance.unknown.push_back(ReadPacked(element, place));
    if (covariance.unknown.back().size() != rank)
      Refuse(place, "must hold " + std::to_string(rank) + " values");
  });
  in.Done();
  return covariance;
}

Basis ReadBasis(const Json& json, const Model& model) {
  Object in(json, "basis");
  Basis basis;
  CentredBasis& fit = basis.fit;
  fit.columns = static_cast<Index>(model.terms.size());
  fit.intercept = model.intercept;
  for (size_t j = 0; j < model.terms.size(); ++j) {
    if (!IsKept(model, j)) continue;
    fit.kept.push_back(static_cast<Index>(j));
    fit.coefficient.push_back(model.terms[j].coefficient);
  }
  const size_t rank = fit.kept.size();
  fit.centre = in.Packed("centre", rank);
  if (fit.intercept) {
    in.Get("origin");
    const std::vector<double> origin = in.Finite("origin", 2);
    fit.coefficient[0] = {origin[0], origin[1]};
  }
  const std::span<DoubleDouble> slopes = std::span(fit.coefficient).subspan(fit.intercept ? 1 : 0);
  if (HasPolynomial(model)) {
    const std::vector<double> high = in.Packed("slope", slopes.size());
    for (size_t k = 0; k < slopes.size(); ++k) slopes[k] = high[k];
  }
  if (in.Find("slope_low") != nullptr) {
    const std::vector<double> low = in.Packed("slope_low", slopes.size());
    for (size_t k = 0; k < slopes.size(); ++k) slopes[k].lo = low[k];
  }
  const auto packed = static_cast<size_t>(PackedSize(fit.rank()));
  const std::vector<double> factor = in.Packed("factor", packed);
  fit.factor.assign(factor.begin(), factor.end());
  fit.extended = in.Find("factor_low") != nullptr;
  if (fit.extended) {
    const std::vector<double> low = in.Packed("factor_low", packed);
    for (size_t k = 0; k < packed; ++k) fit.factor[k].lo = low[k];
  }
  for (Index j = 0; j < fit.rank(); ++j) {
    if (!(factor[static_cast<size_t>(PackedIndex(j, j))] > 0))
      Refuse("basis.factor", "must have a diagonal above 0");
  }
  if (const Json* robust = in.Find("robust")) basis.robust = ReadCovariance(*robust, rank);
  if (model.errors == ErrorKind::kCluster && model.clusters == 0)
    Refuse("clusters", "must be there for cluster errors");
  if (basis.robust.has_value() != (model.errors != ErrorKind::kClassical))
    Refuse("basis.robust", "must be there exactly for robust errors");
  basis.largest_leverage = in.Number("largest_leverage");
  in.Done();
  return basis;
}

void ReadRows(const Json& json, RowCounts& rows) {
  Object in(json, "rows");
  rows.offered = in.Count("offered");
  rows.fitted = in.Count("fitted");
  rows.with_gaps = in.Count("with_gaps");
  rows.outside = in.Count("outside");
  const std::int64_t left_out = rows.offered - rows.fitted;
  if (left_out < 0 || rows.with_gaps > left_out || rows.outside > left_out)
    Refuse("rows", "must not count more than offered");
  in.Done();
}

void CheckColumns(const Model& model) {
  std::set<std::string_view> names;
  for (size_t i = 0; i < model.columns.size(); ++i) {
    const ModelColumn& column = model.columns[i];
    const std::string place = At("columns", i);
    if (!names.insert(column.name).second) Refuse(place, "repeats the name of another column");
    if ((column.role == ColumnRole::kResponse) != (i == 0))
      Refuse(place, "must be the response exactly if it is the first");
    if (i == 0 && column.kind != ColumnKind::kNumber) Refuse(place, "must be a number");
    if (column.kind == ColumnKind::kCategory && column.transform != Transform())
      Refuse(place, "must have no transform as a category");
    if (column.role == ColumnRole::kProduct) {
      for (const int part : column.parts) {
        const bool there = part < static_cast<int>(model.columns.size());
        const ModelColumn* of = there ? &model.columns[static_cast<size_t>(part)] : nullptr;
        if (of == nullptr || !of->IsInput()) Refuse(place, "must be a product of input columns");
      }
      if (column.parts[0] == column.parts[1]) Refuse(place, "must have two parts");
    }
    if (model.refused()) continue;
    if (column.IsInput() && column.kind == ColumnKind::kText) Refuse(place, "must be no bare text");
    if (column.IsInput() && column.kind != ColumnKind::kCategory && std::isnan(column.observed_low))
      Refuse(place, "lacks values");
  }
}

Model ReadModel(std::string_view text) {
  const Result<Json> json = Json::Parse(text);
  if (!json.ok()) throw Unsound{json.error()};
  Object in(json.value(), "");
  const Json& version = in.Get("ladderline_model");
  if (!version.is_number_integer() || version.get<std::int64_t>() != kModelVersion) {
    throw Unsound{"its format has version " + Excerpt(version.dump(), 40) +
                  ", this build reads version " + std::to_string(kModelVersion)};
  }
  Model model;
  constexpr std::array<std::string_view, 2> kStatus = {"fitted", "refused"};
  const bool refused = ReadWord(in.Get("status"), "status", kStatus) == 1;
  model.reason = in.Text("reason");
  if (refused == model.reason.empty()) Refuse("reason", "must be given exactly if it is refused");
  model.family = ReadText(in.Get("family"), "family");
  if (model.family != "ols") Refuse("family", "is not known");
  model.name = in.Text("name");
  model.intercept = in.Flag("intercept", true);
  model.errors = static_cast<ErrorKind>(in.Word("errors", 0, kErrorKindNames));
  if (const Json* level = in.Find("level")) {
    model.level = ReadFinite(*level, "level");
    if (!(model.level > 0 && model.level < 1)) Refuse("level", "must lie between 0 and 1");
  }
  model.clusters = in.Count("clusters");
  ReadRows(in.Get("rows"), model.rows);
  if (model.clusters > model.rows.fitted) Refuse("clusters", "must not be more than rows");
  in.Each("columns", [&](const Json& element, const std::string& place) {
    model.columns.push_back(ReadColumn(element, place));
  });
  CheckColumns(model);
  model.checks_wanted = in.Flag("checks_wanted", true);
  if (refused) {
    in.Done();
    return model;
  }
  if (model.columns.empty()) Refuse("columns", "must not be empty");
  in.Each("terms", [&](const Json& element, const std::string& place) {
    const bool is_intercept = model.intercept && model.terms.empty();
    model.terms.push_back(ReadTerm(element, place, is_intercept, model.columns));
  });
  if (model.terms.empty() || model.terms.size() > kMostTerms)
    Refuse("terms", "must be 1 to " + std::to_string(kMostTerms));
  model.basis = ReadBasis(in.Get("basis"), model);
  ReadFacts(in.Get("facts"), model);
  in.Each("tests",
          [&](const Json& element, const std::string& place) { ReadTest(element, place, model); });
  in.Each("checks", [&](const Json& element, const std::string& place) {
    model.checks.push_back(ReadCheck(element, place));
  });
  if (const Json* residuals = in.Find("residuals")) model.residuals = ReadResiduals(*residuals);
  model.smearing = ReadSmearing(in.Find("smearing"), model.response().transform);
  in.Each("influence", [&](const Json& element, const std::string& place) {
    model.influence.push_back(ReadCase(element, place, model));
  });
  model.digest = in.Text("digest");
  if (!model.digest.empty() &&
      (model.digest.size() != 32 ||
       model.digest.find_first_not_of("0123456789abcdef") != std::string::npos))
    Refuse("digest", "must be 32 hexadecimal digits");
  in.Done();
  return model;
}

}  // namespace

std::string ModelText(const Model& model) {
  Json out;
  out["ladderline_model"] = kModelVersion;
  out["status"] = model.refused() ? "refused" : "fitted";
  PutText(out, "reason", model.reason);
  out["family"] = model.family;
  PutText(out, "name", model.name);
  PutUnless(out, "intercept", model.intercept, true);
  if (model.errors != ErrorKind::kClassical)
    out["errors"] = kErrorKindNames[static_cast<size_t>(model.errors)];
  PutUnless(out, "level", model.level, 0.95);
  PutUnless<std::int64_t>(out, "clusters", model.clusters, 0);
  Json& rows = out["rows"];
  rows["offered"] = model.rows.offered;
  rows["fitted"] = model.rows.fitted;
  PutUnless<std::int64_t>(rows, "with_gaps", model.rows.with_gaps, 0);
  PutUnless<std::int64_t>(rows, "outside", model.rows.outside, 0);
  for (const ModelColumn& column : model.columns) out["columns"].push_back(ColumnJson(column));
  PutUnless(out, "checks_wanted", model.checks_wanted, true);
  if (!model.refused()) {
    for (const ModelTerm& term : model.terms) out["terms"].push_back(TermJson(term, model));
    out["facts"] = FactsJson(model);
    for (const ColumnTest& test : model.tests) out["tests"].push_back(TestJson(test, model));
    for (const Check& check : model.checks) out["checks"].push_back(CheckJson(check));
    Json residuals = ResidualsJson(model.residuals);
    if (!residuals.empty()) out["residuals"] = std::move(residuals);
    if (model.smearing.kind != Smearing::Kind::kNone) {
      Json& smearing = out["smearing"];
      smearing["kind"] = kSmearingKindNames[static_cast<size_t>(model.smearing.kind)];
      if (!model.smearing.values.empty()) smearing["values"] = NumbersJson(model.smearing.values);
      if (!model.smearing.points.empty()) smearing["points"] = PackNumbers(model.smearing.points);
    }
    for (const InfluentialCase& row : model.influence)
      out["influence"].push_back(CaseJson(row, model));
    out["basis"] = BasisJson(model.basis, HasPolynomial(model));
    PutText(out, "digest", model.digest);
  }
  return out.dump();
}

Result<Model> ModelFromText(std::string_view text) {
  try {
    return ReadModel(text);
  } catch (const Unsound& unsound) {
    return Error{unsound.what};
  }
}

}  // namespace ladderline
