#include "core/transform/calendar.h"

#include <limits>

#include "tests/reference/reference.h"

namespace ladderline {
namespace {

// Python 3.11: datetime.date.fromisoformat(text).toordinal() - 719163. Python has no year 0; that
// year is the leap year before 0001-01-01.
TEST(Calendar, DaysAreCountedFrom1970) {
  const std::pair<const char*, int> dates[] = {
      {"1970-01-01", 0},       {"1969-12-31", -1},      {"2000-02-29", 11016},
      {"2000-03-01", 11017},   {"1900-02-28", -25509},  {"1900-03-01", -25508},
      {"2024-12-31", 20088},   {"1600-02-29", -135081}, {"0001-01-01", -719162},
      {"9999-12-31", 2932896}, {"0000-12-31", -719163}, {"0000-01-01", -719528},
  };
  for (const auto& [date, days] : dates) {
    EXPECT_EQ(DaysOfDate(date), days) << date;
    EXPECT_EQ(DateOfDays(days), date) << date;
  }
}

TEST(Calendar, EveryDayIsOneAfterTheDayBefore) {
  std::string before;
  for (int day = kFirstDay; day <= kLastDay; ++day) {
    const auto date = DateOfDays(day);
    ASSERT_TRUE(date.has_value()) << day;
    ASSERT_LT(before, *date) << day;
    ASSERT_EQ(DaysOfDate(*date), day) << *date;
    before = *date;
  }
}

TEST(Calendar, OnlyRealDaysInStrictFormAreDates) {
  for (const char* text :
       {"",           "2023-02-29",  "1900-02-29",  "2023-00-10",       "2023-13-01",
        "2023-04-31", "2023-01-00",  "2023-1-01",   "2023-01-1",        "20230101",
        "2023/01/01", "2023-01-01 ", " 2023-01-01", "2023-01-01T00:00", "02023-01-01",
        "-001-01-01", "+023-01-01",  "2023-01- 1",  "2023-0x-01",       "abcd-ef-gh"}) {
    EXPECT_FALSE(DaysOfDate(text).has_value()) << text;
  }
}

TEST(Calendar, OnlyWholeDaysOfTheseYearsHaveADate) {
  constexpr double kInf = std::numeric_limits<double>::infinity();
  for (const double days : {0.5, -0.1, kFirstDay - 1.0, kLastDay + 1.0, 1e300, -1e300, kInf, -kInf,
                            std::numeric_limits<double>::quiet_NaN()}) {
    EXPECT_FALSE(DateOfDays(days).has_value()) << days;
  }
}

}  // namespace
}  // namespace ladderline
