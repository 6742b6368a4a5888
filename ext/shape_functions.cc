// The shape of a column and its pictures: JSON results, and the tables they are read as.
#include <cmath>

#include "core/describe/histogram.h"
#include "core/describe/shape.h"
#include "core/normality/normal_scores.h"
#include "core/support/text.h"
#include "ext/aggregate.h"
#include "ext/column_state.h"
#include "ext/function_tables.h"
#include "ext/json.h"
#include "ext/results.h"
#include "ext/table.h"

namespace ladderline {
namespace {

// ---- Aggregates ----

struct ShapeState : ColumnState {
  void Answer(const Call& call) {
    if (rows() == 0) return call.ReturnNull();
    const ColumnShape shape = ShapeOfColumn(InOrder());
    Json json;
    json["rows"] = shape.rows;
    json["missing"] = missing();
    json["zeros"] = shape.zeros;
    json["negatives"] = shape.negatives;
    json["least"] = shape.least;
    json["lower_quartile"] = shape.lower_quartile;
    json["median"] = shape.median;
    json["upper_quartile"] = shape.upper_quartile;
    json["largest"] = shape.largest;
    json["mean"] = shape.mean;
    json["sd"] = shape.sd;
    json["skewness"] = shape.skewness;
    json["excess_kurtosis"] = shape.excess_kurtosis;
    json["reading"] = ShapeReading(shape);
    call.Return(json.dump());
  }
};

// A column with a second argument: how many of something, one number for the whole group. A row
// without it is missing.
template <std::size_t kMost>
class CountedState : public ColumnState {
 public:
  void Step(const Call& call) { Add(Read(call)); }
  void Inverse(const Call& call) { Remove(Read(call)); }

 protected:
  std::optional<std::size_t> count() const { return count_; }

 private:
  std::optional<double> Read(const Call& call) {
    const std::optional<double> x = call.Number(0);
    if (!call.Has(1)) return x;
    const std::optional<double> count = call.Number(1);
    if (!count) return std::nullopt;
    if (!(*count >= 1 && *count <= static_cast<double>(kMost) && std::floor(*count) == *count))
      call.ThrowBad(1, "must be a whole number from 1 to " + std::to_string(kMost));
    const auto whole = static_cast<std::size_t>(*count);
    if (count_ && *count_ != whole) {
      call.ThrowBad(1,
                    "must stay the same within a group, where it was " + std::to_string(*count_));
    }
    count_ = whole;
    return x;
  }

  std::optional<std::size_t> count_;
};

struct HistogramState : CountedState<kMostBins> {
  void Answer(const Call& call) {
    if (rows() == 0) return call.ReturnNull();
    const std::vector<double> values = InOrder();
    Json bins = Json::array();
    for (const HistogramBin& bin : count() ? Histogram(values, *count()) : Histogram(values))
      bins.push_back(Json::array(bin.low, bin.high, bin.rows));
    Json json;
    json["rows"] = rows();
    json["missing"] = missing();
    json["bins"] = std::move(bins);
    call.Return(json.dump());
  }
};

constexpr std::size_t kMostPoints = 1'000'000;
constexpr std::size_t kUsualPoints = 1000;  // as many as a plot can show

struct QuantileState : CountedState<kMostPoints> {
  void Answer(const Call& call) {
    if (rows() == 0) return call.ReturnNull();
    Json pairs = Json::array();
    for (const QuantilePair& pair : QuantilePairs(InOrder(), count().value_or(kUsualPoints)))
      pairs.push_back(Json::array(pair.normal_score, pair.value));
    Json json;
    json["rows"] = rows();
    json["missing"] = missing();
    json["pairs"] = std::move(pairs);
    call.Return(json.dump());
  }
};

// ---- Tables ----

// The argument as JSON; anything that is none is null.
Json Parse(const TableCall& call) {
  const std::string_view text = TextOf(call.value(0));
  Result<Json> json = Json::Parse(text);
  return json.ok() ? std::move(json).value() : Json();
}

bool IsNull(const TableCall& call) { return sqlite3_value_type(call.value(0)) == SQLITE_NULL; }

// Counts beyond this are no counts of rows; sums of a few thousand such do not overflow.
constexpr std::uint64_t kMostRows = std::uint64_t{1} << 48;

bool IsCount(const Json& value, std::uint64_t least = 0) {
  return value.is_number_integer() && value.get<std::int64_t>() >= 0 &&
         value.get<std::uint64_t>() >= least && value.get<std::uint64_t>() <= kMostRows;
}

// An object with the counts of rows and, besides them, the array `key`, which is not empty.
bool IsListResult(const Json& result, const char* key) {
  return result.is_object() && result.size() == 3 && result.contains("rows") &&
         IsCount(result["rows"], 1) && result.contains("missing") && IsCount(result["missing"]) &&
         result.contains(key) && result[key].is_array() && !result[key].empty();
}

constexpr const char* kShapeNames[] = {
    "rows",           "missing", "zeros", "negatives", "least",    "lower_quartile",  "median",
    "upper_quartile", "largest", "mean",  "sd",        "skewness", "excess_kurtosis", "reading"};

bool IsShape(const Json& result) {
  if (!result.is_object() || result.size() != std::size(kShapeNames)) return false;
  for (const char* name : kShapeNames)
    if (!result.contains(name)) return false;
  for (const char* name : {"missing", "zeros", "negatives"})
    if (!IsCount(result[name])) return false;
  for (const char* name : {"sd", "skewness", "excess_kurtosis"})
    if (!result[name].is_number() && !result[name].is_null()) return false;
  double before = -HUGE_VAL;
  for (const char* name : {"least", "lower_quartile", "median", "upper_quartile", "largest"}) {
    if (!result[name].is_number() || result[name].get<double>() < before) return false;
    before = result[name].get<double>();
  }
  return IsCount(result["rows"], 1) && result["mean"].is_number() && result["reading"].is_string();
}

std::vector<TableRow> ShapeRows(const TableCall& call) {
  if (IsNull(call)) return {};
  const Json result = Parse(call);
  if (!IsShape(result)) call.ThrowBad(0, "must be a result of shape_summary");
  std::vector<TableRow> rows;
  for (const char* name : kShapeNames) rows.push_back({std::string(name), CellOf(result[name])});
  return rows;
}

bool IsBin(const Json& bin) {
  return bin.is_array() && bin.size() == 3 && bin[0].is_number() && bin[1].is_number() &&
         IsCount(bin[2]);
}

// Adjacent bins of some width (a single one may have none) whose rows add up.
bool IsHistogram(const Json& result) {
  if (!IsListResult(result, "bins")) return false;
  const Json& bins = result["bins"];
  if (bins.size() > kMostBins) return false;
  std::uint64_t rows = 0;
  for (std::size_t i = 0; i < bins.size(); ++i) {
    if (!IsBin(bins[i])) return false;
    const double low = bins[i][0].get<double>(), high = bins[i][1].get<double>();
    if (low > high || (low == high && bins.size() > 1)) return false;
    if (i > 0 && low != bins[i - 1][1].get<double>()) return false;
    rows += bins[i][2].get<std::uint64_t>();
  }
  return rows == result["rows"].get<std::uint64_t>();
}

std::vector<TableRow> HistogramRows(const TableCall& call) {
  if (IsNull(call)) return {};
  const Json result = Parse(call);
  if (!IsHistogram(result)) call.ThrowBad(0, "must be a result of histogram_bins");
  std::uint64_t most = 0;
  for (const Json& bin : result["bins"]) most = std::max(most, bin[2].get<std::uint64_t>());
  std::vector<TableRow> rows;
  for (const Json& bin : result["bins"]) {
    const auto count = bin[2].get<std::int64_t>();
    rows.push_back({bin[0].get<double>(), bin[1].get<double>(), count,
                    static_cast<double>(count) / result["rows"].get<double>(),
                    HistogramBar(static_cast<std::size_t>(count), most)});
  }
  return rows;
}

// Rising scores with values that never fall.
bool IsQuantiles(const Json& result) {
  if (!IsListResult(result, "pairs")) return false;
  const Json& pairs = result["pairs"];
  if (pairs.size() > result["rows"].get<std::uint64_t>()) return false;
  double score = -HUGE_VAL, value = -HUGE_VAL;
  for (const Json& pair : pairs) {
    if (!pair.is_array() || pair.size() != 2 || !pair[0].is_number() || !pair[1].is_number() ||
        pair[0].get<double>() <= score || pair[1].get<double>() < value)
      return false;
    score = pair[0].get<double>();
    value = pair[1].get<double>();
  }
  return true;
}

std::vector<TableRow> QuantileRows(const TableCall& call) {
  if (IsNull(call)) return {};
  const Json result = Parse(call);
  if (!IsQuantiles(result)) call.ThrowBad(0, "must be a result of quantile_pairs");
  std::vector<TableRow> rows;
  for (const Json& pair : result["pairs"])
    rows.push_back({pair[0].get<double>(), pair[1].get<double>()});
  return rows;
}

// ---- Registration ----

constexpr AggregateMethods kShape = AggregateOf<ShapeState>();
constexpr AggregateMethods kHistogram = AggregateOf<HistogramState>();
constexpr AggregateMethods kQuantiles = AggregateOf<QuantileState>();
constexpr TableMethods kShapeRows = {"name TEXT, value", ShapeRows};
constexpr TableMethods kHistogramRows = {
    "low REAL, high REAL, rows INTEGER, share REAL, sketch TEXT", HistogramRows};
constexpr TableMethods kQuantileRows = {"normal_score REAL, value REAL", QuantileRows};

constexpr const char* kFreedmanDiaconis = "Freedman & Diaconis 1981";
constexpr const char* kBlom = "Blom 1958";

// Days that eight repairs stayed open.
#define LADDERLINE_OF_DAYS(call) \
  "SELECT " call " FROM (VALUES (2), (3), (3), (5), ('8'), (13), (40), (NULL), (0))"

constexpr FunctionRow kRows[] = {
    {.name = "shape_summary",
     .kind = FunctionRow::Kind::kAggregate,
     .least_arguments = 1,
     .most_arguments = 1,
     .arguments = "x",
     .purpose = "The shape of a column as JSON: rows, missing, zeros, negatives, quartiles and "
                "ends, mean, sd, skewness, excess kurtosis, and a reading in one sentence.",
     .source = "Joanes & Gill 1998",
     .example = LADDERLINE_OF_DAYS("shape_summary(column1)"),
     .aggregate = &kShape},
    {.name = "shape_summary_rows",
     .kind = FunctionRow::Kind::kTable,
     .least_arguments = 1,
     .most_arguments = 1,
     .arguments = "result",
     .purpose = "A shape_summary as a table, one row for each figure.",
     .source = "",
     .example =
         "SELECT * FROM shape_summary_rows((" LADDERLINE_OF_DAYS("shape_summary(column1)") "))",
     .table = &kShapeRows},
    {.name = "histogram_bins",
     .kind = FunctionRow::Kind::kAggregate,
     .least_arguments = 1,
     .most_arguments = 2,
     .arguments = "x [, bins]",
     .purpose = "Counts of values in bins of equal width as JSON: as many bins as asked for, from "
                "the least value to the largest, else up to 40 of a readable width that suits the "
                "data.",
     .source = kFreedmanDiaconis,
     .example = LADDERLINE_OF_DAYS("histogram_bins(column1, 5)"),
     .aggregate = &kHistogram},
    {.name = "histogram_rows",
     .kind = FunctionRow::Kind::kTable,
     .least_arguments = 1,
     .most_arguments = 1,
     .arguments = "result",
     .purpose =
         "A histogram_bins as a table with a sketch: one row for each bin, from low to below "
         "high (the last one's high included).",
     .source = "",
     .example = "SELECT * FROM histogram_rows((" LADDERLINE_OF_DAYS("histogram_bins(column1)") "))",
     .table = &kHistogramRows},
    {.name = "quantile_pairs",
     .kind = FunctionRow::Kind::kAggregate,
     .least_arguments = 1,
     .most_arguments = 2,
     .arguments = "x [, points = 1000]",
     .purpose = "Values in order beside where a normal column would have them, as JSON; of more "
                "rows than points, evenly spaced ones with both ends.",
     .source = kBlom,
     .example = LADDERLINE_OF_DAYS("quantile_pairs(column1)"),
     .aggregate = &kQuantiles},
    {.name = "quantile_rows",
     .kind = FunctionRow::Kind::kTable,
     .least_arguments = 1,
     .most_arguments = 1,
     .arguments = "result",
     .purpose = "A quantile_pairs as a table: plotted against each other, normal values lie on a "
                "straight line.",
     .source = kBlom,
     .example = "SELECT * FROM quantile_rows((" LADDERLINE_OF_DAYS("quantile_pairs(column1)") "))",
     .table = &kQuantileRows},
};

}  // namespace

std::span<const FunctionRow> ShapeFunctions() { return kRows; }

}  // namespace ladderline
