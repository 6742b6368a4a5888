// A value or an error: how core/ reports bad data without throwing.
//
// Three kinds of trouble, three channels: bad data comes back as an Error, out of memory flies as
// std::bad_alloc, a bug of ours is an assert.
#ifndef LADDERLINE_CORE_SUPPORT_RESULT_H_
#define LADDERLINE_CORE_SUPPORT_RESULT_H_

#include <cassert>
#include <optional>
#include <string>
#include <utility>
#include <variant>

namespace ladderline {

// `what` is a full sentence part that a user reads; it names the offending value.
struct Error {
  std::string what;
};

template <class T>
class [[nodiscard]] Result {
 public:
  Result(T value) : state_(std::move(value)) {}      // NOLINT(google-explicit-constructor)
  Result(Error error) : state_(std::move(error)) {}  // NOLINT(google-explicit-constructor)

  bool ok() const { return state_.index() == 0; }
  const T& value() const& {
    assert(ok());
    return std::get<0>(state_);
  }
  T&& value() && {
    assert(ok());
    return std::get<0>(std::move(state_));
  }
  const std::string& error() const {
    assert(!ok());
    return std::get<1>(state_).what;
  }

 private:
  std::variant<T, Error> state_;
};

}  // namespace ladderline

#endif  // LADDERLINE_CORE_SUPPORT_RESULT_H_
