#include "core/transform/transform.h"

#include <bit>
#include <cmath>
#include <cstdint>
#include <limits>

#include "tests/reference/reference.h"

namespace ladderline {
namespace {

// The rows of one kind in the reference file; there are some.
nlohmann::json Rows(const char* kind) {
  nlohmann::json rows = ladderline::testing::ReadJson("transforms.json").at(kind);
  EXPECT_GT(rows.size(), 20U);
  return rows;
}

constexpr double kInf = std::numeric_limits<double>::infinity();
constexpr double kNaN = std::numeric_limits<double>::quiet_NaN();
constexpr double kEps = std::numeric_limits<double>::epsilon();

Transform T(std::string_view spec) {
  const auto reading = Transform::ReadSpec(spec);
  EXPECT_TRUE(reading.ok()) << spec << ": " << reading.error();
  EXPECT_FALSE(reading.value().needs_estimate()) << spec;
  return *reading.value().transform;
}

std::string ErrorOf(std::string_view spec) {
  const auto reading = Transform::ReadSpec(spec);
  return reading.ok() ? "(no error)" : reading.error();
}

// Specs that cover every kind, for the tests that hold for all of them.
const char* const kSpecs[] = {"identity",
                              "log_offset",
                              "log_offset 1",
                              "log_offset 0.5 10",
                              "sqrt_offset",
                              "sqrt_offset 0.375",
                              "square",
                              "power_of 3",
                              "power_of -0.5",
                              "reciprocal",
                              "negative_reciprocal",
                              "log_reflected 101",
                              "box_cox 0.25",
                              "box_cox 0 1",
                              "box_cox -1 0.5",
                              "yeo_johnson 0.4",
                              "yeo_johnson 3",
                              "asinh_scaled 0.01",
                              "logit 0 100",
                              "logit 0 100 0.01",
                              "z_score 20 7",
                              "rescale 0 100 1 5",
                              "center 12",
                              "date_days"};

// tests/reference/transforms.py, mpmath 1.2.1, 700 digits.
TEST(Transform, ForwardIsWithinFourUlp) {
  for (const auto& row : Rows("forward")) {
    const Transform t = T(row["spec"].get<std::string>());
    const double z = row["z"], scale = row["conditioning"];
    EXPECT_NEAR(t.Forward(row["x"]), z, 4 * kEps * scale * std::abs(z)) << row;
  }
}

TEST(Transform, BackIsWithinFourUlpOfItsConditioning) {
  for (const auto& row : Rows("back")) {
    const Transform t = T(row["spec"].get<std::string>());
    const double x = row["x"], scale = row["conditioning"];
    EXPECT_NEAR(t.Back(row["z"]), x, 4 * kEps * scale * std::abs(x)) << row;
  }
}

TEST(Transform, SlopeAndJacobianAreThoseOfTheFormula) {
  for (const auto& row : Rows("forward")) {
    const Transform t = T(row["spec"].get<std::string>());
    const double slope = row["slope"], log_slope = std::log(std::abs(slope));
    EXPECT_NEAR(t.Slope(row["x"]), slope, 1e-12 * std::abs(slope)) << row;
    EXPECT_NEAR(t.LogJacobian(row["x"]), log_slope, 1e-12 * (1 + std::abs(log_slope))) << row;
    EXPECT_NEAR(t.LogJacobian(row["x"], row["z"]), log_slope, 1e-12 * (1 + std::abs(log_slope)))
        << row;
  }
}

TEST(Transform, SlopeAtTheEdgeOfTheDomainMayBeInfiniteOrZero) {
  EXPECT_EQ(T("sqrt_offset").Slope(0), kInf);
  EXPECT_EQ(T("sqrt_offset").LogJacobian(0), kInf);
  EXPECT_EQ(T("power_of 0.5").LogJacobian(0), kInf);
  EXPECT_EQ(T("power_of 1").LogJacobian(0), 0);
  EXPECT_EQ(T("power_of 3").LogJacobian(0), -kInf);
  EXPECT_EQ(T("square").LogJacobian(0), -kInf);
  EXPECT_TRUE(std::isnan(T("log_offset").Slope(0)));
  EXPECT_TRUE(std::isnan(T("log_offset").LogJacobian(-1)));
}

// lim λ → 0 of Box–Cox is ln; its first correction is λ ln²/2.
TEST(Transform, BoxCoxJoinsTheLogarithmWithoutAStep) {
  const Transform log = T("log_offset");
  for (double lambda = 1e-16; lambda < 1e-11; lambda *= 10) {
    for (const double sign : {-1.0, 1.0}) {
      const double arguments[] = {sign * lambda};
      const Transform t = *Transform::TryMake(TransformKind::kBoxCox, arguments);
      for (const double x : {1e-8, 0.3, 1.0, 7.0, 1e9}) {
        const double ln = log.Forward(x);
        EXPECT_NEAR(t.Forward(x), ln + sign * lambda * ln * ln / 2, 4 * kEps * std::abs(ln));
        EXPECT_NEAR(t.Back(t.Forward(x)), x, 4 * kEps * x * (1 + std::abs(ln)));
      }
    }
  }
}

TEST(Transform, AResultThatFitsIsNotLostToAnIntermediateOverflow) {
  // 2^1025 is too large, a fifth of it is not.
  const double x = 0x1p205, z = 0x1p1023 / 5 * 4;
  EXPECT_DOUBLE_EQ(T("box_cox 5").Forward(x), z);
  EXPECT_DOUBLE_EQ(T("box_cox 5").Back(z), x);
  EXPECT_DOUBLE_EQ(T("yeo_johnson 5").Forward(x), z);
  EXPECT_DOUBLE_EQ(T("yeo_johnson -3").Forward(-x), -z);
  EXPECT_DOUBLE_EQ(T("asinh_scaled 1e-300").Forward(1e-300), 1e-300);
  const Transform steep = T("asinh_scaled 1e308");
  EXPECT_NEAR(steep.Back(steep.Forward(24600)), 24600, 1e-8);  // its exponent, 720, costs 3 digits
  // ln((1 - d)/d) with d the smallest double; mpmath 1.2.1. The odds themselves overflow.
  EXPECT_DOUBLE_EQ(T("logit -1 0").Forward(-5e-324), 744.4400719213812);
}

TEST(Transform, AResultThatDoesNotFitIsNaN) {
  EXPECT_TRUE(std::isnan(T("square").Forward(1e200)));
  EXPECT_TRUE(std::isnan(T("log_offset").Back(710)));
  EXPECT_TRUE(std::isnan(T("reciprocal").Forward(1e-320)));
  EXPECT_TRUE(std::isnan(T("box_cox 9").Forward(1e40)));
  EXPECT_FALSE(T("square").InDomain(1e200));
}

TEST(Transform, WholePowersOfTheBaseAreExact) {
  const Transform log10 = T("log_offset 0 10"), log2 = T("log_offset 0 2");
  for (int k = -20; k <= 22; ++k) {
    const double power = k < 0 ? 1 / std::pow(10, -k) : std::pow(10, k);
    EXPECT_EQ(log10.Forward(power), k) << power;
  }
  for (int k = -1022; k <= 1023; ++k) EXPECT_EQ(log2.Forward(std::ldexp(1, k)), k);
  for (int k = 0; k <= 15; ++k) EXPECT_EQ(log10.Back(k), std::pow(10, k));
  EXPECT_EQ(T("log_offset 1 10").Forward(999), 3);
  EXPECT_EQ(T("log_offset 0 2.718281828459045"), T("log_offset"));
}

TEST(Transform, RangesAreExactAtBothEnds) {
  const Transform t = T("rescale 0.1 0.7 0.3 1.1");
  EXPECT_EQ(t.Forward(0.1), 0.3);
  EXPECT_EQ(t.Forward(0.7), 1.1);
  EXPECT_EQ(t.Back(0.3), 0.1);
  EXPECT_EQ(t.Back(1.1), 0.7);
  EXPECT_EQ(T("rescale 0 100").Forward(67), 0.67);
}

struct DomainCase {
  const char* spec;
  std::vector<double> inside;
  std::vector<double> outside;
};

// DESIGN: the domains of the table of scalars.
TEST(Transform, DomainsAreAsStated) {
  const DomainCase cases[] = {
      {"identity", {-1, 0, 1}, {}},
      {"log_offset", {5e-324, 1}, {0, -1}},
      {"log_offset 2", {-1.9999, 0}, {-2, -3}},
      {"sqrt_offset 2", {-2, 0}, {-2.0000001}},
      {"square", {-3, 0, 3}, {}},
      {"power_of 2", {0, 1}, {-1}},
      {"power_of -2", {1}, {0, -1}},
      {"reciprocal", {-1, 1}, {0}},
      {"negative_reciprocal", {-1, 1}, {0}},
      {"log_reflected 100", {-5, 99.99}, {100, 101}},
      {"box_cox 0.5", {5e-324, 1}, {0, -1}},
      {"box_cox 0 1", {-0.5}, {-1, -2}},
      {"yeo_johnson -1", {-9, 0, 9}, {}},
      {"asinh_scaled 2", {-9, 0, 9}, {}},
      {"logit", {1e-300, 0.5}, {0, 1, -0.1, 1.1}},
      {"logit 0 100 0.01", {0, 100, 101}, {-2, 102.5}},
      {"logit 100 0", {1, 99}, {0, 100}},
      {"z_score 5 2", {-9, 0}, {}},
      {"rescale 0 10", {-9, 20}, {}},
      {"center 3", {-9, 3}, {}},
      {"date_days", {-9, 20000}, {}},
  };
  for (const DomainCase& c : cases) {
    const Transform t = T(c.spec);
    for (const double x : c.inside) {
      EXPECT_TRUE(t.InDomain(x)) << c.spec << " " << x;
      EXPECT_TRUE(std::isfinite(t.Forward(x))) << c.spec << " " << x;
    }
    for (const double x : c.outside) {
      EXPECT_FALSE(t.InDomain(x)) << c.spec << " " << x;
      EXPECT_TRUE(std::isnan(t.Forward(x))) << c.spec << " " << x;
    }
  }
}

TEST(Transform, DomainsOfTheWayBackAreAsStated) {
  const DomainCase cases[] = {
      {"log_offset 1", {-900, 700}, {710}},
      {"sqrt_offset", {0, 3}, {-1e-300}},
      {"square", {0, 3}, {-1}},
      {"power_of 3", {0, 3}, {-1}},
      {"power_of -3", {3}, {0, -1}},
      {"reciprocal", {-1, 1}, {0}},
      {"box_cox 0.5", {-2, 3}, {-2.0001}},
      {"box_cox -0.5", {-9, 1.99}, {2, 2.01}},
      {"yeo_johnson -0.5", {-9, 1.99}, {2, 3}},
      {"yeo_johnson 2.5", {-1.99, 9}, {-2, -3}},
      {"logit", {-800, 800}, {}},
  };
  for (const DomainCase& c : cases) {
    const Transform t = T(c.spec);
    for (const double z : c.inside) EXPECT_TRUE(std::isfinite(t.Back(z))) << c.spec << " " << z;
    for (const double z : c.outside) EXPECT_TRUE(std::isnan(t.Back(z))) << c.spec << " " << z;
  }
  EXPECT_EQ(T("box_cox 0.5 3").Back(-2), -3);
  // 0.1 as a double is a little above 0.1: the product rounds to -1 and counts as that.
  EXPECT_EQ(T("box_cox 0.1").Back(-10), 0);
}

TEST(Transform, NaNAndInfinityGiveNaNBothWays) {
  for (const char* spec : kSpecs) {
    const Transform t = T(spec);
    for (const double bad : {kNaN, kInf, -kInf}) {
      EXPECT_TRUE(std::isnan(t.Forward(bad))) << spec;
      EXPECT_TRUE(std::isnan(t.Back(bad))) << spec;
      EXPECT_TRUE(std::isnan(t.Slope(bad))) << spec;
      EXPECT_TRUE(std::isnan(t.LogJacobian(bad))) << spec;
      EXPECT_FALSE(t.InDomain(bad)) << spec;
      EXPECT_FALSE(t.Returns(bad)) << spec;
    }
  }
}

TEST(Transform, ASquaredResponseHasToBePositive) {
  EXPECT_TRUE(T("square").InDomain(-1));
  EXPECT_FALSE(T("square").Returns(-1));
  EXPECT_TRUE(T("square").Returns(0));
  EXPECT_TRUE(T("center 3").Returns(-1));
}

TEST(Transform, EveryWayThereHasItsWayBack) {
  for (const char* spec : kSpecs) {
    const Transform t = T(spec);
    int tried = 0;
    for (double x = -30.25; x < 100; x += 0.734) {
      if (!t.Returns(x)) continue;
      EXPECT_NEAR(t.Back(t.Forward(x)), x, 1e-12 * (1 + std::abs(x))) << spec;
      ++tried;
    }
    EXPECT_GT(tried, 100) << spec;
  }
}

TEST(Transform, DecreasingSaysWhetherOrderIsReversed) {
  std::vector<std::string> specs(std::begin(kSpecs), std::end(kSpecs));
  for (const char* spec :
       {"log_offset 0 0.5", "power_of -2", "logit 100 0 0.1", "rescale 0 100 5 1",
        "rescale 100 0 5 1", "box_cox -2", "yeo_johnson -3"})
    specs.push_back(spec);
  for (const std::string& spec : specs) {
    const Transform t = T(spec);
    for (double x = 0.5; x < 99; x += 1) {
      EXPECT_EQ(t.Forward(x + 0.5) < t.Forward(x), t.Decreasing()) << spec << " at " << x;
    }
  }
}

TEST(Transform, LimitsAreHeldAtAFiniteEdge) {
  EXPECT_EQ(T("sqrt_offset 2").BackHeld(-0.5, 1), -2);
  EXPECT_EQ(T("square").BackHeld(-4, 1), 0);
  EXPECT_GT(T("logit 0 100 0.01").Back(9), 100);
  EXPECT_EQ(T("logit 0 100 0.01").BackHeld(9, 1), 100);
  EXPECT_EQ(T("logit 0 100 0.01").BackHeld(-9, 1), 0);
  EXPECT_EQ(T("logit 100 0 0.01").BackHeld(-9, 1), 100);
  EXPECT_EQ(T("power_of 0.5").BackHeld(-4, 1), 0);
  EXPECT_EQ(T("box_cox 0.5 3").BackHeld(-2.5, 1), -3);
  EXPECT_TRUE(std::isnan(T("power_of -0.5").BackHeld(-4, 1)));
  EXPECT_TRUE(std::isnan(T("box_cox -0.5").BackHeld(2.5, 1)));
  EXPECT_TRUE(std::isnan(T("yeo_johnson -0.5").BackHeld(2.5, 1)));
  for (const char* spec : {"reciprocal", "negative_reciprocal"}) {
    const Transform t = T(spec);
    EXPECT_EQ(t.BackHeld(2, 1), t.Back(2));
    EXPECT_EQ(t.BackHeld(-2, -1), t.Back(-2));
    EXPECT_TRUE(std::isnan(t.BackHeld(-2, 1)));
    EXPECT_TRUE(std::isnan(t.BackHeld(2, -1)));
    EXPECT_TRUE(std::isnan(t.BackHeld(0, 1)));
    EXPECT_TRUE(std::isnan(t.BackHeld(0, -1)));
  }
  for (const char* spec : kSpecs) {
    const Transform t = T(spec);
    const double z = t.Forward(50);
    EXPECT_EQ(t.BackHeld(z, z), t.Back(z)) << spec;
    EXPECT_TRUE(std::isnan(t.BackHeld(kNaN, z))) << spec;
  }
}

TEST(Transform, BlocksAreBitForBitTheScalars) {
  const auto same = [](double a, double b) {
    return std::bit_cast<std::uint64_t>(a) == std::bit_cast<std::uint64_t>(b) ||
           (std::isnan(a) && std::isnan(b));
  };
  std::vector<double> x = {kNaN, kInf, -kInf, 0.0, -0.0, 100, 101, 1e300, 5e-324};
  for (int i = 0; i < 700; ++i) x.push_back(-40 + 0.2371 * i);
  for (const char* spec : kSpecs) {
    const Transform t = T(spec);
    std::vector<double> z(x.size()), back(x.size()), in_place = x;
    t.ForwardBlock(x.data(), z.data(), x.size());
    t.ForwardBlock(in_place.data(), in_place.data(), x.size());
    t.BackBlock(x.data(), back.data(), x.size());
    for (size_t i = 0; i < x.size(); ++i) {
      EXPECT_TRUE(same(z[i], t.Forward(x[i]))) << spec << " " << x[i];
      EXPECT_TRUE(same(in_place[i], z[i])) << spec << " " << x[i];
      EXPECT_TRUE(same(back[i], t.Back(x[i]))) << spec << " " << x[i];
    }
    t.ForwardBlock(nullptr, nullptr, 0);
    t.BackBlock(nullptr, nullptr, 0);
  }
}

TEST(TransformSpec, WritesWhatItReads) {
  for (const char* spec : kSpecs) {
    EXPECT_EQ(T(spec).spec(), spec);
    EXPECT_EQ(T(T(spec).spec()), T(spec));
  }
  EXPECT_EQ(Transform(), T("identity"));
  EXPECT_EQ(T("power_of 0.3333333333333333").arguments()[0], 1.0 / 3);
  EXPECT_EQ(T("power_of 0.3333333333333333").spec(), "power_of 0.3333333333333333");
}

TEST(TransformSpec, LeavesDefaultsOut) {
  EXPECT_EQ(T("log_offset 0").spec(), "log_offset");
  EXPECT_EQ(T("log_offset 0 10").spec(), "log_offset 0 10");
  EXPECT_EQ(T("log_offset 1 2.718281828459045").spec(), "log_offset 1");
  EXPECT_EQ(T("box_cox 0 0").spec(), "box_cox 0");
  EXPECT_EQ(T("logit 0 1 0").spec(), "logit");
  EXPECT_EQ(T("logit 0 1 0.01").spec(), "logit 0 1 0.01");
  EXPECT_EQ(T("rescale 5 9 0 1").spec(), "rescale 5 9");
  EXPECT_EQ(T("logit").arguments().size(), 3U);
}

TEST(TransformSpec, TakesBlanksAroundWords) {
  EXPECT_EQ(T("  log_offset\t1 \n"), T("log_offset 1"));
  const std::string_view words[] = {"box_cox", "0.25", "1e0"};
  const auto reading = Transform::ReadSpec(words);
  ASSERT_TRUE(reading.ok());
  EXPECT_EQ(*reading.value().transform, T("box_cox 0.25 1"));
}

TEST(TransformSpec, SaysWhichArgumentsAreLeftToTheData) {
  for (const char* spec :
       {"z_score", "rescale", "center", "box_cox", "yeo_johnson", "log_offset auto"}) {
    const auto reading = Transform::ReadSpec(spec);
    ASSERT_TRUE(reading.ok()) << spec;
    EXPECT_TRUE(reading.value().needs_estimate()) << spec;
    EXPECT_EQ(std::string(spec).find(TransformWord(reading.value().kind)), 0U);
  }
}

TEST(TransformSpec, RefusesInWords) {
  const std::string known =
      "known are identity, log_offset, sqrt_offset, square, power_of, reciprocal, "
      "negative_reciprocal, log_reflected, box_cox, yeo_johnson, asinh_scaled, logit, z_score, "
      "rescale, center, date_days";
  const std::pair<const char*, std::string> cases[] = {
      {"", "no transform is called ''; " + known},
      {"cube", "no transform is called 'cube'; " + known},
      {"LOG_OFFSET", "no transform is called 'LOG_OFFSET'; " + known},
      {"log_offset 1 10 3", "log_offset takes [offset [base]], got 3 arguments"},
      {"square 2", "square takes no arguments, got 1 argument"},
      {"power_of", "power_of takes p, got 0 arguments"},
      {"z_score 3", "z_score takes mean sd, got 1 argument"},
      {"logit 5", "logit takes [low high [inset]], got 1 argument"},
      {"rescale 0 1 2", "rescale takes old_low old_high [new_low new_high], got 3 arguments"},
      {"z_score 1 2 3 4 5", "z_score takes mean sd, got 5 arguments"},
      {"log_offset one", "offset must be a number, got 'one'"},
      {"log_offset 1 auto", "base must be a number, got 'auto'"},
      {"log_offset inf", "offset must be a number, got 'inf'"},
      {"log_offset 1e999", "offset must be a number, got '1e999'"},
      {"log_offset 1,5", "offset must be a number, got '1,5'"},
      {"log_offset 1 1", "base must be above 0 and other than 1, got 1"},
      {"log_offset 1 -2", "base must be above 0 and other than 1, got -2"},
      {"power_of 0", "p must be other than 0, got 0"},
      {"asinh_scaled 0", "theta must be above 0, got 0"},
      {"z_score 1 0", "sd must be above 0, got 0"},
      {"logit 3 3", "high must differ from low, by a finite amount, got 3"},
      {"logit 0 1 0.5", "inset must lie in 0 up to but not including 0.5, got 0.5"},
      {"logit 0 1 -0.1", "inset must lie in 0 up to but not including 0.5, got -0.1"},
      {"rescale 2 2", "old_high must differ from old_low, by a finite amount, got 2"},
      {"rescale 0 1 2 2", "new_high must differ from new_low, by a finite amount, got 2"},
      {"rescale -1e308 1e308", "old_high must differ from old_low, by a finite amount, got 1e+308"},
  };
  for (const auto& [spec, message] : cases) EXPECT_EQ(ErrorOf(spec), message) << spec;
}

TEST(TransformSpec, MakeRefusesWhatIsNotFinite) {
  const double arguments[] = {kNaN};
  const auto made = Transform::Make(TransformKind::kCenter, arguments);
  ASSERT_FALSE(made.ok());
  EXPECT_EQ(made.error(), "middle must be a finite number, got no finite number");
  EXPECT_FALSE(Transform::TryMake(TransformKind::kCenter, arguments).has_value());
  EXPECT_FALSE(Transform::TryMake(TransformKind::kCenter, {}).has_value());
}

TEST(TransformSpec, EveryWordNamesItsKind) {
  EXPECT_EQ(TransformWords().size(), 16U);
  for (const std::string_view word : TransformWords()) {
    const auto kind = TransformOfWord(word);
    ASSERT_TRUE(kind.has_value()) << word;
    EXPECT_EQ(TransformWord(*kind), word);
  }
  EXPECT_FALSE(TransformOfWord("category").has_value());
}

}  // namespace
}  // namespace ladderline
