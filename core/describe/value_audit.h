// What is in a dirty column: how many values of which kind, with an example of each.
#ifndef LADDERLINE_CORE_DESCRIBE_VALUE_AUDIT_H_
#define LADDERLINE_CORE_DESCRIBE_VALUE_AUDIT_H_

#include <array>
#include <cstddef>
#include <cstdint>
#include <optional>
#include <string>
#include <string_view>
#include <variant>

#include "core/describe/moving_ends.h"

namespace ladderline {

// Every value is of one of the kinds up to kBlob; numbers may also be zero or negative.
enum class ValueKind : unsigned char {
  kMissing,
  kBlank,
  kInteger,
  kReal,
  kNumericText,
  kLeadingZero,
  kDateLike,
  kOtherText,
  kBlob,
  kZero,
  kNegative,
};
inline constexpr std::array<const char*, 11> kValueKindNames = {
    "missing",   "blank",      "integer", "real", "numeric_text", "leading_zero",
    "date_like", "other_text", "blob",    "zero", "negative"};

// The kind of a text: blank; numeric, where `is_number` says that the host reads it whole as one,
// with a leading zero (`03`, `-007`, but not `0` or `0.5`) or without; like a date; or other.
// Like a date is three groups of digits with `-`, `/` or `.` twice between them, a year of 4 digits
// first or of 4 or 2 last, day and month of 1 or 2 digits in either order and within 31 and 12, and
// nothing more than a time of day behind a blank or a `T`.
ValueKind KindOfText(std::string_view text, bool is_number);

class ValueAudit {
 public:
  using Example = std::variant<std::monostate, std::int64_t, double, std::string>;

  struct Value {
    ValueKind kind;
    std::optional<double> number;  // finite, for the kinds that the host reads as one
    // The value itself; of long texts and BLOBs the first bytes are kept.
    std::variant<std::monostate, std::int64_t, double, std::string_view> shown;
  };
  struct Entry {
    std::int64_t rows = 0;
    Example example;  // of the newest row of the kind that is in
  };

  void Add(const Value& value) { Count(value, true); }
  // Takes out the oldest row, which the host hands over again.
  void Remove(const Value& value) { Count(value, false); }

  std::int64_t rows() const { return rows_; }
  const Entry& operator[](ValueKind kind) const { return entries_[static_cast<std::size_t>(kind)]; }
  // Among all finite numbers, whether stored as numbers or as text; nullopt when there is none.
  std::optional<double> least() const { return ends_.least(); }
  std::optional<double> largest() const { return ends_.largest(); }

 private:
  void Count(const Value& value, bool enters);

  std::int64_t rows_ = 0;
  std::array<Entry, kValueKindNames.size()> entries_;
  MovingEnds ends_;
};

}  // namespace ladderline

#endif  // LADDERLINE_CORE_DESCRIBE_VALUE_AUDIT_H_
