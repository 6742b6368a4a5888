// re_expression_scan: which re-expression suits a column, or a response given its predictors.

#include "core/model/blocked.h"
#include "core/model/predictor_design.h"
#include "core/scan/reading.h"
#include "core/scan/scan.h"
#include "ext/aggregate.h"
#include "ext/column_or_pairs.h"
#include "ext/function_tables.h"
#include "ext/json.h"
#include "ext/labelled_rows.h"

namespace ladderline {
namespace {

// A plain column, 8 bytes a row.
class ColumnToScan {
 public:
  void Step(const Call& call) { Move(call, 1); }
  void Inverse(const Call& call) { Move(call, -1); }

  UsedRows Used() const { return {static_cast<std::int64_t>(values_.size()), missing_, 0}; }
  std::string name() const { return "the measure"; }
  Result<ReExpressionScan> Scan() const { return ScanColumn(values_.Copy()); }

 private:
  void Move(const Call& call, int direction) {
    const std::optional<double> x = call.Number(0);
    if (!x) {
      missing_ += direction;
    } else if (direction > 0) {
      values_.Push(*x);
    } else {
      values_.PopFront();
    }
  }

  Blocked<double> values_;
  std::int64_t missing_ = 0;
};

class PairsToScan final : public LabelledRows {
 public:
  UsedRows Used() const {
    if (!started()) return {};
    const RowCounts& rows = set().rows();
    return {rows.fitted, rows.with_gaps, rows.outside};
  }
  std::string name() const { return started() ? set().column(0).label.name : "the response"; }
  Result<ReExpressionScan> Scan() const {
    if (!started()) return Error{"no rows"};
    const Result<PredictorDesign> design = PredictorDesign::Make(set());
    if (!design.ok()) return Error{design.error()};
    return ScanResponse(set().column(0).numbers.Copy(), design.value().rows());
  }

 private:
  void Prepare(const Call& call, std::vector<Label>& labels) override {
    RequireRaw(call, labels.front(), "the re-expression is what is looked for");
  }
};

struct ScanState : ColumnOrPairs<ColumnToScan, PairsToScan> {
  void Answer(const Call& call) {
    const UsedRows used = Ask([](auto& rows) { return rows.Used(); });
    const Result<ReExpressionScan> scan = Ask([](auto& rows) { return rows.Scan(); });
    Json json;
    json["rows"] = used.rows;
    json["missing"] = used.missing;
    json["outside"] = used.outside;
    json["reading"] = scan.ok()
                          ? ScanReading(scan.value(), Ask([](auto& rows) { return rows.name(); }))
                          : "There is nothing to choose: " + scan.error() + ".";
    json["candidates"] = Json::array();
    if (scan.ok()) {
      for (std::size_t i = 0; i < scan.value().candidates.size(); ++i)
        json["candidates"].push_back(CandidateJson(scan.value(), i));
    }
    call.Return(json.dump());
  }

  static Json CandidateJson(const ReExpressionScan& scan, std::size_t i) {
    const ScannedCandidate& scanned = scan.candidates[i];
    Json json;
    json["rank"] = i + 1;
    json["spec"] = scanned.candidate.transform.spec();
    json["power"] = scanned.candidate.power;
    json["rows_used"] = scanned.rows_used;
    json["rows_outside"] = scanned.rows_outside;
    json["skewness"] = scanned.shape.skewness;
    json["excess_kurtosis"] = scanned.shape.excess_kurtosis;
    json["normal_correlation"] = scanned.shape.normal_correlation;
    json["normal_p"] = scanned.shape.normal_p;
    json["log_likelihood"] = scanned.log_likelihood;
    json["aic"] = scanned.aic;
    json["funnel_p"] = scanned.funnel_p;
    json["reading"] = CandidateReading(scan, i);
    return json;
  }
};

constexpr AggregateMethods kScan = AggregateOf<ScanState>();

constexpr FunctionRow kRows[] = {
    {.name = "re_expression_scan",
     .kind = FunctionRow::Kind::kAggregate,
     .least_arguments = 1,
     .most_arguments = kAnyCount,
     .arguments = "x or label, value, …",
     .purpose = "Tries every re-expression that suits a column, or a response given its "
                "predictors (labelled pairs, the response first and raw), and ranks them by "
                "likelihood on the original scale; what loses rows comes last, and nothing is "
                "recommended that gains no more than chance. JSON with a reading in one sentence.",
     .source = "Box & Cox 1964; Anscombe 1948; Anderson & Darling 1954; Koenker 1981",
     .example = "SELECT re_expression_scan(column1) FROM (VALUES (120), (180), (210), (390), "
                "(2400), (95), (640), (310), (155))",
     .aggregate = &kScan},
};

}  // namespace

std::span<const FunctionRow> ScanFunctions() { return kRows; }

}  // namespace ladderline
