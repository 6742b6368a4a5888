// Aggregates over values in order: medians, percentiles, the median absolute deviation.
#include <cmath>

#include "core/describe/ordered_frame.h"
#include "core/support/text.h"
#include "ext/aggregate.h"
#include "ext/function_tables.h"

namespace ladderline {
namespace {

template <double (OrderedFrame::*kFigure)()>
struct OrderState {
  OrderedFrame frame;
  void Step(const Call& call) {
    if (const std::optional<double> x = call.Number(0)) frame.Add(*x);
  }
  void Inverse(const Call& call) {
    if (const std::optional<double> x = call.Number(0)) frame.Remove(*x);
  }
  void Answer(const Call& call) { call.Return((frame.*kFigure)()); }
};

template <double (OrderedFrame::*kFigure)(double)>
struct PercentileState {
  OrderedFrame frame;
  std::optional<double> fraction;

  void Step(const Call& call) {
    if (const std::optional<double> x = Read(call)) frame.Add(*x);
  }
  void Inverse(const Call& call) {
    if (const std::optional<double> x = Read(call)) frame.Remove(*x);
  }
  void Answer(const Call& call) {
    if (fraction) {
      call.Return((frame.*kFigure)(*fraction));
    } else {
      call.ReturnNull();
    }
  }

 private:
  std::optional<double> Read(const Call& call) {
    const std::optional<double> x = call.Number(0), p = call.Number(1);
    if (!p) return std::nullopt;
    if (*p < 0 || *p > 1) call.ThrowBad(1, "must lie in 0..1");
    if (fraction && *fraction != *p)
      call.ThrowBad(1, "must stay the same within a group, where it was " + NumberText(*fraction));
    fraction = p;
    return x;
  }
};

constexpr AggregateMethods kMedian = AggregateOf<OrderState<&OrderedFrame::Median>>();
constexpr AggregateMethods kMedianAbsDev = AggregateOf<OrderState<&OrderedFrame::MedianAbsDev>>();
constexpr AggregateMethods kCont = AggregateOf<PercentileState<&OrderedFrame::PercentileCont>>();
constexpr AggregateMethods kDisc = AggregateOf<PercentileState<&OrderedFrame::PercentileDisc>>();

constexpr FunctionRow kRows[] = {
    {.name = "median",
     .kind = FunctionRow::Kind::kAggregate,
     .least_arguments = 1,
     .most_arguments = 1,
     .arguments = "x",
     .purpose = "The middle value, or halfway between the two middle ones.",
     .source = "",
     .example = "SELECT median(column1) FROM (VALUES (2), (3), ('7'), (NULL))",
     .aggregate = &kMedian},
    {.name = "median_abs_dev",
     .kind = FunctionRow::Kind::kAggregate,
     .least_arguments = 1,
     .most_arguments = 1,
     .arguments = "x",
     .purpose = "The median distance from the median, unscaled: a spread that far values leave be.",
     .source = "",
     .example = "SELECT median_abs_dev(column1) FROM (VALUES (2), (3), ('7'), (NULL))",
     .aggregate = &kMedianAbsDev},
    {.name = "percentile_cont",
     .kind = FunctionRow::Kind::kAggregate,
     .least_arguments = 2,
     .most_arguments = 2,
     .arguments = "x, fraction",
     .purpose = "The value at place 1 + (n - 1) fraction in order, interpolated.",
     .source = "ISO/IEC 9075-2",
     .example = "SELECT percentile_cont(column1, 0.9) FROM (VALUES (2), (3), ('7'), (NULL))",
     .aggregate = &kCont},
    {.name = "percentile_disc",
     .kind = FunctionRow::Kind::kAggregate,
     .least_arguments = 2,
     .most_arguments = 2,
     .arguments = "x, fraction",
     .purpose = "The first value in order at or below which a fraction of the values lies.",
     .source = "ISO/IEC 9075-2",
     .example = "SELECT percentile_disc(column1, 0.9) FROM (VALUES (2), (3), ('7'), (NULL))",
     .aggregate = &kDisc},
};

}  // namespace

std::span<const FunctionRow> OrderFunctions() { return kRows; }

}  // namespace ladderline
