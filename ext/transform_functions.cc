// Re-expressions as scalars, there and back, dates, and reading dirty columns.
//
// A value outside a transform's domain gives NULL, and so do arguments outside theirs (an sd of 0,
// a base of 1): in a query these often come from data, out of windows and joins. In a spec, which
// is written by hand, such arguments are an error.
#include <array>
#include <cmath>

#include "core/transform/calendar.h"
#include "core/transform/transform.h"
#include "ext/function_tables.h"

namespace ladderline {
namespace {

enum class Way { kForward, kBack };

// word(value [, arguments of the kind]).
template <TransformKind kind, Way way>
void ReExpressed(Call& call) {
  const auto given = static_cast<size_t>(call.count() - 1);
  if (!Transform::Takes(kind, given)) {
    call.Throw("takes (" + std::string(call.row().arguments) + "), got " +
               std::to_string(call.count()) + " arguments");
  }
  std::array<double, 5> numbers;
  if (!call.Numbers(numbers)) return call.ReturnNull();
  const auto transform = Transform::TryMake(kind, {numbers.data() + 1, given});
  if (!transform) return call.ReturnNull();
  call.Return(way == Way::kForward ? transform->Forward(numbers[0]) : transform->Back(numbers[0]));
}

void ReturnDays(Call& call) {
  if (sqlite3_value_type(call.value(0)) != SQLITE_TEXT) return call.ReturnNull();
  const std::optional<int> days = DaysOfDate(TextOf(call.value(0)));
  days ? call.Return(std::int64_t{*days}) : call.ReturnNull();
}

void ReturnDate(Call& call) {
  const std::optional<double> days = call.Number(0);
  const auto date = days ? DateOfDays(*days) : std::nullopt;
  date ? call.Return(std::string_view(*date)) : call.ReturnNull();
}

// The transform that argument 1 spells. The host keeps it from row to row where the spec is the
// same literal or parameter throughout.
Transform SpecOf(Call& call, std::string_view text) {
  constexpr int kSpec = 1;
  if (const void* kept = sqlite3_get_auxdata(call.context(), kSpec))
    return *static_cast<const Transform*>(kept);
  const auto reading = Transform::ReadSpec(text);
  if (!reading.ok()) {
    call.Throw("spec must be a transform and its arguments, got " + Describe(call.value(kSpec)) +
               ": " + reading.error());
  }
  if (reading.value().needs_estimate()) call.ThrowBad(kSpec, "must give its arguments as numbers");
  const Transform transform = *reading.value().transform;
  sqlite3_set_auxdata(call.context(), kSpec, new Transform(transform),
                      [](void* kept) { delete static_cast<Transform*>(kept); });
  return transform;
}

template <Way way>
void BySpec(Call& call) {
  const std::optional<std::string_view> text = call.Text(1);
  if (!text) return call.ReturnNull();
  const Transform transform = SpecOf(call, *text);
  if (transform.kind() == TransformKind::kDateDays)
    return way == Way::kForward ? ReturnDays(call) : ReturnDate(call);
  const std::optional<double> x = call.Number(0);
  if (!x) return call.ReturnNull();
  call.Return(way == Way::kForward ? transform.Forward(*x) : transform.Back(*x));
}

bool IsInteger(sqlite3_value* value) { return sqlite3_value_numeric_type(value) == SQLITE_INTEGER; }

void NumberOrNull(Call& call) {
  sqlite3_value* x = call.value(0);
  const NumberReading number = ReadNumber(x);
  const bool is_number = number.kind == NumberReading::Kind::kNumber;
  bool is_code = false;
  for (int i = 1; i < call.count(); ++i) {
    sqlite3_value* code = call.value(i);
    if (sqlite3_value_type(code) == SQLITE_BLOB) call.ThrowBad(i, "must be a number or text");
    const NumberReading reading = ReadNumber(code);
    if (!is_number || reading.kind != NumberReading::Kind::kNumber) continue;
    // Integers beyond 2^53 keep their last digits.
    is_code |= IsInteger(x) && IsInteger(code) ? sqlite3_value_int64(x) == sqlite3_value_int64(code)
                                               : number.number == reading.number;
  }
  if (!is_number || is_code) return call.ReturnNull();
  IsInteger(x) ? call.Return(std::int64_t{sqlite3_value_int64(x)}) : call.Return(number.number);
}

template <TransformKind kind>
constexpr ScalarCall kForward = ReExpressed<kind, Way::kForward>;
template <TransformKind kind>
constexpr ScalarCall kBack = ReExpressed<kind, Way::kBack>;

constexpr const char* kBoxCoxSource = "Box & Cox 1964";
constexpr const char* kYeoJohnsonSource = "Yeo & Johnson 2000";

using enum TransformKind;

constexpr FunctionRow kRows[] = {
    Scalar("log_offset", 1, 3, "x [, offset = 0 [, base = e]]", kForward<kLogOffset>,
           "The logarithm of x + offset; NULL unless x + offset > 0.", "",
           "SELECT log_offset(119, 1), log_offset(1000, 0, 10)"),
    Scalar("log_offset_inverse", 1, 3, "z [, offset = 0 [, base = e]]", kBack<kLogOffset>,
           "Back from log_offset: base^z - offset.", "",
           "SELECT log_offset_inverse(log_offset(119, 1), 1)"),
    Scalar("sqrt_offset", 1, 2, "x [, offset = 0]", kForward<kSqrtOffset>,
           "The square root of x + offset; NULL unless x + offset >= 0.", "",
           "SELECT sqrt_offset(15, 1)"),
    Scalar("sqrt_offset_inverse", 1, 2, "z [, offset = 0]", kBack<kSqrtOffset>,
           "Back from sqrt_offset: z squared - offset; NULL for z < 0.", "",
           "SELECT sqrt_offset_inverse(4, 1)"),
    Scalar("square", 1, 1, "x", kForward<kSquare>,
           "x squared: draws out the upper end of a left-skewed measure.", "", "SELECT square(90)"),
    Scalar("square_inverse", 1, 1, "z", kBack<kSquare>,
           "Back from square: the root that is not negative; NULL for z < 0.", "",
           "SELECT square_inverse(8100)"),
    Scalar("power_of", 2, 2, "x, p", kForward<kPowerOf>,
           "x to the power p; NULL for x < 0, for x = 0 unless p > 0, and for p = 0.", "",
           "SELECT power_of(27, 1.0 / 3)"),
    Scalar("power_of_inverse", 2, 2, "z, p", kBack<kPowerOf>,
           "Back from power_of: z to the power 1/p.", "",
           "SELECT power_of_inverse(power_of(27, -0.5), -0.5)"),
    Scalar("reciprocal", 1, 1, "x", kForward<kReciprocal>,
           "1/x, its own way back; turns order and units round (repairs per visit to visits per "
           "repair); NULL at 0.",
           "", "SELECT reciprocal(4)"),
    Scalar("negative_reciprocal", 1, 1, "x", kForward<kNegativeReciprocal>,
           "-1/x, its own way back; keeps the order of positive values; NULL at 0.", "",
           "SELECT negative_reciprocal(4)"),
    Scalar(
        "log_reflected", 2, 2, "x, top", kForward<kLogReflected>,
        "-ln(top - x), for left-skewed measures with a ceiling; keeps the order; NULL unless x < "
        "top.",
        "", "SELECT log_reflected(88, 101)"),
    Scalar("log_reflected_inverse", 2, 2, "z, top", kBack<kLogReflected>,
           "Back from log_reflected: top - exp(-z).", "",
           "SELECT log_reflected_inverse(log_reflected(88, 101), 101)"),
    Scalar(
        "box_cox", 2, 3, "x, lambda [, offset = 0]", kForward<kBoxCox>,
        "((x + offset)^lambda - 1)/lambda, the logarithm at lambda = 0; NULL unless x + offset > "
        "0.",
        kBoxCoxSource, "SELECT box_cox(120.5, 0.25)"),
    Scalar("box_cox_inverse", 2, 3, "z, lambda [, offset = 0]", kBack<kBoxCox>,
           "Back from box_cox; NULL where lambda z + 1 < 0.", kBoxCoxSource,
           "SELECT box_cox_inverse(box_cox(120.5, 0.25), 0.25)"),
    Scalar(
        "yeo_johnson", 2, 2, "x, lambda", kForward<kYeoJohnson>,
        "A power transform for values of both signs: box_cox of 1 + x from 0 on, its mirror image "
        "with 2 - lambda below.",
        kYeoJohnsonSource, "SELECT yeo_johnson(-3, 0.5), yeo_johnson(3, 0.5)"),
    Scalar("yeo_johnson_inverse", 2, 2, "z, lambda", kBack<kYeoJohnson>, "Back from yeo_johnson.",
           kYeoJohnsonSource, "SELECT yeo_johnson_inverse(yeo_johnson(-3, 0.5), 0.5)"),
    Scalar("asinh_scaled", 2, 2, "x, theta", kForward<kAsinhScaled>,
           "asinh(theta x)/theta: like a logarithm for large values of both signs, like x near 0; "
           "NULL unless theta > 0.",
           "", "SELECT asinh_scaled(-250, 0.1)"),
    Scalar("asinh_scaled_inverse", 2, 2, "z, theta", kBack<kAsinhScaled>,
           "Back from asinh_scaled: sinh(theta z)/theta.", "",
           "SELECT asinh_scaled_inverse(asinh_scaled(-250, 0.1), 0.1)"),
    Scalar(
        "logit", 1, 4, "p [, low = 0, high = 1 [, inset = 0]]", kForward<kLogit>,
        "ln(q/(1 - q)) of the share q that p has of low ... high, moved inwards by inset so that "
        "scores at the ends keep a value; NULL unless 0 < q < 1.",
        "", "SELECT logit(0.8), logit(100, 0, 100, 0.01)"),
    Scalar("logit_inverse", 1, 4, "z [, low = 0, high = 1 [, inset = 0]]", kBack<kLogit>,
           "Back from logit.", "", "SELECT logit_inverse(logit(88, 0, 100), 0, 100)"),
    Scalar("z_score", 3, 3, "x, mean, sd", kForward<kZScore>,
           "(x - mean)/sd; NULL unless sd > 0. Mean and sd may come from windows.", "",
           "SELECT z_score(57, 45, 6)"),
    Scalar("z_score_inverse", 3, 3, "z, mean, sd", kBack<kZScore>,
           "Back from z_score: mean + z sd.", "", "SELECT z_score_inverse(2, 45, 6)"),
    Scalar("rescale", 3, 5, "x, old_low, old_high [, new_low = 0, new_high = 1]",
           kForward<kRescale>,
           "Maps old_low ... old_high on new_low ... new_high by a line, beyond the ends too; NULL "
           "where the ends of a range are equal.",
           "", "SELECT rescale(15, 10, 30), rescale(15, 10, 30, 0, 100)"),
    Scalar("rescale_inverse", 3, 5, "z, old_low, old_high [, new_low = 0, new_high = 1]",
           kBack<kRescale>, "Back from rescale, given the same ranges.", "",
           "SELECT rescale_inverse(25, 10, 30, 0, 100)"),
    Scalar("center", 2, 2, "x, middle", kForward<kCenter>, "x - middle.", "",
           "SELECT center(57, 45)"),
    Scalar("center_inverse", 2, 2, "z, middle", kBack<kCenter>, "z + middle.", "",
           "SELECT center_inverse(12, 45)"),
    Scalar("date_days", 1, 1, "d", ReturnDays,
           "Days since 1970-01-01 of an ISO date, YYYY-MM-DD; NULL for anything else.",
           "ISO 8601, proleptic Gregorian calendar", "SELECT date_days('2024-02-29')"),
    Scalar(
        "date_from_days", 1, 1, "n", ReturnDate,
        "The ISO date of a whole number of days since 1970-01-01; NULL outside the years 0000 to "
        "9999.",
        "ISO 8601, proleptic Gregorian calendar", "SELECT date_from_days(19782)"),
    Scalar("re_express", 2, 2, "x, spec", BySpec<Way::kForward>,
           "x re-expressed by a spec: a function's name and its numbers, as in a model's labels.",
           "", "SELECT re_express(119, 'log_offset 1')"),
    Scalar("back_transform", 2, 2, "z, spec", BySpec<Way::kBack>,
           "The way back from re_express with the same spec.", "",
           "SELECT back_transform(re_express(119, 'log_offset 1'), 'log_offset 1')"),
    Scalar(
        "number_or_null", 1, kAnyCount, "x [, code ...]", NumberOrNull,
        "x if it is a number or text that reads as one and is none of the codes, else NULL. Codes "
        "compare as numbers: '-9', -9 and '-9.0' are one code; codes that are words need no "
        "listing.",
        "", "SELECT number_or_null('12.5'), number_or_null('n/a'), number_or_null('999', 999, -9)"),
};

}  // namespace

std::span<const FunctionRow> TransformFunctions() { return kRows; }

}  // namespace ladderline
