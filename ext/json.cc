#include "ext/json.h"

#include <algorithm>
#include <cmath>
#include <limits>
#include <nlohmann/json.hpp>

#include "core/support/text.h"

namespace ladderline {

namespace {

// A text or a number as JSON. A leaf of nlohmann's asks for nothing while it is destroyed.
template <class T>
std::string Leaf(const T& value) {
  return nlohmann::json(value).dump(-1, ' ', false, nlohmann::json::error_handler_t::replace);
}

void Write(const Json& json, std::string& out) {
  const char* separator = "";
  if (json.is_object()) {
    out += '{';
    for (const Json::Member& member : json.members()) {
      out += separator + Leaf(member.key) + ':';
      Write(member.value, out);
      separator = ",";
    }
    out += '}';
  } else if (json.is_array()) {
    out += '[';
    for (const Json& element : json) {
      out += separator;
      Write(element, out);
      separator = ",";
    }
    out += ']';
  } else if (json.is_string()) {
    out += Leaf(json.get<std::string>());
  } else if (json.is_number_integer()) {
    out += std::to_string(json.get<std::int64_t>());
  } else if (json.is_number()) {
    out += Leaf(json.get<double>());
  } else if (json.is_boolean()) {
    out += json.get<bool>() ? "true" : "false";
  } else {
    out += "null";
  }
}

constexpr size_t kMostDepth = 8;
constexpr size_t kMostKeys = 100;  // keys are searched one by one

}  // namespace

// Receives the parts of a text in their order. Every call says whether to go on.
class Json::Builder {
 public:
  Json root;
  std::string error;

  bool null() { return Put(nullptr); }
  bool boolean(bool value) { return Put(value); }
  bool number_integer(std::int64_t value) { return Put(value); }
  bool number_unsigned(std::uint64_t value) {
    return value <= std::numeric_limits<std::int64_t>::max() ? Put(value)
                                                             : Put(static_cast<double>(value));
  }
  bool number_float(double value, const std::string&) { return Put(value); }
  bool string(std::string& value) { return Put(std::move(value)); }
  bool binary(nlohmann::json::binary_t&) { return false; }  // never in text
  bool start_array(size_t) { return Open(array()); }
  bool start_object(size_t) { return Open(object()); }
  bool end_array() { return Close(); }
  bool end_object() { return Close(); }
  bool key(std::string& value) {
    if (open_.back()->contains(value))
      return Refuse("the key " + Excerpt(value, 40) + " comes twice in one object");
    if (open_.back()->size() == kMostKeys) return Refuse("an object has too many keys");
    next_ = &(*open_.back())[value];
    return true;
  }
  bool parse_error(size_t byte, const std::string&, const nlohmann::json::exception& failure) {
    return Refuse(failure.id == kOutOfRange ? "it holds a number too large for a double"
                                            : "it is not JSON, at byte " + std::to_string(byte));
  }

 private:
  static constexpr int kOutOfRange = 406;  // nlohmann's number for what overflows

  // Where the next value belongs: after a key, at the end of an array, or the whole.
  Json& Place() {
    if (next_ != nullptr) return *std::exchange(next_, nullptr);
    if (open_.empty()) return root;
    open_.back()->push_back(nullptr);
    return std::get<Array>(open_.back()->value_).back();
  }
  bool Put(Json value) {
    Place() = std::move(value);
    return true;
  }
  // What is open is the last element of what holds it, so that its address stays.
  bool Open(Json value) {
    if (open_.size() == kMostDepth) return Refuse("it is nested too deeply");
    Json& place = Place();
    place = std::move(value);
    open_.push_back(&place);
    return true;
  }
  bool Close() {
    open_.pop_back();
    return true;
  }
  bool Refuse(std::string what) {
    error = std::move(what);
    return false;
  }

  std::vector<Json*> open_;
  Json* next_ = nullptr;  // the member whose key was read last; its value follows at once
};

Json::Json(double value) {
  if (std::isfinite(value)) value_ = value;
}

Json Json::object() {
  Json json;
  json.value_ = Object();
  return json;
}

Result<Json> Json::Parse(std::string_view text) {
  Builder builder;
  if (!nlohmann::json::sax_parse(text.begin(), text.end(), &builder))
    return Error{std::move(builder.error)};
  return std::move(builder.root);
}

std::string Json::dump() const {
  std::string out;
  Write(*this, out);
  return out;
}

size_t Json::size() const {
  if (is_array()) return std::get<Array>(value_).size();
  return is_object() ? std::get<Object>(value_).size() : 0;
}

const Json* Json::begin() const { return is_array() ? std::get<Array>(value_).data() : nullptr; }

const Json* Json::end() const { return is_array() ? begin() + size() : nullptr; }

void Json::push_back(Json element) {
  if (is_null()) value_ = Array();
  std::get<Array>(value_).push_back(std::move(element));
}

const Json* Json::Find(std::string_view key) const {
  if (!is_object()) return nullptr;
  for (const Member& member : members())
    if (member.key == key) return &member.value;
  return nullptr;
}

Json& Json::operator[](std::string_view key) {
  if (is_null()) value_ = Object();
  for (Member& member : std::get<Object>(value_))
    if (member.key == key) return member.value;
  return std::get<Object>(value_).emplace_back(Member{std::string(key), Json()}).value;
}

}  // namespace ladderline
