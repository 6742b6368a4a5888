// log_offset_choice: the offset that a column asks for before its logarithm is taken.
#include "core/profile/offset_choice.h"
#include "ext/aggregate.h"
#include "ext/column_state.h"
#include "ext/function_tables.h"

namespace ladderline {
namespace {

struct OffsetState : ColumnState {
  void Answer(const Call& call) {
    const Result<double> offset = ChooseLogOffset(InOrder());
    if (offset.ok()) {
      call.Return(offset.value());
    } else {
      call.ReturnNull();
    }
  }
};

constexpr AggregateMethods kChoice = AggregateOf<OffsetState>();

constexpr FunctionRow kRows[] = {
    {.name = "log_offset_choice",
     .kind = FunctionRow::Kind::kAggregate,
     .least_arguments = 1,
     .most_arguments = 1,
     .arguments = "x",
     .purpose = "The offset that leaves ln(x + offset) with zero skewness, for a column skewed to "
                "the right, with or without zeros and negative values. NULL where no offset does: "
                "fewer than three distinct values, no skewness to the right, or half of the rows "
                "or more at the least value.",
     .source = "van Zwet 1964: the skewness rises with the offset",
     .example = "SELECT log_offset_choice(column1) FROM (VALUES (0), (0), (180), (210), (390), "
                "(2400))",
     .aggregate = &kChoice},
};

}  // namespace

std::span<const FunctionRow> OffsetFunctions() { return kRows; }

}  // namespace ladderline
