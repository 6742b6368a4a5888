// Text to model, with every part checked; model_text.h documents the format.
#include <algorithm>
#include <cmath>
#include <set>
#include <span>
#include <utility>
#include <vector>

#include "core/model/fit.h"
#include "core/support/text.h"
#include "ext/json.h"
#include "ext/model_text.h"
#include "ext/model_text_rules.h"
#include "ext/packed_numbers.h"

namespace ladderline {
namespace {

using namespace model_text;

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
  column.merged = static_cast<int>(
      in.Integer("merged", -1, -1, static_cast<std::int64_t>(column.levels.size()) - 1));
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
  in.Each("repeats", [&](const Json& element, const std::string& where) {
    const Json& repeat = Tuple(element, where, 2);
    term.repeats.push_back({static_cast<Index>(ReadInteger(repeat[0], where, 0, kMostTerms - 1)),
                            ReadFinite(repeat[1], where)});
  });
  in.Done();
  return term;
}

void ReadFacts(const Json& json, Model& model) {
  Object in(json, "facts");
  ModelFacts& facts = model.facts;
  for (const FactKey& key : FactKeys()) {
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

std::vector<HistogramBin> ReadHistogram(const Json& json, const std::string& place,
                                        std::int64_t fitted) {
  Object in(json, place);
  in.Get("edges");
  std::vector<double> edges;
  in.Each("edges", [&](const Json& element, const std::string& where) {
    edges.push_back(ReadFinite(element, where));
  });
  const bool constant = edges.size() == 2 && edges[0] == edges[1];
  if (edges.size() < 2 || edges.size() > kMostHistogramBins + 1)
    Refuse(in.Place("edges"),
           "must hold 2 to " + std::to_string(kMostHistogramBins + 1) + " values");
  for (size_t i = 1; i < edges.size(); ++i) {
    if (!(edges[i] > edges[i - 1]) && !constant) Refuse(in.Place("edges"), "must rise");
  }
  in.Get("rows");
  std::vector<HistogramBin> bins;
  std::int64_t left = fitted;
  in.Each("rows", [&](const Json& element, const std::string& where) {
    const std::int64_t rows = ReadInteger(element, where, 0, left);
    left -= rows;
    const size_t i = bins.size();
    if (i + 1 < edges.size()) bins.push_back({edges[i], edges[i + 1], static_cast<size_t>(rows)});
  });
  in.CheckSize("rows", json.Find("rows")->size(), edges.size() - 1);
  if (left != 0) Refuse(in.Place("rows"), "must add up to rows.fitted");
  in.Done();
  return bins;
}

ResponseHistogram ReadResponseHistogram(const Json& json, const Model& model) {
  Object in(json, "response_histogram");
  ResponseHistogram histogram;
  histogram.original = ReadHistogram(in.Get("original"), in.Place("original"), model.rows.fitted);
  if (const Json* scaled = in.Find("scaled")) {
    if (model.response().transform == Transform())
      Refuse(in.Place("scaled"), "must not be there for a response without a transform");
    histogram.scaled = ReadHistogram(*scaled, in.Place("scaled"), model.rows.fitted);
  }
  in.Done();
  return histogram;
}

ModelResiduals ReadResiduals(const Json& json) {
  Object in(json, "residuals");
  ModelResiduals residuals;
  if (in.Find("quantiles") != nullptr) {
    residuals.quantiles = in.Numbers("quantiles");
    in.CheckSize("quantiles", residuals.quantiles.size(), kResidualProbabilities.size());
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

void CheckRepeats(const Model& model) {
  for (size_t j = 0; j < model.terms.size(); ++j) {
    const std::string place = At("terms", j) + ".repeats";
    if (!model.terms[j].repeats.empty() && IsKept(model, j))
      Refuse(place, "must be there for a term without a coefficient only");
    for (const Repeat& repeat : model.terms[j].repeats) {
      const auto of = static_cast<size_t>(repeat.column);
      if (of >= model.terms.size() || !IsKept(model, of))
        Refuse(place, "must name terms that are kept");
    }
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
  model.release_floor = in.Count("release_floor");
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
  CheckRepeats(model);
  model.basis = ReadBasis(in.Get("basis"), model);
  ReadFacts(in.Get("facts"), model);
  in.Each("tests",
          [&](const Json& element, const std::string& place) { ReadTest(element, place, model); });
  in.Each("checks", [&](const Json& element, const std::string& place) {
    model.checks.push_back(ReadCheck(element, place));
  });
  if (const Json* histogram = in.Find("response_histogram"))
    model.response_histogram = ReadResponseHistogram(*histogram, model);
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

Result<Model> ModelFromText(std::string_view text) {
  try {
    return ReadModel(text);
  } catch (const Unsound& unsound) {
    return Error{unsound.what};
  }
}

}  // namespace ladderline
