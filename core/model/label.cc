#include "core/model/label.h"

#include <algorithm>
#include <array>
#include <optional>
#include <span>
#include <utility>
#include <vector>

#include "core/model/polynomial_basis.h"
#include "core/support/near_text.h"
#include "core/support/text.h"

namespace ladderline {
namespace {

constexpr std::array<std::pair<std::string_view, Label::Word>, 11> kWords = {{
    {"number", Label::Word::kNumber},
    {"category", Label::Word::kCategory},
    {"weight", Label::Word::kWeight},
    {"exposure", Label::Word::kExposure},
    {"cluster", Label::Word::kCluster},
    {"key", Label::Word::kKey},
    {"order", Label::Word::kOrder},
    {"present", Label::Word::kPresent},
    {"polynomial", Label::Word::kPolynomial},
    {"product", Label::Word::kProduct},
    {"option", Label::Word::kOption},
}};

// Roles that are read, but that no model takes yet, are not advertised.
bool IsOffered(Label::Word role) { return role != Label::Word::kExposure; }

constexpr std::string_view kBlanks = " \t\n\r\f\v";

std::string_view Trimmed(std::string_view text) {
  const size_t first = text.find_first_not_of(kBlanks);
  if (first == std::string_view::npos) return {};
  return text.substr(first, text.find_last_not_of(kBlanks) - first + 1);
}

// Walks over a label's text; a failure is kept until the end, so that callers read straight on.
class Reader {
 public:
  explicit Reader(std::string_view text) : text_(text), rest_(text) {}

  bool failed() const { return !error_.empty(); }
  Error Failure() const { return {"label '" + Excerpt(text_, 80) + "' " + error_}; }
  void Fail(std::string why) {
    if (error_.empty()) error_ = std::move(why);
  }

  void SkipBlanks() {
    rest_.remove_prefix(std::min(rest_.find_first_not_of(kBlanks), rest_.size()));
  }
  bool AtEnd() {
    SkipBlanks();
    return rest_.empty();
  }
  bool Take(char c) {
    SkipBlanks();
    if (rest_.empty() || rest_.front() != c) return false;
    rest_.remove_prefix(1);
    return true;
  }
  bool AtQuote() const { return !rest_.empty() && rest_.front() == '"'; }

  // Text up to one of `stops` or the end.
  std::string_view Until(std::string_view stops) {
    const size_t end = std::min(rest_.find_first_of(stops), rest_.size());
    const std::string_view taken = rest_.substr(0, end);
    rest_.remove_prefix(end);
    return taken;
  }
  // After an opening quote: the quoted text.
  std::string Quoted() {
    rest_.remove_prefix(1);
    std::string out;
    while (true) {
      const size_t quote = rest_.find('"');
      if (quote == std::string_view::npos) {
        Fail("has a double quote that is never closed");
        return out;
      }
      out.append(rest_.substr(0, quote));
      rest_.remove_prefix(quote + 1);
      if (rest_.empty() || rest_.front() != '"') return out;
      out += '"';
      rest_.remove_prefix(1);
    }
  }

 private:
  std::string_view text_, rest_;
  std::string error_;
};

std::string ReadName(Reader& reader) {
  reader.SkipBlanks();
  return reader.AtQuote() ? reader.Quoted() : std::string(Trimmed(reader.Until("|()\"")));
}

// A word or argument after the bar.
std::string ReadArgument(Reader& reader) {
  if (reader.AtQuote()) return reader.Quoted();
  const std::string_view plain = reader.Until(" \t\n\r\f\v|()\"");
  if (plain.empty())
    reader.Fail("holds a character that must stand in double quotes after the bar");
  return std::string(plain);
}

std::string Count(size_t n, const char* what) {
  return std::to_string(n) + " " + what + (n == 1 ? "" : "s");
}

void FailUnknownWord(std::string_view word, Reader& reader) {
  const std::span<const std::string_view> transforms = TransformWords();
  std::vector<std::string_view> known(transforms.begin(), transforms.end());
  std::string list;
  for (const std::string_view transform : transforms)
    list += (list.empty() ? "" : ", ") + std::string(transform);
  list += "; roles are ";
  for (const auto& [role_word, role] : kWords) {
    if (!IsOffered(role)) continue;
    if (known.size() > transforms.size()) list += ", ";
    list += role_word;
    known.push_back(role_word);
  }
  const std::string nearest(NearestWord(word, known));
  reader.Fail("has an unknown word '" + Excerpt(word, 40) + "'" +
              (nearest.empty() ? "" : " (did you mean " + nearest + "?)") + "; known are " + list);
}

void ReadTransform(const std::vector<std::string>& words, Label& label, Reader& reader) {
  if (!TransformOfWord(words[0])) return FailUnknownWord(words[0], reader);
  const std::vector<std::string_view> views(words.begin(), words.end());
  Result<SpecReading> reading = Transform::ReadSpec(std::span<const std::string_view>(views));
  if (!reading.ok()) {
    reader.Fail("cannot be read: " + reading.error());
  } else if (reading.value().needs_estimate()) {
    label.estimated = reading.value().kind;
  } else {
    label.transform = *reading.value().transform;
  }
}

void ReadRole(const std::vector<std::string>& words, Label& label, Reader& reader) {
  const size_t arguments = words.size() - 1;
  const auto takes = [&](size_t least, size_t most, const char* what) {
    if (arguments >= least && arguments <= most) return true;
    reader.Fail("gives " + Count(arguments, "argument") + " to " + words[0] + ", which takes " +
                what);
    return false;
  };
  switch (label.word) {
    case Label::Word::kCategory:
      if (takes(0, 1, "at most a reference level (in double quotes if it holds blanks)") &&
          arguments == 1) {
        label.reference = words[1];
        label.has_reference = true;
      }
      return;
    case Label::Word::kPolynomial:
      if (takes(1, 1, "its degree")) {
        const double degree = ParseNumber(words[1]).value_or(0);
        if (degree < 1 || degree > kHighestDegree || degree != static_cast<int>(degree)) {
          reader.Fail("has a degree that is no whole number from 1 to " +
                      std::to_string(kHighestDegree) + ": " + words[1]);
          return;
        }
        label.degree = static_cast<int>(degree);
      }
      return;
    case Label::Word::kProduct:
      if (takes(2, 2, "the names of two other labels")) {
        label.part_a = words[1];
        label.part_b = words[2];
      }
      return;
    default:
      (void)takes(0, 0, "none");
  }
}

}  // namespace

Result<Label> ReadLabel(std::string_view text) {
  Reader reader(text);
  Label label;
  if (!IsUtf8(text)) return Error{"label '" + Excerpt(text, 80) + "' is not UTF-8 text"};
  if (text.find('\0') != std::string_view::npos)
    return Error{"label '" + Excerpt(text, 80) + "' holds a NUL character"};
  if (IsBlank(text)) return Error{"label is empty"};
  label.name = ReadName(reader);
  if (IsBlank(label.name)) reader.Fail("has no name");
  if (reader.Take('(')) {
    label.unit = Trimmed(reader.Until(")"));
    if (!reader.Take(')')) reader.Fail("has a unit without a closing parenthesis");
  }
  if (reader.Take('|')) {
    std::vector<std::string> words;
    while (!reader.failed() && !reader.AtEnd()) words.push_back(ReadArgument(reader));
    if (words.empty()) reader.Fail("has nothing after the bar");
    if (!reader.failed()) {
      const auto* role = std::find_if(kWords.begin(), kWords.end(),
                                      [&](const auto& entry) { return entry.first == words[0]; });
      if (role == kWords.end()) {
        label.word = Label::Word::kTransform;
        ReadTransform(words, label, reader);
      } else {
        label.word = role->second;
        ReadRole(words, label, reader);
      }
    }
  } else if (!reader.AtEnd()) {
    reader.Fail(
        "goes on after its name; write a unit in parentheses, a word after a bar, and quote "
        "names that hold | ( ) or \"");
  }
  if (reader.failed()) return reader.Failure();
  return label;
}

std::string QuotedName(std::string_view name) {
  const bool plain =
      !name.empty() && name.find_first_of("|()\" \t\n\r\f\v") == std::string_view::npos;
  if (plain) return std::string(name);
  std::string out = "\"";
  for (const char c : name) {
    if (c == '"') out += '"';
    out += c;
  }
  return out + "\"";
}

}  // namespace ladderline
