#include "core/model/columns.h"

#include <gmock/gmock.h>
#include <gtest/gtest.h>

#include <cmath>

#include "core/model/column_summary.h"

namespace ladderline {
namespace {

using ::testing::HasSubstr;

Cell Number(double x) { return {.kind = Cell::Kind::kNumber, .number = x}; }
Cell Text(std::string_view text) { return {.kind = Cell::Kind::kText, .text = text}; }
Cell Integer(std::int64_t i) { return {.kind = Cell::Kind::kInteger, .integer = i}; }
const Cell kMissing;

ColumnSet Make(std::initializer_list<const char*> texts) {
  std::vector<Label> labels;
  for (const char* text : texts) {
    Result<Label> label = ReadLabel(text);
    if (!label.ok()) ADD_FAILURE() << label.error();
    labels.push_back(std::move(label).value());
  }
  Result<ColumnSet> set = ColumnSet::Make(std::move(labels));
  if (!set.ok()) ADD_FAILURE() << set.error();
  return std::move(set).value();
}

void Add(ColumnSet& set, std::vector<Cell> cells) {
  const std::optional<Error> error = set.Add(cells);
  EXPECT_FALSE(error) << error->what;
}

TEST(ColumnSet, KeepsCompleteRowsAndCountsTheRestByColumn) {
  ColumnSet set = Make({"y | log_offset", "age | number", "w | weight"});
  Add(set, {Number(1), Number(2), Number(1)});
  Add(set, {kMissing, kMissing, Number(1)});
  Add(set, {Number(0), Number(3), Number(1)});  // ln 0
  Add(set, {Number(2), Number(4), Number(0)});  // weight 0
  Add(set, {Number(-1), kMissing, Number(1)});  // both kinds
  Add(set, {Number(3), Number(5), Number(0.5)});
  EXPECT_EQ(set.rows().offered, 6);
  EXPECT_EQ(set.rows().fitted, 2);
  EXPECT_EQ(set.rows().with_gaps, 2);
  EXPECT_EQ(set.rows().outside, 3);
  EXPECT_EQ(set.column(0).missing, 1);
  EXPECT_EQ(set.column(0).outside, 2);
  EXPECT_EQ(set.column(1).missing, 2);
  EXPECT_EQ(set.column(2).outside, 1);
  EXPECT_EQ(set.OfferedNumber(0), 1);
  EXPECT_EQ(set.OfferedNumber(1), 6);
}

// What a transform still to be estimated takes must not depend on the estimate.
TEST(ColumnSet, EstimatedTransformsHaveTheirDomainBeforehand) {
  ColumnSet set = Make({"y | box_cox", "a | box_cox", "b | yeo_johnson", "c | log_offset auto",
                        "d | z_score", "e | center", "f | rescale"});
  const auto row = [](double y, double a, double rest) {
    return std::vector<Cell>{Number(y),    Number(a),    Number(rest), Number(rest),
                             Number(rest), Number(rest), Number(rest)};
  };
  Add(set, row(1, 1e-300, -1e300));
  Add(set, row(0, 1, 0));
  Add(set, row(1, -1, 1));
  EXPECT_EQ(set.rows().fitted, 1);
  EXPECT_EQ(set.column(0).outside, 1);
  EXPECT_EQ(set.column(1).outside, 1);
  for (size_t i = 2; i < set.size(); ++i) EXPECT_EQ(set.column(i).outside, 0);
}

TEST(ColumnSet, MissingKeyDropsNoRow) {
  ColumnSet set = Make({"y", "case | key"});
  Add(set, {Number(1), kMissing});
  Add(set, {Number(2), Text("A-17")});
  Add(set, {Number(3), Integer(1)});
  EXPECT_EQ(set.rows().fitted, 3);
  EXPECT_EQ(set.keys()->At(0), KeyValue());
  EXPECT_EQ(set.keys()->At(1), KeyValue(std::string("A-17")));
  EXPECT_EQ(set.keys()->At(2), KeyValue(std::int64_t{1}));
}

TEST(ColumnSet, LettingRowsGoIsAsIfTheyHadNeverCome) {
  ColumnSet moving = Make({"y | log_offset", "t | category", "k | key"});
  const auto row = [](int i) {
    return std::vector<Cell>{i % 7 == 3 ? kMissing : Number(i % 5), Text(i % 3 == 0 ? "a" : "b"),
                             Integer(i)};
  };
  for (int i = 0; i < 5000; ++i) {
    Add(moving, row(i));
    if (i >= 1500) moving.Remove(row(i - 1500));
  }
  ColumnSet fresh = Make({"y | log_offset", "t | category", "k | key"});
  for (int i = 3500; i < 5000; ++i) Add(fresh, row(i));
  EXPECT_EQ(moving.rows().offered, fresh.rows().offered);
  EXPECT_EQ(moving.rows().fitted, fresh.rows().fitted);
  EXPECT_EQ(moving.rows().with_gaps, fresh.rows().with_gaps);
  EXPECT_EQ(moving.rows().outside, fresh.rows().outside);
  EXPECT_EQ(moving.Digest(), fresh.Digest());
  ASSERT_EQ(moving.column(0).numbers.size(), fresh.column(0).numbers.size());
  for (size_t i = 0; i < fresh.column(0).numbers.size(); ++i) {
    EXPECT_EQ(moving.column(0).numbers[i], fresh.column(0).numbers[i]);
    EXPECT_EQ(moving.keys()->At(i), fresh.keys()->At(i));
    EXPECT_EQ(moving.OfferedNumber(i), fresh.OfferedNumber(i));
  }
}

// A new level and a new key in every row: only those in the frame count.
TEST(ColumnSet, LevelsAndKeysLeaveWithTheirRows) {
  ColumnSet set = Make({"y", "t | category", "k | key"});
  std::vector<std::string> texts;
  for (int i = 0; i < 20000; ++i) texts.push_back("level or key number " + std::to_string(i));
  const auto row = [&](int i) {
    const std::string_view text = texts[static_cast<size_t>(i)];
    return std::vector<Cell>{Number(i), Text(i % 2 == 0 ? text : "common"), Text(text)};
  };
  constexpr int kFrame = 300;
  for (int i = 0; i < 20000; ++i) {
    Add(set, row(i));
    if (i >= kFrame) set.Remove(row(i - kFrame));
    ASSERT_EQ(set.refusal(), "");
  }
  EXPECT_LE(set.column(1).levels.codes(), 152u);
  const ModelColumn column = Summarise(set, 1);
  ASSERT_EQ(column.levels.size(), 151u);
  EXPECT_EQ(column.levels[0].text, "common");
  EXPECT_EQ(column.levels[0].rows, 150);
  EXPECT_EQ(column.levels[1].text, texts[19700]);
  EXPECT_EQ(column.levels[150].text, texts[19998]);
  for (int i = 0; i < kFrame; ++i) {
    const auto kept = static_cast<size_t>(i);
    EXPECT_EQ(set.keys()->At(kept), KeyValue(texts[19700 + kept]));
    EXPECT_EQ(set.column(1).levels.text(set.column(1).codes[kept]),
              i % 2 == 0 ? texts[19700 + kept] : "common");
  }
}

TEST(ColumnSet, AFrameWithTooManyLevelsIsRefusedWhileItHasThem) {
  ColumnSet set = Make({"y", "t | category"});
  std::vector<std::string> texts;
  for (int i = 0; i < 2000; ++i) texts.push_back(std::to_string(i < 1000 ? i : i % 7));
  const auto row = [&](int i) {
    return std::vector<Cell>{Number(i), Text(texts[static_cast<size_t>(i)])};
  };
  for (int i = 0; i < 2000; ++i) {
    Add(set, row(i));
    if (i >= 600) set.Remove(row(i - 600));
    const int distinct = i < 600 ? i + 1 : i < 1000 ? 600 : std::max(0, 1600 - i - 1) + 7;
    if (i >= 1000 && i < 1007) continue;  // the seven arrive one by one
    EXPECT_EQ(set.refusal().empty(), distinct <= kMostLevels) << i;
    if (i % 97 == 0) {
      EXPECT_EQ(Summarise(set, 1).levels.size(),
                distinct <= kMostLevels ? static_cast<size_t>(distinct) : 0);
    }
  }
}

// Means by hand; of the window 300..399 every tenth row is dropped: 300, 310, …, 390.
TEST(ColumnSet, NumbersOfRowsLeftOutAreSummedAndLeaveAgain) {
  ColumnSet set = Make({"y", "age | number", "t | category", "w | weight"});
  const auto row = [](int i) {
    return std::vector<Cell>{Number(i == 5 ? 1e300 : i),
                             i % 10 == 0 || i == 5 ? kMissing : Number(1), Text("a"), Number(1)};
  };
  for (int i = 0; i < 400; ++i) {
    Add(set, row(i));
    if (i >= 100) set.Remove(row(i - 100));
  }
  EXPECT_EQ(set.LeftOut(0).rows, 10);
  EXPECT_EQ(set.LeftOut(0).mean, 345);
  EXPECT_EQ(set.LeftOut(1).rows, 0);
  EXPECT_TRUE(std::isnan(set.LeftOut(1).mean));
  EXPECT_EQ(set.LeftOut(3).rows, 0);
  ColumnSet unwanted = Make({"y", "age | number"});
  unwanted.WantLeftOut(false);
  Add(unwanted, {Number(1), kMissing});
  EXPECT_EQ(unwanted.LeftOut(0).rows, 0);
}

TEST(ColumnSet, KeysOfSeveralRowsAreCountedOnce) {
  ColumnSet set = Make({"y", "case | key"});
  EXPECT_EQ(set.RepeatedKeys(), 0);
  const auto add = [&](const Cell& key, double y = 1) { Add(set, {Number(y), key}); };
  for (int i = 0; i < 5000; ++i) add(Integer(i));
  add(kMissing);
  add(kMissing);  // no key at all
  EXPECT_EQ(set.RepeatedKeys(), 0);
  for (int i = 0; i < 5000; i += 10) add(Integer(i));
  for (int i = 0; i < 5000; i += 100) add(Integer(i));
  EXPECT_EQ(set.RepeatedKeys(), 500);
  for (const char* text : {"A-17", "A-18", "A-17", "17", ""}) add(Text(text));
  EXPECT_EQ(set.RepeatedKeys(), 501);
  Add(set, {kMissing, Text("A-18")});  // not kept
  EXPECT_EQ(set.RepeatedKeys(), 501);
  EXPECT_EQ(Make({"y"}).RepeatedKeys(), 0);

  ColumnSet many = Make({"y", "case | key"});
  for (int i = 0; i < 200'000; ++i) Add(many, {Number(1), Integer(i % 150'000)});
  EXPECT_EQ(many.RepeatedKeys(), 50'000);
}

TEST(ColumnSet, DigestIgnoresOrderAndSeesEveryValue) {
  const auto digest = [](std::vector<std::vector<Cell>> rows) {
    ColumnSet set = Make({"y", "k | key", "w | weight"});
    for (const auto& row : rows) Add(set, row);
    return set.Digest();
  };
  const std::vector<Cell> a = {Number(1), Text("x"), Number(1)};
  const std::vector<Cell> b = {Number(2), Text("y"), Number(1)};
  EXPECT_EQ(digest({a, b}), digest({b, a}));
  EXPECT_NE(digest({a, b}), digest({a}));
  EXPECT_NE(digest({a, b}), digest({a, {Number(2), Text("z"), Number(1)}}));
  EXPECT_NE(digest({a, b}), digest({a, {Number(3), Text("y"), Number(1)}}));
  EXPECT_NE(digest({a, b}), digest({a, {Number(2), Text("y"), Number(2)}}));
  EXPECT_NE(digest({a, b}),
            digest({{Number(1), Text("y"), Number(1)}, {Number(2), Text("x"), Number(1)}}));
  EXPECT_EQ(digest({a, b}).size(), 32u);
}

TEST(ColumnSet, ClustersAreTheHostsTextAndMissingOnesDropTheRow) {
  ColumnSet set = Make({"y", "d | cluster"});
  for (const Cell& cell : {Integer(3), Text("x"), Text("3"), kMissing, Text("x"), Integer(-12)})
    Add(set, {Number(1), cell});
  EXPECT_EQ(set.rows().fitted, 5);
  EXPECT_EQ(set.column(1).missing, 1);
  std::vector<std::uint32_t> groups;
  for (size_t i = 0; i < set.groups().size(); ++i) groups.push_back(set.groups()[i]);
  EXPECT_EQ(groups, (std::vector<std::uint32_t>{0, 1, 0, 1, 2}));
  set.Remove(std::vector<Cell>{Number(1), Integer(3)});
  EXPECT_EQ(set.groups().size(), 4u);
  EXPECT_EQ(set.groups()[0], 1u);
}

// Whole numbers and others by size, exactly; then texts by bytes; equal ones as they came.
TEST(ColumnSet, OrderPutsNumbersBeforeTexts) {
  ColumnSet set = Make({"y", "o | order"});
  const std::vector<Cell> cells = {Text("b"),
                                   Number(2.5),
                                   Integer(9007199254740993),
                                   Number(9007199254740992),
                                   Text("a"),
                                   Integer(2),
                                   Number(-1e300),
                                   Integer(9007199254740992),
                                   Number(1e300),
                                   Text("ab")};
  for (const Cell& cell : cells) Add(set, {Number(1), cell});
  Add(set, {Number(1), kMissing});
  EXPECT_EQ(set.rows().fitted, 10);
  EXPECT_EQ(set.Order(), (std::vector<std::ptrdiff_t>{6, 5, 1, 3, 7, 2, 8, 4, 9, 0}));
}

TEST(ColumnSet, RowsThatCameInOrderNeedNone) {
  ColumnSet set = Make({"y", "o | order"});
  for (const int i : {1, 2, 2, 7}) Add(set, {Number(1), Integer(i)});
  EXPECT_TRUE(set.Order().empty());
  EXPECT_TRUE(Make({"y"}).Order().empty());
}

TEST(ClusterTable, HoldsAsManyAsThereAre) {
  ClusterTable table;
  constexpr std::uint32_t kTexts = 100'000;
  for (std::uint32_t i = 0; i < kTexts; ++i) EXPECT_EQ(table.Enter("g" + std::to_string(i)), i);
  EXPECT_EQ(table.Enter("g1234"), 1234u);
  EXPECT_EQ(table.Enter(""), kTexts);
  EXPECT_EQ(table.size(), kTexts + 1);
}

// A frame of 100 rows over 5,000 clusters of one row.
TEST(ColumnSet, ClustersLeaveWithTheirRows) {
  ColumnSet set = Make({"y", "d | cluster"});
  for (int i = 0; i < 5000; ++i) {
    Add(set, {Number(1), Integer(i)});
    if (i >= 100) set.Remove(std::vector<Cell>{Number(1), Integer(i - 100)});
  }
  EXPECT_EQ(set.groups().size(), 100u);
  EXPECT_LE(set.group_count(), 101u);
}

TEST(ColumnSet, MistakesInTheLabelsAreNamed) {
  const auto error = [](std::initializer_list<const char*> texts) {
    std::vector<Label> labels;
    for (const char* text : texts) labels.push_back(ReadLabel(text).value());
    const Result<ColumnSet> set = ColumnSet::Make(std::move(labels));
    return set.ok() ? std::string("(no error)") : set.error();
  };
  EXPECT_THAT(error({}), HasSubstr("needs a response"));
  EXPECT_THAT(error({"y", "y | category"}), HasSubstr("'y' is given twice"));
  EXPECT_THAT(error({"y | weight"}), HasSubstr("is the response"));
  EXPECT_THAT(error({"y", "a | weight", "b | weight"}), HasSubstr("second weight"));
  EXPECT_THAT(error({"y", "a | key", "b | key"}), HasSubstr("second key"));
}

TEST(ColumnSummary, ReferenceIsTheCommonestLevelOrTheGivenOne) {
  ColumnSet chosen = Make({"y", "t | category"}), given = Make({"y", "t | category c"});
  for (const char* level : {"b", "a", "c", "b", "a"}) {
    Add(chosen, {Number(1), Text(level)});
    Add(given, {Number(1), Text(level)});
  }
  const ModelColumn by_count = Summarise(chosen, 1);
  ASSERT_EQ(by_count.levels.size(), 3u);
  EXPECT_EQ(by_count.levels[0].text, "a");  // byte order; a and b tie, so a is the reference
  EXPECT_EQ(by_count.levels[0].rows, 2);
  EXPECT_EQ(by_count.reference, 0);
  EXPECT_FALSE(by_count.reference_given);
  EXPECT_EQ(Summarise(given, 1).reference, 2);
  EXPECT_TRUE(Summarise(given, 1).reference_given);
}

// Twelve values: quartiles, mean and sd by hand. Sorted 1..12 shifted by 1e9: mean 6.5, variance
// (12² − 1)/12 · 12/11 = 13; quartiles at places 3.75, 6.5, 9.25.
TEST(ColumnSummary, NumbersKeepTheirDigitsFarFromZero) {
  ColumnSet set = Make({"y"});
  for (const int i : {7, 1, 12, 3, 5, 9, 2, 11, 4, 10, 6, 8}) Add(set, {Number(1e9 + i)});
  const ModelColumn column = Summarise(set, 0);
  EXPECT_EQ(column.observed_low, 1e9 + 1);
  EXPECT_EQ(column.observed_high, 1e9 + 12);
  EXPECT_EQ(column.lower_quartile, 1e9 + 3.75);
  EXPECT_EQ(column.median, 1e9 + 6.5);
  EXPECT_EQ(column.upper_quartile, 1e9 + 9.25);
  EXPECT_EQ(column.mean, 1e9 + 6.5);
  EXPECT_NEAR(column.sd, std::sqrt(13.0), 1e-15 * 4);
}

// The invariance of spread: times a power of two, at both ends of the range of a double.
TEST(ColumnSummary, SpreadOfTinyAndHugeNumbersKeepsItsDigits) {
  const auto summary = [](double scale) {
    ColumnSet set = Make({"y"});
    for (const double x : {7.0, 1.0, 12.5, -3.0, 5.0, 9.0, 2.25}) Add(set, {Number(scale * x)});
    return Summarise(set, 0);
  };
  const ModelColumn plain = summary(1);
  for (const int exponent : {-1040, -700, -500, 500, 700, 1018}) {
    const double scale = std::ldexp(1.0, exponent);
    EXPECT_EQ(summary(scale).mean, scale * plain.mean) << exponent;
    EXPECT_NEAR(summary(scale).sd / scale, plain.sd, 1e-9 * plain.sd) << exponent;
    if (exponent > -1000) {
      EXPECT_EQ(summary(scale).sd, scale * plain.sd) << exponent;
    }
  }
  ColumnSet ends = Make({"y"});
  for (const double x : {-1.5e308, 1.5e308, 0.0, 0.0, 0.0}) Add(ends, {Number(x)});
  // Two of five numbers at ±a: variance 2a²/4.
  EXPECT_NEAR(Summarise(ends, 0).sd / 1e308, 1.5 / std::sqrt(2), 1e-15);
}

TEST(LevelTable, ACodeWithoutRowsGoesToTheNextNewLevel) {
  LevelTable table;
  for (int i = 0; i < 1000; ++i)
    EXPECT_EQ(table.Enter("level " + std::to_string(i)), static_cast<std::uint16_t>(i));
  EXPECT_EQ(table.Enter("level 123"), std::uint16_t{123});
  table.Leave(123);
  EXPECT_EQ(table.rows(123), 1);
  table.Leave(123);
  table.Leave(7);
  EXPECT_EQ(table.size(), 998u);
  EXPECT_EQ(table.Enter("another"), std::uint16_t{7});
  EXPECT_EQ(table.Enter("level 7"), std::uint16_t{123});
  for (int i = 0; i < 1000; ++i) {
    const std::string text = i == 123 ? "another" : "level " + std::to_string(i);
    EXPECT_EQ(table.text(table.CodeOf(text)), text);
  }
  for (std::uint16_t code = 0; code < 1000; ++code) table.Leave(code);
  EXPECT_EQ(table.size(), 0u);
}

TEST(LevelTable, EndsAtItsCodes) {
  LevelTable table;
  for (std::size_t i = 0; i < LevelTable::kMostCodes; ++i)
    ASSERT_TRUE(table.Enter(std::to_string(i)));
  EXPECT_EQ(table.Enter("one more"), std::nullopt);
  EXPECT_EQ(table.Enter("123"), std::uint16_t{123});
}

}  // namespace
}  // namespace ladderline
