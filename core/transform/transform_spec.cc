// How a transform is made from numbers, and read from and written as a spec text.
#include <algorithm>
#include <cmath>
#include <numbers>
#include <vector>

#include "core/elementary/elementary.h"
#include "core/support/text.h"
#include "core/transform/transform.h"

namespace ladderline {
namespace {

constexpr std::string_view kBlanks = " \t\n\r\f\v";

struct Signature {
  std::string_view word;
  std::string_view usage;  // the arguments as a reader sees them
  std::array<std::string_view, 4> names;
  unsigned counts;                   // bit n is set where n arguments may be given
  std::array<double, 4> defaults{};  // for the arguments that may be left out
  bool estimable = false;            // without arguments, a spec asks for an estimate
};

constexpr unsigned Counts(std::initializer_list<unsigned> counts) {
  unsigned bits = 0;
  for (const unsigned n : counts) bits |= 1U << n;
  return bits;
}

// In the order of TransformKind.
// clang-format off
constexpr std::array<Signature, 16> kSignatures = {{
    {"identity", "no arguments", {}, Counts({0})},
    {"log_offset", "[offset [base]]", {"offset", "base"}, Counts({0, 1, 2}), {0, std::numbers::e}},
    {"sqrt_offset", "[offset]", {"offset"}, Counts({0, 1})},
    {"square", "no arguments", {}, Counts({0})},
    {"power_of", "p", {"p"}, Counts({1})},
    {"reciprocal", "no arguments", {}, Counts({0})},
    {"negative_reciprocal", "no arguments", {}, Counts({0})},
    {"log_reflected", "top", {"top"}, Counts({1})},
    {"box_cox", "lambda [offset]", {"lambda", "offset"}, Counts({1, 2}), {}, true},
    {"yeo_johnson", "lambda", {"lambda"}, Counts({1}), {}, true},
    {"asinh_scaled", "theta", {"theta"}, Counts({1})},
    {"logit", "[low high [inset]]", {"low", "high", "inset"}, Counts({0, 2, 3}), {0, 1, 0}},
    {"z_score", "mean sd", {"mean", "sd"}, Counts({2}), {}, true},
    {"rescale", "old_low old_high [new_low new_high]", {"old_low", "old_high", "new_low", "new_high"},
     Counts({2, 4}), {0, 0, 0, 1}, true},
    {"center", "middle", {"middle"}, Counts({1}), {}, true},
    {"date_days", "no arguments", {}, Counts({0})},
}};
// clang-format on
static_assert(kSignatures.size() == static_cast<size_t>(TransformKind::kDateDays) + 1);

constexpr auto kWords = [] {
  std::array<std::string_view, kSignatures.size()> words;
  for (size_t i = 0; i < words.size(); ++i) words[i] = kSignatures[i].word;
  return words;
}();

const Signature& SignatureOf(TransformKind kind) { return kSignatures[static_cast<size_t>(kind)]; }

size_t MostArguments(const Signature& signature) {
  size_t most = 0;
  while (most < 4 && !signature.names[most].empty()) ++most;
  return most;
}

// What is wrong with argument `index`: it must `requirement`.
struct Objection {
  size_t index;
  std::string_view requirement;
};

std::optional<Objection> ObjectionTo(TransformKind kind, std::span<const double> a) {
  for (size_t i = 0; i < a.size(); ++i)
    if (!std::isfinite(a[i])) return Objection{i, "be a finite number"};
  const auto no_range = [&](size_t low) {
    return a[low] == a[low + 1] || !std::isfinite(a[low + 1] - a[low]);
  };
  switch (kind) {
    case TransformKind::kLogOffset:
      if (a[1] <= 0 || a[1] == 1) return Objection{1, "be above 0 and other than 1"};
      break;
    case TransformKind::kPowerOf:
      if (a[0] == 0) return Objection{0, "be other than 0"};
      break;
    case TransformKind::kAsinhScaled:
      if (a[0] <= 0) return Objection{0, "be above 0"};
      break;
    case TransformKind::kLogit:
      if (no_range(0)) return Objection{1, "differ from low, by a finite amount"};
      if (a[2] < 0 || a[2] >= 0.5) return Objection{2, "lie in 0 up to but not including 0.5"};
      break;
    case TransformKind::kZScore:
      if (a[1] <= 0) return Objection{1, "be above 0"};
      break;
    case TransformKind::kRescale:
      if (no_range(0)) return Objection{1, "differ from old_low, by a finite amount"};
      if (no_range(2)) return Objection{3, "differ from new_low, by a finite amount"};
      break;
    default:
      break;
  }
  return std::nullopt;
}

bool TakesCount(const Signature& signature, size_t count) {
  return count <= 4 && (signature.counts >> count & 1U) != 0;
}

// `given` with the defaults after it; nullopt where the kind does not take so many.
std::optional<std::array<double, 4>> Filled(const Signature& signature,
                                            std::span<const double> given) {
  if (!TakesCount(signature, given.size())) return std::nullopt;
  std::array<double, 4> all = signature.defaults;
  std::copy(given.begin(), given.end(), all.begin());
  return all;
}

Error WrongCount(const Signature& signature, size_t given) {
  return Error{std::string(signature.word) + " takes " + std::string(signature.usage) + ", got " +
               std::to_string(given) + (given == 1 ? " argument" : " arguments")};
}

}  // namespace

Transform::Transform(TransformKind kind, const std::array<double, 4>& arguments, size_t count)
    : kind_(kind), count_(static_cast<unsigned char>(count)), arguments_(arguments) {
  // Exactly 1 for the double nearest e, so that the default is the natural logarithm itself.
  if (kind == TransformKind::kLogOffset && arguments[1] != std::numbers::e)
    log_base_ = Log(arguments[1]);
}

bool Transform::Takes(TransformKind kind, std::size_t count) {
  return TakesCount(SignatureOf(kind), count);
}

std::optional<Transform> Transform::TryMake(TransformKind kind, std::span<const double> arguments) {
  const Signature& signature = SignatureOf(kind);
  const auto all = Filled(signature, arguments);
  const size_t count = MostArguments(signature);
  if (!all || ObjectionTo(kind, {all->data(), count})) return std::nullopt;
  return Transform(kind, *all, count);
}

Result<Transform> Transform::Make(TransformKind kind, std::span<const double> arguments) {
  if (const auto made = TryMake(kind, arguments)) return *made;
  const Signature& signature = SignatureOf(kind);
  const auto all = Filled(signature, arguments);
  if (!all) return WrongCount(signature, arguments.size());
  const Objection objection = *ObjectionTo(kind, {all->data(), MostArguments(signature)});
  const double value = (*all)[objection.index];
  return Error{std::string(signature.names[objection.index]) + " must " +
               std::string(objection.requirement) + ", got " +
               (std::isfinite(value) ? NumberText(value) : "no finite number")};
}

Result<SpecReading> Transform::ReadSpec(std::string_view spec) {
  std::vector<std::string_view> words;
  for (size_t start = spec.find_first_not_of(kBlanks); start != spec.npos;) {
    const size_t end = std::min(spec.find_first_of(kBlanks, start), spec.size());
    words.push_back(spec.substr(start, end - start));
    start = spec.find_first_not_of(kBlanks, end);
  }
  return ReadSpec(words);
}

Result<SpecReading> Transform::ReadSpec(std::span<const std::string_view> words) {
  const std::string_view word = words.empty() ? std::string_view() : words[0];
  const std::optional<TransformKind> kind = TransformOfWord(word);
  if (!kind) {
    std::string what = "no transform is called '" + Excerpt(word, 60) + "'; known are ";
    for (const std::string_view known : kWords) {
      if (known != kWords.front()) what += ", ";
      what += known;
    }
    return Error{std::move(what)};
  }
  const Signature& signature = SignatureOf(*kind);
  const std::span<const std::string_view> given = words.subspan(1);
  if (given.empty() && signature.estimable) return SpecReading{*kind, std::nullopt};
  if (*kind == TransformKind::kLogOffset && given.size() == 1 && given[0] == "auto")
    return SpecReading{*kind, std::nullopt};
  if (!TakesCount(signature, given.size())) return WrongCount(signature, given.size());
  std::vector<double> numbers;
  for (const std::string_view text : given) {
    const std::optional<double> number = ParseNumber(text);
    if (!number) {
      return Error{std::string(signature.names[numbers.size()]) + " must be a number, got '" +
                   Excerpt(text, 60) + "'"};
    }
    numbers.push_back(*number);
  }
  Result<Transform> made = Make(*kind, numbers);
  if (!made.ok()) return Error{made.error()};
  return SpecReading{*kind, made.value()};
}

std::string Transform::spec() const {
  const Signature& signature = SignatureOf(kind_);
  // The fewest arguments that leave the rest at their defaults.
  size_t count = 0;
  while (!TakesCount(signature, count) ||
         !std::equal(arguments_.begin() + count, arguments_.begin() + count_,
                     signature.defaults.begin() + count))
    ++count;
  std::string text(signature.word);
  for (size_t i = 0; i < count; ++i) text.append(" ").append(NumberText(arguments_[i]));
  return text;
}

std::span<const std::string_view> TransformWords() { return kWords; }

std::string_view TransformWord(TransformKind kind) { return SignatureOf(kind).word; }

std::optional<TransformKind> TransformOfWord(std::string_view word) {
  const auto found = std::find(kWords.begin(), kWords.end(), word);
  if (found == kWords.end()) return std::nullopt;
  return static_cast<TransformKind>(found - kWords.begin());
}

}  // namespace ladderline
