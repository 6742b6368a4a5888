// Charts as text: aggregates that draw their rows as SVG, to stand in a page as they are.
#include <array>
#include <deque>
#include <limits>
#include <string>
#include <utility>
#include <vector>

#include "core/chart/histogram_chart.h"
#include "core/chart/intervals_chart.h"
#include "core/chart/points_chart.h"
#include "core/support/text.h"
#include "ext/aggregate.h"
#include "ext/function_tables.h"

namespace ladderline {
namespace {

// The first kTexts arguments name the chart and its axes, the same in every row; the others are a
// row of figures, which kRead takes, or nothing where one that is needed is missing.
template <int kTexts, class Row, std::optional<Row> (*kRead)(const Call&)>
class ChartState {
 public:
  void Step(const Call& call) {
    std::optional<Row> row = Read(call);
    if (row) {
      rows_.push_back(std::move(*row));
    } else {
      ++skipped_;
    }
  }
  void Inverse(const Call& call) {
    if (Read(call)) {
      rows_.pop_front();
    } else {
      --skipped_;
    }
  }

 protected:
  bool empty() const { return rows_.empty(); }
  std::vector<Row> rows() const { return {rows_.begin(), rows_.end()}; }
  const std::string& text(std::size_t i) const { return texts_[i]; }
  std::int64_t skipped() const { return skipped_; }
  static void Send(const Call& call, Result<std::string> chart) {
    if (!chart.ok()) call.Throw(chart.error());
    call.Return(std::move(chart).value());
  }

 private:
  std::optional<Row> Read(const Call& call) {
    std::array<std::string_view, kTexts> texts;
    bool missing = false;
    for (int i = 0; i < kTexts; ++i) {
      const std::optional<std::string_view> text = call.Text(i);
      missing = missing || !text;
      texts[static_cast<std::size_t>(i)] = text.value_or(std::string_view());
    }
    std::optional<Row> row = kRead(call);
    if (missing) return std::nullopt;
    for (std::size_t i = 0; i < kTexts; ++i) {
      if (!named_) {
        texts_[i] = texts[i];
      } else if (texts_[i] != texts[i]) {
        call.ThrowBad(static_cast<int>(i), "must stay the same within a group, where it was '" +
                                               Excerpt(texts_[i], 40) + "'");
      }
    }
    named_ = true;
    return row;
  }

  bool named_ = false;
  std::array<std::string, kTexts> texts_;
  std::deque<Row> rows_;
  std::int64_t skipped_ = 0;
};

double NumberOrNaN(const Call& call, int i) {
  return call.Has(i) ? call.Number(i).value_or(std::numeric_limits<double>::quiet_NaN())
                     : std::numeric_limits<double>::quiet_NaN();
}

// ---- chart_histogram ----

std::optional<ChartBin> ReadBin(const Call& call) {
  const std::optional<double> low = call.Number(2), high = call.Number(3), rows = call.Number(4);
  if (!low || !high || !rows) return std::nullopt;
  return ChartBin{*low, *high, *rows};
}

struct HistogramChartState : ChartState<2, ChartBin, ReadBin> {
  void Answer(const Call& call) const {
    if (empty()) return call.ReturnNull();
    Send(call, HistogramChart(text(0), text(1), rows(), skipped()));
  }
};

// ---- chart_points ----

std::optional<ChartPoint> ReadPoint(const Call& call) {
  const std::optional<double> x = call.Number(3), y = call.Number(4);
  const double guide = NumberOrNaN(call, 5), low = NumberOrNaN(call, 6),
               high = NumberOrNaN(call, 7);
  if (!x || !y) return std::nullopt;
  return ChartPoint{*x, *y, guide, low, high};
}

struct PointsChartState : ChartState<3, ChartPoint, ReadPoint> {
  void Answer(const Call& call) const {
    if (empty()) return call.ReturnNull();
    call.Return(PointsChart(text(0), text(1), text(2), rows(), skipped()));
  }
};

// ---- chart_intervals ----

std::optional<ChartInterval> ReadInterval(const Call& call) {
  const std::optional<std::string_view> name = call.Text(2);
  const std::optional<double> middle = call.Number(3);
  const double low = NumberOrNaN(call, 4), high = NumberOrNaN(call, 5);
  if (!name || !middle) return std::nullopt;
  return ChartInterval{std::string(*name), *middle, low, high};
}

struct IntervalsChartState : ChartState<2, ChartInterval, ReadInterval> {
  void Answer(const Call& call) const {
    if (empty()) return call.ReturnNull();
    Send(call, IntervalsChart(text(0), text(1), rows(), skipped()));
  }
};

constexpr AggregateMethods kHistogram = AggregateOf<HistogramChartState>();
constexpr AggregateMethods kPoints = AggregateOf<PointsChartState>();
constexpr AggregateMethods kIntervals = AggregateOf<IntervalsChartState>();

constexpr FunctionRow kRows[] = {
    Aggregate("chart_histogram", 5, 5, "title, axis, low, high, rows", kHistogram,
              "A histogram as SVG, one bin a row; what is given twice for a bin adds up.", "",
              "SELECT chart_histogram('Cost of repairs', 'cost (EUR)', low, high, rows) FROM "
              "(SELECT 0 AS low, 100 AS high, 12 AS rows UNION ALL SELECT 100, 200, 5)"),
    Aggregate(
        "chart_points", 5, 8, "title, x_axis, y_axis, x, y [, guide [, low, high]]", kPoints,
        "Points as SVG, each with a bar from low to high where these are given, and a dashed line "
        "through the guides.",
        "",
        "SELECT chart_points('Cost and age', 'age (years)', 'cost (EUR)', age, cost) FROM "
        "(SELECT 10 AS age, 120 AS cost UNION ALL SELECT 40, 300)"),
    Aggregate(
        "chart_intervals", 6, 6, "title, axis, name, middle, low, high", kIntervals,
        "Named figures with their limits as SVG, one under the other in the order of the rows. A "
        "limit that is NULL leaves its side open; both: there are no limits.",
        "",
        "SELECT chart_intervals('Repairs in 2024', 'per 1,000 dwellings', area, rate, low, high) "
        "FROM (SELECT 'Northfold' AS area, 12.5 AS rate, 9.1 AS low, 16.8 AS high "
        "UNION ALL SELECT 'Marrow Quay', 20.2, 15, 26.5)"),
};

}  // namespace

std::span<const FunctionRow> ChartFunctions() { return kRows; }

}  // namespace ladderline
