#include "core/effects/reading.h"

#include "tests/reference/reference.h"

namespace ladderline::testing {
namespace {

Transform Spec(const std::string& spec) { return *Transform::ReadSpec(spec).value().transform; }

TEST(Reading, AStraightLineHasOneSlopeEverywhere) {
  for (const char* spec : {"identity", "z_score 3 2", "rescale 0 10 5 7", "center 4", "date_days",
                           "power_of 1", "box_cox 1 2", "yeo_johnson 1"}) {
    const Transform t = Spec(spec);
    EXPECT_TRUE(IsStraight(t)) << spec;
    EXPECT_EQ(t.Slope(1), t.Slope(7)) << spec;
    EXPECT_FALSE(LogFormOf(t)) << spec;
  }
  for (const char* spec : {"log_offset", "sqrt_offset", "square", "power_of 2", "reciprocal",
                           "box_cox 0.5", "box_cox 0", "yeo_johnson 0", "asinh_scaled 1", "logit"})
    EXPECT_FALSE(IsStraight(Spec(spec))) << spec;
}

// ln u = factor z, and u is the distance from the edge.
TEST(Reading, ALogFormTakesItsTransformApart) {
  for (const char* spec : {"log_offset", "log_offset 20", "log_offset -2 10", "log_offset 1 0.5",
                           "box_cox 0", "box_cox 0 3", "log_reflected 101", "log_reflected 7"}) {
    const Transform t = Spec(spec);
    const std::optional<LogForm> log = LogFormOf(t);
    ASSERT_TRUE(log) << spec;
    for (const double x : {3.0, 5.5}) {
      const double u = log->Distance(x);
      EXPECT_TRUE(Agrees(std::log(u), log->factor * t.Forward(x), 14)) << spec;
      EXPECT_EQ(log->At(u), x) << spec;
    }
  }
}

}  // namespace
}  // namespace ladderline::testing
