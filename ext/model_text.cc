#include "ext/model_text.h"

#include <algorithm>
#include <cmath>
#include <set>
#include <span>
#include <utility>
#include <vector>

#include "core/model/fit.h"
#include "core/support/text.h"
#include "ext/json.h"

namespace ladderline {
namespace {

// A fact of ModelFacts and its key, in the order of writing.
struct FactKey {
  const char* key;
  double ModelFacts::*fact;
};
constexpr FactKey kFactKeys[] = {
    {"residual_df", &ModelFacts::residual_df},
    {"residual_sd", &ModelFacts::residual_sd},
    {"median_absolute_error", &ModelFacts::median_absolute_error},
    {"r_squared", &ModelFacts::r_squared},
    {"adjusted_r_squared", &ModelFacts::adjusted_r_squared},
    {"f", &ModelFacts::f},
    {"f_df1", &ModelFacts::f_df1},
    {"f_df2", &ModelFacts::f_df2},
    {"f_p", &ModelFacts::f_p},
    {"log_likelihood", &ModelFacts::log_likelihood},
    {"aic", &ModelFacts::aic},
    {"bic", &ModelFacts::bic},
    {"log_likelihood_original", &ModelFacts::log_likelihood_original},
    {"aic_original", &ModelFacts::aic_original},
    {"bic_original", &ModelFacts::bic_original},
    {"press", &ModelFacts::press},
};

// Keys of a term's standard errors, by ErrorKind.
constexpr std::array<const char*, kErrorKinds> kErrorKeys = {
    "standard_error", "hc0", "hc1", "hc2", "hc3", "cluster"};

constexpr std::array<std::string_view, 4> kCheckStatus = {"fine", "look", "problem",
                                                          "not computed"};

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
  if (!std::isnan(column.observed_low))
    out["observed"] = NumbersJson(std::array{column.observed_low, column.observed_high});
  if (!std::isnan(column.median)) {
    out["quartiles"] =
        NumbersJson(std::array{column.lower_quartile, column.median, column.upper_quartile});
  }
  PutNumber(out, "mean", column.mean);
  PutNumber(out, "sd", column.sd);
  for (const CategoryLevel& level : column.levels)
    out["levels"].push_back(Json::array(level.text, level.rows));
  PutUnless(out, "reference", column.reference, -1);
  PutUnless(out, "reference_given", column.reference_given, false);
  PutUnless<std::int64_t>(out, "missing", column.missing, 0);
  PutUnless<std::int64_t>(out, "outside", column.outside, 0);
  PutText(out, "note", column.note);
  return out;
}

Json TermJson(const ModelTerm& term) {
  Json out;
  out["name"] = term.name;
  Json factors = Json::array();
  for (const Factor& factor : term.factors) {
    factors.push_back(factor.level < 0 ? Json::array(factor.column, factor.power)
                                       : Json::array(factor.column, 0, factor.level));
  }
  out["factors"] = std::move(factors);
  out["coefficient"] = NumberJson(term.coefficient);
  for (size_t kind = 0; kind < kErrorKinds; ++kind)
    PutNumber(out, kErrorKeys[kind], term.standard_error[kind]);
  PutNumber(out, "variance_inflation", term.variance_inflation);
  PutText(out, "note", term.note);
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

Json BasisJson(const Basis& basis) {
  const CentredBasis& fit = basis.fit;
  Json out;
  if (fit.rank() != fit.columns) {
    Json& kept = out["kept"] = Json::array();
    for (const Index j : fit.kept) kept.push_back(j);
  }
  out["centre"] = NumbersJson(fit.centre);
  Json high = Json::array(), low = Json::array();
  for (const DoubleDouble beta : fit.coefficient) {
    high.push_back(NumberJson(beta.hi));
    low.push_back(NumberJson(beta.lo));
  }
  out["coefficient"] = std::move(high);
  const auto has_low = [](DoubleDouble number) { return number.lo != 0; };
  if (std::any_of(fit.coefficient.begin(), fit.coefficient.end(), has_low))
    out["coefficient_low"] = std::move(low);
  high = Json::array();
  low = Json::array();
  for (const DoubleDouble r : fit.factor) {
    high.push_back(NumberJson(r.hi));
    if (fit.extended) low.push_back(NumberJson(r.lo));
  }
  out["factor"] = std::move(high);
  if (fit.extended) out["factor_low"] = std::move(low);
  if (basis.robust) {
    Json& robust = out["robust"];
    robust["scale"] = NumberJson(basis.robust->scale);
    if (!basis.robust->matrix.empty()) robust["matrix"] = NumbersJson(basis.robust->matrix);
    for (const std::vector<double>& direction : basis.robust->unknown)
      robust["unknown"].push_back(NumbersJson(direction));
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
  if (in.Find("observed") != nullptr) {
    const std::vector<double> observed = in.Finite("observed", 2);
    CheckRising(observed, in.Place("observed"));
    column.observed_low = observed[0];
    column.observed_high = observed[1];
  }
  if (in.Find("quartiles") != nullptr) {
    const std::vector<double> quartiles = in.Finite("quartiles", 3);
    CheckRising(quartiles, in.Place("quartiles"));
    column.lower_quartile = quartiles[0];
    column.median = quartiles[1];
    column.upper_quartile = quartiles[2];
  }
  column.mean = in.Number("mean");
  column.sd = in.Number("sd");
  if (column.sd < 0) Refuse(in.Place("sd"), "must not be negative");
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

ModelTerm ReadTerm(const Json& json, const std::string& place,
                   const std::vector<ModelColumn>& columns) {
  Object in(json, place);
  ModelTerm term;
  term.name = ReadText(in.Get("name"), in.Place("name"));
  in.Each("factors", [&](const Json& element, const std::string& where) {
    term.factors.push_back(ReadFactor(element, where, columns));
  });
  term.coefficient = in.Number("coefficient");
  for (size_t kind = 0; kind < kErrorKinds; ++kind) {
    term.standard_error[kind] = in.Number(kErrorKeys[kind]);
    if (term.standard_error[kind] < 0) Refuse(in.Place(kErrorKeys[kind]), "must not be negative");
  }
  term.variance_inflation = in.Number("variance_inflation");
  term.note = in.Text("note");
  in.Done();
  return term;
}

ModelFacts ReadFacts(const Json& json) {
  Object in(json, "facts");
  ModelFacts facts;
  for (const FactKey& fact : kFactKeys) facts.*fact.fact = in.Number(fact.key);
  if (std::isnan(facts.residual_df)) Refuse("facts", "lacks residual_df");
  for (const double df : {facts.residual_df, facts.f_df1, facts.f_df2}) {
    if (!std::isnan(df) && !(df >= 0 && df <= kExactIntegers && df == std::nearbyint(df)))
      Refuse("facts", "must have whole degrees of freedom");
  }
  if (facts.residual_sd < 0) Refuse("facts.residual_sd", "must not be negative");
  in.Done();
  return facts;
}

ColumnTest ReadTest(const Json& json, const std::string& place,
                    const std::vector<ModelColumn>& columns) {
  Tuple(json, place, 5);
  ColumnTest test;
  test.column = static_cast<int>(
      ReadInteger(json[0], place, 1, static_cast<std::int64_t>(columns.size()) - 1));
  test.parameters = static_cast<int>(ReadInteger(json[1], place, 0, kMostTerms));
  test.sum_of_squares = ReadNumber(json[2], place);
  test.f = ReadNumber(json[3], place);
  test.p_value = ReadNumber(json[4], place);
  return test;
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
    Tuple(element, place, 5);
    residuals.bins.push_back(
        {.fitted_low = ReadFinite(element[0], place),
         .fitted_high = ReadFinite(element[1], place),
         .rows = ReadInteger(element[2], place, 0, std::numeric_limits<std::int64_t>::max()),
         .mean = ReadNumber(element[3], place),
         .sd = ReadNumber(element[4], place)});
  });
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
  in.Each("points", [&](const Json& element, const std::string& place) {
    smearing.points.push_back(ReadFinite(element, place));
  });
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

InfluentialCase ReadCase(const Json& json, const std::string& place) {
  Tuple(json, place, 4);
  return {.key = ReadKey(json[0], place),
          .cooks_distance = ReadNumber(json[1], place),
          .leverage = ReadNumber(json[2], place),
          .studentized_residual = ReadNumber(json[3], place)};
}

std::vector<DoubleDouble> WithLow(std::span<const double> high, std::span<const double> low) {
  std::vector<DoubleDouble> numbers(high.begin(), high.end());
  for (size_t i = 0; i < low.size(); ++i) numbers[i].lo = low[i];
  return numbers;
}

Covariance ReadCovariance(const Json& json, size_t rank) {
  Object in(json, "basis.robust");
  Covariance covariance;
  covariance.scale = ReadNumber(in.Get("scale"), in.Place("scale"));
  if (covariance.scale < 0) Refuse(in.Place("scale"), "must not be negative");
  if (in.Find("matrix") != nullptr)
    covariance.matrix =
        in.Finite("matrix", static_cast<size_t>(PackedSize(static_cast<Index>(rank))));
  in.Each("unknown", [&](const Json& element, const std::string& place) {
    Tuple(element, place, rank);
    std::vector<double>& direction = covariance.unknown.emplace_back();
    for (const Json& number : element) direction.push_back(ReadFinite(number, place));
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
  if (in.Find("kept") != nullptr) {
    in.Each("kept", [&](const Json& element, const std::string& place) {
      const Index least = fit.kept.empty() ? 0 : fit.kept.back() + 1;
      fit.kept.push_back(ReadInteger(element, place, least, fit.columns - 1));
    });
    if (fit.intercept && (fit.kept.empty() || fit.kept[0] != 0))
      Refuse("basis.kept", "must begin with the intercept");
  } else {
    for (Index j = 0; j < fit.columns; ++j) fit.kept.push_back(j);
  }
  const auto rank = static_cast<size_t>(fit.rank());
  const auto packed = static_cast<size_t>(PackedSize(fit.rank()));
  fit.centre = in.Finite("centre", rank);
  const std::vector<double> beta = in.Finite("coefficient", rank);
  const bool beta_low = in.Find("coefficient_low") != nullptr;
  fit.coefficient =
      WithLow(beta, beta_low ? in.Finite("coefficient_low", rank) : std::vector<double>());
  const std::vector<double> factor = in.Finite("factor", packed);
  fit.extended = in.Find("factor_low") != nullptr;
  fit.factor =
      WithLow(factor, fit.extended ? in.Finite("factor_low", packed) : std::vector<double>());
  for (Index j = 0; j < fit.rank(); ++j) {
    if (!(factor[static_cast<size_t>(PackedIndex(j, j))] > 0))
      Refuse("basis.factor", "must have a diagonal above 0");
  }
  if (const Json* robust = in.Find("robust")) basis.robust = ReadCovariance(*robust, rank);
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
    if (model.refused()) continue;
    if (column.IsInput() && column.kind == ColumnKind::kText) Refuse(place, "must be no bare text");
    if (column.IsInput() && column.kind != ColumnKind::kCategory && std::isnan(column.observed_low))
      Refuse(place, "lacks observed");
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
  ReadRows(in.Get("rows"), model.rows);
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
    model.terms.push_back(ReadTerm(element, place, model.columns));
    const bool intercept = model.intercept && model.terms.size() == 1;
    if (model.terms.back().factors.empty() != intercept)
      Refuse(place, "must have factors exactly if it is not the intercept");
  });
  if (model.terms.empty() || model.terms.size() > kMostTerms)
    Refuse("terms", "must be 1 to " + std::to_string(kMostTerms));
  model.facts = ReadFacts(in.Get("facts"));
  in.Each("tests", [&](const Json& element, const std::string& place) {
    model.tests.push_back(ReadTest(element, place, model.columns));
  });
  in.Each("checks", [&](const Json& element, const std::string& place) {
    model.checks.push_back(ReadCheck(element, place));
  });
  if (const Json* residuals = in.Find("residuals")) model.residuals = ReadResiduals(*residuals);
  model.smearing = ReadSmearing(in.Find("smearing"), model.response().transform);
  in.Each("influence", [&](const Json& element, const std::string& place) {
    model.influence.push_back(ReadCase(element, place));
  });
  model.basis = ReadBasis(in.Get("basis"), model);
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
  Json& rows = out["rows"];
  rows["offered"] = model.rows.offered;
  rows["fitted"] = model.rows.fitted;
  PutUnless<std::int64_t>(rows, "with_gaps", model.rows.with_gaps, 0);
  PutUnless<std::int64_t>(rows, "outside", model.rows.outside, 0);
  for (const ModelColumn& column : model.columns) out["columns"].push_back(ColumnJson(column));
  PutUnless(out, "checks_wanted", model.checks_wanted, true);
  if (!model.refused()) {
    for (const ModelTerm& term : model.terms) out["terms"].push_back(TermJson(term));
    Json& facts = out["facts"];
    for (const FactKey& fact : kFactKeys) PutNumber(facts, fact.key, model.facts.*fact.fact);
    for (const ColumnTest& test : model.tests) {
      out["tests"].push_back(Json::array(test.column, test.parameters,
                                         NumberJson(test.sum_of_squares), NumberJson(test.f),
                                         NumberJson(test.p_value)));
    }
    for (const Check& check : model.checks) out["checks"].push_back(CheckJson(check));
    if (!model.residuals.quantiles.empty())
      out["residuals"]["quantiles"] = NumbersJson(model.residuals.quantiles);
    for (const ResidualBin& bin : model.residuals.bins) {
      out["residuals"]["bins"].push_back(Json::array(NumberJson(bin.fitted_low),
                                                     NumberJson(bin.fitted_high), bin.rows,
                                                     NumberJson(bin.mean), NumberJson(bin.sd)));
    }
    if (model.smearing.kind != Smearing::Kind::kNone) {
      Json& smearing = out["smearing"];
      smearing["kind"] = kSmearingKindNames[static_cast<size_t>(model.smearing.kind)];
      if (!model.smearing.values.empty()) smearing["values"] = NumbersJson(model.smearing.values);
      if (!model.smearing.points.empty()) smearing["points"] = NumbersJson(model.smearing.points);
    }
    for (const InfluentialCase& row : model.influence) {
      out["influence"].push_back(Json::array(KeyJson(row.key), NumberJson(row.cooks_distance),
                                             NumberJson(row.leverage),
                                             NumberJson(row.studentized_residual)));
    }
    out["basis"] = BasisJson(model.basis);
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
