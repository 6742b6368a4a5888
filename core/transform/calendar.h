// Dates as text and as counts of days.
//
// The calendar is the proleptic Gregorian one: today's leap-year rule for every year, 0000 (a leap
// year) to 9999. Day 0 is 1970-01-01.
//   source  ISO 8601-1:2019, the extended format of a calendar date
#ifndef LADDERLINE_CORE_TRANSFORM_CALENDAR_H_
#define LADDERLINE_CORE_TRANSFORM_CALENDAR_H_

#include <optional>
#include <string>
#include <string_view>

namespace ladderline {

constexpr int kFirstDay = -719528;  // 0000-01-01
constexpr int kLastDay = 2932896;   // 9999-12-31

// Days since 1970-01-01 of `YYYY-MM-DD`: ten characters, a real day. nullopt for anything else:
// blanks around it, a time after it, one-digit months, 2023-02-29.
std::optional<int> DaysOfDate(std::string_view date);

// The date of a day count; nullopt unless it is whole and in kFirstDay … kLastDay.
std::optional<std::string> DateOfDays(double days);

}  // namespace ladderline

#endif  // LADDERLINE_CORE_TRANSFORM_CALENDAR_H_
