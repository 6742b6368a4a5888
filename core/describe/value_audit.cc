#include "core/describe/value_audit.h"

#include <algorithm>

#include "core/support/text.h"

namespace ladderline {
namespace {

// Bytes of an example that are kept: more than any message shows.
constexpr size_t kExampleBytes = 256;

bool IsDigit(char c) { return c >= '0' && c <= '9'; }

std::string_view WithoutBlanks(std::string_view text) {
  constexpr const char* kBlanks = " \t\n\r\f\v";
  const size_t begin = text.find_first_not_of(kBlanks);
  if (begin == std::string_view::npos) return {};
  return text.substr(begin, text.find_last_not_of(kBlanks) + 1 - begin);
}

// Takes the digits at the head of `text`, at most four.
struct Group {
  size_t length = 0;
  int number = 0;
};
Group TakeGroup(std::string_view& text) {
  Group group;
  while (group.length < 5 && group.length < text.size() && IsDigit(text[group.length])) {
    group.number = 10 * group.number + (text[group.length] - '0');
    ++group.length;
  }
  text.remove_prefix(group.length);
  return group;
}

bool IsTimeOfDay(std::string_view text) {
  return text.size() > 1 && IsDigit(text[0]) &&
         text.find_first_not_of("0123456789:.,+-Z ") == std::string_view::npos;
}

bool IsDateLike(std::string_view text) {
  const Group first = TakeGroup(text);
  if (text.empty() || std::string_view("-/.").find(text[0]) == std::string_view::npos) return false;
  const char separator = text[0];
  text.remove_prefix(1);
  const Group second = TakeGroup(text);
  if (text.empty() || text[0] != separator) return false;
  text.remove_prefix(1);
  const Group third = TakeGroup(text);
  if (!text.empty() && !((text[0] == ' ' || text[0] == 'T') && IsTimeOfDay(text.substr(1))))
    return false;

  const bool year_first = first.length == 4;
  const Group& year = year_first ? first : third;
  const Group& other = year_first ? third : first;
  const auto in_calendar = [](const Group& g) {
    return (g.length == 1 || g.length == 2) && 1 <= g.number && g.number <= 31;
  };
  return (year.length == 4 || (!year_first && year.length == 2)) && in_calendar(second) &&
         in_calendar(other) && std::min(second.number, other.number) <= 12;
}

bool HasLeadingZero(std::string_view number) {
  if (number[0] == '+' || number[0] == '-') number.remove_prefix(1);
  return number.size() > 1 && number[0] == '0' && IsDigit(number[1]);
}

}  // namespace

ValueKind KindOfText(std::string_view text, bool is_number) {
  const std::string_view bare = WithoutBlanks(text);
  if (bare.empty()) return ValueKind::kBlank;
  if (is_number) return HasLeadingZero(bare) ? ValueKind::kLeadingZero : ValueKind::kNumericText;
  return IsDateLike(bare) ? ValueKind::kDateLike : ValueKind::kOtherText;
}

void ValueAudit::Count(const Value& value, bool enters) {
  const auto count = [&](ValueKind kind) {
    Entry& entry = entries_[static_cast<size_t>(kind)];
    if (!enters) {
      if (--entry.rows == 0) entry.example = {};
      return;
    }
    ++entry.rows;
    if (const auto* integer = std::get_if<std::int64_t>(&value.shown)) {
      entry.example = *integer;
    } else if (const auto* number = std::get_if<double>(&value.shown)) {
      entry.example = *number;
    } else if (const auto* text = std::get_if<std::string_view>(&value.shown)) {
      if (!std::holds_alternative<std::string>(entry.example)) entry.example = std::string();
      std::get<std::string>(entry.example).assign(text->substr(0, kExampleBytes));
    }
  };
  rows_ += enters ? 1 : -1;
  count(value.kind);
  if (!value.number) return;
  if (*value.number == 0) count(ValueKind::kZero);
  if (*value.number < 0) count(ValueKind::kNegative);
  if (enters) {
    ends_.Add(*value.number);
  } else {
    ends_.Remove(*value.number);
  }
}

}  // namespace ladderline
