// A JSON value: built to be written as text, or read from it.
//
// nlohmann/json does the reading and printing, but its own tree is not used: it asks for memory
// while it is destroyed, in a destructor, so that running out of memory there would end the host's
// process. This one speaks the same way where it can.
//
//   Json result;
//   result["rows"] = 12;                                      // null becomes an object
//   result["bins"].push_back(Json::array(0.5, 1.5, 3));       // null becomes an array
//
// Objects keep the order in which keys were added. There are no braced lists of values: GCC 12
// destroys their temporaries wrongly when one of them runs out of memory.
#ifndef LADDERLINE_EXT_JSON_H_
#define LADDERLINE_EXT_JSON_H_

#include <concepts>
#include <cstdint>
#include <string>
#include <string_view>
#include <type_traits>
#include <utility>
#include <variant>
#include <vector>

#include "core/support/result.h"

namespace ladderline {

// A member of an object. A template, so that it is made where a value is whole already.
template <class Value>
struct JsonMember {
  std::string key;
  Value value;
};

class Json {
 public:
  using Member = JsonMember<Json>;
  using Array = std::vector<Json>;
  using Object = std::vector<Member>;

  Json() = default;  // null
  Json(std::nullptr_t) {}
  template <std::integral Integer>
  Json(Integer value) {
    if constexpr (std::same_as<Integer, bool>) {
      value_ = value;
    } else {
      value_ = static_cast<std::int64_t>(value);
    }
  }
  Json(double value);  // null where it is not finite
  Json(std::string value) : value_(std::move(value)) {}
  Json(std::string_view value) : value_(std::string(value)) {}
  Json(const char* value) : value_(std::string(value)) {}
  template <class... Items>
  static Json array(Items&&... items) {
    Json json;
    Array& elements = json.value_.emplace<Array>();
    elements.reserve(sizeof...(items));
    (elements.emplace_back(std::forward<Items>(items)), ...);
    return json;
  }
  static Json object();

  // The value of a whole text. Refused, in words that follow `it`: what is not JSON, a number
  // beyond the range of a double, a key that comes twice in one object, and more than 8 levels or
  // 100 keys in one object, which no result of this extension has. Whole numbers beyond 64 bits are
  // read as doubles.
  static Result<Json> Parse(std::string_view text);
  // The text; bytes that are not UTF-8 are replaced.
  std::string dump() const;

  bool is_null() const { return std::holds_alternative<std::nullptr_t>(value_); }
  bool is_boolean() const { return std::holds_alternative<bool>(value_); }
  bool is_number_integer() const { return std::holds_alternative<std::int64_t>(value_); }
  bool is_number() const { return is_number_integer() || std::holds_alternative<double>(value_); }
  bool is_string() const { return std::holds_alternative<std::string>(value_); }
  bool is_array() const { return std::holds_alternative<Array>(value_); }
  bool is_object() const { return std::holds_alternative<Object>(value_); }

  // The value, which must be of the kind asked for; a number may be read as any type of number.
  template <class T>
  T get() const {
    if constexpr (std::is_arithmetic_v<T> && !std::same_as<T, bool>) {
      return is_number_integer() ? static_cast<T>(std::get<std::int64_t>(value_))
                                 : static_cast<T>(std::get<double>(value_));
    } else {
      return std::get<T>(value_);
    }
  }

  // Of an array or an object; 0 and true for anything else.
  size_t size() const;
  bool empty() const { return size() == 0; }
  // Elements of an array; none of anything else.
  const Json* begin() const;
  const Json* end() const;
  const Json& operator[](size_t i) const { return std::get<Array>(value_)[i]; }
  Json& operator[](size_t i) { return std::get<Array>(value_)[i]; }
  void push_back(Json element);  // null becomes an array

  // Members of an object; null where there is no such key, or no object.
  const Json* Find(std::string_view key) const;
  bool contains(std::string_view key) const { return Find(key) != nullptr; }
  const Object& members() const { return std::get<Object>(value_); }
  const Json& operator[](std::string_view key) const { return *Find(key); }  // which must be there
  Json& operator[](std::string_view key);  // added where it is missing; null becomes an object

 private:
  class Builder;

  std::variant<std::nullptr_t, bool, std::int64_t, double, std::string, Array, Object> value_ =
      nullptr;
};

}  // namespace ladderline

#endif  // LADDERLINE_EXT_JSON_H_
