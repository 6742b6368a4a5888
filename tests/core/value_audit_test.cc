#include "core/describe/value_audit.h"

#include <gtest/gtest.h>

#include <algorithm>
#include <deque>
#include <random>

namespace ladderline {
namespace {

using Value = ValueAudit::Value;
using Example = ValueAudit::Example;

TEST(KindOfText, TellsCodesDatesAndNumbersApart) {
  struct Case {
    const char* text;
    bool is_number;
    ValueKind kind;
  };
  constexpr Case kCases[] = {
      {"", false, ValueKind::kBlank},
      {" \t\r\n", false, ValueKind::kBlank},
      {"12", true, ValueKind::kNumericText},
      {" 5. ", true, ValueKind::kNumericText},
      {"0", true, ValueKind::kNumericText},
      {"0.5", true, ValueKind::kNumericText},
      {"-0.5", true, ValueKind::kNumericText},
      {"0e5", true, ValueKind::kNumericText},
      {"03", true, ValueKind::kLeadingZero},
      {" 00 ", true, ValueKind::kLeadingZero},
      {"-007", true, ValueKind::kLeadingZero},
      {"+01.50", true, ValueKind::kLeadingZero},
      {"2024-03-05", false, ValueKind::kDateLike},
      {"2024/3/5", false, ValueKind::kDateLike},
      {"05.03.2024", false, ValueKind::kDateLike},
      {"3/25/24", false, ValueKind::kDateLike},
      {" 2024-03-05T14:30:00Z ", false, ValueKind::kDateLike},
      {"2024-03-05 14:30", false, ValueKind::kDateLike},
      {"2024-13-25", false, ValueKind::kOtherText},  // neither 13 nor 25 is a month
      {"2024-00-05", false, ValueKind::kOtherText},
      {"2024-03", false, ValueKind::kOtherText},
      {"2024-03-05 or so", false, ValueKind::kOtherText},
      {"2024-03/05", false, ValueKind::kOtherText},
      {"20240-03-05", false, ValueKind::kOtherText},
      {"1.2.3", false, ValueKind::kOtherText},  // a version: no year has one digit
      {"192.168.0.1", false, ValueKind::kOtherText},
      {"n/a", false, ValueKind::kOtherText},
      {"0123A", false, ValueKind::kOtherText},
      {"12 EUR", false, ValueKind::kOtherText},
      {"-", false, ValueKind::kOtherText},
  };
  for (const Case& c : kCases) EXPECT_EQ(KindOfText(c.text, c.is_number), c.kind) << c.text;
}

const Value kMissing{ValueKind::kMissing, {}, {}};
Value Integer(std::int64_t x) { return {ValueKind::kInteger, static_cast<double>(x), x}; }
Value Text(std::string_view text, ValueKind kind, std::optional<double> number = {}) {
  return {kind, number, text};
}

TEST(ValueAudit, CountsEveryValueOnceAndZerosAndNegativesBesides) {
  ValueAudit audit;
  audit.Add(kMissing);
  audit.Add(Text(" ", ValueKind::kBlank));
  audit.Add(Integer(0));
  audit.Add(Integer(-4));
  audit.Add({ValueKind::kReal, 2.5, 2.5});
  audit.Add(Text("-7.5", ValueKind::kNumericText, -7.5));
  audit.Add(Text("0", ValueKind::kNumericText, 0));
  audit.Add(Text("099", ValueKind::kLeadingZero, 99));
  audit.Add(Text("n/a", ValueKind::kOtherText));
  audit.Add(Text("2024-03-05", ValueKind::kDateLike));
  EXPECT_EQ(audit.rows(), 10);
  EXPECT_EQ(audit[ValueKind::kMissing].rows, 1);
  EXPECT_EQ(audit[ValueKind::kMissing].example, Example());
  EXPECT_EQ(audit[ValueKind::kBlank].example, Example(" "));
  EXPECT_EQ(audit[ValueKind::kInteger].rows, 2);
  EXPECT_EQ(audit[ValueKind::kReal].example, Example(2.5));
  EXPECT_EQ(audit[ValueKind::kNumericText].rows, 2);
  EXPECT_EQ(audit[ValueKind::kZero].rows, 2);
  EXPECT_EQ(audit[ValueKind::kZero].example, Example("0"));
  EXPECT_EQ(audit[ValueKind::kNegative].rows, 2);
  EXPECT_EQ(audit[ValueKind::kNegative].example, Example("-7.5"));
  EXPECT_EQ(audit[ValueKind::kBlob].rows, 0);
  EXPECT_EQ(audit.least(), -7.5);
  EXPECT_EQ(audit.largest(), 99);
}

TEST(ValueAudit, NothingAtAll) {
  const ValueAudit audit;
  EXPECT_EQ(audit.rows(), 0);
  EXPECT_FALSE(audit.least().has_value());
  EXPECT_EQ(audit[ValueKind::kInteger].example, Example());
}

TEST(ValueAudit, AFrameForgetsWhatHasLeft) {
  ValueAudit audit;
  audit.Add(Text("n/a", ValueKind::kOtherText));
  audit.Add(Integer(-900));
  audit.Add(Integer(5));
  audit.Add(Text("?", ValueKind::kOtherText));
  audit.Remove(Text("n/a", ValueKind::kOtherText));
  EXPECT_EQ(audit[ValueKind::kOtherText].rows, 1);
  EXPECT_EQ(audit[ValueKind::kOtherText].example, Example("?"));
  audit.Remove(Integer(-900));
  EXPECT_EQ(audit[ValueKind::kNegative].rows, 0);
  EXPECT_EQ(audit[ValueKind::kNegative].example, Example());
  EXPECT_EQ(audit.least(), 5);
  audit.Remove(Integer(5));
  audit.Remove(Text("?", ValueKind::kOtherText));
  EXPECT_EQ(audit.rows(), 0);
  EXPECT_FALSE(audit.largest().has_value());
}

TEST(MovingEnds, EqualTheDefinition) {
  std::mt19937_64 random(11);
  for (const unsigned values : {1U, 4U, 1000000U}) {
    MovingEnds ends;
    std::deque<double> rows;
    for (int i = 0; i < 3000; ++i) {
      const double x = i < 2000 ? static_cast<double>(random() % values) : i;
      ends.Add(x);
      rows.push_back(x);
      while (rows.size() > 1 + random() % 60) {
        ends.Remove(rows.front());
        rows.pop_front();
      }
      ASSERT_EQ(ends.least(), *std::min_element(rows.begin(), rows.end()));
      ASSERT_EQ(ends.largest(), *std::max_element(rows.begin(), rows.end()));
    }
  }
}

}  // namespace
}  // namespace ladderline
