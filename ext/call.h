// One call from SQL: reading arguments under the product's number rules, and answering.
//
// Every callback runs inside Guard, so that nothing is thrown past the C boundary. A bad call is
// thrown as CallError and becomes the statement's error; its text has one form everywhere:
// `function: argument must requirement, got value`.
#ifndef LADDERLINE_EXT_CALL_H_
#define LADDERLINE_EXT_CALL_H_

#include <cstdint>
#include <optional>
#include <span>
#include <stdexcept>
#include <string>
#include <string_view>

#include "ext/host.h"

namespace ladderline {

struct FunctionRow;
struct Connection;

// A mistake in the call; what() is the whole message.
class CallError : public std::runtime_error {
 public:
  using std::runtime_error::runtime_error;
};

// How a value reads where a number is wanted: INTEGER, REAL, or text that SQLite's numeric type
// takes whole is a number; NULL and blank text are missing; other text, a BLOB, an infinity are
// bad.
struct NumberReading {
  enum class Kind : unsigned char { kNumber, kMissing, kBad };
  Kind kind;
  double number;  // kNumber only
};
NumberReading ReadNumber(sqlite3_value* value);

std::string_view TextOf(sqlite3_value* value);   // the value's text in the host's rendering
std::string_view BytesOf(sqlite3_value* value);  // BLOB or text bytes, no conversion
// For messages: `text 'n/a'`, `NULL`, `12.5`, `an infinity`, `a BLOB of 3 bytes`; long text is cut.
std::string Describe(sqlite3_value* value);
// What to write instead of a level in percent, from 50 on: `; write 0.95`. Else empty.
std::string LevelAdvice(double level);

// What a registered function carries: its row in the table, and the connection's shared state.
struct Binding {
  const FunctionRow& row;
  Connection& connection;
};

// The arguments of a call, named in messages as the table names them.
class Arguments {
 public:
  Arguments(const Binding& binding, std::span<sqlite3_value*> values)
      : binding_(binding), values_(values) {}

  const FunctionRow& row() const { return binding_.row; }
  Connection& connection() const { return binding_.connection; }
  int count() const { return static_cast<int>(values_.size()); }
  sqlite3_value* value(int i) const { return values_[static_cast<size_t>(i)]; }
  bool Has(int i) const { return i < count(); }
  bool IsNull(int i) const { return sqlite3_value_type(value(i)) == SQLITE_NULL; }

  // The number in argument i; nullopt when it is missing. Throws CallError when it is bad.
  std::optional<double> Number(int i) const {
    const NumberReading reading = ReadNumber(value(i));
    if (reading.kind == NumberReading::Kind::kNumber) [[likely]]
      return reading.number;
    if (reading.kind == NumberReading::Kind::kMissing) return std::nullopt;
    ThrowBad(i, "must be a number");
  }
  // All arguments as numbers, in order, into `out`, which holds the defaults of those left out.
  // False when one is missing: the answer is then NULL.
  bool Numbers(std::span<double> out) const;
  // Text as it stands (numbers in the host's rendering); nullopt for NULL. Throws for a BLOB or for
  // bytes that are not UTF-8.
  std::optional<std::string_view> Text(int i) const;

  // Refuses fewer arguments than the function takes, which the host lets through where any number
  // may be given.
  void CheckCount() const;
  // `function: argument REQUIREMENT, got value`, the argument's name taken from the table, then the
  // advice.
  [[noreturn]] void ThrowBad(int i, std::string_view requirement,
                             std::string_view advice = {}) const;
  // `function: MESSAGE`.
  [[noreturn]] void Throw(std::string_view message) const;

 private:
  const Binding& binding_;
  std::span<sqlite3_value*> values_;
};

// A call of a scalar or an aggregate: its arguments, and the way to answer.
class Call : public Arguments {
 public:
  Call(sqlite3_context* context, int count, sqlite3_value** values)
      : Arguments(*static_cast<const Binding*>(sqlite3_user_data(context)),
                  std::span(values, static_cast<size_t>(count))),
        context_(context) {}

  sqlite3_context* context() const { return context_; }

  // Answers. A NaN or an infinity becomes NULL.
  void Return(double number) const;
  void Return(std::int64_t number) const { sqlite3_result_int64(context_, number); }
  void Return(std::string_view text) const;
  void Return(std::optional<double> number) const { number ? Return(*number) : ReturnNull(); }
  void ReturnNull() const { sqlite3_result_null(context_); }

 private:
  sqlite3_context* context_;
};

// Runs `body` with nothing thrown past it; errors become the statement's result.
template <class Body>
void Guard(sqlite3_context* context, Body&& body) noexcept {
  try {
    body();
  } catch (const std::bad_alloc&) {
    sqlite3_result_error_nomem(context);
  } catch (const std::exception& error) {
    sqlite3_result_error(context, error.what(), -1);
  } catch (...) {
    sqlite3_result_error(context, "ladderline: internal error", -1);
  }
}

}  // namespace ladderline

#endif  // LADDERLINE_EXT_CALL_H_
