// Model to text; model_text.h documents the format.
#include <charconv>
#include <cmath>
#include <span>
#include <utility>
#include <vector>

#include "core/support/text.h"
#include "ext/json.h"
#include "ext/model_text.h"
#include "ext/model_text_rules.h"
#include "ext/packed_numbers.h"

namespace ladderline {
namespace {

using namespace model_text;

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
  PutUnless(out, "merged", column.merged, -1);
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
  for (const Repeat& repeat : term.repeats)
    out["repeats"].push_back(
        Json::array(std::int64_t{repeat.column}, NumberJson(repeat.coefficient)));
  return out;
}

Json FactsJson(const Model& model) {
  Json out = Json::object();
  for (const FactKey& key : FactKeys()) {
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

Json HistogramJson(std::span<const HistogramBin> bins) {
  Json out;
  out["edges"].push_back(NumberJson(bins.front().low));
  for (const HistogramBin& bin : bins) {
    out["edges"].push_back(NumberJson(bin.high));
    out["rows"].push_back(bin.rows);
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

}  // namespace

std::string ModelText(const Model& model) {
  Json out;
  out["ladderline_model"] = kModelVersion;
  out["status"] = model.refused() ? "refused" : "fitted";
  PutText(out, "reason", model.reason);
  PutUnless<std::int64_t>(out, "release_floor", model.release_floor, 0);
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
    const ResponseHistogram& histogram = model.response_histogram;
    if (!histogram.original.empty()) {
      Json& out_histogram = out["response_histogram"];
      out_histogram["original"] = HistogramJson(histogram.original);
      if (!histogram.scaled.empty()) out_histogram["scaled"] = HistogramJson(histogram.scaled);
    }
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

}  // namespace ladderline
