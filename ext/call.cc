#include "ext/call.h"

#include <cmath>

#include "core/support/prose.h"
#include "core/support/text.h"
#include "ext/registry.h"

namespace ladderline {

std::string_view BytesOf(sqlite3_value* value) {
  const void* bytes = sqlite3_value_blob(value);
  const int size = sqlite3_value_bytes(value);
  return bytes == nullptr
             ? std::string_view()
             : std::string_view(static_cast<const char*>(bytes), static_cast<size_t>(size));
}

std::string_view TextOf(sqlite3_value* value) {
  const unsigned char* text = sqlite3_value_text(value);
  if (text == nullptr) {
    if (sqlite3_value_type(value) != SQLITE_NULL) throw std::bad_alloc();
    return {};
  }
  return {reinterpret_cast<const char*>(text), static_cast<size_t>(sqlite3_value_bytes(value))};
}

NumberReading ReadNumber(sqlite3_value* value) {
  using Kind = NumberReading::Kind;
  int type = sqlite3_value_type(value);
  if (type == SQLITE_TEXT) {
    if (IsBlank(TextOf(value))) return {Kind::kMissing, 0};
    type = sqlite3_value_numeric_type(value);
  }
  switch (type) {
    case SQLITE_INTEGER:
    case SQLITE_FLOAT: {
      const double number = sqlite3_value_double(value);
      return {std::isfinite(number) ? Kind::kNumber : Kind::kBad, number};
    }
    case SQLITE_NULL:
      return {Kind::kMissing, 0};
    default:
      return {Kind::kBad, 0};
  }
}

std::string LevelAdvice(double level) {
  if (!(level >= 50 && level < 100)) return "";
  return "; write " + Rounded(level / 100, 12);
}

std::string Describe(sqlite3_value* value) {
  switch (sqlite3_value_type(value)) {
    case SQLITE_NULL:
      return "NULL";
    case SQLITE_BLOB:
      return "a BLOB of " + std::to_string(sqlite3_value_bytes(value)) + " bytes";
    case SQLITE_TEXT:
      return "text '" + Excerpt(TextOf(value), 60) + "'";
    default:
      if (std::isinf(sqlite3_value_double(value))) return "an infinity";
      return std::string(TextOf(value));
  }
}

bool Arguments::Numbers(std::span<double> out) const {
  bool all = true;
  for (int i = 0; i < count(); ++i) {
    const std::optional<double> number = Number(i);
    all = all && number.has_value();
    if (number) out[static_cast<size_t>(i)] = *number;
  }
  return all;
}

std::optional<std::string_view> Arguments::Text(int i) const {
  sqlite3_value* v = value(i);
  if (IsNull(i)) return std::nullopt;
  if (sqlite3_value_type(v) == SQLITE_BLOB) ThrowBad(i, "must be text");
  const std::string_view text = TextOf(v);
  if (!IsUtf8(text)) ThrowBad(i, "must be UTF-8 text");
  return text;
}

void Call::Return(double number) const {
  if (std::isfinite(number)) {
    sqlite3_result_double(context_, number);
  } else {
    sqlite3_result_null(context_);
  }
}

void Call::Return(std::string_view text) const {
  sqlite3_result_text64(context_, text.data(), text.size(), SQLITE_TRANSIENT, SQLITE_UTF8);
}

void Arguments::ThrowBad(int i, std::string_view requirement, std::string_view advice) const {
  throw CallError(std::string(row().name) + ": " + ArgumentName(row(), i) + " " +
                  std::string(requirement) + ", got " + Describe(value(i)) + std::string(advice));
}

void Arguments::CheckCount() const {
  if (count() >= row().least_arguments) [[likely]]
    return;
  Throw("takes (" + std::string(row().arguments) + "), got " + std::to_string(count()) +
        " arguments");
}

void Arguments::Throw(std::string_view message) const {
  throw CallError(std::string(row().name) + ": " + std::string(message));
}

}  // namespace ladderline
