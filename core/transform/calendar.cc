#include "core/transform/calendar.h"

#include <array>
#include <cmath>

namespace ladderline {
namespace {

bool IsLeap(int year) { return year % 4 == 0 && (year % 100 != 0 || year % 400 == 0); }

// Days of the (common) year before the first of each month, and in the whole year.
constexpr std::array<int, 13> kDaysBefore = {0,   31,  59,  90,  120, 151, 181,
                                             212, 243, 273, 304, 334, 365};

// Days before the first of `month` (1 … 13) in `year`.
int DaysBefore(int year, int month) {
  return kDaysBefore[static_cast<size_t>(month - 1)] + (month > 2 && IsLeap(year) ? 1 : 0);
}

// Days from 0000-01-01 to the first day of `year`: one leap day per multiple of 4 before it, less
// those of 100, plus those of 400; year 0 is one of each.
int DaysBeforeYear(int year) {
  if (year == 0) return 0;
  const int last = year - 1;
  return 365 * year + last / 4 - last / 100 + last / 400 + 1;
}

// The number that `digits` spells, or -1.
int Digits(std::string_view digits) {
  int number = 0;
  for (const char c : digits) {
    if (c < '0' || c > '9') return -1;
    number = 10 * number + (c - '0');
  }
  return number;
}

}  // namespace

std::optional<int> DaysOfDate(std::string_view date) {
  if (date.size() != 10 || date[4] != '-' || date[7] != '-') return std::nullopt;
  const int year = Digits(date.substr(0, 4));
  const int month = Digits(date.substr(5, 2));
  const int day = Digits(date.substr(8, 2));
  if (year < 0 || month < 1 || month > 12 || day < 1) return std::nullopt;
  const int before = DaysBefore(year, month);
  if (day > DaysBefore(year, month + 1) - before) return std::nullopt;
  return kFirstDay + DaysBeforeYear(year) + before + day - 1;
}

std::optional<std::string> DateOfDays(double days) {
  if (!(days >= kFirstDay && days <= kLastDay) || days != std::floor(days)) return std::nullopt;
  int rest = static_cast<int>(days) - kFirstDay;
  int year = rest / 366;  // never too late, and at most 7 years too early
  while (DaysBeforeYear(year + 1) <= rest) ++year;
  rest -= DaysBeforeYear(year);
  int month = 1;
  while (DaysBefore(year, month + 1) <= rest) ++month;
  const int day = rest - DaysBefore(year, month) + 1;
  const auto digit = [](int number, int unit) {
    return static_cast<char>('0' + number / unit % 10);
  };
  return std::string{digit(year, 1000),
                     digit(year, 100),
                     digit(year, 10),
                     digit(year, 1),
                     '-',
                     digit(month, 10),
                     digit(month, 1),
                     '-',
                     digit(day, 10),
                     digit(day, 1)};
}

}  // namespace ladderline
