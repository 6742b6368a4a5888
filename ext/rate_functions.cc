// Rates, shares and rate ratios as scalars.
//
// A base or whole ≤ 0, a negative count, and a part above its whole give NULL. A `per` below 1 and
// a level outside (0, 1) are errors, whatever the other arguments: they are written by hand, and
// each easily lands in the other's place.
#include <limits>

#include "core/rates/binomial.h"
#include "core/rates/poisson.h"
#include "core/rates/rate_ratio.h"
#include "ext/function_tables.h"

namespace ladderline {
namespace {

constexpr double kUsualLevel = 0.95;

constexpr double kMissing = std::numeric_limits<double>::quiet_NaN();

// Missing numbers are NaN: the rooms of core/rates give NaN for them, and that is returned as NULL.
double NumberAt(const Call& call, int i) { return call.Number(i).value_or(kMissing); }

double PerAt(const Call& call, int i) {
  const double per = NumberAt(call, i);
  if (per < 1) call.ThrowBad(i, "must be at least 1");
  return per;
}

double LevelAt(const Call& call, int i) {
  if (!call.Has(i)) return kUsualLevel;
  const double level = NumberAt(call, i);
  if (level <= 0 || level >= 1) call.ThrowBad(i, "must lie between 0 and 1", LevelAdvice(level));
  return level;
}

void CallRatePer(Call& call) {
  const double events = NumberAt(call, 0), base = NumberAt(call, 1);
  call.Return(RatePer(events, base, PerAt(call, 2)));
}

template <double (*limit)(double events, double base, double per, double level)>
void RateLimit(Call& call) {
  const double events = NumberAt(call, 0), base = NumberAt(call, 1), per = PerAt(call, 2);
  call.Return(limit(events, base, per, LevelAt(call, 3)));
}

void CallPercentOf(Call& call) {
  const double part = NumberAt(call, 0);
  call.Return(PercentOf(part, NumberAt(call, 1)));
}

template <double (*limit)(double part, double whole, double level)>
void PercentLimit(Call& call) {
  const double part = NumberAt(call, 0), whole = NumberAt(call, 1);
  call.Return(limit(part, whole, LevelAt(call, 2)));
}

template <double (*compare)(double e1, double b1, double e2, double b2)>
void Ratio(Call& call) {
  const double e1 = NumberAt(call, 0), b1 = NumberAt(call, 1), e2 = NumberAt(call, 2);
  call.Return(compare(e1, b1, e2, NumberAt(call, 3)));
}

template <double (*limit)(double e1, double b1, double e2, double b2, double level)>
void RatioLimit(Call& call) {
  const double e1 = NumberAt(call, 0), b1 = NumberAt(call, 1), e2 = NumberAt(call, 2);
  const double b2 = NumberAt(call, 3);
  call.Return(limit(e1, b1, e2, b2, LevelAt(call, 4)));
}

constexpr const char* kGarwood = "Garwood 1936";
constexpr const char* kClopperPearson = "Clopper & Pearson 1934";
constexpr const char* kRateArguments = "events, base, per [, level = 0.95]";
constexpr const char* kPercentArguments = "part, whole [, level = 0.95]";
constexpr const char* kRatioArguments = "e1, b1, e2, b2 [, level = 0.95]";

constexpr FunctionRow kRows[] = {
    Scalar("rate_per", 3, 3, "events, base, per", CallRatePer,
           "Events per so many units of the base: per events/base.", "",
           "SELECT rate_per(17, 4200, 1000)"),
    Scalar("rate_low", 3, 4, kRateArguments, RateLimit<RateLow>,
           "Lower exact Poisson limit of a rate; 0 for no events.", kGarwood,
           "SELECT rate_low(17, 4200, 1000)"),
    Scalar("rate_high", 3, 4, kRateArguments, RateLimit<RateHigh>,
           "Upper exact Poisson limit of a rate; also for no events.", kGarwood,
           "SELECT rate_high(0, 4200, 1000, 0.9)"),
    Scalar("percent_of", 2, 2, "part, whole", CallPercentOf, "The part in percent of the whole.",
           "", "SELECT percent_of(12, 80)"),
    Scalar("percent_low", 2, 3, kPercentArguments, PercentLimit<PercentLow>,
           "Lower exact binomial limit of a share, in percent.", kClopperPearson,
           "SELECT percent_low(12, 80)"),
    Scalar("percent_high", 2, 3, kPercentArguments, PercentLimit<PercentHigh>,
           "Upper exact binomial limit of a share, in percent.", kClopperPearson,
           "SELECT percent_high(12, 80, 0.99)"),
    Scalar("rate_ratio", 4, 4, "e1, b1, e2, b2", Ratio<RateRatio>,
           "The rate e1/b1 over the rate e2/b2; NULL for e2 = 0.", "",
           "SELECT rate_ratio(17, 4200, 9, 3900)"),
    Scalar("rate_ratio_low", 4, 5, kRatioArguments, RatioLimit<RateRatioLow>,
           "Lower limit of a rate ratio, exact given the total of events.", kClopperPearson,
           "SELECT rate_ratio_low(17, 4200, 9, 3900)"),
    Scalar("rate_ratio_high", 4, 5, kRatioArguments, RatioLimit<RateRatioHigh>,
           "Upper limit of a rate ratio, exact given the total of events; NULL for e2 = 0.",
           kClopperPearson, "SELECT rate_ratio_high(17, 4200, 9, 3900)"),
    Scalar(
        "rate_ratio_p", 4, 4, "e1, b1, e2, b2", Ratio<RateRatioP>,
        "Two-sided exact p-value of equal rates given the total of events: all divisions no more "
        "likely than the one seen. NULL for a fractional count.",
        "", "SELECT rate_ratio_p(17, 4200, 9, 3900)"),
};

}  // namespace

std::span<const FunctionRow> RateFunctions() { return kRows; }

}  // namespace ladderline
