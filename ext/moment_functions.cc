// Aggregates over sums: counts, means, spread, shape, and the straight line of y on x.
#include "core/describe/frame.h"
#include "core/describe/means.h"
#include "core/describe/moments.h"
#include "core/describe/trailing_score.h"
#include "core/describe/value_sum.h"
#include "ext/aggregate.h"
#include "ext/function_tables.h"

namespace ladderline {
namespace {

template <class State>
constexpr AggregateMethods kMethods = AggregateOf<State>();

// Numbers that are there go into the accumulator, whose Value() is the answer.
template <class Accumulator>
struct NumbersState {
  Accumulator accumulator;
  void Step(const Call& call) {
    if (const std::optional<double> x = call.Number(0)) accumulator.Add(*x);
  }
  void Inverse(const Call& call) {
    if (const std::optional<double> x = call.Number(0)) accumulator.Remove(*x);
  }
  void Answer(const Call& call) { call.Return(accumulator.Value()); }
};

template <int kOrder, double (*kFigure)(const CentralSums&)>
struct MomentFrame : Frame<PowerSums<kOrder>> {
  double Value() { return kFigure(this->Summarise()); }
};
template <int kOrder, double (*kFigure)(const CentralSums&)>
constexpr AggregateMethods kMoment = kMethods<NumbersState<MomentFrame<kOrder, kFigure>>>;

// Rows in which both numbers are there.
std::optional<Pair> ReadPair(const Call& call) {
  const std::optional<double> y = call.Number(0), x = call.Number(1);
  if (!y || !x) return std::nullopt;
  return Pair{*y, *x};
}

template <double (*kFigure)(const CentralCoSums&)>
struct PairsState {
  Frame<CoSums> frame;
  void Step(const Call& call) {
    if (const std::optional<Pair> row = ReadPair(call)) frame.Add(*row);
  }
  void Inverse(const Call& call) {
    if (const std::optional<Pair> row = ReadPair(call)) frame.Remove(*row);
  }
  void Answer(const Call& call) { call.Return(kFigure(frame.Summarise())); }
};
template <double (*kFigure)(const CentralCoSums&)>
constexpr AggregateMethods kCoMoment = kMethods<PairsState<kFigure>>;

struct CountState {
  std::int64_t rows = 0;
  void Step(const Call& call) { rows += call.Number(0) ? 1 : 0; }
  void Inverse(const Call& call) { rows -= call.Number(0) ? 1 : 0; }
  void Answer(const Call& call) const { call.Return(rows); }
};

struct PairCountState {
  std::int64_t rows = 0;
  void Step(const Call& call) { rows += ReadPair(call) ? 1 : 0; }
  void Inverse(const Call& call) { rows -= ReadPair(call) ? 1 : 0; }
  void Answer(const Call& call) const { call.Return(rows); }
};

struct SumState {
  ValueSum sum;
  void Step(const Call& call) {
    Visit(call, [this](auto x) { sum.Add(x); });
  }
  void Inverse(const Call& call) {
    Visit(call, [this](auto x) { sum.Remove(x); });
  }
  void Answer(const Call& call) {
    if (const std::optional<std::int64_t> whole = sum.Whole()) {
      call.Return(*whole);
    } else {
      call.Return(sum.Real());
    }
  }

 private:
  template <class Fold>
  static void Visit(const Call& call, Fold&& fold) {
    const std::optional<double> x = call.Number(0);
    if (!x) return;
    if (sqlite3_value_numeric_type(call.value(0)) == SQLITE_INTEGER) {
      fold(std::int64_t{sqlite3_value_int64(call.value(0))});
    } else {
      fold(*x);
    }
  }
};

struct TrailingScoreState {
  TrailingScore score;
  void Step(const Call& call) { score.Add(call.Number(0)); }
  void Inverse(const Call& call) { score.Remove(call.Number(0)); }
  void Answer(const Call& call) { call.Return(score.Value()); }
};

constexpr const char* kStandard = "ISO/IEC 9075-2";
constexpr const char* kJoanesGill = "Joanes & Gill 1998";

constexpr FunctionRow OfX(const char* name, const AggregateMethods& methods, const char* purpose,
                          const char* source, const char* example) {
  return Aggregate(name, 1, 1, "x", methods, purpose, source, example);
}

constexpr FunctionRow OfPairs(const char* name, const AggregateMethods& methods,
                              const char* purpose, const char* example) {
  return Aggregate(name, 2, 2, "y, x", methods, purpose, kStandard, example);
}

// The examples' rows: three days, their visits and the hours they took.
#define LADDERLINE_OF_X(call) "SELECT " call " FROM (VALUES (2), (3), ('7'), (NULL))"
#define LADDERLINE_OF_PAIRS(call) "SELECT " call " FROM (VALUES (2.5, 1), (4, 2), (9, 4))"

constexpr FunctionRow kRows[] = {
    OfX("value_count", kMethods<CountState>,
        "How many values are there; text that is no number is an error, blank text is missing.", "",
        LADDERLINE_OF_X("value_count(column1)")),
    OfX("value_sum", kMethods<SumState>,
        "The sum, exact and whole where all values are integers that sum to one.", "",
        LADDERLINE_OF_X("value_sum(column1)")),
    OfX("mean", kMoment<2, Mean>, "The arithmetic mean; blank text is missing, not 0.", "",
        LADDERLINE_OF_X("mean(column1)")),
    OfX("geometric_mean", kMethods<NumbersState<GeometricMean>>,
        "The n-th root of the product; 0 with a zero, NULL with a negative value.", "",
        LADDERLINE_OF_X("geometric_mean(column1)")),
    OfX("harmonic_mean", kMethods<NumbersState<HarmonicMean>>,
        "n over the sum of reciprocals; 0 with a zero, NULL with a negative value.", "",
        LADDERLINE_OF_X("harmonic_mean(column1)")),
    OfX("zero_share", kMethods<NumbersState<ZeroShare>>,
        "The share of zeros among the values, 0 to 1.", "",
        "SELECT zero_share(column1) FROM (VALUES (0), (0), (5), (NULL))"),
    OfX("var_samp", kMoment<2, VarianceSamp>, "The variance, divided by n - 1; from 2 values on.",
        kStandard, LADDERLINE_OF_X("var_samp(column1)")),
    OfX("var_pop", kMoment<2, VariancePop>, "The variance, divided by n.", kStandard,
        LADDERLINE_OF_X("var_pop(column1)")),
    OfX("stddev_samp", kMoment<2, StdDevSamp>,
        "The standard deviation, with n - 1; from 2 values on.", kStandard,
        LADDERLINE_OF_X("stddev_samp(column1)")),
    OfX("stddev_pop", kMoment<2, StdDevPop>, "The standard deviation, with n.", kStandard,
        LADDERLINE_OF_X("stddev_pop(column1)")),
    OfX("skewness", kMoment<3, Skewness>,
        "Adjusted skewness G1: above 0 the long tail is on the right; from 3 values on.",
        kJoanesGill, LADDERLINE_OF_X("skewness(column1)")),
    OfX("skewness_pop", kMoment<3, SkewnessPop>, "Skewness g1, of the values alone.", kJoanesGill,
        LADDERLINE_OF_X("skewness_pop(column1)")),
    OfX("excess_kurtosis", kMoment<4, ExcessKurtosis>,
        "Adjusted excess kurtosis G2: above 0 the tails are heavier than normal; from 4 values on.",
        kJoanesGill, "SELECT excess_kurtosis(column1) FROM (VALUES (2), (3), (3), (4), (11))"),
    OfX("excess_kurtosis_pop", kMoment<4, ExcessKurtosisPop>,
        "Excess kurtosis g2, of the values alone.", kJoanesGill,
        "SELECT excess_kurtosis_pop(column1) FROM (VALUES (2), (3), (3), (4), (11))"),
    OfX("z_against_earlier", kMethods<TrailingScoreState>,
        "For OVER: the frame's last row against mean and standard deviation of the rows before it; "
        "NULL under 2 earlier values or without spread.",
        "",
        "SELECT z_against_earlier(column2) OVER (ORDER BY column1 ROWS 52 PRECEDING) "
        "FROM (VALUES (1, 10), (2, 12), (3, 11), (4, 19))"),
    OfPairs("covar_samp", kCoMoment<CovarianceSamp>,
            "The covariance, divided by n - 1; from 2 pairs on.",
            LADDERLINE_OF_PAIRS("covar_samp(column1, column2)")),
    OfPairs("covar_pop", kCoMoment<CovariancePop>, "The covariance, divided by n.",
            LADDERLINE_OF_PAIRS("covar_pop(column1, column2)")),
    OfPairs("corr", kCoMoment<Correlation>,
            "The correlation; NULL when either variable has no spread.",
            LADDERLINE_OF_PAIRS("corr(column1, column2)")),
    OfPairs("regr_slope", kCoMoment<RegressionSlope>,
            "The slope of the least-squares line of y on x; NULL when x has no spread.",
            LADDERLINE_OF_PAIRS("regr_slope(column1, column2)")),
    OfPairs("regr_intercept", kCoMoment<RegressionIntercept>,
            "The value of the least-squares line of y on x at x = 0; NULL when x has no spread.",
            LADDERLINE_OF_PAIRS("regr_intercept(column1, column2)")),
    OfPairs("regr_r2", kCoMoment<RegressionR2>,
            "The squared correlation; NULL when x has no spread, 1 when only y has none.",
            LADDERLINE_OF_PAIRS("regr_r2(column1, column2)")),
    OfPairs("regr_count", kMethods<PairCountState>, "How many rows have both values.",
            LADDERLINE_OF_PAIRS("regr_count(column1, column2)")),
    OfPairs("regr_avgx", kCoMoment<RegressionAverageX>, "The mean of x over rows that have both.",
            LADDERLINE_OF_PAIRS("regr_avgx(column1, column2)")),
    OfPairs("regr_avgy", kCoMoment<RegressionAverageY>, "The mean of y over rows that have both.",
            LADDERLINE_OF_PAIRS("regr_avgy(column1, column2)")),
    OfPairs("regr_sxx", kCoMoment<RegressionSxx>, "The sum of squares of x about its mean.",
            LADDERLINE_OF_PAIRS("regr_sxx(column1, column2)")),
    OfPairs("regr_syy", kCoMoment<RegressionSyy>, "The sum of squares of y about its mean.",
            LADDERLINE_OF_PAIRS("regr_syy(column1, column2)")),
    OfPairs("regr_sxy", kCoMoment<RegressionSxy>, "The sum of products about the means.",
            LADDERLINE_OF_PAIRS("regr_sxy(column1, column2)")),
};

#undef LADDERLINE_OF_X
#undef LADDERLINE_OF_PAIRS

}  // namespace

std::span<const FunctionRow> MomentFunctions() { return kRows; }

}  // namespace ladderline
