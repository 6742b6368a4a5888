// Tests of normality, as JSON.
#include "core/describe/frame.h"
#include "core/normality/anderson_darling.h"
#include "core/normality/dagostino.h"
#include "core/normality/jarque_bera.h"
#include "core/normality/shapiro_wilk.h"
#include "ext/aggregate.h"
#include "ext/column_state.h"
#include "ext/function_tables.h"
#include "ext/json.h"

namespace ladderline {
namespace {

// A figure that a double cannot hold, like one that is missing (NaN), is null.
void ReturnTest(const Call& call, const NormalityTest& test, std::int64_t rows,
                std::int64_t missing) {
  Json json;
  json["statistic"] = test.statistic;
  json["p_value"] = test.p_value;
  json["rows"] = rows;
  json["missing"] = missing;
  json["note"] = test.note == nullptr ? Json() : Json(test.note);
  call.Return(json.dump());
}

// Tests of skewness and kurtosis need sums alone.
template <NormalityTest (*kTest)(const CentralSums&), std::int64_t kLeastRows>
struct MomentTest {
  Frame<PowerSums<4>> frame;
  std::int64_t missing = 0;

  void Step(const Call& call) {
    if (const std::optional<double> x = call.Number(0)) {
      frame.Add(*x);
    } else {
      ++missing;
    }
  }
  void Inverse(const Call& call) {
    if (const std::optional<double> x = call.Number(0)) {
      frame.Remove(*x);
    } else {
      --missing;
    }
  }
  void Answer(const Call& call) {
    const CentralSums sums = frame.Summarise();
    if (sums.n < kLeastRows) return call.ReturnNull();
    ReturnTest(call, kTest(sums), sums.n, missing);
  }
};

template <NormalityTest (*kTest)(std::span<const double>), std::size_t kLeastRows>
struct OrderTest : ColumnState {
  void Answer(const Call& call) {
    if (rows() < kLeastRows) return call.ReturnNull();
    ReturnTest(call, kTest(InOrder()), static_cast<std::int64_t>(rows()), missing());
  }
};

constexpr AggregateMethods kJarqueBera =
    AggregateOf<MomentTest<JarqueBera, kJarqueBeraLeastRows>>();
constexpr AggregateMethods kShapiroWilk =
    AggregateOf<OrderTest<ShapiroWilk, kShapiroWilkLeastRows>>();
constexpr AggregateMethods kAndersonDarling =
    AggregateOf<OrderTest<AndersonDarling, kAndersonDarlingLeastRows>>();
constexpr AggregateMethods kDagostinoK2 =
    AggregateOf<MomentTest<DagostinoK2, kDagostinoLeastRows>>();

constexpr FunctionRow OfX(const char* name, const AggregateMethods& methods, const char* purpose,
                          const char* source, const char* example) {
  return Aggregate(name, 1, 1, "x", methods, purpose, source, example);
}

#define LADDERLINE_OF_X(function) \
  "SELECT " function              \
  "(column1) FROM (VALUES (2), (3), (3), (4), ('5'), (6), (8), (11), (30), (NULL))"

constexpr FunctionRow kRows[] = {
    OfX("jarque_bera", kJarqueBera,
        "Whether skewness and kurtosis are those of a normal column, as JSON: statistic, p_value, "
        "rows, missing, note. For many rows; NULL under 2.",
        "Jarque & Bera 1980", LADDERLINE_OF_X("jarque_bera")),
    OfX("shapiro_wilk", kShapiroWilk,
        "Whether a column of 3 to 5000 rows is normal, as jarque_bera tells it: the sharpest of "
        "the four tests for most shapes. NULL under 3 rows, a note above 5000.",
        "Royston 1995, AS R94", LADDERLINE_OF_X("shapiro_wilk")),
    OfX("anderson_darling", kAndersonDarling,
        "Whether a column is normal, with weight on its tails, as jarque_bera tells it. NULL under "
        "8 rows; a p_value of 3.7e-24 means at most that.",
        "D'Agostino & Stephens 1986", LADDERLINE_OF_X("anderson_darling")),
    OfX("dagostino_k2", kDagostinoK2,
        "As jarque_bera, with skewness and kurtosis put on scales that suit fewer rows too. NULL "
        "under 8 rows.",
        "D'Agostino & Pearson 1973; Anscombe & Glynn 1983", LADDERLINE_OF_X("dagostino_k2")),
};

}  // namespace

std::span<const FunctionRow> NormalityFunctions() { return kRows; }

}  // namespace ladderline
